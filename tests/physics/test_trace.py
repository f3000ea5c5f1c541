"""Hall traces of known truth: slope, directions, offset, the end of the straight part."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.errors import OutOfRangeError
from planner.physics.carriers import hall_slope_ohm_per_T
from planner.physics.trace import alike, directions, fit_hall, scatter

from .traces import Faults, Layer, stepped_hall_ohm, sweep, there_and_back


def rng(seed: int = 0) -> np.random.Generator:
    return np.random.default_rng(seed)


@pytest.mark.parametrize("density", [1.3e15, -2.4e15])
@pytest.mark.parametrize("fields", [np.linspace(-1, 1, 300), np.linspace(0.6, 0, 200), there_and_back(-0.5, 0.5, 150)])
def test_a_trace_without_faults_gives_its_slope_exactly(density: float, fields: np.ndarray) -> None:
    fit = fit_hall(fields, fields * float(hall_slope_ohm_per_T(density)))
    assert fit.slope_ohm_per_T == pytest.approx(
        1.602176634e-19**-1 / density, rel=1e-9
    )  # R_xy = B/(n·e), e exact in SI
    assert fit.straight


def test_offset_and_remanence_and_lag_leave_the_slope_and_are_told() -> None:
    fields = there_and_back(-0.6, 0.6, 400)
    faults = Faults(noise=0.0, offset=0.0, remanence_T=4e-3, lag_T=1.5e-3)
    layer = Layer(2e15, quantum_m2_per_Vs=0.5)
    fit = fit_hall(*sweep(fields, layer, faults, rng())[:2])
    assert fit.slope_ohm_per_T == pytest.approx(1 / (2e15 * 1.602176634e-19), rel=1e-6)
    assert fit.zero_T == pytest.approx(4e-3, abs=1e-5)
    assert fit.lag_T is not None
    assert abs(fit.lag_T) == pytest.approx(2 * 1.5e-3, abs=2e-5)
    shifted = fit_hall(*sweep(fields, layer, Faults(0.0, 0.05, 4e-3, 1.5e-3), rng())[:2])
    assert shifted.slope_ohm_per_T == pytest.approx(fit.slope_ohm_per_T, rel=1e-6)


def test_the_straight_part_ends_where_plateaus_begin() -> None:
    fields = np.linspace(0.0, 6.0, 3000)
    truth = 1 / (2e15 * 1.602176634e-19)
    hall = stepped_hall_ohm(2e15, fields)
    whole = np.polyfit(fields, hall, 1)[0]
    assert abs(whole / truth - 1) > 0.01  # a line through everything would be wrong
    fit = fit_hall(fields, hall + 2.0 * rng(5).standard_normal(fields.size))
    assert fit.largest_T < 2.5
    assert fit.slope_ohm_per_T == pytest.approx(truth, rel=0.002)


def test_neighbours_that_are_alike_widen_the_uncertainty() -> None:
    fields = np.linspace(-0.5, 0.5, 1000)
    white = rng(1).standard_normal(fields.size + 20)
    filtered = np.convolve(white, np.ones(10) / 10, mode="valid")[: fields.size]
    plain = fit_hall(fields, 3000 * fields + 10 * white[: fields.size], 0.5)
    smooth = fit_hall(fields, 3000 * fields + 10 * np.sqrt(10) * filtered, 0.5)
    assert smooth.slope_sigma_ohm_per_T > 2 * plain.slope_sigma_ohm_per_T
    assert alike(white) == 1.0


def test_the_scatter_of_a_smooth_trace_is_that_of_its_noise() -> None:
    x = np.linspace(0, 1, 4000)
    assert scatter(x**3 - 2 * x) < 1e-9
    assert scatter(np.sin(9 * x) + 0.1 * rng(2).standard_normal(x.size)) == pytest.approx(0.1, rel=0.05)


def test_turning_points_are_found_and_jitter_makes_none() -> None:
    fields = np.concatenate([np.linspace(0, 1, 100), np.linspace(1, -1, 200), np.linspace(-1, 0, 100)])
    heading = directions(fields + 1e-3 * rng(3).standard_normal(fields.size))
    assert np.count_nonzero(np.diff(heading)) == 2
    assert (heading[:95] == 1).all()
    assert (heading[105:295] == -1).all()
    assert (heading[305:] == 1).all()


@given(st.integers(2, 200), st.sampled_from([1, -1]), st.floats(0.01, 10))
def test_one_way_sweeps_have_one_direction(points: int, way: int, top: float) -> None:
    assert (directions(np.linspace(-top, top, points)[::way]) == way).all()


@pytest.mark.parametrize(
    ("fields", "says"),
    [
        (np.full(50, 1.0), "does not change"),
        (np.linspace(0, 1, 10), "fewer than 12 points"),
        (np.array([0.0, np.nan] * 20), "nan"),
    ],
)
def test_outside_its_range_it_raises(fields: np.ndarray, says: str) -> None:
    with pytest.raises(OutOfRangeError, match=says):
        fit_hall(fields, 3000 * np.nan_to_num(fields))


def test_a_slope_lost_in_the_scatter_is_none() -> None:
    with pytest.raises(OutOfRangeError, match="lost in the scatter"):
        fit_hall(np.linspace(-1, 1, 100), rng(4).standard_normal(100))


def test_a_range_asked_for_is_taken() -> None:
    fields = np.linspace(-1, 1, 400)
    assert fit_hall(fields, 3000 * fields, 0.25).largest_T == 0.25
