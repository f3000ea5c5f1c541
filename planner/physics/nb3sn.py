"""Nb₃Sn: critical surfaces with strain.

`Summers` is the older, simpler form, for magnets of which little is known. `Iter2008` fits strand for large
magnets better and its temperature dependence to T_c; it needs seven parameters. For similar wire the two differ
far more by parameters than by form: `SUMMERS` here carries 2.5 times the current of `ITER_STRAND` at 12 T
because it describes wire of high current density. Strain is in units of one (−0.003 = −0.3 %), negative in compression.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import milli

from planner.physics.ranges import FloatArray, Values, as_values, within

_PER_mm2 = 1.0 / milli**2
LOWEST_K = 1.8
LOWEST_T = 1.0
"""Below these the fits have no data, and their 1/B overstates the current without bound."""


@dataclass(frozen=True)
class Summers:
    """Critical surface of L. T. Summers et al., IEEE Trans. Magn. 27, 2041 (1991), from memory.

    Attributes
    ----------
    constant_A_rtT_per_m2
        C₀ in A·T^½/m².
    strain
        Strain of the filaments, −0.01 to 0.004; checked when a property is asked.
    zero_temperature_T, zero_field_K
        B_c20 and T_c0 without strain.
    """

    constant_A_rtT_per_m2: float
    strain: float = 0.0
    zero_temperature_T: float = 28.0
    zero_field_K: float = 18.0

    def _strain_factor(self) -> float:
        strain = float(within("strain", self.strain, -0.010, 0.004))
        return float(1.0 - (900.0 if strain < 0.0 else 1250.0) * abs(strain) ** 1.7)

    @property
    def strained_K(self) -> float:
        """T_c0·f^(1/3), critical temperature in zero field under strain. Raises `OutOfRangeError`."""
        return float(self.zero_field_K * self._strain_factor() ** (1.0 / 3.0))

    def upper_critical_T(self, temperature_K: ArrayLike) -> Values:
        """Return B_c2(T) under strain; zero at and above T_c. Raises `OutOfRangeError` below 1.8 K."""
        t = np.minimum(within("temperature_K", temperature_K, LOWEST_K) / self.strained_K, 1.0)
        curve = (1.0 - t**2) * (1.0 - 0.31 * t**2 * (1.0 - 1.77 * np.log(t)))
        return as_values(self.zero_temperature_T * self._strain_factor() * curve)

    def critical_temperature_K(self, field_T: ArrayLike) -> Values:
        """Return the temperature at which B_c2(T) has fallen to a field.

        Raises `OutOfRangeError` for a negative field or one above B_c2 at 1.8 K.
        """
        from scipy.optimize import brentq

        highest = float(np.asarray(self.upper_critical_T(LOWEST_K)))
        fields = within("field_T", field_T, 0.0, highest, because="above B_c2 at 1.8 K")
        found = [
            brentq(lambda T, B=B: float(np.asarray(self.upper_critical_T(T))) - B, LOWEST_K, self.strained_K)
            for B in fields.ravel()
        ]
        return as_values(np.asarray(found, dtype=np.float64).reshape(fields.shape))

    def critical_A_per_m2(self, field_T: ArrayLike, temperature_K: ArrayLike) -> Values:
        """Return J_c = C₀·√f/√B·(1 − b)²·(1 − t²)² of the non-copper area, in A/m²; zero where normal.

        Raises `OutOfRangeError` below 1 T or 1.8 K or for a strain outside −1 % to +0.4 %.
        """
        field = within("field_T", field_T, LOWEST_T, because="no data below")
        temperature = within("temperature_K", temperature_K, LOWEST_K, because="no data below")
        with np.errstate(divide="ignore"):
            b = np.minimum(field / np.asarray(self.upper_critical_T(temperature)), 1.0)
        t = np.minimum(temperature / self.strained_K, 1.0)
        scale = self.constant_A_rtT_per_m2 * np.sqrt(self._strain_factor() / field)
        return as_values(scale * (1.0 - b) ** 2 * (1.0 - t**2) ** 2)


SUMMERS = Summers(3.85e4 * _PER_mm2)
"""Wire of high current density without strain: 2663 A/mm² at 12 T and 4.2 K (C₀ from memory)."""


@dataclass(frozen=True)
class Iter2008:
    """Critical surface of L. Bottura, B. Bordini, IEEE Trans. Appl. Supercond. 19, 1521 (2009), from memory.

    Attributes
    ----------
    constant_AT_per_m2
        C in A·T/m² of non-copper area, or in A·T for a set that describes one whole strand: then
        `critical_A_per_m2` gives amperes per strand.
    strain_1, strain_2, rest_strain
        C_a1, C_a2 and ε_0a of the strain function.
    zero_temperature_T, zero_field_K
        B_c20max and T_c0max.
    p, q
        Exponents of b and 1 − b.
    strain
        Strain from the maximum, −0.008 to 0.003; checked when a property is asked.
    """

    constant_AT_per_m2: float
    strain_1: float
    strain_2: float
    rest_strain: float
    zero_temperature_T: float
    zero_field_K: float
    p: float
    q: float
    strain: float = 0.0

    @property
    def strain_factor(self) -> float:
        """s(ε), 1 without strain. Raises `OutOfRangeError` for a strain outside −0.8 % to +0.3 %."""
        strain = float(within("strain", self.strain, -0.008, 0.003))
        shift = self.strain_2 * self.rest_strain / np.sqrt(self.strain_1**2 - self.strain_2**2)
        root = np.hypot(shift, self.rest_strain) - np.hypot(strain - shift, self.rest_strain)
        lost = self.strain_1 * root - self.strain_2 * strain
        return float(1.0 + lost / (1.0 - self.strain_1 * self.rest_strain))

    def _reduced(self, temperature_K: ArrayLike) -> FloatArray:
        temperature = within("temperature_K", temperature_K, LOWEST_K, because="no data below")
        highest = self.zero_field_K * self.strain_factor ** (1.0 / 3.0)
        return np.asarray(np.minimum(temperature / highest, 1.0), dtype=np.float64)

    def upper_critical_T(self, temperature_K: ArrayLike) -> Values:
        """Return B_c2(T) under strain; zero at and above T_c. Raises `OutOfRangeError` below 1.8 K."""
        reduced = 1.0 - self._reduced(temperature_K) ** 1.52
        return as_values(self.zero_temperature_T * self.strain_factor * reduced)

    def critical_temperature_K(self, field_T: ArrayLike) -> Values:
        """Return T_c(B) under strain. Raises `OutOfRangeError` for a field outside 0 to B_c20·s."""
        factor = self.strain_factor
        share = within("field_T", field_T, 0.0, self.zero_temperature_T * factor) / (self.zero_temperature_T * factor)
        return as_values(self.zero_field_K * factor ** (1.0 / 3.0) * (1.0 - share) ** (1.0 / 1.52))

    def critical_A_per_m2(self, field_T: ArrayLike, temperature_K: ArrayLike) -> Values:
        """Return J_c = (C/B)·s·(1 − t^1.52)·(1 − t²)·b^p·(1 − b)^q in A/m²; zero where normal.

        Raises `OutOfRangeError` below 1 T or 1.8 K or for a strain outside −0.8 % to +0.3 %.
        """
        field = within("field_T", field_T, LOWEST_T, because="no data below")
        t = self._reduced(temperature_K)
        with np.errstate(divide="ignore"):
            b = np.minimum(field / np.asarray(self.upper_critical_T(temperature_K)), 1.0)
        cold = self.strain_factor * (1.0 - t**1.52) * (1.0 - t**2)
        return as_values(self.constant_AT_per_m2 / field * cold * b**self.p * (1.0 - b) ** self.q)


ITER_STRAND = Iter2008(83075 * _PER_mm2, 50.06, 0.0, 0.00312, 33.24, 16.34, 0.593, 2.156)
"""Strand for fusion magnets, per non-copper area: 1059 A/mm² at 12 T and 4.2 K (parameters from memory)."""

WHOLE_STRAND = Iter2008(19922.0, 44.48, 0.0, 0.00256, 32.97, 16.06, 0.63, 2.10)
"""A second set, per whole strand of 0.81 mm: `critical_A_per_m2` gives 249 A at 12 T and 4.2 K.

One source labels the constant A·T/mm², which would be a quarter of any such wire; as A·T per strand it gives
943 to 966 A/mm² of non-copper area (parameters from memory).
"""
