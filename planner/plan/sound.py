"""What any plan's numbers must be before anything is done with it, whoever wrote the file."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import fields, is_dataclass
from typing import Any

from planner.clock import zone
from planner.plan.plan import Plan

MOST_STEPS = 20_000
LARGEST_NUMBER = 1e10
"""In whatever unit: seconds, litres, tesla, points. No plan comes near it, and nothing overflows below it."""


def unsound(plan: Plan) -> list[tuple[str, str]]:
    """Places in a plan that cannot be meant, each with what was expected; at most twenty."""
    if len(plan.steps) > MOST_STEPS:
        return [("steps", f"expected at most {MOST_STEPS}")]
    found = []
    try:
        zone(plan.zone)
    except ValueError as error:
        found.append(("zone", str(error)))
    for name in ("start", "end"):
        moment = getattr(plan, name)
        if moment.tzinfo is None or not 1970 <= moment.year <= 2199:
            found.append((name, "expected a time with its offset from UTC, in a year from 1970 to 2199"))
    for where, expected in _numbers(plan, ""):
        found.append((where, expected))
        if len(found) >= 20:
            break
    return found


def _numbers(value: Any, where: str) -> Iterator[tuple[str, str]]:
    if is_dataclass(value):
        for field in fields(value):
            yield from _numbers(getattr(value, field.name), f"{where}.{field.name}" if where else field.name)
    elif isinstance(value, tuple):
        for at, inner in enumerate(value):
            yield from _numbers(inner, f"{where}[{at}]")
    elif isinstance(value, (int, float)) and not isinstance(value, bool):
        if not math.isfinite(value) or abs(value) > LARGEST_NUMBER:
            yield where, f"expected a number of a size up to {LARGEST_NUMBER:g}"
        elif value <= 0 and (where.endswith("temperature_K") or ".stage_K[" in where):
            yield where, "expected a temperature above 0 K"
