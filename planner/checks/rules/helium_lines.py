"""The helium lines, judged on the trusted level: start a ramp, stay at field, coil covered, reserve."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

from planner.checks.plan_view import Placed, PlanView
from planner.checks.registry import Rule, register
from planner.checks.wording import litres as say_litres
from planner.checks.wording import percent
from planner.plan import CoilMode, Finding, Kind

EXACT_L = 1e-7
"""Reaching a line exactly passes; sums of floats over a week differ by less than this."""

START = register(
    Rule(
        "helium to start a ramp",
        "helium",
        "a ramp against too little helium to end it and come down again",
        "rig: bath.lines.start_ramp",
        Kind.STOP,
    )
)
AT_FIELD = register(
    Rule(
        "helium at field",
        "helium",
        "the run-down: it must have begun while the trusted level is at or above the floor",
        "rig: bath.lines.at_field",
        Kind.STOP,
    )
)
COVERED = register(
    Rule(
        "helium over the coil",
        "helium",
        "a coil with current against being uncovered",
        "rig: bath.lines.coil_top",
        Kind.STOP,
    )
)
RESERVE = register(
    Rule("helium reserve", "helium", "the cold rig against running dry", "rig: bath.lines.reserve", Kind.STOP)
)


@dataclass(slots=True)
class _Breach:
    """A stretch of legs below a line: where it began and the lowest level in it."""

    item: Placed
    at_s: float
    lowest_L: float
    lowest_s: float


Instants = tuple[tuple[float, float], ...]


def _breaches(
    view: PlanView, line_L: float, instants: Callable[[Placed, Placed | None], Instants]
) -> Iterator[_Breach]:
    """Stretches below a line. ``instants`` gives the (second, litres) of a leg to which the line applies."""
    found: _Breach | None = None
    previous: Placed | None = None
    for item in view.placed:
        tested = instants(item, previous)
        previous = item
        if found is not None and found.item.leg.start_s < view.recovered_s <= item.leg.start_s:
            yield found
            found = None
        below = [(at, level) for at, level in tested if level < line_L - EXACT_L]
        if not tested or not below:
            if found is not None and tested:
                yield found
                found = None
            continue
        if found is None:
            at_s = below[0][0]
            if len(tested) == 2 and len(below) == 1:
                (first_s, first_L), (last_s, last_L) = tested
                at_s = first_s + (last_s - first_s) * (first_L - line_L) / (first_L - last_L)
            found = _Breach(item, at_s, below[0][1], below[0][0])
        lowest_s, lowest_L = min(below, key=lambda instant: instant[1])
        if lowest_L < found.lowest_L:
            found.lowest_L, found.lowest_s = lowest_L, lowest_s
    if found is not None:
        yield found


def _ends(item: Placed) -> Instants:
    return ((item.leg.start_s, item.before_L), (item.leg.end_s, item.after_L))


def _start_of_rise(item: Placed, previous: Placed | None) -> Instants:
    """A ramp to higher field starts with the first of its legs that rise; the next rate goes on with the same ramp."""
    goes_on = previous is not None and previous.rises
    return ((item.leg.start_s, item.before_L),) if item.rises and not goes_on else ()


def _while_at_field(item: Placed, previous: Placed | None) -> Instants:
    if not item.at_field or item.before.mode is CoilMode.ZERO:
        return ()
    if item.runs_down:
        continues = previous is not None and previous.runs_down
        return () if continues else ((item.leg.start_s, item.before_L),)
    return _ends(item)


def _with_current(item: Placed, _: Placed | None) -> Instants:
    return _ends(item) if item.at_field else ()


def _always(item: Placed, _: Placed | None) -> Instants:
    return _ends(item)


def _finding(view: PlanView, rule: Rule, line: float, breach: _Breach, says: str, mend: str) -> Finding:
    value = view.trusted(breach.lowest_L)
    lowest = ""
    if breach.lowest_s > breach.at_s + 1:
        lowest = f" At its lowest, {view.wall(breach.lowest_s)}, it reads {view.reads(breach.lowest_L)}."
    return rule.finding(
        f"{breach.item.step.label}: {says}{lowest}",
        kind=view.in_recovery(rule.kind, breach.item.leg.start_s),
        value=value,
        least=line,
        unit="%",
        at_s=breach.at_s,
        step=breach.item.step.number,
        subject=breach.item.step.target or breach.item.step.service,
        mend=mend,
    )


@START.plan
def helium_to_start_a_ramp(view: PlanView) -> Iterator[Finding]:
    """A leg that raises |B| begins with the trusted level at or above its line."""
    if view.bath is None:
        return
    line = float(view.bath.lines.start_ramp_percent)
    for breach in _breaches(view, view.line_L(line), _start_of_rise):
        missing = view.line_L(line) - breach.lowest_L
        yield _finding(
            view,
            START,
            line,
            breach,
            f"the field is raised {view.wall(breach.at_s)} with {view.reads(breach.item.before_L)} of helium; "
            f"no ramp starts below a trusted {percent(line)}.",
            f"transfer {say_litres(missing)} or more into the bath first",
        )


@AT_FIELD.plan
def helium_at_field(view: PlanView) -> Iterator[Finding]:
    """With current in the coil the trusted level stays at or above the floor, unless it is running down already."""
    if view.bath is None:
        return
    line = float(view.bath.lines.at_field_percent)
    for breach in _breaches(view, view.line_L(line), _while_at_field):
        yield _finding(
            view,
            AT_FIELD,
            line,
            breach,
            f"still at field when the trusted level is below {percent(line)}, from {view.wall(breach.at_s)} on.",
            f"begin the run-down by {view.wall(int(breach.at_s))}{_closed_switch(view, breach)}",
        )


def _closed_switch(view: PlanView, breach: _Breach) -> str:
    """What the level would be with the coil persistent and the leads down for as long as it stands driven."""
    switch, bath = view.magnet.switch, view.bath
    if switch is None or bath is None:
        return ""
    stay = [
        i for i in view.placed if i.leg.end_s <= breach.lowest_s and i.before.mode is CoilMode.DRIVEN and i.at_field
    ]
    still = [i for i in stay if not i.moves and i.last_T == stay[-1].last_T]
    seconds = sum(i.leg.seconds for i in still) - switch.hold_before_s
    if seconds <= switch.cool_s:
        return ""
    per_s = bath.losses.switch_open_L_per_s
    per_s += bath.losses.leads_L_per_s_A * abs(still[-1].before.lead_current_A[2])
    kept = breach.lowest_L + per_s * seconds
    allowed = "" if view.rig.policies.unattended_persistent else " (not unattended at this site)"
    return f"; persistent with the leads down{allowed} the same stay ends at {view.reads(kept)}"


@COVERED.plan
def helium_over_the_coil(view: PlanView) -> Iterator[Finding]:
    """With current in the coil the trusted level is never below its top; a run-down of a recovery is warned of."""
    if view.bath is None:
        return
    line = float(view.bath.lines.coil_top_percent)
    for breach in _breaches(view, view.line_L(line), _with_current):
        yield _finding(
            view,
            COVERED,
            line,
            breach,
            f"the top of the coil ({percent(line)}) is uncovered with current in it, from {view.wall(breach.at_s)} on.",
            f"be at zero field by {view.wall(int(breach.at_s))}; call the responsible person",
        )


@RESERVE.plan
def helium_reserve(view: PlanView) -> Iterator[Finding]:
    """The trusted level never falls below the reserve."""
    if view.bath is None:
        return
    line = float(view.bath.lines.reserve_percent)
    for breach in _breaches(view, view.line_L(line), _always):
        yield _finding(
            view,
            RESERVE,
            line,
            breach,
            f"the trusted level falls below the reserve ({percent(line)}), from {view.wall(breach.at_s)} on.",
            f"transfer before {view.wall(int(breach.at_s))}",
        )
