"""People: attended work inside staffed hours, enough of them, trained, there, and in one place at a time."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import islice

from planner.checks.plan_view import TRANSFER, PlanView, is_decision
from planner.checks.registry import Rule, register
from planner.checks.room import STAFFED as NEEDS_PEOPLE
from planner.checks.room import first_too_short
from planner.checks.spans import less, lies_in, next_fit
from planner.checks.week_view import WeekView
from planner.checks.wording import length
from planner.files.targets import OtherWork
from planner.plan import Finding, Kind, Step

SWITCHING = ("heater on", "heater off", "leads")
STAFFED = register(
    Rule("staffed hours", "people", "people: attended work wholly inside staffed hours", "week: staffed", Kind.POLICY)
)
THERE = register(
    Rule(
        "people present",
        "people",
        "attended work against nobody being there who can do it",
        "week: people; targets.people, training",
        Kind.POLICY,
    )
)
ONE_PLACE = register(
    Rule("one place at a time", "people", "people against being booked twice", "week: people", Kind.POLICY)
)


def must_be_attended(view: PlanView, step: Step) -> bool:
    """Whether the step, its target or the rig's rules want somebody there all the while."""
    target = view.targets.get(step.target)
    return step.attended or is_decision(step) or (target is not None and view.staff_for(target)[0] > 0)


@STAFFED.plan
def staffed_hours(view: PlanView) -> Iterator[Finding]:
    """Every attended step lies wholly inside staffed hours; ending exactly at their end passes."""
    for step in view.steps:
        if step.seconds == 0 or step.service == TRANSFER or not must_be_attended(view, step):
            continue
        if not step.attended:
            yield STAFFED.finding(
                f"{step.label} at {view.wall(step.start_s)} needs somebody there, and the plan does not say so.",
                at_s=step.start_s,
                step=step.number,
                subject=step.target,
                mend="mark it attended",
            )
        outside = less(((step.start_s, step.end_s),), view.staffed)
        if not outside:
            continue
        minutes = sum(end - begin for begin, end in outside) / 60
        follows = next_fit(view.staffed, step.start_s, step.seconds)
        yield STAFFED.finding(
            f"{step.label} from {view.wall(step.start_s)} to {view.wall(step.end_s)} is attended, and "
            f"{minutes:.4g} min "
            f"of it are outside staffed hours, from {view.wall(outside[0][0])} on.",
            value=minutes,
            most=0.0,
            unit="min",
            at_s=outside[0][0],
            step=step.number,
            subject=step.target,
            mend="no staffed hours are long enough" if follows is None else f"begin at {view.wall(follows)}",
        )


@STAFFED.week
def room_for_attended_work(view: WeekView) -> Iterator[Finding]:
    """Every attended target fits into staffed hours with the people it needs, inside its windows."""
    for target in view.targets.values():
        short = first_too_short(view, target)
        if short is None or short[0] != NEEDS_PEOPLE:
            continue
        _, longest, needed = short
        what = ""
        if isinstance(target, OtherWork) and (target.people > 1 or target.training):
            what = (
                f" with {target.people} trained for {target.training}" if target.training else f" with {target.people}"
            )
        yield STAFFED.finding(
            f'"{target.name}" is attended and needs {length(needed)} in one piece; its hours leave '
            f"{length(longest)} of "
            f"staffed time{what} up to {view.wall(view.horizon_s)}.",
            value=longest / 60,
            least=needed / 60,
            unit="min",
            subject=target.name,
            mend="another window, more staffed hours, or leave it unattended",
        )


def _needs(view: PlanView, step: Step) -> tuple[int, str]:
    """How many people of which training a step needs."""
    if any(leg.action in SWITCHING for leg in step.legs) and step.before.coil.field_T[2] != 0:
        return 1, "switch"
    target = view.targets.get(step.target)
    if target is None or is_decision(step):
        return 1, ""
    count, training = view.staff_for(target)
    return max(1, count), training


@THERE.plan
def people_present(view: PlanView) -> Iterator[Finding]:
    """Attended steps have enough people of the roster who are trained and there; those named can be there."""
    if not view.week.people:
        return
    for step in view.steps:
        if step.seconds == 0 or step.service == TRANSFER or not must_be_attended(view, step):
            continue
        count, training = _needs(view, step)
        able = view.trained(training)
        there = [name for name in able if lies_in(view.presence[name], step.start_s, step.end_s)]
        missing = sorted(set(step.people) - set(there))
        good = len(set(step.people)) - len(missing) if step.people else len(there)
        if good >= count and not missing:
            continue
        what = f"{count} {'person' if count == 1 else 'people'}" + (f" trained for {training}" if training else "")
        why = f"; {', '.join(missing)} cannot" if missing else ""
        follows = next_fit(view.people_there(count, training), step.start_s, step.seconds)
        instead = f" or ask {', '.join(there[:count])}" if len(there) >= count else ""
        later = "nobody can this week" if follows is None else f"begin at {view.wall(follows)}"
        yield THERE.finding(
            f"{step.label} from {view.wall(step.start_s)} to {view.wall(step.end_s)} needs {what}; "
            f"{good} can be there{why}.",
            value=float(good),
            least=float(count),
            unit="people",
            at_s=step.start_s,
            step=step.number,
            subject=step.target or step.service,
            mend=f"{later}{instead}",
        )


def _overlapping(steps: list[Step]) -> Iterator[tuple[Step, Step]]:
    """Pairs of steps that share time; the steps are in order of their start."""
    for at, first in enumerate(steps):
        for second in islice(steps, at + 1, None):
            if second.start_s >= first.end_s:
                break
            yield first, second


@ONE_PLACE.plan
def one_place_at_a_time(view: PlanView) -> Iterator[Finding]:
    """Nobody is named in two steps that overlap."""
    named = [step for step in view.steps if step.people and step.seconds > 0]
    for first, second in _overlapping(sorted(named, key=lambda step: step.start_s)):
        both = sorted(set(first.people) & set(second.people))
        if both:
            yield ONE_PLACE.finding(
                f"{', '.join(both)} would be at {first.label} and at {second.label} at once, "
                f"{view.wall(second.start_s)}.",
                value=float(first.end_s - second.start_s),
                most=0.0,
                unit="s",
                at_s=second.start_s,
                step=second.number,
                mend=f"begin {second.label} at {view.wall(first.end_s)}",
            )
