"""Fillings, plateaus and tilt."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.errors import OutOfRangeError
from planner.physics import fillings

from .handbook import COMMON_PRACTICE, SI_2019, Check, page

F = Fraction

QUANTUM_HALL = "K. von Klitzing, G. Dorda, M. Pepper, Phys. Rev. Lett. 45, 494 (1980); SI of 2019"
FRACTIONS = "D. C. Tsui, H. L. Stormer, A. C. Gossard, PRL 48, 1559 (1982); J. K. Jain, PRL 63, 199 (1989)"
FIVE_HALVES = "R. Willett et al., Phys. Rev. Lett. 59, 1776 (1987)"
GRAPHENE = "K. S. Novoselov et al., Nature 438, 197 (2005); Y. Zhang et al., Nature 438, 201 (2005)"

field, plateau, tilted = fillings.field_for_filling_T, fillings.hall_plateau_ohm, fillings.perpendicular_T


@page(
    [
        Check("1e15 m^-2, nu = 1", field, (1e15, 1), 4.135668, 1e-6, QUANTUM_HALL),
        Check("1e15 m^-2, nu = 2", field, (1e15, 2), 2.067834, 1e-6, QUANTUM_HALL),
        Check("1e15 m^-2, nu = 1/3", field, (1e15, 1 / 3), 12.40700, 1e-6, QUANTUM_HALL),
        Check("2e15 m^-2, nu = 1", field, (2e15, 1), 8.271335, 1e-6, QUANTUM_HALL),
        Check("2e15 m^-2, nu = 5/2", field, (2e15, 5 / 2), 3.308534, 1e-6, QUANTUM_HALL),
        Check("3e15 m^-2, nu = 2", field, (3e15, 2), 6.203502, 1e-6, QUANTUM_HALL),
        Check("holes at 3e15 m^-2, nu = -2", field, (-3e15, -2), 6.203502, 1e-6, QUANTUM_HALL),
        Check("electrons at nu = -2: field reversed", field, (3e15, -2), -6.203502, 1e-6, QUANTUM_HALL),
        Check(
            "graphene 1e16 m^-2: 2, 6, 10", field, (1e16, [2, 6, 10]), [20.67834, 6.892779, 4.135668], 1e-6, GRAPHENE
        ),
    ]
)
def test_field_of_a_filling(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize(
    ("filling", "expected_T", "source"),
    [
        (F(2, 5), 10.3392, FRACTIONS),
        (F(3, 7), 9.6499, FRACTIONS),
        (F(1, 2), 8.2713, FRACTIONS),
        (F(3, 5), 6.8928, FRACTIONS),
        (F(2, 3), 6.2035, FRACTIONS),
        (F(4, 3), 3.1018, FRACTIONS),
        (F(5, 3), 2.4814, FRACTIONS),
        (F(7, 3), 1.7724, FRACTIONS),
        (F(5, 2), 1.6543, FIVE_HALVES),
        (F(8, 3), 1.5509, FRACTIONS),
    ],
)
def test_fractions_at_1e15_per_m2(filling: F, expected_T: float, source: str) -> None:
    assert fillings.field_for_filling_T(1e15, float(filling)) == pytest.approx(expected_T, rel=1e-4), source


@page(
    [
        Check("nu = 1", plateau, (1,), 25812.80745930, 1e-8, SI_2019),
        Check("nu = 2", plateau, (2,), 12906.40373, 1e-8, SI_2019),
        Check("nu = 1/3", plateau, (1 / 3,), 77438.42238, 1e-8, SI_2019),
        Check("nu = 2/5", plateau, (2 / 5,), 64532.01865, 1e-8, SI_2019),
        Check("nu = 2/3", plateau, (2 / 3,), 38719.21119, 1e-8, SI_2019),
        Check("nu = 5/2", plateau, (5 / 2,), 10325.12298, 1e-8, SI_2019),
        Check("nu = 4", plateau, (4,), 6453.20186, 1e-8, SI_2019),
        Check("nu = 6", plateau, (6,), 4302.13458, 1e-8, SI_2019),
        Check("graphene 2, 6, 10", plateau, ([2, 6, 10],), [12906.40, 4302.135, 2581.281], 1e-6, GRAPHENE),
        Check("flux quantum h/e", lambda: fillings.FLUX_QUANTUM_T_m2, (), 4.1356677e-15, 1e-8, SI_2019),
    ]
)
def test_plateau_resistance(check: Check) -> None:
    check.holds()


@page(
    [
        Check("60 degrees halves the field", tilted, (8.0, np.pi / 3), 4.0, 1e-12, "geometry"),
        Check("no tilt", tilted, (8.0, 0.0), 8.0, 1e-12, "geometry"),
        Check("4 T across 60 degrees", fillings.total_T, (4.0, np.pi / 3), 8.0, 1e-12, "geometry"),
        Check("6 T of 12 T left", fillings.largest_tilt_rad, (6.0, 12.0), np.pi / 3, 1e-12, "geometry"),
    ]
)
def test_tilt(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize(
    ("filling", "expected"),
    [(F(i), True) for i in range(1, 21)]
    + [(F(*pair), True) for pair in ((1, 3), (2, 5), (3, 7), (4, 9), (2, 3), (3, 5), (4, 7), (5, 9), (4, 3), (7, 5))]
    + [(F(5, 2), True), (F(1, 2), False), (F(1, 4), False), (F(3, 2), False)],
    ids=str,
)
def test_which_fillings_have_a_plateau(filling: F, expected: bool) -> None:
    """Common practice, no source: integers, odd denominators, and 5/2 as the exception."""
    assert fillings.has_plateau(filling) is expected


def test_listed_fractions_hold_the_principal_sequence_and_its_mirrors() -> None:
    listed = set(fillings.fillings_to_list(largest_integer=20))
    wanted = {F(1, 3), F(2, 5), F(3, 7), F(4, 9), F(5, 11), F(5, 9), F(4, 7), F(3, 5), F(2, 3)}
    wanted |= {F(4, 3), F(7, 5), F(5, 3), F(7, 3), F(5, 2), F(8, 3)} | {F(i) for i in range(1, 21)}
    assert wanted <= listed, COMMON_PRACTICE
    assert F(1, 2) not in listed, "compressible"
    assert all(fillings.has_plateau(filling) for filling in listed)
    assert {1 - f for f in listed if f < 1} == {f for f in listed if f < 1}


def test_graphene_sequence() -> None:
    assert fillings.graphene_fillings(4) == (2, 6, 10, 14), GRAPHENE


def test_an_uncertain_density_gives_an_interval_of_field() -> None:
    low, high = fillings.field_interval_T(1e15, 1e13, 1.0)
    assert (low, high) == pytest.approx((4.135668 * 0.99, 4.135668 * 1.01), rel=1e-6)
    low, high = fillings.field_interval_T(-1e15, 1e13, 1.0, sigmas=2.0)
    assert (low, high) == pytest.approx((-4.135668 * 1.02, -4.135668 * 0.98), rel=1e-6)


SIGN = st.sampled_from([-1.0, 1.0])
DENSITY = st.builds(lambda sign, size: sign * size, SIGN, st.floats(1e13, 1e17))
FILLING = st.builds(lambda sign, size: sign * size, SIGN, st.floats(0.05, 100.0))


@given(DENSITY, FILLING)
def test_filling_field_and_density_invert_each_other_for_either_sign(density: float, filling: float) -> None:
    found_T = fillings.field_for_filling_T(density, filling)
    assert fillings.filling_at(density, found_T) == pytest.approx(filling, rel=1e-12)
    assert fillings.density_for_filling_per_m2(filling, found_T) == pytest.approx(density, rel=1e-12)
    assert np.sign(found_T) == np.sign(density) * np.sign(filling)


@given(st.floats(-20.0, 20.0), st.floats(-1.5, 1.5))
def test_tilt_inverts(total_T: float, tilt_rad: float) -> None:
    across_T = fillings.perpendicular_T(total_T, tilt_rad)
    assert fillings.total_T(across_T, tilt_rad) == pytest.approx(total_T, rel=1e-12, abs=1e-300)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (fillings.field_for_filling_T, (1e15, 0.0)),
        (fillings.field_for_filling_T, (0.0, 1.0)),
        (fillings.field_for_filling_T, (np.nan, 1.0)),
        (fillings.field_for_filling_T, (1e15, [1.0, 0.0])),
        (fillings.filling_at, (1e15, 0.0)),
        (fillings.filling_at, (0.0, 1.0)),
        (fillings.density_for_filling_per_m2, (0.0, 1.0)),
        (fillings.density_for_filling_per_m2, (1.0, 0.0)),
        (fillings.hall_plateau_ohm, (0.0,)),
        (fillings.perpendicular_T, (1.0, 1.6)),
        (fillings.total_T, (1.0, np.pi / 2)),
        (fillings.largest_tilt_rad, (13.0, 12.0)),
        (fillings.field_interval_T, (1e15, 1e15, 1.0)),
        (fillings.jain_fractions, (0,)),
        (fillings.graphene_fillings, (0,)),
        (fillings.fillings_to_list, (0,)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
