"""Densities from synthetic traces of known truth: error, coverage, and what a disagreement means.

The coverage of 500 cases is printed by tests/bench/density_coverage.py; here a short form of the same cases.
"""

from __future__ import annotations

import numpy as np
import pytest

from planner.desk.density_page import density_of_trace
from planner.desk.trace_file import Trace
from planner.errors import InputError
from tests.bench.density_coverage import NAMES, errors
from tests.physics.traces import Faults, Layer, sweep, there_and_back

FIELDS = there_and_back(-0.4, 1.4, 500)


def trace(layer: Layer, faults: Faults | None = None, seed: int = 0) -> Trace:
    return Trace(*sweep(FIELDS, layer, faults or Faults(), np.random.default_rng(seed)))


@pytest.fixture(scope="module")
def cases() -> dict[str, list[tuple[float, float]]]:
    return errors(range(24))


@pytest.mark.parametrize("name", NAMES)
def test_within_one_percent_at_two_percent_noise(name: str, cases: dict[str, list[tuple[float, float]]]) -> None:
    assert len(cases[name]) == 24
    assert max(abs(error) for error, _ in cases[name]) < 0.01


@pytest.mark.parametrize("name", NAMES)
def test_the_stated_uncertainty_is_the_size_of_the_errors(
    name: str, cases: dict[str, list[tuple[float, float]]]
) -> None:
    """Errors in units of one standard deviation (half of what is stated) spread by about one; 95 % lie within two."""
    in_sigma = np.array([error / (stated / 2) for error, stated in cases[name]])
    assert 0.7 < np.sqrt(np.mean(in_sigma**2)) < 1.35
    assert 0.86 <= np.mean(np.abs(in_sigma) <= 2) <= 1.0
    assert abs(np.mean(in_sigma)) < 3 / np.sqrt(24)


def test_both_ways_agree_and_their_mean_is_taken() -> None:
    page = density_of_trace(trace(Layer(1.65e15)))
    assert page.agree
    assert page.hall is not None
    assert page.oscillations is not None
    ends = sorted(value.density_per_m2 for value in (page.hall, page.oscillations))
    assert ends[0] <= page.best.density_per_m2 <= ends[1]
    assert page.best.uncertainty_per_m2 < min(page.hall.uncertainty_per_m2, page.oscillations.uncertainty_per_m2)
    assert page.carriers == "electrons"


def test_a_reversed_sign_is_told_and_the_size_kept() -> None:
    page = density_of_trace(trace(Layer(-1.65e15)))
    assert page.best.density_per_m2 == pytest.approx(-1.65e15, rel=0.01)
    assert page.carriers == "holes"
    assert any("holes, or field" in text for text in page.words)
    known = density_of_trace(trace(Layer(-1.65e15)), carriers="electrons")
    assert any("are reversed" in text and "not electrons" in text for text in known.words)


def test_lag_and_offset_are_told_and_leave_the_density() -> None:
    page = density_of_trace(trace(Layer(2e15), Faults(0.005, 0.03, 4e-3, 3e-3)))
    assert page.best.density_per_m2 == pytest.approx(2e15, rel=5e-3)
    assert any("mT apart" in text for text in page.words)
    assert any("crosses zero at" in text for text in page.words)


def parallel(layer: Layer, density_per_m2: float, mobility: float) -> Trace:
    """The layer with a second, slow channel beside it: conductivity tensors of the two add up."""
    hall, along = layer.hall_ohm(FIELDS), layer.longitudinal_ohm(FIELDS) / layer.squares
    size = along**2 + hall**2
    second = density_per_m2 * 1.602176634e-19 * mobility / (1 + (mobility * FIELDS) ** 2)
    sigma_xx, sigma_xy = along / size + second, hall / size + second * mobility * FIELDS
    size = sigma_xx**2 + sigma_xy**2
    rng = np.random.default_rng(1)
    noisy = [values * (1 + 0.002 * rng.standard_normal(values.size)) for values in (sigma_xy / size, sigma_xx / size)]
    return Trace(FIELDS, noisy[0], noisy[1])


def test_a_parallel_channel_shows_as_more_carriers_in_the_hall_slope() -> None:
    page = density_of_trace(parallel(Layer(2e15), 2e15, 2.5))
    assert page.agree is False
    assert any("parallel channel" in text for text in page.words)
    assert page.best == page.oscillations
    assert page.best.density_per_m2 == pytest.approx(2e15, rel=0.01)


def test_wide_contacts_show_as_geometry_and_a_wrong_gain_as_gain() -> None:
    good = trace(Layer(2e15), Faults(0.003))
    assert good.hall_ohm is not None
    shorted = density_of_trace(Trace(good.field_T, 0.85 * good.hall_ohm, good.longitudinal_ohm))
    assert shorted.agree is False
    assert any("geometry" in text for text in shorted.words)
    gain = density_of_trace(Trace(good.field_T, 1.1 * good.hall_ohm, good.longitudinal_ohm))
    assert any("gain" in text for text in gain.words)
    assert gain.best.density_per_m2 == pytest.approx(2e15, rel=0.01)


def test_spin_split_levels_are_recognised_by_the_factor_two() -> None:
    layer, split = Layer(1.6e15), Layer(3.2e15)  # one state to a level doubles the frequency
    rng = np.random.default_rng(2)
    hall = layer.hall_ohm(FIELDS) + 2.0 * rng.standard_normal(FIELDS.size)
    page = density_of_trace(
        Trace(FIELDS, hall, split.longitudinal_ohm(FIELDS) + 0.1 * rng.standard_normal(FIELDS.size))
    )
    assert page.agree is False
    assert any("With 1 states per level" in text and "spin is split" in text for text in page.words)
    assert page.best == page.hall
    right = density_of_trace(Trace(FIELDS, hall, split.longitudinal_ohm(FIELDS)), degeneracy=1)
    assert right.agree


def test_one_way_alone_is_enough_and_none_is_an_error() -> None:
    good = trace(Layer(2e15))
    hall = density_of_trace(Trace(good.field_T, good.hall_ohm))
    assert (hall.oscillations, hall.agree) == (None, None)
    waves = density_of_trace(Trace(good.field_T, None, good.longitudinal_ohm), carriers="holes")
    assert waves.hall is None
    assert waves.best.density_per_m2 == pytest.approx(-2e15, rel=0.01)
    noise = np.random.default_rng(3).standard_normal(400)
    with pytest.raises(InputError, match=r"Hall slope[\s\S]*oscillations"):
        density_of_trace(Trace(np.linspace(-1, 1, 400), noise, noise))


def test_a_trace_of_many_points_is_averaged_and_gives_the_same() -> None:
    fields = np.linspace(-0.4, 1.4, 30_000)
    field, hall, along = sweep(fields, Layer(2e15), Faults(), np.random.default_rng(4))
    page = density_of_trace(Trace(field, hall, along))
    assert page.hall_fit is not None
    assert page.hall_fit.points <= 4000
    assert page.best.density_per_m2 == pytest.approx(2e15, rel=1e-3)


def test_data_is_plain() -> None:
    data = density_of_trace(trace(Layer(1.65e15))).data()
    assert data["carriers"] == "electrons"
    assert data["best"].keys() == {"density_per_m2", "uncertainty_per_m2"}
