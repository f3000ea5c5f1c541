"""Landau-level fillings: which field shows which filling, its plateau resistance, tilt, what to list.

Fields are components perpendicular to the two-dimensional layer unless a name says total. Signs are
kept: electrons in a positive field have positive density and filling, and reversing field or carriers
reverses the filling.
"""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import e, h

from planner.errors import OutOfRangeError
from planner.physics.ranges import Values, as_values, finite, nonzero, positive, within

FLUX_QUANTUM_T_m2: float = h / e
"""h/e = 4.1356677e-15 T·m², the flux through the area of one state of a Landau level (SI-2019, exact)."""

VON_KLITZING_OHM: float = h / e**2
"""h/e² = 25 812.807 46 Ω (SI-2019, exact)."""


def field_for_filling_T(density_per_m2: ArrayLike, filling: ArrayLike) -> Values:
    """Return the perpendicular field at which a layer has a filling: B = n·h/(e·ν).

    Parameters
    ----------
    density_per_m2
        Sheet density n, signed, not zero (1e15 m⁻² = 1e11 cm⁻²).
    filling
        Filling ν, signed, not zero. Broadcast against the density.

    Returns
    -------
    float or ndarray
        Field in T, signed.

    Raises
    ------
    OutOfRangeError
        For ν = 0 (no finite field), n = 0 (no carriers) or a value that is not finite.

    Notes
    -----
    Valid for a single layer with one kind of carrier. Source: K. von Klitzing, G. Dorda, M. Pepper,
    Phys. Rev. Lett. 45, 494 (1980); constants exact since the SI of 2019.
    """
    carriers = nonzero("density_per_m2", density_per_m2, because="a layer without carriers has no fillings")
    nu = nonzero("filling", filling, because="no finite field has filling 0")
    return as_values(carriers * FLUX_QUANTUM_T_m2 / nu)


def filling_at(density_per_m2: ArrayLike, field_T: ArrayLike) -> Values:
    """Return the filling ν = n·h/(e·B) of a layer in a perpendicular field.

    Parameters
    ----------
    density_per_m2
        Sheet density n, signed, not zero.
    field_T
        Perpendicular field, signed, not zero.

    Returns
    -------
    float or ndarray
        Filling, signed.

    Raises
    ------
    OutOfRangeError
        For B = 0, n = 0 or a value that is not finite.
    """
    carriers = nonzero("density_per_m2", density_per_m2, because="a layer without carriers has no fillings")
    field = nonzero("field_T", field_T, because="fillings are not defined in zero field")
    return as_values(carriers * FLUX_QUANTUM_T_m2 / field)


def density_for_filling_per_m2(filling: ArrayLike, field_T: ArrayLike) -> Values:
    """Return the sheet density n = ν·e·B/h that has a filling in a perpendicular field.

    Parameters
    ----------
    filling
        Filling ν, signed, not zero.
    field_T
        Perpendicular field, signed, not zero.

    Returns
    -------
    float or ndarray
        Density in m⁻², signed.

    Raises
    ------
    OutOfRangeError
        For ν = 0, B = 0 or a value that is not finite.
    """
    nu = nonzero("filling", filling, because="filling 0 has no carriers")
    field = nonzero("field_T", field_T, because="fillings are not defined in zero field")
    return as_values(nu * field / FLUX_QUANTUM_T_m2)


def hall_plateau_ohm(filling: ArrayLike) -> Values:
    """Return the plateau R_xy = (h/e²)/ν of a filling, signed, in Ω.

    Raises
    ------
    OutOfRangeError
        For ν = 0 or a value that is not finite.

    Notes
    -----
    Holds where k_B·T is far below the gap. A compressible filling such as 1/2 has this value on the
    classical Hall line, without a plateau (see `has_plateau`). Source: h/e² exact, CODATA 2018.
    """
    nu = nonzero("filling", filling, because="filling 0 has no plateau of finite resistance")
    return as_values(VON_KLITZING_OHM / nu)


def field_interval_T(
    density_per_m2: float, density_sigma_per_m2: float, filling: ArrayLike, sigmas: float = 1.0
) -> tuple[Values, Values]:
    """Return the lower and upper field between which a filling lies when the density is uncertain.

    Parameters
    ----------
    density_per_m2, density_sigma_per_m2
        Sheet density and its standard uncertainty (not negative).
    filling
        Fillings, signed, not zero.
    sigmas
        Half-width of the interval in standard uncertainties.

    Returns
    -------
    tuple
        Lower and upper field in T (lower ≤ upper for either sign).

    Raises
    ------
    OutOfRangeError
        Additionally if the interval of density reaches zero, where no field interval exists.
    """
    half = float(within("density_sigma_per_m2", density_sigma_per_m2, 0.0)) * float(within("sigmas", sigmas, 0.0))
    if half >= abs(density_per_m2):
        raise OutOfRangeError(f"density_per_m2 = {density_per_m2:g} ± {half:g} includes zero: no field interval exists")
    ends = (
        np.asarray(field_for_filling_T(density_per_m2 - half, filling)),
        np.asarray(field_for_filling_T(density_per_m2 + half, filling)),
    )
    return as_values(np.minimum(*ends)), as_values(np.maximum(*ends))


def perpendicular_T(total_T: ArrayLike, tilt_rad: ArrayLike) -> Values:
    """Return the component B·cos θ perpendicular to a layer tilted by θ (0: layer normal along the field).

    Raises
    ------
    OutOfRangeError
        For |θ| > π/2 or a value that is not finite.
    """
    tilt = within("tilt_rad", tilt_rad, -np.pi / 2, np.pi / 2)
    return as_values(finite("total_T", total_T) * np.cos(tilt))


def total_T(perpendicular_T: ArrayLike, tilt_rad: ArrayLike) -> Values:
    """Return the total field B⊥/cos θ that has a perpendicular component on a layer tilted by θ.

    Raises
    ------
    OutOfRangeError
        For |θ| ≥ π/2, where the layer lies along the field, or a value that is not finite.
    """
    tilt = within(
        "tilt_rad", tilt_rad, -np.pi / 2, np.pi / 2, open_low=True, open_high=True,
        because="the layer lies along the field",
    )  # fmt: skip
    return as_values(finite("perpendicular_T", perpendicular_T) / np.cos(tilt))


def largest_tilt_rad(perpendicular_T: ArrayLike, available_T: ArrayLike) -> Values:
    """Return the largest tilt at which a magnet of ``available_T`` still reaches a perpendicular field.

    Parameters
    ----------
    perpendicular_T
        Perpendicular field wanted; its sign is ignored.
    available_T
        Largest total field, positive.

    Returns
    -------
    float or ndarray
        arccos(|B⊥|/B) in rad, between 0 and π/2.

    Raises
    ------
    OutOfRangeError
        If the field wanted exceeds the field available even without tilt.
    """
    available = positive("available_T", available_T)
    share = np.abs(finite("perpendicular_T", perpendicular_T)) / available
    share = within("share of the available field", share, 0.0, 1.0, because="out of reach even without tilt")
    return as_values(np.arccos(share))


def has_plateau(filling: Fraction) -> bool:
    """Say whether a filling of a single layer is expected to show a Hall plateau at all.

    Integers and fractions of odd denominator can; of the even denominators only 5/2 and its mirror 7/2
    are known in ordinary GaAs layers, below about 100 mK and above about 1000 m²/Vs (from memory). The
    filling 1/2 is compressible.

    Notes
    -----
    D. C. Tsui, H. L. Störmer, A. C. Gossard, Phys. Rev. Lett. 48, 1559 (1982); 5/2: R. Willett et al.,
    Phys. Rev. Lett. 59, 1776 (1987); 7/2 from memory.
    """
    return filling.denominator % 2 == 1 or abs(filling) in (Fraction(5, 2), Fraction(7, 2))


def jain_fractions(largest_p: int) -> tuple[Fraction, ...]:
    """Return the fractions p/(2p ± 1) below 1 for p up to ``largest_p``, in rising order.

    The upper branch p/(2p − 1) starts with p = 2 and holds the particle-hole mates of the lower one.
    Raises `OutOfRangeError` for ``largest_p`` below 1. Source: J. K. Jain, Phys. Rev. Lett. 63, 199 (1989).
    """
    within("largest_p", largest_p, 1)
    below_half = {Fraction(p, 2 * p + 1) for p in range(1, largest_p + 1)}
    return tuple(sorted(below_half | {1 - fraction for fraction in below_half}))


def fillings_to_list(largest_integer: int = 12) -> tuple[Fraction, ...]:
    """Return the fillings worth a line in a table for a GaAs-like layer, in rising order.

    The sequence p/(2p ± 1) to 5/11 with its mirror, 4/3, 7/5, 8/5, 5/3, 7/3, 5/2, 8/3 and the integers up
    to ``largest_integer``. Raises `OutOfRangeError` for ``largest_integer`` below 1. Which fractions a
    sample shows depends on its mobility and temperature; the selection is common practice.
    """
    within("largest_integer", largest_integer, 1)
    above_one = [Fraction(*pair) for pair in ((4, 3), (7, 5), (8, 5), (5, 3), (7, 3), (5, 2), (8, 3))]
    return tuple(sorted({*jain_fractions(5), *above_one, *(Fraction(i) for i in range(1, largest_integer + 1))}))


def graphene_fillings(levels: int) -> tuple[int, ...]:
    """Return the fillings 4·(N + 1/2) = 2, 6, 10, … of monolayer graphene for N below ``levels``.

    Holes show the same sequence with a minus sign. Raises `OutOfRangeError` for ``levels`` below 1.
    Source: K. S. Novoselov et al., Nature 438, 197 (2005); Y. Zhang et al., Nature 438, 201 (2005);
    fourfold degeneracy, not lifted.
    """
    within("levels", levels, 1)
    return tuple(4 * level + 2 for level in range(levels))
