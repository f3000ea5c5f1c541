"""The helium book: claimed litres against a reckoning of one's own, and what is left after the week."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.plan_view import PlanView
from planner.checks.registry import Rule, register
from planner.checks.wording import length, percent
from planner.plan import CoilMode, Finding, Kind, Step

EXACT_L = 1e-6
BOOK = register(
    Rule(
        "helium book",
        "helium",
        "every later level, if a leg burns other than the plan says",
        "rig: bath.losses; level = level before − burn + poured",
        Kind.STOP,
    )
)
AFTER = register(
    Rule(
        "helium after the week",
        "helium",
        "the cold rig between the week's end and the next attended transfer",
        "rig: bath.lines.reserve; week: staffed",
        Kind.WARN,
    )
)


@BOOK.plan
def leg_litres(view: PlanView) -> Iterator[Finding]:
    """Each coil leg's litres are what its time, mode, leads and field change burn; other legs burn nothing."""
    for item in view.placed:
        own = item.before_L - item.after_L
        if not abs(item.leg.litres - own) <= EXACT_L:  # so that a claim that is no number fails too
            yield BOOK.finding(
                f'{item.step.label}: the leg "{item.leg.action}" from {view.wall(item.leg.start_s)} burns {own:.4f} L; '
                f"the plan says {item.leg.litres:.4f} L.",
                value=item.leg.litres,
                least=own if item.leg.litres < own else None,
                most=own if item.leg.litres > own else None,
                unit="L",
                at_s=item.leg.start_s,
                step=item.step.number,
                mend=f"{own:.6f} L",
            )
    for step in view.steps:
        beside = sum(abs(leg.litres) for leg in step.legs if leg.channel != "coil")
        if beside > EXACT_L:
            yield BOOK.finding(
                f"{step.label}: legs beside the coil's claim {beside:.4f} L; the coil's legs carry all helium.",
                value=beside,
                most=0.0,
                unit="L",
                at_s=step.start_s,
                step=step.number,
                mend="0 L there",
            )


@BOOK.plan
def step_levels(view: PlanView) -> Iterator[Finding]:
    """Levels follow on: the first is the week's, each step's last is its first less its burn plus what was poured."""
    if view.bath is None:
        for step in view.steps:
            if step.helium_before_L is not None or step.helium_after_L is not None:
                text = f"{step.label}: the plan names a helium level, and this rig has no bath."
                yield BOOK.finding(text, at_s=step.start_s, step=step.number, mend="no level")
        return
    expected = view.start_L
    for at, step in enumerate(view.steps):
        yield from _compare(view, step, "begins", step.helium_before_L, expected, step.start_s)
        before = expected if step.helium_before_L is None else step.helium_before_L
        burn = sum(item.before_L - item.after_L for item in view.by_step[at])
        yield from _compare(view, step, "ends", step.helium_after_L, before - burn + step.poured_L, step.end_s)
        expected = before - burn + step.poured_L if step.helium_after_L is None else step.helium_after_L


def _compare(view: PlanView, step: Step, verb: str, claimed: float | None, own: float, at_s: int) -> Iterator[Finding]:
    if claimed is not None and abs(claimed - own) <= EXACT_L:
        return
    says = "names no level" if claimed is None else f"says {claimed:.4f} L"
    yield BOOK.finding(
        f"{step.label} {verb} with {own:.4f} L in the bath, {view.wall(at_s)}; the plan {says}.",
        value=claimed,
        least=own if claimed is None or claimed < own else None,
        most=own if claimed is not None and claimed > own else None,
        unit="L",
        at_s=at_s,
        step=step.number,
        mend=f"{own:.6f} L",
    )


@AFTER.plan
def helium_after_the_week(view: PlanView) -> Iterator[Finding]:
    """What the level does after the plan's end: idle as it was left, up to the next possible attended transfer."""
    if view.bath is None or not view.steps:
        return
    end_s = view.steps[-1].end_s
    coil = view.steps[-1].after.coil
    losses = view.bath.losses
    per_s = float(losses.static_L_per_s)
    if coil.mode is CoilMode.DRIVEN:
        per_s += losses.switch_open_L_per_s + losses.leads_L_per_s_A * abs(coil.lead_current_A[2])
    lines = view.bath.lines
    at_field = coil.mode is not CoilMode.ZERO
    name, line = ("floor at field", lines.at_field_percent) if at_field else ("reserve", lines.reserve_percent)
    left_L = view.end_L - view.line_L(float(line))
    start_missing = view.line_L(float(lines.start_ramp_percent)) - view.end_L
    if start_missing > EXACT_L:
        yield AFTER.finding(
            f"The plan ends {view.wall(end_s)} with {view.reads(view.end_L)} of helium: no ramp before a transfer, "
            f"since none starts below a trusted {percent(lines.start_ramp_percent)}.",
            kind=Kind.NOTE,
            value=view.trusted(view.end_L),
            least=float(lines.start_ramp_percent),
            unit="%",
            at_s=end_s,
            source="rig: bath.lines.start_ramp",
            mend=f"next: transfer {start_missing:.1f} L or more",
        )
    if per_s <= 0 or left_L < 0:
        return
    empty_s = end_s + left_L / per_s
    least_s = int(view.least_transfer_s)
    starts = [max(a, end_s) for a, b in view.transfer_spans if b - max(a, end_s) >= least_s]
    following = min(starts, default=None)
    if following is None or following <= empty_s:
        return
    yield AFTER.finding(
        f"After the plan's end the trusted level reaches the {name} ({percent(line)}) {view.wall(empty_s)}, "
        f"{length(following - empty_s)} before the next attended transfer can begin, {view.wall(following)}.",
        value=(empty_s - end_s) / 3600,
        least=(following - end_s) / 3600,
        unit="h",
        at_s=empty_s,
        mend=f"transfer {per_s * (following - empty_s):.1f} L more before the week ends, "
        f"or one by {view.wall(empty_s)}",
    )
