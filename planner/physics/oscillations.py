"""Shubnikov–de Haas oscillations: onset, period in 1/B, thermal and disorder damping."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import e, h, hbar, k, m_e, pi

from planner.physics.ranges import FloatArray, Values, as_values, nonzero, not_negative, positive, within

THERMAL_T_per_K: float = 2.0 * pi**2 * k * m_e / (hbar * e)
"""2π²·k_B·m_e/(ħ·e) = 14.693 T/K, the scale of thermal damping for the free electron mass."""


def onset_T(mobility_m2_per_Vs: ArrayLike) -> Values:
    """Return the field 1/µ from which oscillations may appear (ω_c·τ = 1).

    Raises `OutOfRangeError` if the mobility is not positive.

    Notes
    -----
    A lower bound: the quantum lifetime decides, and in modulation-doped GaAs the onset lies several times
    higher. D. Shoenberg, Magnetic Oscillations in Metals (Cambridge 1984), from memory.
    """
    return as_values(1.0 / positive("mobility_m2_per_Vs", mobility_m2_per_Vs))


def transport_time_s(mobility_m2_per_Vs: ArrayLike, mass_ratio: ArrayLike) -> Values:
    """Return the transport scattering time µ·m*/e. Raises `OutOfRangeError` for values not positive."""
    mass = positive("mass_ratio", mass_ratio) * m_e
    return as_values(positive("mobility_m2_per_Vs", mobility_m2_per_Vs) * mass / e)


def oscillation_field_T(density_per_m2: ArrayLike, degeneracy: ArrayLike = 2) -> Values:
    """Return the frequency B_F = |n|·h/(g·e) of oscillations in 1/B; their period is 1/B_F.

    Parameters
    ----------
    density_per_m2
        Sheet density, signed, not zero.
    degeneracy
        States per orbital level: 2 for spin, 4 for monolayer graphene, 1 where spin is split.

    Raises
    ------
    OutOfRangeError
        For zero density or a degeneracy below 1.

    Notes
    -----
    L. Onsager, Phil. Mag. 43, 1006 (1952), from memory.
    """
    carriers = np.abs(nonzero("density_per_m2", density_per_m2))
    return as_values(carriers * h / (within("degeneracy", degeneracy, 1.0) * e))


def density_of_oscillation_per_m2(oscillation_field_T: ArrayLike, degeneracy: ArrayLike = 2) -> Values:
    """Return the magnitude of the density whose oscillations have a frequency B_F: n = g·e·B_F/h.

    Raises `OutOfRangeError` if B_F is not positive or the degeneracy below 1.
    """
    states = within("degeneracy", degeneracy, 1.0)
    return as_values(positive("oscillation_field_T", oscillation_field_T) * states * e / h)


def next_extremum_T(field_T: ArrayLike, density_per_m2: ArrayLike, degeneracy: ArrayLike = 2) -> Values:
    """Return the field of the next like extremum above one at ``field_T``: 1/(1/B − 1/B_F).

    Raises
    ------
    OutOfRangeError
        If the field is not positive, or reaches B_F: the last level is empty above it.
    """
    end = np.asarray(oscillation_field_T(density_per_m2, degeneracy))
    field = positive("field_T", field_T)
    within("field_T / B_F", field / end, 0.0, 1.0, open_high=True, because="no further oscillation above B_F")
    return as_values(np.asarray(1.0 / (1.0 / field - 1.0 / end)))


def half_period_T(field_T: ArrayLike, density_per_m2: ArrayLike, degeneracy: ArrayLike = 2) -> Values:
    """Return the width ½·B²/B_F of half an oscillation near a field: what a sweep must resolve.

    Raises `OutOfRangeError` if the field is not positive or the density zero. For B well below B_F.
    """
    return as_values(
        0.5 * positive("field_T", field_T) ** 2 / np.asarray(oscillation_field_T(density_per_m2, degeneracy))
    )


def thermal_argument(temperature_K: ArrayLike, field_T: ArrayLike, mass_ratio: ArrayLike) -> Values:
    """Return X = 2π²·k_B·T·m*/(ħ·e·|B|) = 14.693·(m*/m_e)·T/B of the thermal damping.

    Raises `OutOfRangeError` for a negative temperature, zero field or a mass that is not positive.
    """
    return as_values(_argument(temperature_K, field_T, mass_ratio))


def _argument(temperature_K: ArrayLike, field_T: ArrayLike, mass_ratio: ArrayLike) -> FloatArray:
    temperature = not_negative("temperature_K", temperature_K)
    field = np.abs(nonzero("field_T", field_T))
    return np.asarray(THERMAL_T_per_K * positive("mass_ratio", mass_ratio) * temperature / field)


def thermal_damping(temperature_K: ArrayLike, field_T: ArrayLike, mass_ratio: ArrayLike) -> Values:
    """Return the factor X/sinh X by which temperature lowers an oscillation's amplitude; 1 at T = 0.

    Raises `OutOfRangeError` as `thermal_argument` does.
    I. M. Lifshitz, A. M. Kosevich, Sov. Phys. JETP 2, 636 (1956), from memory; for small amplitudes.
    """
    x = _argument(temperature_K, field_T, mass_ratio)
    # X/sinh X = 2X·e^(−X)/(1 − e^(−2X)): no overflow at large X, and 1 in the limit X → 0.
    # Below X = 1e-4 the series 1 − X²/6 is exact to the last digit and never rounds above 1.
    with np.errstate(invalid="ignore"):
        factor = 2.0 * x * np.exp(-x) / -np.expm1(-2.0 * x)
    return as_values(np.where(x > 1e-4, factor, 1.0 - x * x / 6.0))


def disorder_damping(dingle_K: ArrayLike, field_T: ArrayLike, mass_ratio: ArrayLike) -> Values:
    """Return the factor exp(−14.693·(m*/m_e)·T_D/B) by which disorder lowers an oscillation's amplitude.

    Parameters
    ----------
    dingle_K
        Dingle temperature ħ/(2π·k_B·τ_q), not negative.
    field_T, mass_ratio
        Field (not zero) and m*/m_e (positive).

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    return as_values(np.exp(-_argument(dingle_K, field_T, mass_ratio)))
