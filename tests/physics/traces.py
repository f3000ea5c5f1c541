"""Hall and oscillation traces of known truth, with the faults real ones have.

Resistances after P. T. Coleridge, R. Stoner, R. Fletcher, Phys. Rev. B 39, 1120 (1989) (from memory), for a layer with
two spin states: with Dg/g = 2·sum_s (sX/sinh sX)·exp(-s·pi/(w_c·t_q))·cos(2·pi·s·F/B - s·pi),

    R_xx = R_0·(1 + 2·Dg/g),      R_xy = B/(n·e)·(1 - (Dg/g)/(mu·B)^2).

They are written out here, apart from the formulas of `planner.physics` that are under test.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.constants import e, h, hbar, k, m_e
from scipy.special import ndtr

Array = NDArray[np.float64]
MASS = 0.067 * m_e


@dataclass(frozen=True)
class Layer:
    """Density and mobilities; ``quantum_m2_per_Vs`` is e·t_q/m."""

    density_per_m2: float
    mobility_m2_per_Vs: float = 60.0
    quantum_m2_per_Vs: float = 4.0
    temperature_K: float = 0.3
    squares: float = 3.0

    def states(self, field_T: Array) -> Array:
        """Dg/g, two harmonics."""
        size = np.maximum(np.abs(field_T), 1e-6)
        total = np.zeros_like(size)
        for s in (1, 2):
            x = s * 2 * np.pi**2 * k * self.temperature_K * MASS / (hbar * e * size)
            warm = np.where(x < 300, x / np.sinh(np.minimum(x, 300)), 0.0)
            disorder = np.exp(-s * np.pi / (self.quantum_m2_per_Vs * size))
            frequency = abs(self.density_per_m2) * h / (2 * e)
            total += 2 * warm * disorder * np.cos(2 * np.pi * s * frequency / size - s * np.pi)
        return total

    def hall_ohm(self, field_T: Array) -> Array:
        """R_xy."""
        size = np.maximum(np.abs(field_T), 1e-6)
        wiggle = self.states(field_T) / (self.mobility_m2_per_Vs * size) ** 2
        return field_T / (self.density_per_m2 * e) * (1 - wiggle)

    def longitudinal_ohm(self, field_T: Array) -> Array:
        """R_xx of a bar of so many squares."""
        zero = self.squares / (abs(self.density_per_m2) * e * self.mobility_m2_per_Vs)
        return zero * (1 + 2 * self.states(field_T))


def stepped_hall_ohm(density_per_m2: float, field_T: Array, width_T: float = 0.9) -> Array:
    """R_xy whose plateaus at even fillings grow out of a straight line with field: for the end of the straight part."""
    size = np.maximum(np.abs(field_T), 1e-9)
    filling = abs(density_per_m2) * h / (e * size)
    levels = 2 * np.arange(1, 400)[:, None] - 1.0
    smear = np.maximum(filling * width_T / size, 0.05)
    below = ndtr((filling[None, :] - levels) / smear[None, :]).sum(axis=0) * 2
    # At low field the sum is the filling itself; keep it exact there.
    blend = 1 / (1 + (width_T / size) ** 8)
    steps = blend * below + (1 - blend) * filling
    return np.sign(field_T) * np.sign(density_per_m2) * h / e**2 / steps


@dataclass(frozen=True)
class Faults:
    """What is wrong with a trace: noise as a share of the largest reading, an offset, shifts of the recorded field."""

    noise: float = 0.02
    offset: float = 0.0
    remanence_T: float = 0.0
    lag_T: float = 0.0


def sweep(field_T: Array, layer: Layer, faults: Faults, rng: np.random.Generator) -> tuple[Array, Array, Array]:
    """Recorded field, R_xy and R_xx of a sweep through the fields given, in that order.

    The recorded field is ahead of the true one by the remanence, and by the lag in the direction of the sweep.
    """
    heading = np.sign(np.gradient(field_T))
    true_T = field_T - faults.remanence_T - faults.lag_T * heading
    hall, along = layer.hall_ohm(true_T), layer.longitudinal_ohm(true_T)
    hall = hall + faults.offset * np.max(np.abs(hall))
    noisy = [
        values + faults.noise * np.max(np.abs(values)) * rng.standard_normal(values.size) for values in (hall, along)
    ]
    return field_T, noisy[0], noisy[1]


def there_and_back(low_T: float, high_T: float, points: int) -> Array:
    """Fields of a sweep up and down again."""
    up = np.linspace(low_T, high_T, points)
    return np.concatenate([up, up[::-1]])
