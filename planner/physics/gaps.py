"""Energy scales of a layer in a field, and the temperature at which a gap shows.

Cyclotron and Coulomb scales follow the perpendicular field, the Zeeman splitting the total one. Energies
are given in J, temperatures E/k_B in K.
"""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import e, epsilon_0, hbar, k, m_e, physical_constants, pi

from planner.physics.fillings import has_plateau
from planner.physics.ranges import Values, as_values, finite, nonzero, positive, within

from planner.errors import OutOfRangeError  # isort: skip

GAAS_MASS_RATIO = 0.067
"""Effective mass of electrons in GaAs over the free mass (common practice)."""

GAAS_G_FACTOR = 0.44
"""Magnitude of the bare g factor in GaAs; exchange may enhance it more than tenfold (common practice)."""

GAAS_PERMITTIVITY = 12.9
"""Static relative permittivity of GaAs; 12.4 to 13 are in use (common practice)."""

BOHR_MAGNETON_J_per_T: float = physical_constants["Bohr magneton"][0]
"""µ_B (CODATA)."""


def cyclotron_gap_J(field_T: ArrayLike, mass_ratio: ArrayLike = GAAS_MASS_RATIO) -> Values:
    """Return ħ·e·|B|/m*, the spacing of Landau levels of a parabolic band, in J.

    Raises `OutOfRangeError` if the mass ratio m*/m_e is not positive or a value not finite.
    GaAs: 1.728 meV/T, 20.05 K/T.
    """
    field = np.abs(finite("field_T", field_T))
    return as_values(hbar * e * field / (positive("mass_ratio", mass_ratio) * m_e))


def graphene_level_J(level: ArrayLike, field_T: ArrayLike, velocity_m_per_s: ArrayLike = 1.0e6) -> Values:
    """Return the energy sgn(N)·v_F·√(2·e·ħ·|B·N|) of a Landau level of monolayer graphene, in J.

    Parameters
    ----------
    level
        Index N, signed whole number.
    field_T
        Perpendicular field; its sign is ignored.
    velocity_m_per_s
        Fermi velocity, positive.

    Raises
    ------
    OutOfRangeError
        Beyond 0.5 eV, where the band is no longer a cone, or for a value outside these ranges.

    Notes
    -----
    A. H. Castro Neto et al., Rev. Mod. Phys. 81, 109 (2009), from memory.
    """
    index = finite("level", level)
    field = np.abs(finite("field_T", field_T))
    size = positive("velocity_m_per_s", velocity_m_per_s) * np.sqrt(2 * e * hbar * field * np.abs(index))
    within("level energy in eV", size / e, 0.0, 0.5, because="the band is a cone only near its point")
    return as_values(np.sign(index) * size)


def zeeman_J(total_T: ArrayLike, g_factor: ArrayLike = GAAS_G_FACTOR) -> Values:
    """Return the bare spin splitting |g|·µ_B·|B| in the *total* field, in J.

    Raises `OutOfRangeError` for a value that is not finite. GaAs: 25.47 µeV/T, 0.2956 K/T.
    """
    g = np.abs(finite("g_factor", g_factor))
    return as_values(g * BOHR_MAGNETON_J_per_T * np.abs(finite("total_T", total_T)))


def magnetic_length_m(field_T: ArrayLike) -> Values:
    """Return l_B = √(ħ/(e·|B|)), 25.66 nm at 1 T. Raises `OutOfRangeError` in zero field."""
    return as_values(np.sqrt(hbar / (e * np.abs(nonzero("field_T", field_T)))))


def coulomb_scale_J(field_T: ArrayLike, permittivity_ratio: ArrayLike = GAAS_PERMITTIVITY) -> Values:
    """Return e²/(4π·ε₀·ε_r·l_B), the scale of interactions between electrons, in J.

    Raises `OutOfRangeError` in zero field or if ε_r is not positive.

    Notes
    -----
    GaAs with ε_r = 12.9: 50.49 K at 1 T, growing as √B. The often quoted 50.8 K belongs to ε_r = 12.82.
    An ideal thin layer; measured gaps of fractions are far smaller than fractions of this scale.
    """
    length = np.asarray(magnetic_length_m(field_T))
    return as_values(e**2 / (4 * pi * epsilon_0 * positive("permittivity_ratio", permittivity_ratio) * length))


def energy_K(energy_J: ArrayLike) -> Values:
    """Return E/k_B in K. Raises `OutOfRangeError` for a value that is not finite."""
    return as_values(finite("energy_J", energy_J) / k)


def gap_scale_K(filling: Fraction, field_T: float, total_T: float) -> float:
    """Return the scale of the gap of a filling of a GaAs layer over k_B, in K.

    Parameters
    ----------
    filling
        Filling with a plateau (see `planner.physics.fillings.has_plateau`), signed, not zero.
    field_T, total_T
        Perpendicular and total field; signs are ignored.

    Returns
    -------
    float
        Even integers: ħω_c less the spin splitting. Odd integers: the bare spin splitting. Fractions of odd
        denominator q: 0.3·E_C/q. 5/2 and 7/2: 0.025·E_C.

    Raises
    ------
    OutOfRangeError
        For a filling without a plateau, filling 0, zero field, or a total below the perpendicular field.

    Notes
    -----
    An order of magnitude. Exchange raises the gaps of odd integers (up to tenfold); thickness, mixing of
    levels and disorder lower those of fractions (threefold and more). Composite-fermion scaling of
    fractions: B. I. Halperin, P. A. Lee, N. Read, Phys. Rev. B 47, 7312 (1993); prefactors from memory.
    """
    if filling == 0 or not has_plateau(filling):
        raise OutOfRangeError(f"filling {filling} is not expected to show a plateau")
    field = abs(float(nonzero("field_T", field_T)))
    spin = float(zeeman_J(within("|total_T|", abs(total_T), field, because="smaller than its component")))
    if filling.denominator > 1:
        share = 0.025 if filling.denominator == 2 else 0.3 / filling.denominator
        gap = share * float(coulomb_scale_J(field))
    else:
        gap = spin if filling.numerator % 2 else float(cyclotron_gap_J(field)) - spin
    if gap <= 0.0:
        raise OutOfRangeError(f"at this tilt spin levels cross and filling {filling} has no simple gap")
    return gap / k


def activated_share(gap_K: ArrayLike, temperature_K: ArrayLike) -> Values:
    """Return exp(−Δ/2k_BT), the share of a longitudinal resistance that is left by activation.

    Raises `OutOfRangeError` for a negative gap or a temperature that is not positive.

    Notes
    -----
    Δ is the full gap: the slope of ln ρ_xx over 1/T is −Δ/2k_B. Holds roughly for Δ/20 < k_BT < Δ/2; colder,
    hopping takes over and the resistance falls less.
    """
    gap = within("gap_K", gap_K, 0.0)
    return as_values(np.exp(-gap / (2.0 * positive("temperature_K", temperature_K))))


def temperature_to_resolve_K(gap_K: ArrayLike, left_over: ArrayLike = 0.01) -> Values:
    """Return the temperature at which activation leaves a share of the longitudinal resistance.

    Δ/(2·ln(1/share)): Δ/9.2 for 1 %, a minimum that may be called zero (common practice).
    Raises `OutOfRangeError` for a gap that is not positive or a share outside 0 to 1, ends excluded.
    """
    share = within("left_over", left_over, 0.0, 1.0, open_low=True, open_high=True)
    return as_values(-positive("gap_K", gap_K) / (2.0 * np.log(share)))
