"""Hot spot of a quench: how much ∫I²dt a copper-stabilised wire bears before it reaches a temperature.

Adiabatic, with the heat capacity and resistance of the copper alone: B. J. Maddock, G. B. James, Proc. IEE 115,
543 (1968), from memory.
"""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike

from planner.physics.cooldown import heat_capacity_J_per_kg_K
from planner.physics.eddy import COPPER_4K_ohm_m, copper_ohm_m
from planner.physics.ranges import FloatArray, Values, as_values, positive, within

COPPER_kg_per_m3 = 8960.0
"""Density of copper; its change of 1 % with temperature is neglected."""

COPPER_DEBYE_K = 343.0
"""Debye temperature of copper that fits its resistance (common practice)."""

ICE_POINT_K = 273.15


@lru_cache(maxsize=1)
def _lattice_share() -> tuple[FloatArray, FloatArray]:
    """Return temperatures from 4 to 300 K and (T/Θ)⁵·J₅(Θ/T), the lattice part of a resistance but for a factor."""
    temperature = np.append(np.geomspace(4.0, 300.0, 400), ICE_POINT_K)
    nodes, weights = np.polynomial.legendre.leggauss(80)
    limit = np.minimum(COPPER_DEBYE_K / temperature, 60.0)[:, None]
    x = 0.5 * limit * (nodes + 1.0)
    integrand = x**5 * np.exp(-x) / np.expm1(-x) ** 2
    integral = 0.5 * limit[:, 0] * np.sum(weights * integrand, axis=1)
    share = (temperature / COPPER_DEBYE_K) ** 5 * integral
    return temperature[:-1], np.asarray(share[:-1] / share[-1])


def copper_resistivity_ohm_m(temperature_K: ArrayLike, rrr: float, field_T: float = 0.0) -> Values:
    """Return the resistivity of copper between 4 and 300 K: impurities, lattice and magnetoresistance.

    Parameters
    ----------
    temperature_K
        Temperature, 4 to 300 K.
    rrr
        Residual resistance ratio ρ(273 K)/ρ(4 K), 5 to 3000.
    field_T
        Field, at most 30 T; its sign is ignored.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    Bloch–Grüneisen law scaled to 1.55e-8 Ω·m at 273 K; the three parts added (Matthiessen). 10 %.
    """
    temperature = within("temperature_K", temperature_K, 4.0, 300.0)
    cold = float(np.asarray(copper_ohm_m(rrr, field_T)))
    knots, share = _lattice_share()
    lattice = np.exp(np.interp(np.log(temperature), np.log(knots), np.log(share)))
    return as_values(cold + COPPER_4K_ohm_m * (1.0 - 1.0 / rrr) * lattice)


def copper_quench_A2s_per_m4(hot_K: float, rrr: float, field_T: float = 0.0, cold_K: float = 4.2) -> float:
    """Return U = ∫γ·c_p/ρ dT of copper: ∫I²dt for a temperature rise is A²·U.

    Parameters
    ----------
    hot_K, cold_K
        Temperatures at the end and the start, 4 K ≤ cold ≤ hot ≤ 300 K.
    rrr, field_T
        Residual resistance ratio (5 to 3000) and field (at most 30 T).

    Returns
    -------
    float
        A²·s/m⁴: 1.5e17 to 300 K for RRR 100 without field. Accuracy 10 %.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    cold = float(within("cold_K", cold_K, 4.0, 300.0))
    hot = float(within("hot_K", hot_K, cold, 300.0, because="the hot end is warmer, and the fits end at 300 K"))
    temperature = np.clip(np.geomspace(cold, hot, 800), 4.0, 300.0)
    capacity = COPPER_kg_per_m3 * np.asarray(heat_capacity_J_per_kg_K("copper", temperature))
    return float(np.trapezoid(capacity / np.asarray(copper_resistivity_ohm_m(temperature, rrr, field_T)), temperature))


def quench_integral_A2s(copper_m2: ArrayLike, hot_K: float, rrr: float, field_T: float = 0.0) -> Values:
    """Return the ∫I²dt that heats a wire of a copper area from 4.2 K to ``hot_K``, in A²·s.

    Raises `OutOfRangeError` as `copper_quench_A2s_per_m4` does, or for an area that is not positive.
    """
    return as_values(positive("copper_m2", copper_m2) ** 2 * copper_quench_A2s_per_m4(hot_K, rrr, field_T))
