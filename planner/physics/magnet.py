"""Superconducting magnets: energy, ramps through a rate table, voltage limits, persistent mode, quench.

Fields and currents are signed; a rate table holds for the magnitude of the field.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from planner.errors import OutOfRangeError
from planner.physics.helium import BOILING_LATENT_J_PER_L
from planner.physics.ranges import (
    FloatArray,
    Values,
    as_values,
    finite,
    nonzero,
    not_negative,
    positive,
    within,
)


def stored_energy_J(inductance_H: ArrayLike, current_A: ArrayLike) -> Values:
    """Return the energy ½·L·I² in the field of a coil, in J.

    Raises `OutOfRangeError` if the inductance is not positive or a value not finite.
    """
    return as_values(0.5 * positive("inductance_H", inductance_H) * finite("current_A", current_A) ** 2)


def current_A(field_T: ArrayLike, coil_T_per_A: ArrayLike) -> Values:
    """Return the current B/k that makes a field, k being the coil constant in T/A; signed.

    Raises `OutOfRangeError` if k is zero or a value not finite.
    """
    return as_values(finite("field_T", field_T) / nonzero("coil_T_per_A", coil_T_per_A))


def charging_voltage_V(
    inductance_H: ArrayLike,
    current_rate_A_per_s: ArrayLike,
    current_A: ArrayLike = 0.0,
    lead_resistance_ohm: ArrayLike = 0.0,
) -> Values:
    """Return the voltage L·İ + I·R a supply shows while it ramps a coil through resistive leads, signed.

    Parameters
    ----------
    inductance_H
        Inductance, positive.
    current_rate_A_per_s, current_A
        Rate and present value of the current, signed.
    lead_resistance_ohm
        Resistance of the whole circuit outside the coil, not negative.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    inductive_V = positive("inductance_H", inductance_H) * finite("rate", current_rate_A_per_s)
    return as_values(inductive_V + finite("current_A", current_A) * not_negative("R", lead_resistance_ohm))


def ramp_time_s(from_T: ArrayLike, to_T: ArrayLike, upper_edges_T: ArrayLike, rates_T_per_s: ArrayLike) -> Values:
    """Return the time of a ramp through a rate table by magnitude of field.

    Parameters
    ----------
    from_T, to_T
        Fields at the start and the end, signed; a ramp through zero is allowed.
    upper_edges_T
        Upper edge of each segment, positive and rising; the first segment starts at 0 T, the last edge
        is the largest field allowed.
    rates_T_per_s
        Largest rate in each segment, positive, one per edge.

    Returns
    -------
    float or ndarray
        Sum of ΔB/rate over the pieces the ramp crosses, in s.

    Raises
    ------
    OutOfRangeError
        If a field lies beyond the last edge, a rate is not positive, edges do not rise, or lengths differ.

    Notes
    -----
    The time of a field above zero is the integral of 1/rate from 0, a function of |B|; carrying the sign
    of B it rises along the whole axis, and a ramp takes the difference between its ends.
    """
    edges = np.atleast_1d(positive("upper_edges_T", upper_edges_T))
    rates = np.atleast_1d(positive("rates_T_per_s", rates_T_per_s))
    if edges.shape != rates.shape or edges.ndim != 1:
        raise OutOfRangeError(f"{edges.size} segment edges but {rates.size} rates")
    positive("rise from edge to edge", np.diff(edges, prepend=0.0))
    return as_values(np.abs(_signed_time_s(to_T, edges, rates) - _signed_time_s(from_T, edges, rates)))


def _signed_time_s(field_T: ArrayLike, edges: FloatArray, rates: FloatArray) -> FloatArray:
    field = within("field_T", field_T, -edges[-1], edges[-1], because="the ramp table ends there")
    knots = np.concatenate(([0.0], edges))
    times = np.concatenate(([0.0], np.cumsum(np.diff(knots) / rates)))
    return np.asarray(np.sign(field) * np.interp(np.abs(field), knots, times), dtype=np.float64)


def voltage_limited_time_s(
    from_A: float,
    to_A: float,
    inductance_H: float,
    lead_resistance_ohm: float,
    highest_V: float,
    lowest_V: float = 0.0,
) -> float:
    """Return the shortest time of a current ramp with a supply at the limits of its voltage.

    Parameters
    ----------
    from_A, to_A
        Currents at the start and the end, signed; a ramp through zero counts as down, then up.
    inductance_H, lead_resistance_ohm
        Inductance (positive) and resistance of the circuit outside the coil (not negative).
    highest_V
        Largest voltage in the direction of the current, positive.
    lowest_V
        Voltage in the direction of the current a supply can go down to, zero or negative. −highest_V
        for a supply that takes energy back; 0 for one that only lets the leads drain the coil.

    Returns
    -------
    float
        Up: −(L/R)·ln[(V − I₂R)/(V − I₁R)]; down: the same with V the lowest voltage. In s.

    Raises
    ------
    OutOfRangeError
        If the supply cannot reach the end: V ≤ I·R on the way up, or nothing to bring the current down.

    Notes
    -----
    Solution of L·dI/dt = V − I·R; goes over into L·ΔI/V for R → 0. Derived, checked against a solved ODE.
    """
    inductance = float(positive("inductance_H", inductance_H))
    ohm = float(not_negative("lead_resistance_ohm", lead_resistance_ohm))
    up_V = float(positive("highest_V", highest_V))
    down_V = float(within("lowest_V", lowest_V, high=0.0))
    start, end = float(finite("from_A", from_A)), float(finite("to_A", to_A))
    if start * end < 0.0:
        return _one_way_s(abs(start), 0.0, inductance, ohm, down_V) + _one_way_s(0.0, abs(end), inductance, ohm, up_V)
    supply_V = up_V if abs(end) > abs(start) else down_V
    return _one_way_s(abs(start), abs(end), inductance, ohm, supply_V)


def _one_way_s(start: float, end: float, inductance: float, ohm: float, supply_V: float) -> float:
    if start == end:
        return 0.0
    first, last = supply_V - start * ohm, supply_V - end * ohm
    if first * last <= 0.0 or (last > 0.0) != (end > start):
        raise OutOfRangeError(f"{supply_V:g} V across {ohm:g} Ω cannot take the current from {start:g} A to {end:g} A")
    drop = (start - end) * ohm / first
    # log1p(x)/x stays accurate for leads of almost no resistance, where x goes to zero.
    logarithm = np.log1p(drop) / drop if drop != 0.0 else 1.0
    return float(inductance * (end - start) / first * logarithm)


def voltage_limited_rate_A_per_s(
    current_A: ArrayLike, inductance_H: ArrayLike, lead_resistance_ohm: ArrayLike, highest_V: ArrayLike
) -> Values:
    """Return the fastest rise (V − |I|·R)/L of the current at a current, in A/s.

    On the way down a supply that can go to −V reaches (V + |I|·R)/L: the same with a negative resistance
    drop, so coming down is never the slower way (see `voltage_limited_time_s`).

    Raises
    ------
    OutOfRangeError
        If the leads take the whole voltage (V ≤ |I|·R), or a value is outside its range.
    """
    drop_V = np.abs(finite("current_A", current_A)) * not_negative("lead_resistance_ohm", lead_resistance_ohm)
    left_V = positive(
        "voltage left for the coil",
        positive("highest_V", highest_V) - drop_V,
        because="the leads take all of it",
    )
    return as_values(left_V / positive("inductance_H", inductance_H))


def persistent_field_T(
    field_T: ArrayLike, time_s: ArrayLike, inductance_H: ArrayLike, joint_resistance_ohm: ArrayLike
) -> Values:
    """Return the field B·exp(−R·t/L) left after a time in persistent mode, signed.

    Raises `OutOfRangeError` if L is not positive, R or t negative, or a value not finite.
    Source of the concept: M. N. Wilson, Superconducting Magnets (Oxford 1983), from memory.
    """
    exponent = not_negative("joint_resistance_ohm", joint_resistance_ohm) / positive("L", inductance_H)
    return as_values(finite("field_T", field_T) * np.exp(-exponent * not_negative("time_s", time_s)))


def joint_resistance_ohm(decay_per_s: ArrayLike, inductance_H: ArrayLike) -> Values:
    """Return the resistance of the joints that gives a relative decay rate of the field: R = L·(Ḃ/B).

    Raises `OutOfRangeError` if the decay rate is negative or the inductance not positive.
    """
    return as_values(not_negative("decay_per_s", decay_per_s) * positive("inductance_H", inductance_H))


def open_switch_power_W(voltage_V: ArrayLike, switch_ohm: ArrayLike) -> Values:
    """Return the heat V²/R_n in an open (warm) persistent switch while the coil is ramped, in W.

    Raises `OutOfRangeError` if the switch resistance is not positive. The current past the coil is V/R_n.
    """
    return as_values(finite("voltage_V", voltage_V) ** 2 / positive("switch_ohm", switch_ohm))


def heater_power_W(heater_A: ArrayLike, heater_ohm: ArrayLike) -> Values:
    """Return the power I²·R of a persistent-switch heater, in W.

    Raises `OutOfRangeError` if the resistance is not positive or the current not finite.
    """
    return as_values(finite("heater_A", heater_A) ** 2 * positive("heater_ohm", heater_ohm))


def quench_liquid_L(energy_J: ArrayLike, liquid_L: ArrayLike = np.inf) -> Values:
    """Return the most liquid helium a quench can evaporate, in L.

    Parameters
    ----------
    energy_J
        Energy stored in the coil, not negative.
    liquid_L
        Liquid in the bath, not negative; without it the energy alone bounds the loss.

    Returns
    -------
    float or ndarray
        The smaller of E/(L·ρ) at the normal boiling point and the liquid present.

    Raises
    ------
    OutOfRangeError
        For a negative value.

    Notes
    -----
    An upper bound: part of the energy stays in the coil, and the gas takes up enthalpy above the latent
    heat. The gas volume of the bound is `planner.physics.helium.gas_volume_m3`.
    """
    liquid = np.asarray(liquid_L, dtype=np.float64)
    if not (liquid >= 0.0).all():
        raise OutOfRangeError("liquid_L is negative or not a number")
    return as_values(np.minimum(not_negative("energy_J", energy_J) / BOILING_LATENT_J_PER_L, liquid))
