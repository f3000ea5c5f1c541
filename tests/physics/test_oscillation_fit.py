"""Oscillations of known frequency, found again in 1/B."""

from __future__ import annotations

import numpy as np
import pytest

from planner.errors import OutOfRangeError
from planner.physics.oscillation_fit import fit_oscillations

from .traces import Faults, Layer, sweep, there_and_back

FLUX_T_m2 = 4.135667696e-15
"""h/e, SI of 2019."""


def frequency_T(density_per_m2: float) -> float:
    """n·h/(2e): L. Onsager, Phil. Mag. 43, 1006 (1952), two spins to a level."""
    return density_per_m2 * FLUX_T_m2 / 2


@pytest.mark.parametrize("density", [1.0e15, 2.2e15, 4.5e15])
@pytest.mark.parametrize("expected", [True, False])
def test_the_frequency_is_found_with_and_without_a_hint(density: float, expected: bool) -> None:
    fields = np.linspace(0.02, 0.7 * density / 1e15, 900)
    _, _, along = sweep(fields, Layer(density), Faults(noise=0.005), np.random.default_rng(1))
    fit = fit_oscillations(fields, along, expected_T=1.1 * frequency_T(density) if expected else None)
    assert fit.frequency_T == pytest.approx(frequency_T(density), rel=3e-3)
    assert abs(fit.frequency_T - frequency_T(density)) < 4 * fit.sigma_T
    assert fit.cycles > 5
    assert fit.explained > 0.9


def test_the_shift_of_each_direction_is_found_where_both_signs_of_field_oscillate() -> None:
    fields = there_and_back(-1.2, 1.2, 900)
    faults = Faults(noise=0.005, remanence_T=6e-3, lag_T=2e-3)
    _, _, along = sweep(fields, Layer(2e15), faults, np.random.default_rng(2))
    fit = fit_oscillations(fields, along)
    assert fit.shift_up_T == pytest.approx(8e-3, abs=1e-3)
    assert fit.shift_down_T == pytest.approx(4e-3, abs=1e-3)
    assert fit.frequency_T == pytest.approx(frequency_T(2e15), rel=1e-3)


def test_fields_below_filling_six_are_left_out() -> None:
    fields = np.linspace(0.05, 4.0, 3000)
    _, _, along = sweep(fields, Layer(2e15), Faults(noise=0.01), np.random.default_rng(3))
    fit = fit_oscillations(fields, along, expected_T=frequency_T(2e15))
    assert fit.high_T <= 1.15 * frequency_T(2e15) / 3


@pytest.mark.parametrize(
    ("values", "says"),
    [
        (np.random.default_rng(4).standard_normal(400), "stands out"),
        (np.linspace(1, 2, 400), "stands out"),
        (np.full(400, 5.0), "stands out"),
    ],
)
def test_what_does_not_oscillate_gives_no_period(values: np.ndarray, says: str) -> None:
    with pytest.raises(OutOfRangeError, match=says):
        fit_oscillations(np.linspace(0.05, 1.5, 400), values)


def test_noise_is_not_taken_for_oscillations() -> None:
    fields = np.linspace(0.05, 1.5, 400)
    for seed in range(12):
        with pytest.raises(OutOfRangeError, match="stands out"):
            fit_oscillations(fields, 100 + np.random.default_rng(seed).standard_normal(fields.size))


def test_too_few_points_raise() -> None:
    with pytest.raises(OutOfRangeError, match="fewer than 30 points"):
        fit_oscillations(np.linspace(0.05, 1.5, 400), np.ones(400), low_T=1.45)
