"""Load line of a coil against a critical surface: short sample, operating fraction, temperature margin.

A coil section is its peak field per ampere, the area of superconductor in its wire and a critical surface
from `planner.physics.nbti` or `planner.physics.nb3sn`. A magnet of several sections is as good as its worst.
"""

from __future__ import annotations

from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike

from planner.errors import OutOfRangeError
from planner.physics.ranges import Values, positive, within

HIGHEST_T = 40.0
"""No surface here carries current above this field."""

LOWEST_T = 1.0
LOWEST_K = 1.8
"""Field and temperature above which every surface here is valid."""


class Surface(Protocol):
    """A critical surface: what `NbTi`, `Summers` and `Iter2008` have in common."""

    def critical_temperature_K(self, field_T: ArrayLike) -> Values:
        """Return T_c in a field."""

    def critical_A_per_m2(self, field_T: ArrayLike, temperature_K: ArrayLike) -> Values:
        """Return J_c, zero where normal."""


def _critical_A(surface: Surface, area_m2: float, field_T: float, temperature_K: float) -> float:
    return area_m2 * float(np.asarray(surface.critical_A_per_m2(field_T, temperature_K)))


def short_sample_A(surface: Surface, area_m2: float, peak_T_per_A: float, temperature_K: float) -> float:
    """Return the current at which the load line meets the critical surface, A_sc·J_c(κ·I, T) = I.

    Parameters
    ----------
    surface
        Critical surface of the superconductor.
    area_m2
        Area of superconductor in the wire (for Nb₃Sn, of non-copper), positive.
    peak_T_per_A
        Peak field on the section per ampere κ, positive; larger than the coil constant at the centre.
    temperature_K
        Temperature of the coil, at least 1.8 K.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges, or if the lines meet below 1 T, where the surfaces do not hold.
    """
    from scipy.optimize import brentq

    area = float(positive("area_m2", area_m2))
    kappa = float(positive("peak_T_per_A", peak_T_per_A))
    temperature = float(within("temperature_K", temperature_K, LOWEST_K))

    def surplus_A(field_T: float) -> float:
        return _critical_A(surface, area, field_T, temperature) - field_T / kappa

    if surplus_A(LOWEST_T) <= 0.0:
        raise OutOfRangeError(f"the load line meets the critical surface below {LOWEST_T:g} T")
    return float(brentq(surplus_A, LOWEST_T, HIGHEST_T, xtol=1e-12)) / kappa


def operating_fraction(
    current_A: float, surface: Surface, area_m2: float, peak_T_per_A: float, temperature_K: float
) -> float:
    """Return |I| over the short-sample current along the load line.

    Parameters and errors as in `short_sample_A`, with the operating current (sign ignored) first.
    """
    return abs(current_A) / short_sample_A(surface, area_m2, peak_T_per_A, temperature_K)


def current_sharing_K(current_A: float, surface: Surface, area_m2: float, field_T: float) -> float:
    """Return the temperature at which a current in a field is just critical; independent of the bath.

    Parameters
    ----------
    current_A
        Current in the wire; its sign is ignored. In zero current this is T_c(B).
    surface, area_m2
        Critical surface and area of superconductor (positive).
    field_T
        Peak field on the wire, at least 1 T.

    Raises
    ------
    OutOfRangeError
        If the current is beyond critical even at 1.8 K, or a value is outside its range.
    """
    from scipy.optimize import brentq

    area = float(positive("area_m2", area_m2))
    field = float(within("field_T", field_T, LOWEST_T, because="the surfaces do not hold below"))
    current = abs(float(within("current_A", current_A)))
    highest = float(np.asarray(surface.critical_temperature_K(field)))
    if current == 0.0:
        return highest

    def surplus_A(temperature_K: float) -> float:
        return _critical_A(surface, area, field, temperature_K) - current

    if highest <= LOWEST_K or surplus_A(LOWEST_K) <= 0.0:
        raise OutOfRangeError(f"{current:g} A in {field:g} T is beyond critical even at {LOWEST_K:g} K")
    return float(brentq(surplus_A, LOWEST_K, highest, xtol=1e-12))


def temperature_margin_K(current_A: float, surface: Surface, area_m2: float, field_T: float, bath_K: float) -> float:
    """Return current-sharing temperature less the bath's: how far the wire may warm; negative beyond critical.

    Parameters and errors as in `current_sharing_K`, with the bath's temperature (at least 1.8 K) last.
    """
    bath = float(within("bath_K", bath_K, LOWEST_K))
    return current_sharing_K(current_A, surface, area_m2, field_T) - bath


def linear_margin_K(current_A: float, surface: Surface, area_m2: float, field_T: float, bath_K: float) -> float:
    """Return the estimate (T_c(B) − T)·(1 − I/I_c) of the temperature margin.

    A hand check of `temperature_margin_K`: a few per cent lower for NbTi, because J_c falls almost straight with
    temperature. Parameters and errors as there; raises `OutOfRangeError` also above T_c or for I > I_c.
    """
    bath = float(within("bath_K", bath_K, LOWEST_K))
    field = float(within("field_T", field_T, LOWEST_T))
    room = float(np.asarray(surface.critical_temperature_K(field))) - bath
    critical = _critical_A(surface, float(positive("area_m2", area_m2)), field, bath)
    within("current_A", abs(current_A), 0.0, critical, because="beyond critical at the bath's temperature")
    return float(positive("T_c − T", room)) * (1.0 - abs(current_A) / critical)
