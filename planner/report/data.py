"""A plan's summary as plain data, for `--json`."""

from __future__ import annotations

from dataclasses import asdict
from typing import Any

from planner.plan import Finding, Plan, Step
from planner.report.wording import HOUR_S


def as_data(plan: Plan) -> dict[str, Any]:
    """The summary's numbers, the steps, what was left out, findings and comparison, as JSON-ready values.

    Times are ISO 8601 with offset, beside seconds from the week's start; units are in the keys.
    """
    return {
        "title": plan.title,
        "rig": plan.rig,
        "zone": plan.zone,
        "start": plan.clock.moment(0).isoformat(),
        "end": plan.end.astimezone(plan.clock.where).isoformat(),
        "made_by": plan.made_by,
        "recovery": plan.recovery,
        "sources": [{"role": s.role, "path": s.path, "sha256": s.sha256} for s in plan.sources],
        "score": {**asdict(plan.score), "gap": plan.score.gap, "moving_h": plan.score.moving_s / HOUR_S},
        "compared": [
            {
                **asdict(order),
                "saved_h": (order.moving_s - order.plan_moving_s) / HOUR_S,
                "saved_L": order.litres - order.plan_litres,
            }
            for order in plan.compared
        ],
        "left_out": [asdict(item) for item in plan.left_out],
        "findings": [finding_data(finding, plan) for finding in plan.findings],
        "steps": [_step(step, plan) for step in plan.steps],
    }


def finding_data(finding: Finding, plan: Plan) -> dict[str, Any]:
    """A finding as JSON-ready values, with the wall time of its instant."""
    at = None if finding.at_s is None else plan.clock.moment(finding.at_s).isoformat()
    return {**asdict(finding), "kind": str(finding.kind), "at": at}


def _step(step: Step, plan: Plan) -> dict[str, Any]:
    before, after = step.before, step.after
    return {
        "number": step.number,
        "kind": str(step.kind),
        "label": step.label,
        "start": plan.clock.moment(step.start_s).isoformat(),
        "end": plan.clock.moment(step.end_s).isoformat(),
        "start_s": step.start_s,
        "end_s": step.end_s,
        "user": step.user,
        "sample": step.sample,
        "target": step.target,
        "take": step.take,
        "direction": step.direction,
        "service": step.service,
        "field_from_T": before.coil.field_T[2],
        "field_to_T": after.coil.field_T[2],
        "coil_mode": str(after.coil.mode),
        "lead_current_A": after.coil.lead_current_A[2],
        "temperature_K": after.stage.temperature_K,
        "gates_V": dict(after.gates_V),
        "helium_before_L": step.helium_before_L,
        "helium_after_L": step.helium_after_L,
        "poured_L": step.poured_L,
        "drawn_L": step.drawn_L,
        "pace": step.pace,
        "attended": step.attended,
        "people": list(step.people),
        "notes": list(step.notes),
    }
