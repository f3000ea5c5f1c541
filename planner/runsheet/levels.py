"""Helium on the sheet: what the gauge should read, and the lowest it may read."""

from __future__ import annotations

from dataclasses import dataclass

from planner.files.level import level_at, litres_at
from planner.files.rig import Bath, Rig
from planner.plan import CoilMode, Plan, Step, magnitude
from planner.runsheet.setpoints import MOVING


@dataclass(frozen=True, slots=True)
class Floor:
    """Lowest gauge reading allowed at a step's start and all through it; the gauge's error is already added."""

    start_percent: float
    start_why: str
    through_percent: float
    through_why: str
    start_L: float
    through_L: float


def floor_of(step: Step, bath: Bath) -> Floor:
    """The lowest gauge readings at which a step may begin and go on, by the rig's lines plus the gauge's error."""
    lines = bath.lines
    legs = [leg for leg in step.legs if leg.channel == "coil" and leg.coil is not None]
    states = [state for leg in legs if leg.coil for state in leg.coil] or [step.before.coil, step.after.coil]
    moves = [leg for leg in legs if leg.action in MOVING]
    raising = any(leg.coil and magnitude(leg.coil[1].field_T) > magnitude(leg.coil[0].field_T) for leg in moves)
    energised = any(state.mode != CoilMode.ZERO for state in states)
    if raising:
        start, why = lines.start_ramp_percent, "to begin a ramp"
        through, through_why = lines.at_field_percent, "while at field"
    elif energised and moves and _ends_without_current(step):
        start, why = lines.at_field_percent, "to begin the run-down"
        through, through_why = lines.coil_top_percent, "until the current is out"
    elif energised:
        start, why = lines.at_field_percent, "while at field"
        through, through_why = start, why
    else:
        start, why = lines.reserve_percent, "always"
        through, through_why = start, why
    error = bath.gauge_error_percent
    return Floor(
        start + error,
        why,
        through + error,
        through_why,
        litres_at(bath, start + error),
        litres_at(bath, through + error),
    )


def _ends_without_current(step: Step) -> bool:
    return step.after.coil.mode == CoilMode.ZERO


def gauge_percent(rig: Rig, litres: float | None) -> float | None:
    """The gauge reading expected at a content, or None where there is no bath or no content is known."""
    if rig.bath is None or litres is None:
        return None
    return level_at(rig.bath, litres)


def litres_over_time(plan: Plan, rig: Rig) -> list[tuple[int, float]]:
    """Bath content at the corners of its curve, as (second, litres); a pour rises at the end of its step."""
    corners: list[tuple[int, float]] = []
    for step in plan.steps:
        if step.helium_before_L is None or step.helium_after_L is None:
            continue
        corners.append((step.start_s, step.helium_before_L))
        if step.poured_L > 0 and rig.bath is not None:
            pouring_s = round(step.poured_L / rig.bath.transfer.rate_L_per_s)
            begins_s = max(step.start_s, step.end_s - pouring_s)
            corners.append((begins_s, step.helium_after_L - step.poured_L))
        else:
            content_L = step.helium_before_L
            for leg in step.legs:
                if leg.channel == "coil":
                    content_L -= leg.litres
                    corners.append((leg.end_s, content_L))
        corners.append((step.end_s, step.helium_after_L))
    return corners
