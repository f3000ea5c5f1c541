"""The cold stage: its range, how long its temperature takes, and coming back after a ramp."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.asks import temperatures_asked
from planner.checks.plan_view import PlanView
from planner.checks.registry import Rule, register
from planner.checks.stage_time import least_seconds, settle_after_ramp_s
from planner.checks.week_view import WeekView
from planner.checks.wording import kelvin, length
from planner.plan import Finding, Kind, Leg, Step, StepKind

EXACT = 1e-9
RANGE = register(Rule("temperature range", "stage", "the mixture and the stage", "rig: stage.base, highest", Kind.STOP))
TIME = register(
    Rule(
        "temperature time",
        "stage",
        "everything after it, if the stage is not yet there",
        "rig: stage.warming, cooling or model",
        Kind.STOP,
    )
)
SETTLE = register(
    Rule("stage settles after a ramp", "stage", "cold data against a warm stage", "rig: stage.after_ramp", Kind.POLICY)
)
TOGETHER = register(
    Rule("moved together", "stage", "the site's rule on what may move at once", "rig: policies.together", Kind.POLICY)
)


def _off(view: WeekView, temperature_K: float) -> tuple[float | None, float | None]:
    """The broken limit as (least, most)."""
    stage = view.rig.stage
    if temperature_K < stage.base_K * (1 - EXACT):
        return float(stage.base_K), None
    if temperature_K > stage.highest_K * (1 + EXACT):
        return None, float(stage.highest_K)
    return None, None


def _range_finding(
    view: WeekView, temperature_K: float, where: str, subject: str, at_s: int | None, step: int | None
) -> Iterator[Finding]:
    least, most = _off(view, temperature_K)
    if least is None and most is None:
        return
    stage = view.rig.stage
    edge = least if least is not None else float(stage.highest_K)
    yield RANGE.finding(
        f"{where}: {kelvin(temperature_K)}; the stage goes from {kelvin(stage.base_K)} to {kelvin(stage.highest_K)}.",
        value=temperature_K,
        least=least,
        most=most,
        unit="K",
        at_s=at_s,
        step=step,
        subject=subject,
        mend=f"{kelvin(edge)} {'at least' if least is not None else 'at most'}",
    )


@RANGE.plan
def temperature_range(view: PlanView) -> Iterator[Finding]:
    """The stage stays between base and its highest temperature."""
    outside = False
    for step in view.steps:
        instants = [(step.start_s, step.before.stage.temperature_K)]
        instants += [(leg.end_s, leg.stage_K[1]) for leg in step.legs if leg.stage_K is not None]
        instants.append((step.end_s, step.after.stage.temperature_K))
        for at_s, temperature_K in instants:
            was, outside = outside, _off(view, temperature_K) != (None, None)
            if outside and not was:
                where = f"{step.label}, {view.wall(at_s)}"
                yield from _range_finding(view, temperature_K, where, step.target, at_s, step.number)


@RANGE.week
def asked_temperatures(view: WeekView) -> Iterator[Finding]:
    """No target, present state or wanted end outside the stage's range; a series may not pass its end."""
    base = float(view.rig.stage.base_K)
    for where, written in (
        ("The present state", view.week.present.temperature_K),
        ("The wanted end", view.week.wanted_end.temperature_K),
    ):
        if not isinstance(written, str):
            yield from _range_finding(view, float(written), where, "", None, None)
    for target in view.targets.values():
        for temperature_K, lower_too in temperatures_asked(target, base):
            if lower_too and temperature_K >= base:
                continue
            yield from _range_finding(view, temperature_K, f'"{target.name}"', target.name, None, None)


@TIME.plan
def temperature_time(view: PlanView) -> Iterator[Finding]:
    """Every change of temperature has the time the rig's file gives for it, and none happens without a leg."""
    for step in view.steps:
        here, at = step.before.stage.temperature_K, step.start_s
        for leg in sorted((leg for leg in step.legs if leg.stage_K is not None), key=lambda leg: leg.start_s):
            first, last = leg.stage_K or (here, here)
            yield from _given(view, step, here, first, 0, leg.start_s)
            yield from _given(view, step, first, last, leg.seconds, leg.end_s)
            here, at = last, leg.end_s
        yield from _given(view, step, here, step.after.stage.temperature_K, 0, at)


def _given(view: PlanView, step: Step, first: float, last: float, seconds: int, at_s: int) -> Iterator[Finding]:
    if min(first, last) <= 0:
        return  # the rule "temperature range" says it
    needed = least_seconds(view.rig.stage, first, last)
    if seconds >= needed - 1e-6:
        return
    yield TIME.finding(
        f"{step.label}: {kelvin(first)} to {kelvin(last)} takes {length(needed)}; the plan gives it {length(seconds)} "
        f"up to {view.wall(at_s)}.",
        value=float(seconds),
        least=needed,
        unit="s",
        at_s=at_s,
        step=step.number,
        subject=step.target,
        mend=f"go on at {view.wall(at_s - seconds + needed)}",
    )


@SETTLE.plan
def stage_settles(view: PlanView) -> Iterator[Finding]:
    """A cold take begins only once the stage has come back from the last ramp."""
    ramped: int | None = None
    for at, step in enumerate(view.steps):
        if step.kind is StepKind.TAKE and step.seconds > 0:
            needed = settle_after_ramp_s(view.rig.stage, step.before.stage.temperature_K)
            if ramped is not None and step.start_s - ramped < needed - 1e-6:
                yield SETTLE.finding(
                    f"{step.label} at {kelvin(step.before.stage.temperature_K)} begins {view.wall(step.start_s)}, "
                    f"{length(step.start_s - ramped)} after the ramp; the stage comes back in {length(needed)}.",
                    value=float(step.start_s - ramped),
                    least=needed,
                    unit="s",
                    at_s=step.start_s,
                    step=step.number,
                    subject=step.target,
                    mend=f"begin at {view.wall(ramped + needed)}",
                )
            ramped = None
        elif moved := [item.leg.end_s for item in view.by_step[at] if item.moves]:
            ramped = moved[-1]


@TOGETHER.plan
def moved_together(view: PlanView) -> Iterator[Finding]:
    """In a move, what the site's rules leave out of ``together`` moves while nothing else does."""
    together = view.rig.policies.together
    for step in view.of_step(StepKind.MOVE):
        moving = {"field": _field_legs(step), "temperature": _stage_legs(step), "gates": _gate_legs(step)}
        for name in ("field", "temperature", "gates"):
            others = [leg for other, legs in moving.items() if other != name for leg in legs]
            if name in together:
                continue
            clash = next(
                ((a, b) for a in moving[name] for b in others if a.start_s < b.end_s and b.start_s < a.end_s), None
            )
            if clash is None:
                continue
            at_s = max(leg.start_s for leg in clash)
            yield TOGETHER.finding(
                f"{step.label}: {name} moves with something else, {view.wall(at_s)}; at this site it moves alone.",
                at_s=at_s,
                step=step.number,
                mend=f"move {name} from {view.wall(max(leg.end_s for leg in others))} on",
            )
            break


def _field_legs(step: Step) -> list[Leg]:
    return [leg for leg in step.legs if leg.coil is not None and leg.coil[0].field_T != leg.coil[1].field_T]


def _stage_legs(step: Step) -> list[Leg]:
    return [leg for leg in step.legs if leg.stage_K is not None and leg.stage_K[0] != leg.stage_K[1]]


def _gate_legs(step: Step) -> list[Leg]:
    return [leg for leg in step.legs if leg.gates_V is not None and leg.gates_V[0] != leg.gates_V[1]]
