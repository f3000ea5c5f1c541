"""Stray field of an unshielded solenoid, and the distances of the limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import milli, mu_0
from scipy.integrate import quad

from planner.errors import OutOfRangeError
from planner.physics import stray_field as stray

from .handbook import FROM_MEMORY, Check, page

DIPOLE = "magnetostatics of a dipole; derived"
ICNIRP = "ICNIRP, Health Phys. 96, 504 (2009)"
IEC = "IEC 60601-2-33:2022"
A, LENGTH, FIELD_T = 0.080, 0.250, 14.0
MOMENT = float(stray.dipole_moment_A_m2(FIELD_T, A, LENGTH))
LIMITS = np.array([0.5, 0.9, 3.0]) * milli


@page(
    [
        Check(
            "moment of 14 T in 80 mm by 250 mm", stray.dipole_moment_A_m2, (FIELD_T, A, LENGTH), 66486.9, 1e-5, DIPOLE
        ),
        Check(
            "0.5, 0.9, 3 mT on the axis",
            stray.axial_distance_m,
            (MOMENT, LIMITS),
            [2.98492, 2.45381, 1.64266],
            1e-5,
            DIPOLE,
        ),
        Check(
            "0.5, 0.9, 3 mT across it",
            stray.equatorial_distance_m,
            (MOMENT, LIMITS),
            [2.36913, 1.94759, 1.30378],
            1e-5,
            DIPOLE,
        ),
        Check("1e5 A m^2 at 3 m", stray.axial_field_T, (1e5, 3.0), 0.740741 * milli, 1e-5, DIPOLE),
        Check("1e5 A m^2, 0.5 mT on the axis", stray.axial_distance_m, (1e5,), 3.41995, 1e-5, DIPOLE),
        Check("1e5 A m^2, 0.5 mT across it", stray.equatorial_distance_m, (1e5,), 2.71442, 1e-5, DIPOLE),
        Check(
            "0.9 mT is nearer than 0.5 mT by",
            lambda: stray.axial_distance_m(1, stray.IMPLANTS_IEC_2022_T) / stray.axial_distance_m(1),
            (),
            0.822071,
            1e-5,
            IEC,
        ),
        Check("limit with implants", lambda: stray.IMPLANTS_T, (), 0.5 * milli, 1e-12, ICNIRP + "; from memory"),
        Check(
            "workers, head and limbs; public",
            lambda: (stray.WORKER_HEAD_T, stray.WORKER_LIMBS_T, stray.PUBLIC_T),
            (),
            (2.0, 8.0, 0.4),
            1e-12,
            ICNIRP,
        ),
        Check("loose steel", lambda: stray.LOOSE_STEEL_T, (), 3 * milli, 1e-12, FROM_MEMORY),
    ]
)
def test_stray_field(check: Check) -> None:
    check.holds()


def current_sheet_on_axis_T(distance_m: float) -> float:
    """Field of the coil as a stack of current loops (Biot and Savart), scaled to 14 T in the centre."""

    def of_stack(z: float) -> float:
        area, _ = quad(lambda s: A**2 / (A**2 + (z - s) ** 2) ** 1.5, -LENGTH / 2, LENGTH / 2)
        return mu_0 / 2 * area

    return FIELD_T * of_stack(distance_m) / of_stack(0.0)


@pytest.mark.parametrize(("distance_m", "dipole_low_by"), [(2.985, 0.0024), (1.0, 0.022), (0.6, 0.057)])
def test_dipole_against_a_stack_of_current_loops(distance_m: float, dipole_low_by: float) -> None:
    exact_T = current_sheet_on_axis_T(distance_m)
    stray.check_far(distance_m, A, LENGTH)
    assert 1 - stray.axial_field_T(MOMENT, distance_m) / exact_T == pytest.approx(dipole_low_by, abs=0.003)


def test_near_the_coil_the_dipole_is_too_low_and_refused() -> None:
    assert current_sheet_on_axis_T(2.985) == pytest.approx(0.50122 * milli, rel=1e-4)
    assert stray.axial_field_T(MOMENT, 0.405) == pytest.approx(0.2, rel=0.01)
    assert current_sheet_on_axis_T(0.405) / stray.axial_field_T(MOMENT, 0.405) == pytest.approx(1.13, abs=0.01)
    with pytest.raises(OutOfRangeError, match="too close"):
        stray.check_far(0.405, A, LENGTH)


@given(st.floats(1.0, 1e7), st.floats(1e-4, 1e-2))
def test_at_the_distance_the_field_is_the_limit(moment: float, limit_T: float) -> None:
    assert stray.axial_field_T(moment, stray.axial_distance_m(moment, limit_T)) == pytest.approx(limit_T)
    assert stray.equatorial_field_T(moment, stray.equatorial_distance_m(moment, limit_T)) == pytest.approx(limit_T)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (stray.dipole_moment_A_m2, (14.0, 0.0, 0.25)),
        (stray.axial_field_T, (1e5, 0.0)),
        (stray.equatorial_field_T, (0.0, 1.0)),
        (stray.axial_distance_m, (1e5, 0.0)),
        (stray.equatorial_distance_m, (-1.0,)),
        (stray.check_far, ([3.0, 0.3], 0.08, 0.25)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
