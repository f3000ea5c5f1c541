"""Current leads: the heat an optimal lead brings into the cold end.

Both forms take conductors that follow the Wiedemann–Franz law. Off their design current leads bring more than
optimal heat per ampere; without current a vapour-cooled lead still brings 0.5 to 0.7 of its rated load (from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import hour

from planner.physics.helium import (
    BOILING_K,
    BOILING_LATENT_J_PER_L,
    BOILING_LATENT_J_per_kg,
    GAS_CP_J_per_kg_K,
)
from planner.physics.ranges import Values, as_values, not_negative, positive, within

LORENZ_W_ohm_per_K2 = 2.443e-8
"""Lorenz number π²/3·(k_B/e)²; 2.45e-8 is also in use and adds 0.14 % to a lead."""


def conducting_lead_W_per_A(warm_K: ArrayLike, cold_K: ArrayLike) -> Values:
    """Return the least heat √(L₀·(T_h² − T_c²)) per ampere of one lead cooled at its ends only.

    Parameters
    ----------
    warm_K, cold_K
        Temperatures of the ends, positive, the warm one not below the cold one.

    Returns
    -------
    float or ndarray
        W/A for one lead: 46.9 mW/A from 300 to 4.2 K.

    Raises
    ------
    OutOfRangeError
        For temperatures outside these ranges.

    Notes
    -----
    R. McFee, Rev. Sci. Instrum. 30, 98 (1959), from memory. Holds at the one ratio of length to section
    that is optimal for the current.
    """
    warm, cold = positive("warm_K", warm_K), positive("cold_K", cold_K)
    difference = within("T_h² − T_c²", warm**2 - cold**2, 0.0, because="the warm end is colder")
    return as_values(np.sqrt(LORENZ_W_ohm_per_K2 * difference))


def vapour_cooled_W_per_A(warm_K: float = 300.0, vapour_share: float = 1.0) -> float:
    """Return the least heat per ampere of one lead cooled by the vapour it evaporates.

    Parameters
    ----------
    warm_K
        Temperature of the warm end, above 4.2221 K, where the cold end boils, and at most 400 K.
    vapour_share
        Share of the evaporated mass that flows along the lead, above 0 and at most 1; 0.864 if vapour stays in
        the vessel to replace the liquid.

    Returns
    -------
    float
        W/A for one lead: 1.11e-3 from 300 K with all the vapour.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    Perfect exchange between lead and gas of constant heat capacity: dq/dT = ṁ·c_p − I²·L₀·T/q with
    ṁ = share·Q/L and no heat from the warm end, q(T_h) = 0. In u = q/(I·T) the equation separates, and

        ln(T_h/T_c) = ∫₀^{u_c} u·du/(u² − a·u + L₀),   a = share·c_p/L · Q/I,   u_c = Q/(I·T_c)

    fixes Q/I. With the true heat capacity of helium, higher near 4 K, 1.083e-3 W/A results; published
    values are 1.04e-3 to 1.1e-3 (J. M. Lock, Cryogenics 9, 438 (1969); M. N. Wilson, Superconducting
    Magnets (Oxford 1983); both from memory).
    """
    from scipy.optimize import brentq

    cold = BOILING_K
    warm = float(within("warm_K", warm_K, cold, 400.0, open_low=True))
    share = float(within("vapour_share", vapour_share, 0.0, 1.0, open_low=True))
    cooling_per_K = share * GAS_CP_J_per_kg_K / BOILING_LATENT_J_per_kg

    def excess(heat: float) -> float:
        u, a = heat / cold, cooling_per_K * heat
        root = np.sqrt(LORENZ_W_ohm_per_K2 - a**2 / 4.0)
        logarithm = 0.5 * np.log((u**2 - a * u + LORENZ_W_ohm_per_K2) / LORENZ_W_ohm_per_K2)
        arc = np.arctan2(u - a / 2.0, root) + np.arctan2(a / 2.0, root)
        return float(logarithm + a / 2.0 / root * arc - np.log(warm / cold))

    # The integral grows without bound as a → 2√L₀, so the root lies below.
    highest = 2.0 * np.sqrt(LORENZ_W_ohm_per_K2) / cooling_per_K
    return float(brentq(excess, highest * 1e-6, highest * (1.0 - 1e-12), xtol=1e-15, rtol=1e-12))


def lead_pair_L_per_h(current_A: ArrayLike, heat_W_per_A: ArrayLike) -> Values:
    """Return the liquid helium a pair of leads evaporates at 4.22 K: 3.0 L/h at 1 kA for 1.08e-3 W/A.

    Parameters
    ----------
    current_A
        Current; its sign is ignored.
    heat_W_per_A
        Heat of one lead per ampere, not negative.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    current = np.abs(within("current_A", current_A))
    heat_W = 2.0 * current * not_negative("heat_W_per_A", heat_W_per_A)
    return as_values(heat_W / BOILING_LATENT_J_PER_L * hour)
