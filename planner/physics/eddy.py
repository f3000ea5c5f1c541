"""Eddy-current heating of metal parts in a ramping field, by geometry.

Every form is the induction law with the field of the eddy currents themselves neglected: valid when a
ramp lasts far longer than `diffusion_time_s`. Heat goes as the square of the rate. Compare F. Pobell, Matter and
Methods at Low Temperatures, ch. 10 (from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import mu_0, pi

from planner.physics.ranges import FloatArray, Values, as_values, finite, positive, within

COPPER_4K_ohm_m = 1.55e-8
"""Resistivity of copper at 273 K: divided by the residual resistance ratio, that at 4 K (common practice)."""

COPPER_MAGNETO_ohm_m_per_T = 4.8e-11
"""Magnetoresistance of cold copper per tesla (from memory, 15 %)."""

FIRST_BESSEL_ZERO = 2.404825557695773
"""First zero of the Bessel function J₀."""


def copper_ohm_m(rrr: ArrayLike, field_T: ArrayLike = 0.0) -> Values:
    """Return the resistivity of copper below about 10 K: 1.55e-8/RRR + 4.8e-11·|B| (Ω·m).

    Raises `OutOfRangeError` for a residual resistance ratio below 5 or above 3000, or beyond 30 T.
    The magnetoresistance is from memory, 15 %.
    """
    ratio = within("rrr", rrr, 5.0, 3000.0)
    field = np.abs(within("field_T", field_T, -30.0, 30.0))
    return as_values(COPPER_4K_ohm_m / ratio + COPPER_MAGNETO_ohm_m_per_T * field)


def _drive(size_m: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> FloatArray:
    speed = positive("size_m", size_m) * finite("rate_T_per_s", rate_T_per_s)
    return np.asarray(speed**2 / positive("resistivity_ohm_m", resistivity_ohm_m))


def axial_cylinder_W_per_m3(radius_m: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return r²·Ḃ²/(8ρ): a cylinder or disc with the field along its axis.

    Raises `OutOfRangeError` for a radius or resistivity that is not positive.
    """
    return as_values(_drive(radius_m, rate_T_per_s, resistivity_ohm_m) / 8.0)


def transverse_cylinder_W_per_m3(radius_m: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return r²·Ḃ²/(4ρ): a long cylinder with the field across its axis.

    Raises `OutOfRangeError` for a radius or resistivity that is not positive.
    """
    return as_values(_drive(radius_m, rate_T_per_s, resistivity_ohm_m) / 4.0)


def sphere_W_per_m3(radius_m: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return r²·Ḃ²/(10ρ): a sphere.

    Raises `OutOfRangeError` for a radius or resistivity that is not positive.
    """
    return as_values(_drive(radius_m, rate_T_per_s, resistivity_ohm_m) / 10.0)


def plate_W_per_m3(thickness_m: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return d²·Ḃ²/(12ρ): a wide plate with the field in its plane.

    Raises `OutOfRangeError` for a thickness or resistivity that is not positive.
    """
    return as_values(_drive(thickness_m, rate_T_per_s, resistivity_ohm_m) / 12.0)


def tube_W_per_m3(radius_m: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return a²·Ḃ²/(4ρ): a thin-walled tube of mean radius a with the field along its axis.

    Raises `OutOfRangeError` for a radius or resistivity that is not positive.
    """
    return as_values(_drive(radius_m, rate_T_per_s, resistivity_ohm_m) / 4.0)


def ring_W(radius_m: ArrayLike, section_m2: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return the heat π·a³·A·Ḃ²/(2ρ) of a closed thin ring across the field, in W.

    Parameters
    ----------
    radius_m, section_m2
        Mean radius a and cross-section A of the ring, positive.
    rate_T_per_s, resistivity_ohm_m
        Rate of the field and resistivity (positive).

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    volume = 2.0 * pi * positive("radius_m", radius_m) * positive("section_m2", section_m2)
    return as_values(volume * _drive(radius_m, rate_T_per_s, resistivity_ohm_m) / 4.0)


def bar_W_per_m(torsion_m4: ArrayLike, rate_T_per_s: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return the heat per length J·Ḃ²/(4ρ) of a long bar of any section with the field along it, in W/m.

    The stress function of torsion solves the same equation as the eddy currents; J is the section's torsion
    constant (π·r⁴/2 for a round bar). Raises `OutOfRangeError` unless J and ρ are positive.
    """
    rate = finite("rate_T_per_s", rate_T_per_s)
    torsion = positive("torsion_m4", torsion_m4)
    return as_values(torsion * rate**2 / (4.0 * positive("resistivity_ohm_m", resistivity_ohm_m)))


def diffusion_time_s(radius_m: ArrayLike, resistivity_ohm_m: ArrayLike) -> Values:
    """Return µ₀·r²/(2.405²·ρ), the slowest decay time of eddy currents in a cylinder along the field.

    Raises `OutOfRangeError` for a radius or resistivity that is not positive.
    """
    square = positive("radius_m", radius_m) ** 2
    return as_values(mu_0 * square / (FIRST_BESSEL_ZERO**2 * positive("rho", resistivity_ohm_m)))
