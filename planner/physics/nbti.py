"""NbTi: upper critical field, critical temperature, and fits of the critical current density.

All fits share one form (L. Bottura, IEEE Trans. Appl. Supercond. 10, 1054 (2000), from memory):

    J_c = (K/B)·b^α·(1 − b)^β·(1 − t^1.7)^γ,   b = B/B_c2(T),  t = T/T_c0,  B_c2(T) = B_c20·(1 − t^1.7)

`SET_A` and `SET_B` describe accelerator-magnet wire of 3000 A/mm² at 5 T and 4.2 K and differ by up to
15 % (9 T, 4.2 K); neither gives exactly its reference there. `ROUTINE` is the form of the author's property
routine of 2013, which does, and falls lowest at high field. A wire's own data decide; a rig file names its fit
and the area that makes it match. Real wires scatter by 10 % about any of them.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import milli

from planner.physics.ranges import FloatArray, Values, as_values, within

_PER_mm2 = 1.0 / milli**2
LOWEST_K = 1.8
"""Below, in saturated superfluid helium, the fits have no data."""

LOWEST_T = 0.5
"""Below, the 1/B of the fits overstates the current density without bound."""


@dataclass(frozen=True)
class NbTi:
    """One set of parameters of the critical surface of NbTi.

    Attributes
    ----------
    constant_AT_per_m2
        K, the constant of the 1/B law (in the publication J_ref·C₀).
    alpha, beta, gamma
        Exponents of b, 1 − b and 1 − t^1.7.
    zero_field_K, zero_temperature_T
        T_c0 and B_c20; by default those of M. S. Lubell, IEEE Trans. Magn. 19, 754 (1983).
    """

    constant_AT_per_m2: float
    alpha: float
    beta: float
    gamma: float
    zero_field_K: float = 9.2
    zero_temperature_T: float = 14.5

    def upper_critical_T(self, temperature_K: ArrayLike) -> Values:
        """Return B_c2(T); zero at and above T_c0. Raises `OutOfRangeError` below 0 K."""
        return as_values(self.zero_temperature_T * self._cold(within("temperature_K", temperature_K, 0.0)))

    def critical_temperature_K(self, field_T: ArrayLike) -> Values:
        """Return T_c(B) = T_c0·(1 − B/B_c20)^(1/1.7). Raises `OutOfRangeError` outside 0 ≤ B ≤ B_c20."""
        field = within("field_T", field_T, 0.0, self.zero_temperature_T, because="NbTi is normal above")
        return as_values(self.zero_field_K * (1.0 - field / self.zero_temperature_T) ** (1.0 / 1.7))

    def critical_A_per_m2(self, field_T: ArrayLike, temperature_K: ArrayLike) -> Values:
        """Return the critical current density of the superconductor.

        Parameters
        ----------
        field_T
            Magnitude of the field, at least 0.5 T.
        temperature_K
            Temperature, at least 1.8 K.

        Returns
        -------
        float or ndarray
            J_c in A/m², zero where the superconductor is normal (B ≥ B_c2 or T ≥ T_c0).

        Raises
        ------
        OutOfRangeError
            For a field or temperature below these bounds.
        """
        field = within("field_T", field_T, LOWEST_T, because="the fit diverges towards zero field")
        temperature = within("temperature_K", temperature_K, LOWEST_K, because="no data below")
        cold = self._cold(temperature)
        with np.errstate(divide="ignore"):
            reduced = np.minimum(field / (self.zero_temperature_T * cold), 1.0)
        shape = reduced**self.alpha * (1.0 - reduced) ** self.beta * cold**self.gamma
        return as_values(self.constant_AT_per_m2 / field * shape)

    def _cold(self, temperature: FloatArray) -> FloatArray:
        return np.asarray(1.0 - np.minimum(temperature / self.zero_field_K, 1.0) ** 1.7, dtype=np.float64)


SET_A = NbTi(27.04 * 3000 * _PER_mm2, 0.57, 0.8477, 2.23234)
"""Parameters of an openly published accelerator-magnet code (from memory)."""

SET_B = NbTi(31.4 * 3000 * _PER_mm2, 0.63, 1.0, 2.3)
"""A second set in use for similar wire (from memory)."""

ROUTINE = NbTi(7.86e10, 0.6, 1.0, 2.0, zero_field_K=9.5)
"""The author's property routine of 2013: 3000 A/mm² at 5 T and 4.2 K (parameters from memory)."""


def lubell_field_share(field_T: ArrayLike) -> Values:
    """Return J_c(B)/j₀ = 1 − 0.096·B of NbTi at 4.2 K between 3 and 10 T (σ = 3 %, ten wires).

    Raises `OutOfRangeError` outside. Source: M. S. Lubell, IEEE Trans. Magn. 19, 754 (1983). Serves to carry
    one measured value at 4.2 K to another field; the surfaces above serve for temperature margins.
    """
    return as_values(1.0 - 0.096 * within("field_T", field_T, 3.0, 10.0))


def lubell_temperature_share(temperature_K: ArrayLike) -> Values:
    """Return J_c(T)/j₀′ = 1 − 0.177·T of NbTi at 8 T between 2 and 5.5 K (σ < 1 %).

    Raises `OutOfRangeError` outside. Source: M. S. Lubell, IEEE Trans. Magn. 19, 754 (1983).
    """
    return as_values(1.0 - 0.177 * within("temperature_K", temperature_K, 2.0, 5.5))
