"""Why a take was left out, and why there is no plan, in words with numbers."""

from __future__ import annotations

from planner.optimise.result import Result
from planner.plan import LeftOut
from planner.planning.compile import Compiled


def left_out(compiled: Compiled, result: Result) -> tuple[LeftOut, ...]:
    """Targets that the rig cannot do, then takes that found no room, each with its reason."""
    impossible = [LeftOut(item.ask.name, "", item.user, item.ask.priority, item.reason) for item in compiled.impossible]
    return (*impossible, *_without_room(compiled, result))


def _without_room(_compiled: Compiled, _result: Result) -> list[LeftOut]:
    return []


def why_no_plan(compiled: Compiled, result: Result) -> str:
    """What stands in the way of a plan."""
    names = [compiled.takes[take].name for take in result.missing_musts if take < len(compiled.takes)]
    return ", ".join(names)


def duration_text(seconds: float) -> str:
    """A duration as people say it: "3 h 20 min", "40 min", "50 s"."""
    whole = round(seconds)
    if whole < 60:
        return f"{whole} s"
    hours, minutes = divmod(round(whole / 60), 60)
    if not hours:
        return f"{minutes} min"
    return f"{hours} h {minutes:02d} min" if minutes else f"{hours} h"
