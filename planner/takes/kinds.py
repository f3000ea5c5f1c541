"""How each kind of target becomes takes. `EXPANDERS` is the registry: one function a kind."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import replace
from itertools import pairwise
from typing import Any

import numpy as np

from planner.files.asks import Range, temperature_name
from planner.files.targets import FieldSweep, GateSweep, Hold, Map, OtherWork, Target, TemperatureSeries
from planner.moves import delayed, end_of, field_legs, held, joined, warming_leg, whole_seconds
from planner.physics.lockin import honest_rate_T_per_s
from planner.plan import CoilMode, Gates, Leg
from planner.takes.build import Way, alternative, details_of, dwell_s, lockin_of
from planner.takes.conditions import (
    FieldAsk,
    checked_kelvin,
    coil_ways,
    field_of,
    gates_of,
    kelvin_of,
    state_at,
    within_reach,
)
from planner.takes.take import Alternative, Context, Take

Expander = Callable[[Context, Any], Iterator[Take]]


def _take(
    context: Context, ask: Target, label: str, ways: list[Alternative], name: str = "", notes: tuple[str, ...] = ()
) -> Take:
    return Take(name or ask.name, ask, context.user(ask), label, tuple(ways), details_of(context, ask), notes)


def hold(context: Context, ask: Hold) -> Iterator[Take]:
    """One stay."""
    asked = field_of(ask, context.sample(ask), ask.field_T, ask.filling)
    field_T, notes = within_reach(context.rig, asked)
    ways = _stays(context, ask, f"hold at {asked.text}", field_T, kelvin_of(context.rig, ask), ask.duration_s, ask.coil)
    yield _take(context, ask, f"hold at {asked.text}", ways, notes=notes)


def _stays(
    context: Context, ask: Target, label: str, field_T: float, kelvin: float, duration_s: float, coil: str
) -> list[Alternative]:
    gates_V = gates_of(context, ask)
    found = []
    for persistent in coil_ways(context.rig, field_T, coil, ask.attended):
        state = state_at(context, field_T, kelvin, gates_V, persistent=persistent)
        legs = held((), state.coil, whole_seconds(duration_s), "duration asked")
        found.append(alternative(context, ask, label, Way("", state, state, legs, "duration asked")))
    return found


def temperature_series(context: Context, ask: TemperatureSeries) -> Iterator[Take]:
    """One stay a temperature."""
    asked = field_of(ask, context.sample(ask), ask.field_T, ask.filling)
    field_T, notes = within_reach(context.rig, asked)
    for number, written in enumerate(ask.temperatures_K, 1):
        kelvin = checked_kelvin(context.rig, float(written))
        label = f"{asked.text} at {temperature_name(kelvin)}"
        ways = _stays(context, ask, label, field_T, kelvin, ask.duration_s, ask.coil)
        yield _take(context, ask, label, ways, f"{ask.name} · {number}", notes)


def other_work(context: Context, ask: OtherWork) -> Iterator[Take]:
    """A timed job in a given state."""
    field_T, notes = within_reach(context.rig, field_of(ask, context.sample(ask), ask.field_T, None))
    state = state_at(context, field_T, kelvin_of(context.rig, ask), gates_of(context, ask))
    legs = held((), state.coil, whole_seconds(ask.duration_s), "duration asked")
    way = Way("", state, state, legs, "duration asked")
    people = ask.people if ask.attended or ask.training or ask.people > 1 else 0
    ways = [alternative(context, ask, ask.what, way, people, ask.training or "")]
    yield _take(context, ask, ask.what, ways, notes=notes)


def field_sweep(context: Context, ask: FieldSweep) -> Iterator[Take]:
    """A sweep over the range asked, widened by what the density leaves open and cut at the rig's limit."""
    low_T, high_T, text, notes = _sweep_range(context, ask)
    rate, reason, more = _sweep_rate(context, ask, low_T, high_T)
    label = f"sweep {text}"
    gates_V, kelvin = gates_of(context, ask), kelvin_of(context.rig, ask)
    ways = []
    for names, stops in _turns(ask.direction, low_T, high_T):
        before, after = (state_at(context, stop, kelvin, gates_V) for stop in (stops[0], stops[-1]))
        legs: tuple[Leg, ...] = ()
        if before.coil.mode is CoilMode.ZERO and (warm := warming_leg(context.rig)) is not None:
            legs = (warm,)
        for begin, finish in pairwise(stops):
            swept = field_legs(context.rig, begin, finish, action="sweep", rate_T_per_s=rate, asked=reason)
            legs = (*legs, *delayed(swept, end_of(legs)))
        legs = joined(legs, before.coil, after.coil)
        pace = max(legs, key=lambda leg: leg.seconds).reason
        ways.append(alternative(context, ask, label, Way(names, before, after, legs, pace)))
    yield _take(context, ask, label, ways, notes=(*notes, *more))


def _turns(direction: str, low: float, high: float) -> list[tuple[str, tuple[float, ...]]]:
    """The ways through a range: up runs from its lower to its higher end."""
    ways: dict[str, list[tuple[str, tuple[float, ...]]]] = {
        "up": [("up", (low, high))],
        "down": [("down", (high, low))],
        "either": [("up", (low, high)), ("down", (high, low))],
        "both": [("up, down", (low, high, low)), ("down, up", (high, low, high))],
    }
    return ways[direction]


def _sweep_range(context: Context, ask: FieldSweep) -> tuple[float, float, str, tuple[str, ...]]:
    sample = context.sample(ask)
    if ask.field is not None:
        ends = [field_of(ask, sample, end, None) for end in (ask.field.first, ask.field.last)]
        text = ask.field.text
    elif isinstance(ask.filling, Range):
        ends = [field_of(ask, sample, None, end) for end in (ask.filling.first, ask.filling.last)]
        text = f"ν = {ask.filling.text}"
    else:
        centre, half = field_of(ask, sample, None, ask.filling), (ask.width_T or 0.0) / 2
        within_reach(context.rig, centre)
        ends = [
            FieldAsk(centre.field_T + side, centre.low_T + side, centre.high_T + side, centre.text)
            for side in (-half, half)
        ]
        text = f"{ask.width_T:g} T around {centre.text}"
    ends.sort(key=lambda end: end.field_T)
    low_T, high_T = ends[0].low_T, ends[1].high_T
    notes = []
    if ends[0].uncertain or ends[1].uncertain:
        asked = f"{ends[0].field_T:.3f} to {ends[1].field_T:.3f} T"
        notes.append(f"widened from {asked} to {low_T:.3f} to {high_T:.3f} T, since the density is not known better")
    limit = float(context.rig.magnet.rated_field_T)
    if low_T < -limit or high_T > limit:
        within_reach(context.rig, min(ends, key=lambda end: abs(end.field_T)))
        if ask.field is not None:
            for end in ends:
                within_reach(context.rig, end)
        low_T, high_T = max(low_T, -limit), min(high_T, limit)
        notes.append(f"cut at the rated field: {low_T:.3f} to {high_T:.3f} T")
    return low_T, high_T, text, tuple(notes)


def _sweep_rate(
    context: Context, ask: FieldSweep, low_T: float, high_T: float
) -> tuple[float | None, str, tuple[str, ...]]:
    """The rate to set, what sets it, and notes: the one asked, else the fastest that the lock-in follows."""
    rig = context.rig
    if ask.rate_T_per_s is not None:
        ends = [(low_T, high_T), (high_T, low_T)]
        slowest = min(leg.rate or 0.0 for a, b in ends for leg in field_legs(rig, a, b) if leg.rate)
        notes: tuple[str, ...] = ()
        if ask.rate_T_per_s > slowest * (1 + 1e-9):
            asked = f"{ask.rate_T_per_s * 60:.4g} T/min asked"
            notes = (
                f"{asked}; the magnet allows {slowest * 60:.4g} T/min in the slowest part, so it goes slower there",
            )
        return float(ask.rate_T_per_s), "rate asked", notes
    lockin = lockin_of(context, ask)
    if ask.feature_T is None or lockin is None:
        return None, "", ()
    honest = honest_rate_T_per_s(
        ask.feature_T, lockin.time_constant_s, lockin.poles, lockin.points_across, lockin.settled_percent / 100
    )
    return float(honest), "lock-in", ()


def gate_sweep(context: Context, ask: GateSweep) -> Iterator[Take]:
    """One gate swept at a fixed field; with a second gate, a line for each of its values."""
    asked = field_of(ask, context.sample(ask), ask.field_T, ask.filling, ask.gate)
    field_T, notes = within_reach(context.rig, asked)
    label = f"{ask.gate} {ask.sweep.text} at {asked.text}"
    yield _take(context, ask, label, _lines(context, ask, ask, field_T, label), notes=notes)


def gate_map(context: Context, ask: Map) -> Iterator[Take]:
    """A gate sweep a rung."""
    for number, asked in enumerate(_rungs(context, ask), 1):
        field_T, notes = within_reach(context.rig, asked)
        label = f"rung {number}: {ask.gate} {ask.sweep.text} at {field_T:.4g} T"
        ways = _lines(context, ask, ask, field_T, label)
        yield _take(context, ask, label, ways, f"{ask.name} · {number}", notes)


def _rungs(context: Context, ask: Map) -> list[FieldAsk]:
    """Fields of a map; those of a range lie at equal steps of field."""
    sample = context.sample(ask)
    if ask.fields_T or ask.fillings:
        fields = [field_of(ask, sample, field, None) for field in ask.fields_T]
        return fields + [field_of(ask, sample, None, filling, ask.gate) for filling in ask.fillings]
    ends = ask.field or ask.filling
    if ends is None or ask.rungs is None:
        raise ValueError("a map gives its rungs (checked on reading)")
    first, last = (
        field_of(ask, sample, end if ask.field else None, None if ask.field else end, ask.gate)
        for end in (ends.first, ends.last)
    )
    steps = np.linspace(0, 1, ask.rungs)
    parts = [
        [
            float(a + (b - a) * x)
            for a, b in ((first.field_T, last.field_T), (first.low_T, last.low_T), (first.high_T, last.high_T))
        ]
        for x in steps
    ]
    return [FieldAsk(field, low, high, f"{field:.4g} T") for field, low, high in parts]


def _lines(context: Context, ask: Target, sweep: GateSweep | Map, field_T: float, label: str) -> list[Alternative]:
    """The ways to do one or more lines of a gate sweep at a field."""
    dwell, why = dwell_s(context, ask, sweep.dwell_s)
    low, high = sorted((sweep.sweep.first, sweep.sweep.last))
    gate = context.sample(ask).gate(sweep.gate)
    reason = f"{sweep.points} points of {dwell:.3g} s, {why}"
    found = []
    for names, stops in _turns(sweep.direction, low, high):
        line_s = (len(stops) - 1) * (sweep.points * dwell + (high - low) / gate.rate_V_per_s)
        total_s, second_ends = _second_gate(context, ask, sweep, line_s, stops)
        for persistent in coil_ways(context.rig, field_T, sweep.coil, ask.attended):
            before, after = (
                state_at(context, field_T, kelvin_of(context.rig, ask), gates, persistent=persistent)
                for gates in _line_ends(context, ask, sweep.gate, stops, second_ends)
            )
            moving = _sweep_legs(
                before.gates_V, after.gates_V, f"{context.sample(ask).name}/{sweep.gate}", stops, total_s, reason
            )
            legs = (*held((), before.coil, end_of(moving), reason), *moving)
            found.append(alternative(context, ask, label, Way(names, before, after, legs, reason)))
    return found


def _sweep_legs(
    before: Gates, after: Gates, gate: str, stops: tuple[float, ...], total_s: float, reason: str
) -> tuple[Leg, ...]:
    """A leg a direction. With a second gate the legs stand for all lines together: it moves on in the last one."""
    whole = whole_seconds(total_s)
    if len(stops) == 2:
        return (Leg("gates", "gate sweep", 0, whole, reason, gates_V=(before, after)),)
    turn = tuple((name, stops[1] if name == gate else volt) for name, volt in before)
    half = whole // 2
    there = Leg("gates", "gate sweep", 0, half, reason, gates_V=(before, turn))
    return (there, Leg("gates", "gate sweep", half, whole, reason, gates_V=(turn, after)))


def _line_ends(
    context: Context, ask: Target, gate: str, stops: tuple[float, ...], second: dict[str, tuple[float, float]]
) -> Iterator[Gates]:
    for end in (0, -1):
        yield gates_of(context, ask, {gate: stops[end], **{name: volts[end] for name, volts in second.items()}})


def _second_gate(
    context: Context, ask: Target, sweep: GateSweep | Map, line_s: float, stops: tuple[float, ...]
) -> tuple[float, dict[str, tuple[float, float]]]:
    """Seconds of all lines, and the second gate's first and last voltage; the swept gate goes back between lines."""
    if not isinstance(sweep, GateSweep) or sweep.second_gate is None or sweep.second_sweep is None:
        return line_s, {}
    lines = sweep.second_points or 2
    first, last = sweep.second_sweep.first, sweep.second_sweep.last
    sample = context.sample(ask)
    back_s = abs(stops[-1] - stops[0]) / sample.gate(sweep.gate).rate_V_per_s
    step_s = abs(last - first) / (lines - 1) / sample.gate(sweep.second_gate).rate_V_per_s
    return lines * line_s + (lines - 1) * max(back_s, step_s), {sweep.second_gate: (first, last)}


EXPANDERS: dict[str, Expander] = {
    "hold": hold,
    "field sweep": field_sweep,
    "gate sweep": gate_sweep,
    "temperature series": temperature_series,
    "map": gate_map,
    "other work": other_work,
}


def repeated(takes: list[Take], repeats: int) -> Iterator[Take]:
    """Each take as often as asked."""
    for take in takes:
        for number in range(1, repeats + 1):
            yield replace(take, name=f"{take.name} × {number}") if repeats > 1 else take
