"""Field ramps through the rate table: split at its edges and at zero, one steady rate a leg."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise

from planner.files import Rig
from planner.moves.setup import whole_seconds
from planner.plan import Coil, CoilMode, Leg, along_z


@dataclass(frozen=True, slots=True)
class RateStage:
    """A stretch of |B| with one rate up and one down, and what sets each."""

    low_T: float
    high_T: float
    up_T_per_s: float
    down_T_per_s: float
    up_reason: str
    down_reason: str


def rate_stages(rig: Rig) -> tuple[RateStage, ...]:
    """The rate table narrowed by the supply's voltage, taken where in the stretch it leaves least.

    Charging at current I leaves V − I R for L dI/dt; running down has V + I R.
    """
    magnet, supply = rig.magnet, rig.magnet.supply
    stages, low_T = [], 0.0
    for segment in magnet.ramp_table:
        high_T = float(segment.to_T)
        table = float(segment.rate_T_per_s)
        name = f"rate table {low_T:g}–{high_T:g} T"
        low_A, high_A = low_T / magnet.field_per_current_T_per_A, high_T / magnet.field_per_current_T_per_A
        per_volt = magnet.field_per_current_T_per_A / magnet.inductance_H
        up = (supply.max_voltage_V - high_A * supply.lead_resistance_ohm) * per_volt
        down = (supply.max_voltage_V + low_A * supply.lead_resistance_ohm) * per_volt
        stages.append(
            RateStage(
                low_T,
                high_T,
                min(table, up),
                min(table, down),
                name if table <= up else "supply voltage",
                name if table <= down else "supply voltage",
            )
        )
        low_T = high_T
    return tuple(stages)


def pieces(rig: Rig, from_T: float, to_T: float) -> list[tuple[float, float, float, str]]:
    """A straight ramp as (from, to, fastest rate, reason), split at table edges and at zero."""
    stages = rate_stages(rig)
    edges = sorted({0.0, *(sign * stage.high_T for stage in stages for sign in (-1, 1))})
    low, high = min(from_T, to_T), max(from_T, to_T)
    stops = [low, *(edge for edge in edges if low < edge < high), high]
    if from_T > to_T:
        stops.reverse()
    found = []
    for begin, finish in pairwise(stops):
        near, far = sorted((abs(begin), abs(finish)))
        stage = next((s for s in stages if far <= s.high_T), stages[-1])
        rising = abs(finish) > abs(begin)
        rate, reason = (stage.up_T_per_s, stage.up_reason) if rising else (stage.down_T_per_s, stage.down_reason)
        if near != far:
            found.append((begin, finish, rate, reason))
    return found


def reverses(rig: Rig, from_T: float, to_T: float) -> bool:
    """Whether a unipolar supply must be reversed on the way; it rests in positive polarity."""
    return rig.magnet.supply.polarity == "unipolar" and (from_T < 0) != (to_T < 0)


def field_legs(
    rig: Rig,
    from_T: float,
    to_T: float,
    *,
    action: str = "ramp",
    rate_T_per_s: float | None = None,
    asked: str = "",
) -> tuple[Leg, ...]:
    """Legs of a straight ramp or sweep in driven mode, from second 0.

    Parameters
    ----------
    rate_T_per_s, asked
        A slower rate than the magnet's, and the reason for it.
    """
    legs: list[Leg] = []
    at = 0
    turn = reverses(rig, from_T, to_T)
    for begin, finish, fastest, reason in pieces(rig, from_T, to_T):
        if turn and begin == 0.0:
            at, turn = _reverse(rig, legs, at), False
        slower = rate_T_per_s is not None and rate_T_per_s < fastest
        rate = rate_T_per_s if slower and rate_T_per_s is not None else fastest
        seconds = whole_seconds(abs(finish - begin) / rate)
        coils = (driven(rig, begin), driven(rig, finish))
        legs.append(Leg("coil", action, at, at + seconds, asked if slower else reason, rate=rate, coil=coils))
        at += seconds
        if turn and finish == 0.0:
            at, turn = _reverse(rig, legs, at), False
    return tuple(legs)


def _reverse(rig: Rig, legs: list[Leg], at: int) -> int:
    seconds = whole_seconds(rig.magnet.supply.reversal_s)
    if seconds:
        coil = driven(rig, 0.0)
        legs.append(Leg("coil", "reverse", at, at + seconds, "supply reversal", coil=(coil, coil)))
    return at + seconds


def joined(legs: tuple[Leg, ...], before: Coil, after: Coil) -> tuple[Leg, ...]:
    """The same legs with the coil at both ends as stated: at zero field the modes zero and driven meet."""
    if not legs:
        return legs
    first = replace(legs[0], coil=(before, legs[0].coil[1])) if legs[0].coil else legs[0]
    legs = (first, *legs[1:])
    last = replace(legs[-1], coil=(legs[-1].coil[0], after)) if legs[-1].coil else legs[-1]
    return (*legs[:-1], last)


def driven(rig: Rig, field_T: float) -> Coil:
    """The coil driven at a field, also at zero field with the switch open."""
    return Coil(along_z(field_T), CoilMode.DRIVEN, along_z(field_T / rig.magnet.field_per_current_T_per_A))
