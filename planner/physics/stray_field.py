"""Stray field of an unshielded solenoid far away, and the distances at which it falls to a limit.

Planning figures: active shielding and steel void them, a measured map replaces them, and site rules decide.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import mu_0, pi

from planner.physics.ranges import Values, as_values, finite, positive, within

IMPLANTS_T = 0.5e-3
"""0.5 mT (5 G): boundary for people with implants. ICNIRP, Health Phys. 96, 504 (2009), from memory.

IEC 60601-2-33:2022 moved the controlled area of imaging magnets to 0.9 mT; many national rules keep 0.5 mT,
the default here.
"""

IMPLANTS_IEC_2022_T = 0.9e-3
"""0.9 mT: controlled area of imaging magnets in IEC 60601-2-33:2022."""

LOOSE_STEEL_T = 3.0e-3
"""About 3 mT: loose ferromagnetic objects may become projectiles (from memory)."""

WORKER_HEAD_T, WORKER_LIMBS_T, PUBLIC_T = 2.0, 8.0, 0.4
"""Limits of static field for people without implants: ICNIRP, Health Phys. 96, 504 (2009)."""

NEAREST_IN_LENGTHS = 4.0
"""How many half-diagonals of the coil away from its centre the dipole is good to 6 %."""


def dipole_moment_A_m2(centre_T: ArrayLike, radius_m: ArrayLike, length_m: ArrayLike) -> Values:
    """Return the dipole moment B₀·π·a²·√(l² + 4a²)/µ₀ of a thin solenoid from its central field.

    Raises `OutOfRangeError` for a radius or length that is not positive. The sign of the field is ignored.
    """
    radius, length = positive("radius_m", radius_m), positive("length_m", length_m)
    field = np.abs(finite("centre_T", centre_T))
    return as_values(field * pi * radius**2 * np.sqrt(length**2 + 4.0 * radius**2) / mu_0)


def axial_field_T(moment_A_m2: ArrayLike, distance_m: ArrayLike) -> Values:
    """Return the field µ₀·m/(2π·z³) of a dipole on its axis.

    Raises `OutOfRangeError` unless moment and distance are positive. Not valid near the coil, where
    it is too low: by 12 % at 0.4 m from the centre of a coil 0.25 m long (see `check_far`).
    """
    cube = positive("distance_m", distance_m) ** 3
    return as_values(mu_0 * positive("moment_A_m2", moment_A_m2) / (2.0 * pi * cube))


def equatorial_field_T(moment_A_m2: ArrayLike, distance_m: ArrayLike) -> Values:
    """Return the field µ₀·m/(4π·r³) of a dipole in the plane across its axis. Raises as `axial_field_T`."""
    return as_values(0.5 * np.asarray(axial_field_T(moment_A_m2, distance_m)))


def axial_distance_m(moment_A_m2: ArrayLike, limit_T: ArrayLike = IMPLANTS_T) -> Values:
    """Return the distance on the axis at which a dipole's field falls to a limit.

    Raises `OutOfRangeError` unless moment and limit are positive.
    """
    return as_values(np.cbrt(mu_0 * positive("moment_A_m2", moment_A_m2) / (2.0 * pi * positive("limit_T", limit_T))))


def equatorial_distance_m(moment_A_m2: ArrayLike, limit_T: ArrayLike = IMPLANTS_T) -> Values:
    """Return the distance across the axis at which a dipole's field falls to a limit.

    Raises `OutOfRangeError` unless moment and limit are positive.
    """
    return as_values(np.asarray(axial_distance_m(moment_A_m2, limit_T)) / np.cbrt(2.0))


def check_far(distance_m: ArrayLike, radius_m: float, length_m: float) -> Values:
    """Return the distance if the dipole is good to 6 % there, four half-diagonals of the coil from its centre.

    Raises
    ------
    OutOfRangeError
        If any distance is closer: the coil is no dipole there and its map is needed.
    """
    half_diagonal = np.hypot(float(positive("radius_m", radius_m)), float(positive("l", length_m)) / 2.0)
    closest = NEAREST_IN_LENGTHS * float(half_diagonal)
    return as_values(within("distance_m", distance_m, closest, because="too close to the coil for a dipole"))
