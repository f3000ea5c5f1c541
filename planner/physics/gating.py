"""Gates: how a voltage moves the density of a layer, and the voltage that brings a density.

A gate is a line: n(V) = n₀ + s·(V − V₀). Quantum capacitance, pinch-off and hysteresis are not in it, so
a rig or sample file states the range of voltage in which its line was measured.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import e, epsilon_0

from planner.physics.ranges import Values, as_values, finite, nonzero, positive


def gated_density_per_m2(
    density_per_m2: ArrayLike, slope_per_m2_V: ArrayLike, gate_V: ArrayLike, reference_V: ArrayLike
) -> Values:
    """Return the density at a gate voltage: n = n₀ + s·(V − V₀).

    Parameters
    ----------
    density_per_m2
        Density n₀ at the reference voltage, signed.
    slope_per_m2_V
        Slope s of the gate, m⁻² per V, signed.
    gate_V, reference_V
        Gate voltage and the voltage V₀ at which n₀ holds.

    Returns
    -------
    float or ndarray
        Density in m⁻², signed: a change of sign is a change from electrons to holes, which only a
        layer without a band gap follows.

    Raises
    ------
    OutOfRangeError
        If a value is not finite.
    """
    swing_V = finite("gate_V", gate_V) - finite("reference_V", reference_V)
    return as_values(finite("density_per_m2", density_per_m2) + finite("slope", slope_per_m2_V) * swing_V)


def gate_for_density_V(
    wanted_per_m2: ArrayLike, density_per_m2: ArrayLike, slope_per_m2_V: ArrayLike, reference_V: ArrayLike
) -> Values:
    """Return the gate voltage that brings a density: V = V₀ + (n − n₀)/s.

    Parameters
    ----------
    wanted_per_m2
        Density n wanted, signed.
    density_per_m2
        Density n₀ at the reference voltage, signed.
    slope_per_m2_V
        Slope s of the gate, m⁻² per V, signed, not zero.
    reference_V
        Voltage V₀ at which n₀ holds.

    Returns
    -------
    float or ndarray
        Gate voltage in V. Whether the gate may be taken there is for the sample file to say.

    Raises
    ------
    OutOfRangeError
        For a slope of zero or a value that is not finite.
    """
    slope = nonzero("slope_per_m2_V", slope_per_m2_V, because="this gate does not move the density")
    change = finite("wanted_per_m2", wanted_per_m2) - finite("density_per_m2", density_per_m2)
    return as_values(finite("reference_V", reference_V) + change / slope)


def parallel_plate_F_per_m2(permittivity_ratio: ArrayLike, thickness_m: ArrayLike) -> Values:
    """Return the capacitance per area ε₀·ε_r/d of one dielectric layer.

    Parameters
    ----------
    permittivity_ratio
        ε_r, positive (SiO₂ 3.9, hBN about 3, GaAs 12.9: common practice).
    thickness_m
        Thickness d, positive.

    Raises
    ------
    OutOfRangeError
        If a value is not positive and finite.
    """
    ratio = positive("permittivity_ratio", permittivity_ratio)
    return as_values(epsilon_0 * ratio / positive("thickness_m", thickness_m))


def in_series_F_per_m2(capacitances_F_per_m2: ArrayLike) -> float:
    """Return the capacitance per area of dielectric layers in series, one entry per layer.

    Raises
    ------
    OutOfRangeError
        If a layer's capacitance is not positive and finite.
    """
    layers = positive("capacitances_F_per_m2", capacitances_F_per_m2)
    return float(1.0 / np.sum(1.0 / layers))


def gate_slope_per_m2_V(capacitance_F_per_m2: ArrayLike) -> Values:
    """Return the slope dn/dV = C/e of a gate of a given capacitance per area, in m⁻² per V.

    Raises
    ------
    OutOfRangeError
        If the capacitance is not positive and finite.

    Notes
    -----
    Parallel plates; the quantum capacitance of the layer, in series, is neglected.
    """
    return as_values(positive("capacitance_F_per_m2", capacitance_F_per_m2) / e)
