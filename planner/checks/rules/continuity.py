"""Continuity: time without gaps, states that follow on, the week's own beginning and end, legs that cover steps."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

from planner.checks.plan_view import PlanView, coil_legs
from planner.checks.registry import Rule, register
from planner.files.start import end_state, start_state
from planner.plan import Coil, CoilMode, Finding, Kind, State, Step, StepKind

EXACT = 1e-9
TIME = register(
    Rule("time without gaps", "continuity", "the timetable", "plan: steps cover the week from end to end", Kind.STOP)
)
STATES = register(
    Rule(
        "states follow on",
        "continuity",
        "everything after it",
        "plan: each step begins where the last ended",
        Kind.STOP,
    )
)
FIRST = register(
    Rule("first state", "continuity", "the first move: the rig is where the week says", "week: present", Kind.STOP)
)
LAST = register(Rule("last state", "continuity", "who uses the rig next", "week: wanted_end", Kind.POLICY))
LEGS = register(
    Rule(
        "legs cover the step",
        "continuity",
        "levels and times of a step",
        "plan: coil legs without gap or overlap",
        Kind.STOP,
    )
)
WAITS = register(Rule("waits change nothing", "continuity", "the state after a wait", "plan: waits", Kind.STOP))


def differences(first: State, second: State) -> list[str]:
    """What differs between two states that should be one; a driven coil at zero without current is idle."""
    found = []
    if not _same_coil(first.coil, second.coil):
        found.append(f"coil {_coil(first.coil)} and {_coil(second.coil)}")
    if abs(first.stage.temperature_K - second.stage.temperature_K) > EXACT:
        found.append(f"stage {first.stage.temperature_K:.4g} K and {second.stage.temperature_K:.4g} K")
    one, two = dict(first.gates_V), dict(second.gates_V)
    for name in sorted(one.keys() | two.keys()):
        if name not in one or name not in two:
            found.append(f"gate {name} in one of them only")
        elif abs(one[name] - two[name]) > EXACT:
            found.append(f"gate {name} {one[name]:.4g} V and {two[name]:.4g} V")
    return found


def _same_coil(first: Coil, second: Coil) -> bool:
    if first.mode is CoilMode.DRIVEN and second.mode is CoilMode.ZERO and first.field_T[2] == 0:
        return first.lead_current_A == second.lead_current_A
    if first.mode is not second.mode:
        return False
    pairs = [(first.field_T, second.field_T), (first.lead_current_A, second.lead_current_A)]
    one, two = first.persistent_current_A, second.persistent_current_A
    if isinstance(one, tuple) and isinstance(two, tuple):
        pairs.append((one, two))
    elif one != two:
        return False
    return all(abs(a - b) <= EXACT for left, right in pairs for a, b in zip(left, right, strict=True))


def _coil(coil: Coil) -> str:
    trapped = coil.persistent_current_A
    inside = (
        f", {trapped[2]:.5g} A trapped" if isinstance(trapped, tuple) else f", trapped {trapped}" if trapped else ""
    )
    return f"{coil.field_T[2]:.6g} T {coil.mode} ({coil.lead_current_A[2]:.5g} A in the leads{inside})"


@TIME.plan
def time_without_gaps(view: PlanView) -> Iterator[Finding]:
    """Second 0 to the week's end, every step from where the last ended, none backwards."""
    if not view.steps:
        yield TIME.finding("The plan has no steps.", at_s=0, mend=f"cover the week to {view.wall(view.horizon_s)}")
        return
    joints = [(0, view.steps[0].start_s, view.steps[0])]
    joints += [(first.end_s, second.start_s, second) for first, second in pairwise(view.steps)]
    joints.append((view.horizon_s, view.steps[-1].end_s, view.steps[-1]))
    for expected, found, step in joints:
        if found != expected:
            last = step is view.steps[-1] and expected == view.horizon_s
            what = "the plan ends" if last else f"{step.label} begins"
            yield TIME.finding(
                f"{what[0].upper()}{what[1:]} {view.wall(found)}, and {view.wall(expected)} is expected.",
                value=float(found),
                least=float(expected) if found < expected else None,
                most=float(expected) if found > expected else None,
                unit="s",
                at_s=min(found, expected),
                step=step.number,
                mend=f"{'end' if last else 'begin'} at {view.wall(expected)}",
            )
    for step in view.steps:
        if step.end_s < step.start_s:
            text = f"{step.label} ends {view.wall(step.end_s)}, before it begins."
            yield TIME.finding(text, at_s=step.end_s, step=step.number, mend=f"end after {view.wall(step.start_s)}")


def _differs(view: PlanView, rule: Rule, step: Step, says: str, differs: list[str], at_s: int, mend: str) -> Finding:
    return rule.finding(
        f"{says}, {view.wall(at_s)}: {'; '.join(differs)}.", at_s=at_s, step=step.number, subject=step.target, mend=mend
    )


@STATES.plan
def states_follow_on(view: PlanView) -> Iterator[Finding]:
    """Each step begins in the state the last one left; so does each coil leg; step numbers rise."""
    for first, second in pairwise(view.steps):
        if differs := differences(first.after, second.before):
            says = f"{second.label} does not begin where {first.label} ended"
            yield _differs(view, STATES, second, says, differs, second.start_s, "put the move between them")
        if second.number <= first.number:
            text = f"Step {second.number} follows step {first.number}."
            yield STATES.finding(text, at_s=second.start_s, step=second.number, mend="number the steps in order")
    for at, step in enumerate(view.steps):
        here = step.before.coil
        for item in view.by_step[at]:
            if not _same_coil(here, item.before):
                says = f'{step.label}: the leg "{item.leg.action}" does not begin where the coil was'
                differs = [f"{_coil(here)} and {_coil(item.before)}"]
                yield _differs(view, STATES, step, says, differs, item.leg.start_s, "begin where the last leg ended")
            here = item.after
        if not _same_coil(here, step.after.coil):
            says = f"{step.label} does not end where its legs do"
            differs = [f"{_coil(here)} and {_coil(step.after.coil)}"]
            yield _differs(view, STATES, step, says, differs, step.end_s, "end where the last leg ends")


@FIRST.plan
def first_state(view: PlanView) -> Iterator[Finding]:
    """The first step begins in the week's present state."""
    if view.steps and (differs := differences(view.steps[0].before, start_state(view.week, view.rig))):
        step = view.steps[0]
        yield _differs(
            view, FIRST, step, "The plan does not begin as the week does", differs, 0, "plan from the present"
        )


@LAST.plan
def last_state(view: PlanView) -> Iterator[Finding]:
    """The last step ends as the week wants it."""
    if view.steps and (differs := differences(view.steps[-1].after, end_state(view.week, view.rig))):
        step = view.steps[-1]
        kind = Kind.WARN if view.recovers else LAST.kind
        found = _differs(
            view, LAST, step, "The plan does not end as wanted", differs, step.end_s, "move there before the end"
        )
        yield LAST.finding(found.text, kind=kind, at_s=found.at_s, step=found.step, mend=found.mend)


@LEGS.plan
def legs_cover_the_step(view: PlanView) -> Iterator[Finding]:
    """Coil legs cover their step without gap or overlap; the others lie inside it; none ends before it begins."""
    for step in view.steps:
        at = step.start_s
        for leg in coil_legs(step):
            if leg.start_s != at or leg.end_s < leg.start_s:
                break
            at = leg.end_s
        if at != step.end_s and step.end_s >= step.start_s:
            yield LEGS.finding(
                f"{step.label}: its coil legs cover it up to {view.wall(at)}, not to {view.wall(step.end_s)}.",
                value=float(at),
                least=float(step.end_s) if at < step.end_s else None,
                most=float(step.end_s) if at > step.end_s else None,
                unit="s",
                at_s=min(at, step.end_s),
                step=step.number,
                mend="legs from the step's start to its end, each from where the last ended",
            )
        for leg in step.legs:
            if leg.channel != "coil" and not step.start_s <= leg.start_s <= leg.end_s <= step.end_s:
                yield LEGS.finding(
                    f'{step.label}: the leg "{leg.action}" ({leg.channel}) from {view.wall(leg.start_s)} to '
                    f"{view.wall(leg.end_s)} is not inside its step.",
                    at_s=leg.start_s,
                    step=step.number,
                    mend=f"end the step at {view.wall(leg.end_s)}",
                )


@WAITS.plan
def waits_change_nothing(view: PlanView) -> Iterator[Finding]:
    """A wait leaves coil, stage and gates alone."""
    for step in view.of_step(StepKind.WAIT):
        moving = [leg for leg in step.legs if leg.coil is not None and leg.coil[0] != leg.coil[1]]
        moving += [leg for leg in step.legs if leg.channel != "coil"]
        differs = differences(step.before, step.after) + [f'a leg "{leg.action}"' for leg in moving]
        if differs:
            yield _differs(view, WAITS, step, f"{step.label} changes the rig", differs, step.start_s, "make it a move")
