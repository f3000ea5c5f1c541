"""Vapour pressure of ⁴He and ³He on ITS-90, both ways.

The scale defines T as a power series of ln p; the way back is solved by Newton's method on that series.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import polynomial
from numpy.typing import ArrayLike

from planner.physics.ranges import FloatArray, Values, as_values, within


@dataclass(frozen=True)
class _Branch:
    """One row of ITS-90's table: T = Σ Aᵢ·[(ln p − B)/C]ⁱ between two temperatures."""

    low_K: float
    high_K: float
    A: tuple[float, ...]
    B: float
    C: float

    def temperature_K(self, pressure_Pa: FloatArray) -> FloatArray:
        x = (np.log(pressure_Pa) - self.B) / self.C
        return np.asarray(polynomial.polyval(x, self.A), dtype=np.float64)

    def pressure_Pa(self, temperature_K: FloatArray) -> FloatArray:
        slope = polynomial.polyder(self.A)
        x = np.ones_like(temperature_K)
        # The series rises and bends upwards: Newton's method from the upper end of the range, x = 1, comes
        # down to the root without overshooting.
        for _ in range(12):
            x = x - (polynomial.polyval(x, self.A) - temperature_K) / polynomial.polyval(x, slope)
        return np.asarray(np.exp(self.B + self.C * x), dtype=np.float64)


_HELIUM4_COLD = _Branch(
    1.25, 2.1768,
    (1.392408, 0.527153, 0.166756, 0.050988, 0.026514, 0.001975, -0.017976, 0.005409, 0.013259),
    5.6, 2.9,
)  # fmt: skip
_HELIUM4_WARM = _Branch(
    2.1768, 5.0,
    (3.146631, 1.357655, 0.413923, 0.091159, 0.016349, 0.001826, -0.004325, -0.004973),
    10.3, 1.9,
)  # fmt: skip
_HELIUM3 = _Branch(
    0.65, 3.2,
    (1.053447, 0.980106, 0.676380, 0.372692, 0.151656, -0.002263, 0.006596, 0.088966, -0.004770, -0.054943),
    7.3, 4.3,
)  # fmt: skip

LAMBDA_K = 2.1768
"""Lambda point of ⁴He on ITS-90, where the two ranges of the scale meet."""


def _limit_Pa(branch: _Branch, temperature_K: float) -> float:
    return float(branch.pressure_Pa(np.asarray(temperature_K)))


LAMBDA_Pa = _limit_Pa(_HELIUM4_COLD, LAMBDA_K)
"""Vapour pressure at the lambda point, 5041.8 Pa."""


def helium4_pressure_Pa(temperature_K: ArrayLike) -> Values:
    """Return the vapour pressure of ⁴He between 1.25 and 5.0 K.

    Raises
    ------
    OutOfRangeError
        Outside that range, or for a value that is not finite.

    Notes
    -----
    Source: H. Preston-Thomas, Metrologia 27, 3 (1990), Table 3. An equation of state as in CoolProp lies
    0.16 % lower at 4.2 K: use this scale between T and p, the equation for densities and enthalpies.
    """
    temperature = within("temperature_K", temperature_K, 1.25, 5.0, because="ITS-90's range for ⁴He")
    cold = _HELIUM4_COLD.pressure_Pa(np.minimum(temperature, LAMBDA_K))
    warm = _HELIUM4_WARM.pressure_Pa(np.maximum(temperature, LAMBDA_K))
    return as_values(np.where(temperature <= LAMBDA_K, cold, warm))


def helium4_temperature_K(pressure_Pa: ArrayLike) -> Values:
    """Return the temperature of ⁴He boiling at a pressure, 1.25 to 5.0 K (114.7 Pa to 196 kPa).

    Raises `OutOfRangeError` outside. Source as in `helium4_pressure_Pa`.
    """
    low, high = _limit_Pa(_HELIUM4_COLD, 1.25), _limit_Pa(_HELIUM4_WARM, 5.0)
    pressure = within("pressure_Pa", pressure_Pa, low, high, because="ITS-90's range for ⁴He")
    cold = _HELIUM4_COLD.temperature_K(np.minimum(pressure, LAMBDA_Pa))
    warm = _HELIUM4_WARM.temperature_K(np.maximum(pressure, LAMBDA_Pa))
    return as_values(np.where(pressure <= LAMBDA_Pa, cold, warm))


def helium3_pressure_Pa(temperature_K: ArrayLike) -> Values:
    """Return the vapour pressure of ³He between 0.65 and 3.2 K.

    Raises `OutOfRangeError` outside.

    Notes
    -----
    Source: H. Preston-Thomas, Metrologia 27, 3 (1990), Table 3 (coefficients from memory; they boil at
    3.1968 K as the scale does). PLTS-2000 differs by at most about 1.5 mK at 0.65 K.
    """
    temperature = within("temperature_K", temperature_K, 0.65, 3.2, because="ITS-90's range for ³He")
    return as_values(_HELIUM3.pressure_Pa(temperature))


def helium3_temperature_K(pressure_Pa: ArrayLike) -> Values:
    """Return the temperature of ³He boiling at a pressure, 0.65 to 3.2 K (115.9 Pa to 102 kPa).

    Raises `OutOfRangeError` outside. Source as in `helium3_pressure_Pa`.
    """
    low, high = _limit_Pa(_HELIUM3, 0.65), _limit_Pa(_HELIUM3, 3.2)
    pressure = within("pressure_Pa", pressure_Pa, low, high, because="ITS-90's range for ³He")
    return as_values(_HELIUM3.temperature_K(pressure))
