"""Takes as their targets asked: field, temperature, gates, range, both directions, time."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.asks import (
    least_take_s,
    point_fields,
    sweep_range_T,
    swept_gates,
    takes_asked,
    temperatures_asked,
)
from planner.checks.plan_view import Placed, PlanView, is_decision
from planner.checks.registry import Rule, register
from planner.checks.spans import united
from planner.checks.wording import kelvin, length, number, tesla
from planner.files.targets import AtOneField, FieldSweep, GateSweep, Map, Target, TemperatureSeries
from planner.plan import Finding, Kind, Step, StepKind

EXACT_T = 1e-6
EXACT = 1e-9
FIELD = register(
    Rule("field of a take", "as asked", "data at the wrong field", "week: targets.field, filling, coil", Kind.POLICY)
)
TEMPERATURE = register(
    Rule("temperature of a take", "as asked", "data at the wrong temperature", "week: targets.temperature", Kind.POLICY)
)
GATES = register(
    Rule("gates of a take", "as asked", "data at the wrong gate voltage", "week: targets.gates, sweep", Kind.POLICY)
)
RANGE = register(
    Rule(
        "sweep range",
        "as asked",
        "the part of a sweep that is missing",
        "week: targets.field, filling, width",
        Kind.POLICY,
    )
)
RETURN = register(
    Rule(
        "return sweep",
        "as asked",
        "lag and hysteresis: only both directions tell",
        "week: targets.direction",
        Kind.POLICY,
    )
)
TIME = register(Rule("take time", "as asked", "data cut short", "week: targets.duration, points, dwell", Kind.POLICY))


def _takes(view: PlanView) -> Iterator[tuple[Target, Step, tuple[Placed, ...]]]:
    for at, step in enumerate(view.steps):
        target = view.targets.get(step.target)
        if target is not None and step.kind is StepKind.TAKE and not is_decision(step):
            yield target, step, view.by_step[at]


@FIELD.plan
def field_of_a_take(view: PlanView) -> Iterator[Finding]:
    """A take at one field stands there from end to end, in the coil mode asked; a map's rung is one that was asked."""
    for target, step, items in _takes(view):
        if isinstance(target, FieldSweep):
            continue
        rated = float(view.magnet.rated_field_T)
        asked = [min(max(span.nominal_T, -rated), rated) for span in point_fields(view.week, target)]
        fields = [step.before.coil.field_T[2], *(item.last_T for item in items)]
        mode = getattr(target, "coil", "either")
        for field in fields:
            expected = min(asked, key=lambda one: abs(one - field))
            if abs(field - expected) > EXACT_T or abs(field - fields[0]) > EXACT_T:
                off = expected if abs(field - expected) > EXACT_T else fields[0]
                yield FIELD.finding(
                    f"{step.label} stands at {tesla(field)}, {view.wall(step.start_s)}; {tesla(off)} was asked.",
                    value=field,
                    least=off if field < off else None,
                    most=off if field > off else None,
                    unit="T",
                    at_s=step.start_s,
                    step=step.number,
                    subject=step.target,
                    mend=f"go to {tesla(off)} first",
                )
                break
        if mode != "either" and fields[0] != 0 and step.before.coil.mode != mode:
            yield FIELD.finding(
                f"{step.label}: the coil is {step.before.coil.mode}, {view.wall(step.start_s)}; {mode} was asked.",
                at_s=step.start_s,
                step=step.number,
                subject=step.target,
                source="week: targets.coil",
                mend="close the switch first" if mode == "persistent" else "open the switch first",
            )


@FIELD.plan
def rungs_of_a_map(view: PlanView) -> Iterator[Finding]:
    """A finished map has each of its rungs as often as asked."""
    rated = float(view.magnet.rated_field_T)
    for name, steps in view.takes.items():
        target = view.targets.get(name)
        if not isinstance(target, Map) or len(steps) < takes_asked(target):
            continue
        done = [step.before.coil.field_T[2] for step in steps]
        asked = [min(max(span.nominal_T, -rated), rated) for span in point_fields(view.week, target)]
        for field in dict.fromkeys(asked):
            times = sum(abs(field - other) <= EXACT_T for other in done)
            wanted = target.repeats * asked.count(field)
            if times < wanted:
                yield FIELD.finding(
                    f'"{name}" has {times} takes at {tesla(field)}; {wanted} were asked.',
                    value=float(times),
                    least=float(wanted),
                    unit="takes",
                    at_s=steps[-1].end_s,
                    step=steps[-1].number,
                    subject=name,
                    mend=f"measure at {tesla(field)} too",
                )


def _fits(kelvins: float, asked_K: float, *, lower_too: bool) -> bool:
    return kelvins <= asked_K * (1 + EXACT) if lower_too else abs(kelvins / asked_K - 1) <= EXACT


@TEMPERATURE.plan
def temperature_of_a_take(view: PlanView) -> Iterator[Finding]:
    """A take stands at a temperature asked, from end to end; a series has each of its temperatures."""
    base = float(view.rig.stage.base_K)
    for target, step, _ in _takes(view):
        asked = temperatures_asked(target, base)
        given = [step.before.stage.temperature_K, step.after.stage.temperature_K]
        given += [leg.stage_K[1] for leg in step.legs if leg.stage_K is not None]
        for kelvins in given:
            if any(_fits(kelvins, limit, lower_too=lower) for limit, lower in asked):
                continue
            nearest, lower = min(asked, key=lambda ask: abs(ask[0] - kelvins))
            yield TEMPERATURE.finding(
                f"{step.label} is measured at {kelvin(kelvins)}, {view.wall(step.start_s)}; "
                f"{kelvin(nearest)}{' at most' if lower else ''} was asked.",
                value=kelvins,
                most=nearest if lower or kelvins > nearest else None,
                least=nearest if not lower and kelvins < nearest else None,
                unit="K",
                at_s=step.start_s,
                step=step.number,
                subject=step.target,
                mend=f"go to {kelvin(nearest)} first",
            )
            break


@TEMPERATURE.plan
def temperatures_of_a_series(view: PlanView) -> Iterator[Finding]:
    """A finished series has every temperature as often as it was asked."""
    for name, steps in view.takes.items():
        target = view.targets.get(name)
        if not isinstance(target, TemperatureSeries) or len(steps) < len(target.temperatures_K) * target.repeats:
            continue
        done = [step.before.stage.temperature_K for step in steps]
        for asked in target.temperatures_K:
            times = sum(abs(value / asked - 1) <= EXACT for value in done)
            wanted = target.repeats * list(target.temperatures_K).count(asked)
            if times < wanted:
                yield TEMPERATURE.finding(
                    f'"{name}" is measured {times} times at {kelvin(asked)}; {wanted} were asked.',
                    value=float(times),
                    least=float(wanted),
                    unit="takes",
                    at_s=steps[-1].end_s,
                    step=steps[-1].number,
                    subject=name,
                    mend=f"measure at {kelvin(asked)} too",
                )


def _voltages(step: Step, name: str) -> list[tuple[float, float]]:
    """How one gate moves in a step, as (from, to), by its legs; without legs, from its first to its last voltage."""
    legs = [leg.gates_V for leg in step.legs if leg.gates_V is not None]
    moves = [(dict(a)[name], dict(b)[name]) for a, b in legs if name in dict(a) and name in dict(b)]
    before, after = dict(step.before.gates_V), dict(step.after.gates_V)
    if not moves and name in before and name in after:
        return [(before[name], after[name])]
    return moves


@GATES.plan
def gates_of_a_take(view: PlanView) -> Iterator[Finding]:
    """Held gates stand at their voltages; swept gates begin and end where their sweep does, each way asked."""
    for target, step, _ in _takes(view):
        swept = swept_gates(target)
        for gate, volt in target.gates.items():
            pairs = _voltages(step, f"{target.sample}/{gate}") if gate not in swept else []
            wrong = next((value for pair in pairs for value in pair if abs(value - volt) > EXACT), None)
            if wrong is not None:
                says = f"{number(volt)} V was asked"
                yield _gate_finding(view, step, f"{target.sample}/{gate}", wrong, float(volt), says)
        if isinstance(target, (GateSweep, Map)):
            yield from _swept(view, target, step)
        if isinstance(target, GateSweep) and target.second_gate is not None and target.second_sweep is not None:
            ends = sorted((target.second_sweep.first, target.second_sweep.last))
            name = f"{target.sample}/{target.second_gate}"
            reached = [value for pair in _voltages(step, name) for value in pair] or [0.0]
            for limit, value in zip(ends, (min(reached), max(reached)), strict=True):
                if abs(limit - value) > EXACT:
                    yield _gate_finding(view, step, name, value, limit, f"its sweep goes to {number(limit)} V")


def _gate_finding(view: PlanView, step: Step, name: str, value: float, limit: float, says: str) -> Finding:
    return GATES.finding(
        f"{step.label}, {view.wall(step.start_s)}: gate {name} is at {number(value)} V; {says}.",
        value=value,
        least=limit if value < limit else None,
        most=limit if value > limit else None,
        unit="V",
        at_s=step.start_s,
        step=step.number,
        subject=step.target,
        mend=f"{number(limit)} V",
    )


def _swept(view: PlanView, target: GateSweep | Map, step: Step) -> Iterator[Finding]:
    """The swept gate: ways as the step names them (lines are not legs), its first and last voltage by its legs."""
    name = f"{target.sample}/{target.gate}"
    low, high = sorted((target.sweep.first, target.sweep.last))
    ways = [way.strip() for way in step.direction.split(",") if way.strip()]
    pairs = _voltages(step, name)
    if not ways or not pairs:
        return
    begins, ends = (low if ways[0] == "up" else high), (high if ways[-1] == "up" else low)
    for limit, value in ((begins, pairs[0][0]), (ends, pairs[-1][1])):
        if abs(limit - value) > EXACT:
            says = f"swept {step.direction} it is at {number(limit)} V there"
            yield _gate_finding(view, step, name, value, limit, says)


def _gap(items: list[Placed], low: float, high: float) -> float | None:
    """The first field of the range that no leg covers, or None."""
    parts = united((round(min(i.first_T, i.last_T) * 1e9), round(max(i.first_T, i.last_T) * 1e9)) for i in items)
    at = low
    for begin, end in parts:
        if begin * 1e-9 > at + EXACT_T:
            break
        at = max(at, end * 1e-9)
    return None if at >= high - EXACT_T else at


def _swept_ways(target: Target, step: Step, items: tuple[Placed, ...]) -> set[str]:
    """The directions a step sweeps in: a field by its legs, a gate as the step names them."""
    if not isinstance(target, FieldSweep):
        return {way.strip() for way in step.direction.split(",")}
    sweeps = [item for item in items if item.leg.action == "sweep" and item.moves]
    return {"up" if item.last_T > item.first_T else "down" for item in sweeps}


@RETURN.plan
def return_sweep(view: PlanView) -> Iterator[Finding]:
    """Every direction asked is swept; of either, one."""
    for target, step, items in _takes(view):
        if not isinstance(target, (FieldSweep, GateSweep, Map)):
            continue
        ways = _swept_ways(target, step, items)
        wanted = {"both": ("up", "down"), "either": ()}.get(target.direction, (target.direction,))
        if not wanted and not ways & {"up", "down"}:
            wanted = ("up",)
        what = "the field" if isinstance(target, FieldSweep) else f"gate {target.sample}/{target.gate}"
        for way in wanted:
            if way not in ways:
                yield RETURN.finding(
                    f"{step.label}, {view.wall(step.start_s)}: {what} is not swept {way}, and that was asked.",
                    at_s=step.end_s,
                    step=step.number,
                    subject=step.target,
                    mend=f"sweep {way} as well, or ask for one direction",
                )


@RANGE.plan
def sweep_range(view: PlanView) -> Iterator[Finding]:
    """A field sweep covers its range, widened by the density's error and cut at the rated field, each way it goes."""
    for target, step, items in _takes(view):
        if not isinstance(target, FieldSweep):
            continue
        low, high = sweep_range_T(view.week, view.rig, target)
        sweeps = [item for item in items if item.leg.action == "sweep" and item.moves]
        for way, one_way in (
            ("up", [item for item in sweeps if item.last_T > item.first_T]),
            ("down", [item for item in sweeps if item.last_T < item.first_T]),
        ):
            gap = _gap(one_way, low, high) if one_way else None
            if gap is not None:
                yield RANGE.finding(
                    f"{step.label}, {view.wall(step.start_s)}: swept {way}, {tesla(low)} to {tesla(high)} is asked and "
                    f"the part from {tesla(gap)} on is missing.",
                    value=gap,
                    least=high,
                    unit="T",
                    at_s=step.start_s,
                    step=step.number,
                    subject=step.target,
                    mend=f"sweep from {tesla(low)} to {tesla(high)}",
                )


@TIME.plan
def take_time(view: PlanView) -> Iterator[Finding]:
    """A take lasts at least as long as its duration, its points or its sweep need."""
    for target, step, _ in _takes(view):
        needed = least_take_s(view.week, view.rig, target)
        if isinstance(target, FieldSweep) or step.seconds >= needed - 1e-6:
            continue
        what = "a stay of" if isinstance(target, AtOneField) else "work of"
        yield TIME.finding(
            f"{step.label} gets {length(step.seconds)}, {view.wall(step.start_s)} to {view.wall(step.end_s)}; "
            f"{what} {length(needed)} was asked.",
            value=float(step.seconds),
            least=needed,
            unit="s",
            at_s=step.end_s,
            step=step.number,
            subject=step.target,
            mend=f"end at {view.wall(step.start_s + needed)}",
        )
