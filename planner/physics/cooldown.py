"""Cold stored in metal: heat to take out, and the helium and nitrogen that takes, between two bounds.

Latent heat only is the worst transfer: every litre boils at the bottom and leaves cold gas unused. Full exchange
is the best: gas leaves at the temperature of the metal. Real transfers fall between. Cooling to 77 K with
nitrogen first saves fifteen- to twentyfold of the helium in the first bound.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Final

import numpy as np
from numpy.polynomial import polynomial
from numpy.typing import ArrayLike
from scipy.constants import litre

from planner.errors import OutOfRangeError
from planner.physics.helium import (
    BOILING_K,
    BOILING_LATENT_J_PER_L,
    BOILING_DENSITY_kg_per_m3,
    BOILING_LATENT_J_per_kg,
    NITROGEN_DENSITY_kg_per_m3,
    NITROGEN_LATENT_J_per_kg,
    gas_enthalpy_J_per_kg,
)
from planner.physics.ranges import FloatArray, Values, as_values, within

# log₁₀(c_p in J/kg/K) as a polynomial in log₁₀(T in K), 4 to 300 K.
_HEAT_CAPACITY: Final[dict[str, tuple[float, ...]]] = {
    "copper": (-1.91844, -0.15973, 8.61013, -18.996, 21.9661, -12.7328, 3.54322, -0.3797),
    "aluminium": (46.6467, -314.292, 866.662, -1298.3, 1162.27, -637.795, 210.351, -38.3094, 2.96344),
    "stainless": (22.0061, -127.5528, 303.647, -381.0098, 274.0328, -112.9212, 24.7593, -2.239153),
}

METALS: Final = tuple(_HEAT_CAPACITY)
"""Metals known: oxygen-free copper, aluminium 6061-T6 and stainless steel 304."""

NITROGEN_BOILING_K = 77.355
"""Normal boiling point of nitrogen."""

# Mean heat capacity of nitrogen gas at 1 atm between 77 and 300 K, J/kg/K (R. Span et al., JPCRD 29, 1361 (2000)).
_NITROGEN_GAS_CP = 1051.0


def heat_capacity_J_per_kg_K(metal: str, temperature_K: ArrayLike) -> Values:
    """Return the heat capacity of a metal between 4 and 300 K.

    Parameters
    ----------
    metal
        One of `METALS`.
    temperature_K
        Temperature, 4 to 300 K.

    Raises
    ------
    OutOfRangeError
        For another metal or a temperature outside.

    Notes
    -----
    Fits of the NIST cryogenic materials database: E. D. Marquardt, J. P. Le, R. Radebaugh, Cryogenic Material
    Properties Database, Cryocoolers 11 (2002). 5 % or better.
    """
    temperature = within("temperature_K", temperature_K, 4.0, 300.0, because="range of the fits")
    return as_values(np.asarray(10.0 ** polynomial.polyval(np.log10(temperature), _coefficients(metal))))


def _coefficients(metal: str) -> tuple[float, ...]:
    if metal not in _HEAT_CAPACITY:
        raise OutOfRangeError(f"metal = {metal!r}: only {', '.join(METALS)} are known")
    return _HEAT_CAPACITY[metal]


def _cooling_integral(metal: str, from_K: float, to_K: float, weight: Callable[[FloatArray], FloatArray]) -> float:
    high = float(within("from_K", from_K, 4.0, 300.0))
    low = float(within("to_K", to_K, 4.0, high, because="cooling goes downwards, and the fits end at 4 K"))
    # Gauss points in ln T: heat capacities are smooth there from 4 to 300 K.
    nodes, weights = np.polynomial.legendre.leggauss(60)
    half = 0.5 * np.log(high / low)
    temperature = low * np.exp(half * (nodes + 1.0))
    capacity = np.asarray(heat_capacity_J_per_kg_K(metal, np.clip(temperature, 4.0, 300.0)))
    return float(half * np.sum(weights * temperature * capacity * weight(temperature)))


def metal_heat_J_per_kg(metal: str, from_K: float = 300.0, to_K: float = BOILING_K) -> float:
    """Return the heat to take out of a kilogram of metal: ∫c_p dT.

    Parameters
    ----------
    metal
        One of `METALS`.
    from_K, to_K
        Start and end of the cooldown, 300 K ≥ from ≥ to ≥ 4 K.

    Raises
    ------
    OutOfRangeError
        For another metal or temperatures outside or out of order.
    """
    return _cooling_integral(metal, from_K, to_K, np.ones_like)


def helium_latent_L_per_kg(metal: str, from_K: float) -> float:
    """Return the helium (L per kg) that cools a metal to 4.22 K by its latent heat alone: the upper bound.

    Raises `OutOfRangeError` for another metal or a start outside 4.2221 to 300 K.
    """
    return metal_heat_J_per_kg(metal, from_K) / BOILING_LATENT_J_PER_L


def helium_full_L_per_kg(metal: str, from_K: float) -> float:
    """Return the helium (L per kg) that cools a metal to 4.22 K if gas leaves as warm as the metal: the lower bound.

    Raises `OutOfRangeError` for another metal or a start outside 4.2221 to 300 K.
    """

    def kg_per_J(temperature: FloatArray) -> FloatArray:
        warm = np.asarray(gas_enthalpy_J_per_kg(temperature))
        return np.asarray(1.0 / (BOILING_LATENT_J_per_kg + warm))

    mass_kg = _cooling_integral(metal, from_K, BOILING_K, kg_per_J)
    return mass_kg / BOILING_DENSITY_kg_per_m3 / litre


def nitrogen_latent_L_per_kg(metal: str, from_K: float = 300.0) -> float:
    """Return the nitrogen (L per kg) that cools a metal to 77.4 K by its latent heat alone: the upper bound.

    Raises `OutOfRangeError` for another metal or a start outside 77.355 to 300 K.
    """
    heat = metal_heat_J_per_kg(metal, from_K, NITROGEN_BOILING_K)
    return heat / (NITROGEN_LATENT_J_per_kg * NITROGEN_DENSITY_kg_per_m3 * litre)


def nitrogen_full_L_per_kg(metal: str, from_K: float = 300.0) -> float:
    """Return the nitrogen (L per kg) that cools a metal to 77.4 K if gas leaves as warm as the metal.

    The lower bound. Raises `OutOfRangeError` for another metal or a start outside 77.355 to 300 K.
    """

    def kg_per_J(temperature: FloatArray) -> FloatArray:
        warm = _NITROGEN_GAS_CP * (temperature - NITROGEN_BOILING_K)
        return np.asarray(1.0 / (NITROGEN_LATENT_J_per_kg + warm))

    return _cooling_integral(metal, from_K, NITROGEN_BOILING_K, kg_per_J) / NITROGEN_DENSITY_kg_per_m3 / litre
