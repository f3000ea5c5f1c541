"""Plan a week of cryostat and magnet time.

>>> import planner
>>> request = planner.open_week("example_plans/first_week.toml")  # doctest: +SKIP
>>> plan = planner.plan_request(request, seconds=10)  # doctest: +SKIP
>>> plan.frame()  # doctest: +SKIP
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from planner.checks import check_plan, check_week
    from planner.desk import open_plan, open_week, plan_request, schemas, write_sheets
    from planner.plan import Plan

__all__ = [
    "Plan",
    "check_plan",
    "check_week",
    "open_plan",
    "open_week",
    "plan_request",
    "schemas",
    "write_sheets",
]

_HOMES = {
    "Plan": "planner.plan",
    "check_plan": "planner.checks",
    "check_week": "planner.checks",
} | dict.fromkeys(("open_plan", "open_week", "plan_request", "schemas", "write_sheets"), "planner.desk")


def __getattr__(name: str) -> Any:
    """Import the public names when they are first used, so that ``import planner`` stays light."""
    if name not in _HOMES:
        raise AttributeError(f"module 'planner' has no attribute {name!r}")
    from importlib import import_module

    return getattr(import_module(_HOMES[name]), name)
