"""Users' slots and neighbours' quiet hours."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.plan_view import Placed, PlanView
from planner.checks.registry import Rule, register
from planner.checks.spans import lies_in, next_fit, touching
from planner.checks.week_view import WeekView
from planner.checks.wording import length, tesla
from planner.files.week import Quiet
from planner.plan import Finding, Kind, StepKind

SLOTS = register(Rule("user slots", "sharing", "what users were promised", "week: users.slots", Kind.POLICY))
QUIET = register(Rule("quiet hours", "sharing", "neighbours' measurements", "week: quiet", Kind.POLICY))


@SLOTS.plan
def user_slots(view: PlanView) -> Iterator[Finding]:
    """Nobody's take runs in somebody else's slot; who may only measure in slots does."""
    for step in view.of_step(StepKind.TAKE):
        for user in view.week.users:
            if user.name == step.user:
                continue
            taken = touching(view.slots[user.name], step.start_s, step.end_s)
            if taken is not None:
                at_s = max(taken[0], step.start_s)
                lost = min(taken[1], step.end_s) - at_s
                yield SLOTS.finding(
                    f"{step.label} of {step.user} runs {length(lost)} into the slot of {user.name}, "
                    f"from {view.wall(at_s)} on.",
                    value=lost / 60,
                    most=0.0,
                    unit="min",
                    at_s=at_s,
                    step=step.number,
                    subject=step.target,
                    mend=f"end by {view.wall(taken[0])} or begin at {view.wall(taken[1])}",
                )
        yield from _only_in_slots(view, step.user, step.start_s, step.end_s, step.label, step.number, step.target)


def _only_in_slots(
    view: PlanView, name: str, begin: int, end: int, label: str, number: int, target: str
) -> Iterator[Finding]:
    user = next((user for user in view.week.users if user.name == name), None)
    if user is None or not user.only_in_slots:
        return
    slots = view.slots[name]
    if not lies_in(slots, begin, end):
        follows = next_fit(slots, begin, end - begin)
        yield SLOTS.finding(
            f"{label} from {view.wall(begin)} to {view.wall(end)} is not wholly inside a slot of {name}, "
            "who measures in slots only.",
            at_s=begin,
            step=number,
            subject=target,
            source="week: users.only_in_slots",
            mend="no later slot is long enough" if follows is None else f"begin at {view.wall(follows)}",
        )


@QUIET.plan
def quiet_hours(view: PlanView) -> Iterator[Finding]:
    """No field change in hours quiet of ramps, no field above the limit in hours quiet of field."""
    for quiet in view.week.quiet:
        begin, end = view.span(quiet)
        broken: Finding | None = None
        for item in view.placed:
            if item.leg.end_s <= begin or item.leg.start_s >= end or item.leg.seconds == 0:
                continue
            found = _ramp(view, quiet, item) if quiet.forbids == "ramps" else _field(view, quiet, item)
            if found is not None and broken is None:
                broken = found
                yield found


def _ramp(view: PlanView, quiet: Quiet, item: Placed) -> Finding | None:
    if not item.moves:
        return None
    begin, end = view.span(quiet)
    at_s = max(begin, item.leg.start_s)
    kind = view.in_recovery(QUIET.kind, item.leg.start_s) if item.runs_down else QUIET.kind
    return QUIET.finding(
        f"{item.step.label} changes the field {view.wall(at_s)}, in the quiet hours of {quiet.name} "
        f"({view.wall(begin)} to {view.wall(end)}).",
        kind=kind,
        value=(min(end, item.leg.end_s) - at_s) / 60,
        most=0.0,
        unit="min",
        at_s=at_s,
        step=item.step.number,
        subject=item.step.target,
        mend=f"end the ramp by {view.wall(begin)} or begin it at {view.wall(end)}",
    )


def _field(view: PlanView, quiet: Quiet, item: Placed) -> Finding | None:
    begin, end = view.span(quiet)
    low, high = max(begin, item.leg.start_s), min(end, item.leg.end_s)
    fields = [
        item.first_T + (item.last_T - item.first_T) * (at - item.leg.start_s) / item.leg.seconds for at in (low, high)
    ]
    worst = max(fields, key=abs)
    if abs(worst) <= quiet.above_T + 1e-9:
        return None
    at_s = low if abs(fields[0]) > quiet.above_T + 1e-9 else high
    if at_s == high:
        share = (quiet.above_T - abs(fields[0])) / (abs(fields[1]) - abs(fields[0]))
        at_s = round(low + share * (high - low))
    kind = view.in_recovery(QUIET.kind, item.leg.start_s)
    return QUIET.finding(
        f"{item.step.label}: {tesla(worst)} in the hours of {quiet.name} ({view.wall(begin)} to {view.wall(end)}), "
        f"which allow {tesla(quiet.above_T)}; from {view.wall(at_s)} on.",
        kind=kind,
        value=abs(worst),
        most=float(quiet.above_T),
        unit="T",
        at_s=at_s,
        step=item.step.number,
        subject=item.step.target,
        mend=f"be at {tesla(quiet.above_T)} or below by {view.wall(begin)}",
    )


@QUIET.week
def slots_against_quiet(view: WeekView) -> Iterator[Finding]:
    """A slot that quiet hours take wholly, or in part, is said before anybody plans on it."""
    for user in view.week.users:
        for slot in user.slots:
            begin, end = view.span(slot)
            for quiet in view.week.quiet:
                shared = touching([view.span(quiet)], begin, end)
                if shared is None:
                    continue
                low, high = max(begin, shared[0]), min(end, shared[1])
                what = "no ramp" if quiet.forbids == "ramps" else f"no field above {tesla(quiet.above_T)}"
                yield QUIET.finding(
                    f"The slot of {user.name}, {view.wall(begin)} to {view.wall(end)}, has {length(high - low)} of the "
                    f"quiet hours of {quiet.name} in it: {what} from {view.wall(low)} to {view.wall(high)}.",
                    kind=Kind.WARN,
                    value=(high - low) / 3600,
                    most=0.0,
                    unit="h",
                    at_s=low,
                    subject=user.name,
                    mend=f"move the slot to end by {view.wall(low)} or begin at {view.wall(high)}",
                )
