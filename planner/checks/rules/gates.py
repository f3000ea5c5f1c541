"""Gates: their window, their rate, and rest for those that a take does not use."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from planner.checks.asks import swept_gates
from planner.checks.plan_view import PlanView
from planner.checks.registry import Rule, register
from planner.checks.week_view import WeekView
from planner.checks.wording import length, number
from planner.files.asks import Range
from planner.files.targets import GateSweep, Map, Target
from planner.files.week import Gate
from planner.plan import Finding, Gates, Kind, Step, StepKind

EXACT_V = 1e-9
WINDOW = register(
    Rule("gate window", "gates", "the gate against breaking through", "week: samples.gates.lowest, highest", Kind.STOP)
)
RATE = register(
    Rule("gate rate", "gates", "the sample against a jump of its gate", "week: samples.gates.rate", Kind.STOP)
)
REST = register(Rule("gates at rest", "gates", "samples nobody measures", "week: samples.gates.rest", Kind.WARN))


def gates_by_name(view: WeekView) -> dict[str, Gate]:
    """Every gate of the load by "sample/gate"."""
    return {f"{sample.name}/{gate.name}": gate for sample in view.week.samples for gate in sample.gates}


@dataclass(frozen=True, slots=True)
class _Change:
    """One gate going from one voltage to another."""

    step: Step
    name: str
    begin_s: int
    end_s: int
    first_V: float
    last_V: float
    set_V_per_s: float | None


def _changes(step: Step) -> Iterator[_Change]:
    """How each gate moves through a step, by its legs; a jump between them takes no time."""
    here = dict(step.before.gates_V)
    at = step.start_s
    for leg in sorted((leg for leg in step.legs if leg.gates_V is not None), key=lambda leg: (leg.start_s, leg.end_s)):
        before, after = (dict(gates) for gates in leg.gates_V or ((), ()))
        at = leg.start_s
        for name, volt in before.items():
            if abs(here.get(name, volt) - volt) > EXACT_V:
                yield _Change(step, name, at, at, here[name], volt, None)
        moved = [name for name in after if before.get(name, here.get(name)) != after[name]]
        rate = leg.rate if len(moved) == 1 else None
        for name in moved:
            first = before.get(name, here.get(name, 0.0))
            yield _Change(step, name, leg.start_s, leg.end_s, first, after[name], rate)
        here.update(after)
        at = leg.end_s
    for name, volt in step.after.gates_V:
        if abs(here.get(name, volt) - volt) > EXACT_V:
            yield _Change(step, name, at, at, here[name], volt, None)


def _voltages(step: Step) -> Iterator[tuple[int, Gates]]:
    yield step.start_s, step.before.gates_V
    for leg in step.legs:
        if leg.gates_V is not None:
            yield leg.start_s, leg.gates_V[0]
            yield leg.end_s, leg.gates_V[1]
    yield step.end_s, step.after.gates_V


@WINDOW.plan
def gate_window(view: PlanView) -> Iterator[Finding]:
    """No gate ever leaves its window."""
    gates = gates_by_name(view)
    outside: set[str] = set()
    for step in view.steps:
        for at_s, voltages in _voltages(step):
            for name, volt in voltages:
                gate = gates.get(name)
                if gate is None or gate.lowest_V - EXACT_V <= volt <= gate.highest_V + EXACT_V:
                    outside.discard(name)
                    continue
                if name not in outside:
                    yield _outside(gate, name, volt, f"{step.label}, {view.wall(at_s)}", step.target, at_s, step.number)
                outside.add(name)


def _outside(
    gate: Gate, name: str, volt: float, where: str, subject: str, at_s: int | None = None, step: int | None = None
) -> Finding:
    low = volt < gate.lowest_V
    edge = float(gate.lowest_V if low else gate.highest_V)
    return WINDOW.finding(
        f"{where}: gate {name} at {number(volt)} V; its window is {number(gate.lowest_V)} to "
        f"{number(gate.highest_V)} V.",
        value=volt,
        least=edge if low else None,
        most=None if low else edge,
        unit="V",
        at_s=at_s,
        step=step,
        subject=subject,
        mend=f"{number(edge)} V {'at least' if low else 'at most'}",
    )


@WINDOW.week
def asked_voltages(view: WeekView) -> Iterator[Finding]:
    """No held or swept voltage, and none of the present state, outside its gate's window."""
    gates = gates_by_name(view)
    for name, volt in view.week.present.gates.items():
        gate = gates[name]
        if not gate.lowest_V <= volt <= gate.highest_V:
            yield _outside(gate, name, float(volt), "The present state", "", 0)
    for target in view.targets.values():
        yield from _asked_outside(view, target)


@WINDOW.plan
def swept_voltages(view: PlanView) -> Iterator[Finding]:
    """A take's sweep stays in the window between its ends too, which are not all in its legs."""
    shown = {(found.value, found.subject) for found in gate_window(view)}
    for name, steps in view.takes.items():
        target = view.targets.get(name)
        for found in _asked_outside(view, target) if target is not None else ():
            if (found.value, name) not in shown:
                yield replace(found, at_s=steps[0].start_s, step=steps[0].number)


def _asked_outside(view: WeekView, target: Target) -> Iterator[Finding]:
    sample = view.week.sample(target.sample)
    asked = [(name, float(volt)) for name, volt in target.gates.items()]
    sweeps: list[tuple[str | None, Range | None]] = []
    if isinstance(target, (GateSweep, Map)):
        sweeps.append((target.gate, target.sweep))
    if isinstance(target, GateSweep):
        sweeps.append((target.second_gate, target.second_sweep))
    for swept, ends in sweeps:
        if swept is not None and ends is not None:
            asked += [(swept, ends.first), (swept, ends.last)]
    for name, volt in asked:
        gate = sample.gate(name)
        if not gate.lowest_V <= volt <= gate.highest_V:
            yield _outside(gate, f"{sample.name}/{name}", volt, f'"{target.name}"', target.name)


@RATE.plan
def gate_rate(view: PlanView) -> Iterator[Finding]:
    """No gate moves faster than its rate, and none jumps."""
    gates = gates_by_name(view)
    for step in view.steps:
        for change in _changes(step):
            gate = gates.get(change.name)
            if gate is None:
                continue
            limit = float(gate.rate_V_per_s)
            swing = abs(change.last_V - change.first_V)
            seconds = change.end_s - change.begin_s
            claimed = max(swing / seconds if seconds else float("inf"), change.set_V_per_s or 0.0)
            if claimed <= limit * (1 + EXACT_V):
                continue
            speed = f"at {number(claimed * 1e3)} mV/s" if seconds else "in no time"
            yield RATE.finding(
                f"{step.label}: gate {change.name} goes from {number(change.first_V)} to "
                f"{number(change.last_V)} V {speed}, "
                f"{view.wall(change.begin_s)}; it is allowed {number(limit * 1e3)} mV/s.",
                value=claimed * 1e3 if seconds else None,
                most=limit * 1e3,
                unit="mV/s",
                at_s=change.begin_s,
                step=step.number,
                subject=step.target,
                mend=f"give it {length(swing / limit)}" if limit > 0 else "this gate may not be moved",
            )


@RATE.week
def asked_gate_rate(view: WeekView) -> Iterator[Finding]:
    """A sweep whose dwell leaves no time for the way: the gate moves no faster than its rate, which takes longer."""
    for target in view.targets.values():
        if not isinstance(target, (GateSweep, Map)) or target.dwell_s is None:
            continue
        limit = float(view.week.sample(target.sample).gate(target.gate).rate_V_per_s)
        swing = abs(target.sweep.last - target.sweep.first)
        dwelling = target.points * target.dwell_s
        asked = swing / dwelling
        if limit <= 0 or asked <= limit * (1 + EXACT_V):
            continue
        yield RATE.finding(
            f'"{target.name}" has {length(dwelling)} for {number(swing)} V of gate {target.gate}, '
            f"{number(asked * 1e3)} mV/s; it is allowed {number(limit * 1e3)} mV/s.",
            kind=Kind.WARN,
            value=asked * 1e3,
            most=limit * 1e3,
            unit="mV/s",
            subject=target.name,
            mend=f"count on {length(swing / limit + dwelling)} one way, {length(swing / limit)} of it between points",
        )


@REST.plan
def gates_at_rest(view: PlanView) -> Iterator[Finding]:
    """While a take runs, every gate it does not use is at rest."""
    gates = gates_by_name(view)
    for step in view.of_step(StepKind.TAKE):
        target = view.targets.get(step.target)
        if target is None:
            continue
        used = {f"{target.sample}/{name}" for name in (*target.gates, *swept_gates(target))}
        for name, volt in step.before.gates_V:
            gate = gates.get(name)
            if gate is None or name in used or abs(volt - gate.rest_V) <= EXACT_V:
                continue
            yield REST.finding(
                f"{step.label}, {view.wall(step.start_s)}: gate {name} stands at {number(volt)} V and is not used; "
                f"it rests at {number(gate.rest_V)} V.",
                value=volt,
                least=float(gate.rest_V) if volt < gate.rest_V else None,
                most=float(gate.rest_V) if volt > gate.rest_V else None,
                unit="V",
                at_s=step.start_s,
                step=step.number,
                subject=step.target,
                mend=f"bring it to {number(gate.rest_V)} V first",
            )
