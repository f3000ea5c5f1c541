"""What a plan was made from, and whether a recovery plan is one."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator

from planner.checks.plan_view import TRANSFER, PlanView
from planner.checks.registry import Rule, register
from planner.plan import CoilMode, Finding, Kind

FILES = register(
    Rule("files of the plan", "sources", "every number, if the files changed", "plan: sources.sha256", Kind.STOP)
)
RECOVERY = register(
    Rule(
        "recovery plan",
        "sources",
        "the leniency of a recovery plan against work that is none",
        "common practice: run down at once, call people, transfer",
        Kind.STOP,
    )
)


@FILES.plan
def files_of_the_plan(view: PlanView) -> Iterator[Finding]:
    """The texts a plan carries have the hashes it claims, and are the files it is judged against."""
    given = {source.role: source for source in view.request.sources}
    carried = {source.role: source for source in view.plan.sources}
    for role in ("week", "rig"):
        source = carried.get(role)
        if source is None:
            yield FILES.finding(f"The plan carries no {role} file.", mend="make the plan again")
            continue
        own = hashlib.sha256(source.text.encode()).hexdigest()
        if own != source.sha256:
            yield FILES.finding(
                f"The {role} file in the plan ({source.path}) has the hash {own[:12]}; the plan says "
                f"{source.sha256[:12]}.",
                subject=source.path,
                mend="make the plan again from the file as it is",
            )
        if role in given and given[role].text != source.text:
            yield FILES.finding(
                f"The plan was made from another version of the {role} file {source.path} ({own[:12]}) than "
                "the one it is "
                f"judged against.",
                subject=source.path,
                mend="make the plan again from the file as it is",
            )


@RECOVERY.plan
def recovery_plan(view: PlanView) -> Iterator[Finding]:
    """A recovery runs down, calls people and transfers before anything else, and a driven coil runs down at once."""
    if not view.plan.recovery:
        return
    other = next(view.not_recovery(), None)
    if other is not None:
        step, why = other
        filled = any(earlier.service == TRANSFER and earlier.end_s <= step.start_s for earlier in view.steps)
        after = "after its transfer" if filled else "before any transfer"
        yield RECOVERY.finding(
            f"This is called a recovery plan, and {step.label} {why} {view.wall(step.start_s)}, {after}; every limit "
            f"holds from {view.wall(view.recovered_s)} on.",
            kind=Kind.NOTE if filled else RECOVERY.kind,
            at_s=step.start_s,
            step=step.number,
            subject=step.target,
            mend="plan the work after the transfer by itself" if filled else "transfer first",
        )
    first = view.placed[0] if view.placed else None
    if first is None or first.before.mode is not CoilMode.DRIVEN or not first.at_field:
        return
    down = next((item for item in view.placed if item.runs_down), None)
    begins = None if down is None else down.leg.start_s
    if begins != first.leg.start_s:
        when = "never" if begins is None else view.wall(begins)
        yield RECOVERY.finding(
            f"The coil is driven at {first.first_T:.5g} T and the run-down begins {when}; in a recovery it "
            "begins at once.",
            at_s=first.leg.start_s,
            step=first.step.number,
            mend=f"run down from {view.wall(first.leg.start_s)}",
        )
