"""Density, mobility and Fermi energy of a layer from low-field transport."""

from __future__ import annotations

from numpy.typing import ArrayLike
from scipy.constants import e, hbar, m_e, pi

from planner.physics.ranges import Values, as_values, nonzero, not_negative, positive


def density_of_hall_slope_per_m2(slope_ohm_per_T: ArrayLike) -> Values:
    """Return the sheet density n = 1/(e·dR_xy/dB) from the slope of a low-field Hall trace, signed.

    Raises `OutOfRangeError` for slope zero. One kind of carrier: a second one bends the trace.
    """
    return as_values(1.0 / (e * nonzero("slope_ohm_per_T", slope_ohm_per_T)))


def hall_slope_ohm_per_T(density_per_m2: ArrayLike) -> Values:
    """Return the low-field Hall slope dR_xy/dB = 1/(n·e), signed. Raises `OutOfRangeError` for n = 0."""
    return as_values(1.0 / (e * nonzero("density_per_m2", density_per_m2)))


def mobility_m2_per_Vs(density_per_m2: ArrayLike, sheet_ohm: ArrayLike) -> Values:
    """Return the mobility µ = 1/(|n|·e·ρ_xx) from density and zero-field resistance per square.

    Raises `OutOfRangeError` for n = 0 or a resistance that is not positive.
    """
    return as_values(1.0 / (abs(nonzero("density_per_m2", density_per_m2)) * e * positive("rho", sheet_ohm)))


def fermi_energy_J(density_per_m2: ArrayLike, mass_ratio: ArrayLike) -> Values:
    """Return π·ħ²·n/m*, the Fermi energy of a spin-degenerate parabolic layer, in J.

    Raises `OutOfRangeError` for a negative density or a mass ratio m*/m_e that is not positive.
    """
    mass = positive("mass_ratio", mass_ratio) * m_e
    return as_values(pi * hbar**2 * not_negative("density_per_m2", density_per_m2) / mass)
