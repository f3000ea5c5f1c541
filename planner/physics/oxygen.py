"""Oxygen in a room into which helium or nitrogen gas escapes: planning figures, not a safety assessment.

Every figure assumes the gas mixes with the air of the whole room. Cold helium rises and collects under
the ceiling, cold nitrogen fills pits: locally less oxygen than these figures is to be expected. Site rules
and the responsible safety person decide.
"""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import hour

from planner.errors import OutOfRangeError
from planner.physics.ranges import FloatArray, Values, as_values, not_negative, positive, within

AIR_OXYGEN = 0.21
"""Share of oxygen in air as rounded in oxygen-deficiency procedures (common practice)."""

HAZARD_OXYGEN = 0.195
"""Below 19.5 % an atmosphere is oxygen-deficient: 29 CFR 1910.146(b)."""

ENRICHED_OXYGEN = 0.235
"""Above 23.5 % an atmosphere is oxygen-enriched: 29 CFR 1910.146(b)."""

Fan = Literal["supply", "extract"]


def oxygen_displaced(gas_m3: ArrayLike, room_m3: ArrayLike) -> Values:
    """Return the share of oxygen if released gas first pushes out air only: 0.21·(1 − v/V).

    Parameters
    ----------
    gas_m3
        Gas released at once, at room temperature; at most the volume of the room.
    room_m3
        Free volume of the room, positive.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    The pessimistic of the two instant models; `oxygen_mixed` is the other. Mass balance, as in the
    oxygen-deficiency procedures of national laboratories (Fermilab FESHM 4240, from memory).
    """
    share = not_negative("gas_m3", gas_m3) / positive("room_m3", room_m3)
    return as_values(AIR_OXYGEN * (1.0 - within("gas as a share of the room", share, 0.0, 1.0)))


def oxygen_mixed(gas_m3: ArrayLike, room_m3: ArrayLike) -> Values:
    """Return the share of oxygen if gas mixes while the mixture is pushed out: 0.21·exp(−v/V).

    Raises `OutOfRangeError` for a negative gas volume or a room that is not positive.
    """
    return as_values(AIR_OXYGEN * np.exp(-not_negative("gas_m3", gas_m3) / positive("room_m3", room_m3)))


def gas_to_displace_m3(room_m3: ArrayLike, oxygen: ArrayLike = HAZARD_OXYGEN) -> Values:
    """Return the gas that brings a room down to a share of oxygen by `oxygen_displaced`, in m³.

    Raises `OutOfRangeError` unless 0 ≤ oxygen ≤ 0.21 and the room is positive.
    """
    return as_values(positive("room_m3", room_m3) * (1.0 - within("oxygen", oxygen, 0.0, AIR_OXYGEN) / AIR_OXYGEN))


def gas_to_mix_m3(room_m3: ArrayLike, oxygen: ArrayLike = HAZARD_OXYGEN) -> Values:
    """Return the gas that brings a room down to a share of oxygen by `oxygen_mixed`, in m³.

    Raises `OutOfRangeError` unless 0 < oxygen ≤ 0.21 and the room is positive.
    """
    share = within("oxygen", oxygen, 0.0, AIR_OXYGEN, open_low=True) / AIR_OXYGEN
    return as_values(-positive("room_m3", room_m3) * np.log(share))


def oxygen_during_leak(
    time_s: ArrayLike, room_m3: ArrayLike, leak_m3_per_h: ArrayLike, vent_m3_per_h: ArrayLike, fan: Fan
) -> Values:
    """Return the share of oxygen after a time of steady leak into a ventilated room.

    Parameters
    ----------
    time_s
        Time since the leak began, not negative.
    room_m3
        Free volume of the room, positive.
    leak_m3_per_h, vent_m3_per_h
        Leak R (positive) and ventilation Q (not negative), both at room temperature.
    fan
        ``"supply"``: the fan blows Q of air in, and Q + R leaves. ``"extract"``: the fan draws Q out;
        air makes up Q − R, or none if the leak is larger, when the surplus leaves by itself.

    Returns
    -------
    float or ndarray
        Share of oxygen.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges or another word for the fan.

    Notes
    -----
    Mass balance of a well mixed room; the forms agree with Fermilab FESHM 4240 (from memory).
    """
    t = not_negative("time_s", time_s) / hour
    room = positive("room_m3", room_m3)
    leak = positive("leak_m3_per_h", leak_m3_per_h)
    vent = not_negative("vent_m3_per_h", vent_m3_per_h)
    out = _outflow_m3_per_h(leak, vent, fan)
    air = out - leak
    return as_values(np.asarray(AIR_OXYGEN * (air + leak * np.exp(-out * t / room)) / out))


def oxygen_in_the_long_run(leak_m3_per_h: ArrayLike, vent_m3_per_h: ArrayLike, fan: Fan) -> Values:
    """Return the share of oxygen a steady leak settles to: 0.21·Q/(Q + R) supplied, 0.21·(1 − R/Q) extracted.

    Raises `OutOfRangeError` as `oxygen_during_leak` does. Zero where the leak exceeds an extracting fan.
    """
    leak = positive("leak_m3_per_h", leak_m3_per_h)
    out = _outflow_m3_per_h(leak, not_negative("vent_m3_per_h", vent_m3_per_h), fan)
    return as_values(np.asarray(AIR_OXYGEN * (out - leak) / out))


def _outflow_m3_per_h(leak: ArrayLike, vent: ArrayLike, fan: Fan) -> FloatArray:
    if fan == "supply":
        return np.asarray(np.add(vent, leak))
    if fan == "extract":
        return np.asarray(np.maximum(vent, leak))
    raise OutOfRangeError(f"fan = {fan!r}: only 'supply' and 'extract' are known")


def largest_leak_m3_per_h(vent_m3_per_h: ArrayLike, fan: Fan, oxygen: ArrayLike = HAZARD_OXYGEN) -> Values:
    """Return the steady leak a ventilated room bears without falling below a share of oxygen.

    Raises `OutOfRangeError` unless 0 < oxygen ≤ 0.21 and the ventilation is not negative.
    """
    vent = not_negative("vent_m3_per_h", vent_m3_per_h)
    share = within("oxygen", oxygen, 0.0, AIR_OXYGEN, open_low=True) / AIR_OXYGEN
    if fan == "supply":
        return as_values(vent * (1.0 - share) / share)
    if fan == "extract":
        return as_values(vent * (1.0 - share))
    raise OutOfRangeError(f"fan = {fan!r}: only 'supply' and 'extract' are known")


def oxygen_after_leak(
    time_s: ArrayLike, room_m3: ArrayLike, vent_m3_per_h: ArrayLike, oxygen_at_end: ArrayLike
) -> Values:
    """Return the share of oxygen a time after the leak stopped: 0.21 − (0.21 − C)·exp(−Q·t/V).

    Raises `OutOfRangeError` for a negative time or ventilation, or a share outside 0 to 0.21.
    """
    exponent = not_negative("vent_m3_per_h", vent_m3_per_h) / positive("room_m3", room_m3) / hour
    lack = AIR_OXYGEN - within("oxygen_at_end", oxygen_at_end, 0.0, AIR_OXYGEN)
    return as_values(AIR_OXYGEN - lack * np.exp(-exponent * not_negative("time_s", time_s)))


def airing_time_s(
    room_m3: ArrayLike, vent_m3_per_h: ArrayLike, oxygen_at_end: ArrayLike, oxygen: ArrayLike = HAZARD_OXYGEN
) -> Values:
    """Return the time of ventilation from the end of a leak until a share of oxygen is back, in s.

    Zero where the share never fell below. Raises `OutOfRangeError` unless the ventilation and room are
    positive, the share at the end lies in 0 to 0.21, and the share wanted below 0.21.
    """
    lack_now = AIR_OXYGEN - within("oxygen_at_end", oxygen_at_end, 0.0, AIR_OXYGEN)
    lack_then = AIR_OXYGEN - within("oxygen", oxygen, 0.0, AIR_OXYGEN, open_high=True)
    ratio = np.maximum(lack_now / lack_then, 1.0)
    changes_per_h = positive("vent_m3_per_h", vent_m3_per_h) / positive("room_m3", room_m3)
    return as_values(np.log(ratio) / changes_per_h * hour)
