"""One step of a plan in words: from, to, how long, what set the pace, helium, people, findings."""

from __future__ import annotations

from dataclasses import dataclass

from planner.clock import Clock
from planner.desk.wording import clean, day_time, duration, kelvin, rounded, tesla
from planner.files import Rig
from planner.files.level import level_at
from planner.plan import CoilMode, Finding, Leg, Plan, Score, State, Step, StepKind
from planner.planning import Progress
from planner.runsheet.levels import floor_of


@dataclass(frozen=True, slots=True)
class Told:
    """A step explained: heading, and lines of (what, text)."""

    heading: str
    lines: tuple[tuple[str, str], ...]
    findings: tuple[Finding, ...] = ()


def tell(plan: Plan, step: Step, rig: Rig | None, findings: tuple[Finding, ...] = ()) -> Told:
    """Explain a step of a plan; ``findings`` are all there are, those of the step are picked out."""
    clock = plan.clock
    ends = f"{day_time(clock, step.start_s)} → {day_time(clock, step.end_s)}"
    found = findings_of(step, findings)
    lines = [
        ("when", f"{ends}, {duration(step.seconds)}"),
        ("from", _state(step.before)),
        ("to", _state(step.after) if step.after != step.before else "stays so"),
        ("pace", _pace(step)),
        ("helium", _helium(step, rig)),
        ("people", _people(step)),
        ("gates", _gates(step)),
        ("for", _for(step)),
        *[("note", clean(note)) for note in step.notes],
        *[("", f"{label}: {clean(text)}") for label, text in step.details],
    ]
    return Told(heading_of(step), tuple((name, text) for name, text in lines if text), found)


def heading_of(step: Step) -> str:
    """Number, kind and what."""
    kind = step.service if step.kind is StepKind.SERVICE and step.service else str(step.kind)
    label = clean(step.take or step.label)
    more = clean(step.label) if step.take and step.take != step.label else ""
    same = label in ("", kind)
    return f"{step.number} {kind}" + ("" if same else f": {label}") + (f", {more}" if more else "")


def findings_of(step: Step, findings: tuple[Finding, ...]) -> tuple[Finding, ...]:
    """The findings that name a step, or its take or target."""
    names = {name for name in (step.take, step.target) if name}
    return tuple(
        one
        for one in findings
        if one.step == step.number or (one.step is None and one.subject and one.subject in names)
    )


def step_at(plan: Plan, finding: Finding) -> int | None:
    """Position of the step that a finding is about: by number, by instant, by name; None where it names none."""
    for at, step in enumerate(plan.steps):
        if finding.step == step.number:
            return at
    if finding.at_s is not None:
        for at, step in enumerate(plan.steps):
            if step.start_s <= finding.at_s < step.end_s:
                return at
    for at, step in enumerate(plan.steps):
        if finding.subject and finding.subject in (step.take, step.target):
            return at
    return None


def _state(state: State) -> str:
    coil = state.coil
    mode = {CoilMode.ZERO: "no current", CoilMode.DRIVEN: "driven", CoilMode.PERSISTENT: "persistent"}[coil.mode]
    leads = f", leads {rounded(coil.lead_current_A[2])} A" if coil.mode is not CoilMode.ZERO else ""
    return f"{tesla(coil.field_T[2])} {mode}{leads}; stage {kelvin(state.stage.temperature_K)}"


def _pace(step: Step) -> str:
    """What set the step's length, then each leg of the longest channel with its rate."""
    parts = [clean(step.pace)] if step.pace else []
    legs = [leg for leg in step.legs if leg.seconds]
    if len(legs) > 1:
        parts.append(", ".join(_leg(leg) for leg in legs[:6]) + (", …" if len(legs) > 6 else ""))
    return ": ".join(parts)


def _leg(leg: Leg) -> str:
    name = clean(leg.action)
    if leg.coil is not None and leg.action in ("ramp", "sweep") and leg.rate:
        name += f" to {tesla(leg.coil[1].field_T[2])} at {rounded(abs(leg.rate) * 60, 3)} T/min"
    return f"{name} {duration(leg.seconds)}"


def _helium(step: Step, rig: Rig | None) -> str:
    if step.helium_before_L is None or step.helium_after_L is None:
        return ""
    if rig is None or rig.bath is None:
        return f"{rounded(step.helium_before_L)} L → {rounded(step.helium_after_L)} L"
    before, after = (level_at(rig.bath, litres) for litres in (step.helium_before_L, step.helium_after_L))
    floor = floor_of(step, rig.bath)
    lowest = f"lowest allowed {floor.start_percent:.1f} % {floor.start_why}"
    if floor.through_why != floor.start_why:
        lowest += f", {floor.through_percent:.1f} % {floor.through_why}"
    poured = f", pours {rounded(step.poured_L, 3)} L of {rounded(step.drawn_L, 3)} L drawn" if step.poured_L else ""
    return f"{before:.1f} % → {after:.1f} % ({step.helium_after_L:.1f} L){poured}; {lowest}"


def _people(step: Step) -> str:
    if step.people:
        return "attended by " + ", ".join(clean(name) for name in step.people)
    return "attended" if step.attended else "nobody needed"


def _gates(step: Step) -> str:
    before = dict(step.before.gates_V)
    parts = []
    for name, volt in step.after.gates_V:
        if before.get(name, volt) != volt:
            parts.append(f"{clean(name)} {rounded(before[name])} V → {rounded(volt)} V")
        elif volt:
            parts.append(f"{clean(name)} {rounded(volt)} V")
    return ", ".join(parts)


def _for(step: Step) -> str:
    parts = [clean(step.user), clean(step.sample), clean(step.direction)]
    return ", ".join(part for part in parts if part)


def finding_words(finding: Finding, clock: Clock | None) -> str:
    """A finding in one line: rule, what it is about, when, what is wrong with its numbers, how to mend it."""
    when = f" {day_time(clock, finding.at_s)}" if finding.at_s is not None and clock is not None else ""
    unit = f" {finding.unit}" if finding.unit else ""
    named = (("value", finding.value), ("limit", finding.limit), ("margin", finding.margin))
    numbers = ", ".join(f"{name} {rounded(number)}{unit}" for name, number in named if number is not None)
    about = f" · {clean(finding.subject)}" if finding.subject else ""
    mend = f" Mend: {clean(finding.mend)}." if finding.mend else ""
    return f"{clean(finding.rule)}{about}{when}: {clean(finding.text)}" + (f" ({numbers})" if numbers else "") + mend


def progress_words(progress: Progress | None, elapsed_s: float) -> str:
    """A running solve in one short line: seconds, best so far, proven bound, gap."""
    if progress is None:
        return f"{elapsed_s:.0f} s · looking for a first plan"
    if progress.best_points is None:
        most = "" if progress.points_bound is None else f", at most {progress.points_bound} points"
        return f"{elapsed_s:.0f} s · no plan yet{most}"
    return f"{elapsed_s:.0f} s · " + _worth(
        progress.best_points, progress.points_bound, progress.best_cost_h, progress.cost_bound_h, progress.gap
    )


def score_words(score: Score) -> str:
    """What a plan is worth, as `progress_words` says it."""
    worth = _worth(score.points, score.points_bound, score.cost_h, score.cost_bound_h, score.gap)
    return f"{worth}, proven best" if score.proven else worth


def _worth(
    points: int, points_bound: int | None, cost_h: float | None, cost_bound_h: float | None, gap: float | None
) -> str:
    parts = [f"best {points}{'' if points_bound is None else f'/{points_bound}'} points"]
    if cost_h is not None:
        parts[0] += f", {cost_h:.2f} h"
    if cost_bound_h is not None:
        parts.append(f"bound {cost_bound_h:.2f} h")
    if gap is not None:
        parts.append(f"gap {100 * gap:.1f} %")
    return " · ".join(parts)
