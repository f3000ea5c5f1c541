"""Whether a plan may leave as a sheet to be run."""

from __future__ import annotations

from planner.errors import RefusedError
from planner.files import Rig
from planner.plan import Finding, Kind, Plan, StepKind, magnitude
from planner.runsheet.wording import clean, significant


def refuse_unless_runnable(plan: Plan, rig: Rig) -> None:
    """Let a plan pass that may be run.

    A plan that only runs down, calls people and transfers always passes; one that goes on to other work after a
    recovery is judged by its findings as any other.

    Raises
    ------
    RefusedError
        If the plan has a `stop` or a `policy` finding. The message gives every such finding with its rule, numbers and
        how to mend it, and says who could waive a site rule.
    """
    if plan.recovery and only_recovers(plan):
        return
    stops = [finding for finding in plan.findings if finding.kind == Kind.STOP]
    rules = [finding for finding in plan.findings if finding.kind == Kind.POLICY]
    if not stops and not rules:
        return
    lines = ["No run sheet is written for this plan."]
    if stops:
        lines.append("Limits that nobody may waive:")
        lines += [f"  stop, {_told(finding)}" for finding in stops]
    if rules:
        lines.append("Site rules:")
        lines += [f"  policy, {_told(finding)}" for finding in rules]
        lines.append(f"Only {waived_by(rig)} could waive a site rule, and no waiver is recorded with this plan.")
    lines.append("Mend the week and plan again. A review copy, marked as not to be run, can still be written.")
    raise RefusedError("\n".join(lines))


def only_recovers(plan: Plan) -> bool:
    """Whether a plan measures nothing and never raises the field."""
    coils = (leg.coil for step in plan.steps for leg in step.legs if leg.coil is not None)
    rises = any(magnitude(after.field_T) > magnitude(before.field_T) for before, after in coils)
    return not rises and all(step.kind is not StepKind.TAKE for step in plan.steps)


def waived_by(rig: Rig) -> str:
    """The role that could waive a site rule of this rig: the first contact of its room."""
    if not rig.room.contacts:
        return "the person responsible for the rig"
    first = rig.room.contacts[0]
    return f"the role “{clean(first.role)}” ({clean(first.reach)})"


def numbers_of(finding: Finding) -> str:
    """Value, limit and margin of a finding, with their unit."""
    unit = f" {clean(finding.unit)}" if finding.unit else ""
    parts = (("value", finding.value), ("limit", finding.limit), ("margin", finding.margin))
    return ", ".join(f"{name} {significant(number)}{unit}" for name, number in parts if number is not None)


def _told(finding: Finding) -> str:
    step = f" (step {finding.step})" if finding.step is not None else ""
    numbers = numbers_of(finding)
    mend = f" To mend: {clean(finding.mend)}" if finding.mend else ""
    return f"{clean(finding.rule)}{step}: {clean(finding.text)}{f' [{numbers}]' if numbers else ''}{mend}"
