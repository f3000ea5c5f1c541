"""Ramps: the rate table at every |B|, and whether claimed times carry claimed fields."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.asks import honest_rate, passes, sweep_range_T
from planner.checks.plan_view import MOVES_FIELD, Placed, PlanView
from planner.checks.ramp_table import fastest, least_seconds, pieces, segments_touched, size_range_T
from planner.checks.registry import Rule, register
from planner.checks.week_view import WeekView
from planner.checks.wording import length, rate, tesla
from planner.files.targets import FieldSweep
from planner.plan import CoilMode, Finding, Kind, StepKind

EXACT = 1e-9
RATE = register(
    Rule("ramp rate", "ramps", "the coil against a quench by ramping too fast", "rig: magnet.ramp_table", Kind.STOP)
)
TIME = register(
    Rule(
        "ramp time",
        "ramps",
        "everything after it, if the field is not yet where the plan says",
        "plan: a leg's field change = rate × time",
        Kind.STOP,
    )
)
STILL = register(
    Rule(
        "field moves only in ramps",
        "ramps",
        "everything after it, if the field is not where the plan says",
        "plan: field moves in ramps and sweeps with the supply on the coil",
        Kind.STOP,
    )
)
SETTLE = register(
    Rule("magnet settles", "ramps", "data against a field that still drifts", "rig: magnet.settle", Kind.POLICY)
)
SWEEP_ASKED = register(
    Rule(
        "sweep rate in the table",
        "ramps",
        "the timetable against a sweep rate the magnet does not allow",
        "rig: magnet.ramp_table",
        Kind.WARN,
    )
)


def _mean_rate(item: Placed) -> float:
    change = abs(item.last_T - item.first_T)
    return change / item.leg.seconds if item.leg.seconds > 0 else float("inf")


@RATE.plan
def ramp_rate(view: PlanView) -> Iterator[Finding]:
    """No leg is faster than any segment of the table it touches."""
    for item in view.placed:
        if not item.moves:
            continue
        claimed = item.leg.rate if item.leg.rate is not None else _mean_rate(item)
        segment = fastest(view.magnet, item.first_T, item.last_T)
        limit = float(segment.rate_T_per_s)
        if claimed <= limit * (1 + EXACT):
            continue
        row = view.magnet.ramp_table.index(segment)
        yield RATE.finding(
            f"{item.step.label}: from {tesla(item.first_T)} to {tesla(item.last_T)} at {rate(claimed)}, "
            f"{view.wall(item.leg.start_s)}; up to {tesla(segment.to_T)} the table allows {rate(limit)}.",
            value=claimed * 60,
            most=limit * 60,
            unit="T/min",
            at_s=_enters(view, item, row),
            step=item.step.number,
            subject=item.step.target,
            source=f"rig: magnet.ramp_table[{row}].rate",
            mend=f"{rate(limit)}: "
            f"{length(least_seconds(view.magnet, item.first_T, item.last_T))} from end to end by the table",
        )


def _enters(view: PlanView, item: Placed, row: int) -> float:
    """When a leg enters a row of the table."""
    floor_T = float(view.magnet.ramp_table[row - 1].to_T) if row else 0.0
    low, high = size_range_T(item.first_T, item.last_T)
    if item.rises and low < floor_T < high and item.first_T * item.last_T >= 0:
        return item.leg.start_s + item.leg.seconds * (floor_T - low) / (high - low)
    return item.leg.start_s


@TIME.plan
def ramp_time(view: PlanView) -> Iterator[Finding]:
    """The claimed seconds carry the claimed change of field at the set rate, and are no longer than a second more."""
    for item in view.placed:
        if not item.moves or item.leg.action not in MOVES_FIELD:
            continue
        change = abs(item.last_T - item.first_T)
        if item.leg.rate is None:
            yield TIME.finding(
                f"{item.step.label}: a leg moves the field {view.wall(item.leg.start_s)} and names no rate.",
                at_s=item.leg.start_s,
                step=item.step.number,
                mend=f"set {rate(_mean_rate(item))}" if item.leg.seconds else "give it time and a rate",
            )
            continue
        carried = item.leg.rate * item.leg.seconds
        needed = change / item.leg.rate if item.leg.rate > 0 else float("inf")
        late = change > carried * (1 + EXACT) + EXACT
        if late or item.leg.seconds > needed + 1 + 1e-6:
            verb = "is not yet there" if late else "is there long before"
            yield TIME.finding(
                f"{item.step.label}: {tesla(item.first_T)} to {tesla(item.last_T)} at {rate(item.leg.rate)} takes "
                f"{length(needed)}; the plan gives it {length(item.leg.seconds)} from {view.wall(item.leg.start_s)}, "
                f"so the field {verb}.",
                kind=Kind.STOP if late else Kind.WARN,
                value=float(item.leg.seconds),
                least=needed if late else None,
                most=None if late else needed + 1,
                unit="s",
                at_s=item.leg.end_s,
                step=item.step.number,
                subject=item.step.target,
                mend=f"give the leg {length(needed)}",
            )


@STILL.plan
def field_moves_only_in_ramps(view: PlanView) -> Iterator[Finding]:
    """The field changes in ramps and sweeps alone, driven, the switch open."""
    for item in view.placed:
        if not item.moves:
            continue
        bare = view.magnet.switch is None and item.before.mode is CoilMode.ZERO
        if item.leg.action in MOVES_FIELD and (item.before.mode is CoilMode.DRIVEN or bare):
            continue
        why = (
            f'in a leg "{item.leg.action}"'
            if item.leg.action not in MOVES_FIELD
            else f"with the coil {item.before.mode}"
        )
        yield STILL.finding(
            f"{item.step.label}: the field goes from {tesla(item.first_T)} to {tesla(item.last_T)} {why}, "
            f"{view.wall(item.leg.start_s)}.",
            value=abs(item.last_T - item.first_T),
            most=0.0,
            unit="T",
            at_s=item.leg.start_s,
            step=item.step.number,
            subject=item.step.target,
            mend="open the switch and ramp, or keep the field",
        )


@SETTLE.plan
def magnet_settles(view: PlanView) -> Iterator[Finding]:
    """After the last ramp the magnet has its settling time before data are taken."""
    settle = float(view.magnet.settle_s)
    ramped: int | None = None
    for item in view.placed:
        if item.leg.action == "ramp" and item.moves and item.step.kind is not StepKind.TAKE:
            ramped = item.leg.end_s
        if item.step.kind is not StepKind.TAKE or item.leg.start_s != item.step.start_s or ramped is None:
            continue
        waited = item.leg.start_s - ramped
        if waited < settle - 1e-6:
            yield SETTLE.finding(
                f"{item.step.label} begins {view.wall(item.leg.start_s)}, {length(waited)} after the ramp; "
                f"the magnet settles in {length(settle)}.",
                value=float(waited),
                least=settle,
                unit="s",
                at_s=item.leg.start_s,
                step=item.step.number,
                subject=item.step.target,
                mend=f"begin at {view.wall(ramped + settle)}",
            )
        ramped = None


@SWEEP_ASKED.week
def asked_sweep_rate(view: WeekView) -> Iterator[Finding]:
    """A sweep rate above the table takes the table's time; the honest time is said."""
    for target in view.targets.values():
        if not isinstance(target, FieldSweep) or target.rate_T_per_s is None:
            continue
        low, high = sweep_range_T(view.week, view.rig, target)
        if high <= low:
            continue
        asked = float(target.rate_T_per_s)
        honest_s = least_seconds(view.magnet, low, high)
        capped_s = least_seconds(view.magnet, low, high, asked)
        lowest = fastest(view.magnet, low, high)
        if asked <= lowest.rate_T_per_s * (1 + EXACT):
            continue
        ways = passes(target)
        both = f", {length(ways * capped_s)} both ways" if ways > 1 else ""
        rows = ", ".join(
            f"{rate((abs(b - a)) / s)} from {tesla(a)} to {tesla(b)}"
            for a, b, s in pieces(view.magnet, low, high, asked)
        )
        narrow = honest_rate(view.week, target)
        slower = f" The lock-in wants {rate(narrow)}." if narrow is not None and narrow < asked else ""
        everywhere = asked > max(segment.rate_T_per_s for segment in segments_touched(view.magnet, low, high))
        yield SWEEP_ASKED.finding(
            f'"{target.name}" asks for {rate(asked)}, which is {"" if everywhere else "in part "}above the '
            f"ramp table: {tesla(low)} to {tesla(high)} take "
            f"{length(capped_s)} each way{both}, not {length((high - low) / asked)} ({rows}).{slower}",
            kind=Kind.WARN if everywhere else Kind.NOTE,
            value=asked * 60,
            most=float(lowest.rate_T_per_s) * 60,
            unit="T/min",
            subject=target.name,
            mend=f"count on {length(capped_s)} each way (the magnet alone: {length(honest_s)})",
        )
