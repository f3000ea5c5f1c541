"""What both faces call: open, plan, check, write."""

from planner.desk.desk import (
    changed_files,
    check_plan_file,
    check_week_file,
    open_plan,
    open_week,
    plan_request,
    schemas,
    sheet_formats,
    write_sheets,
)
from planner.planning import Progress

__all__ = [
    "Progress",
    "changed_files",
    "check_plan_file",
    "check_week_file",
    "open_plan",
    "open_week",
    "plan_request",
    "schemas",
    "sheet_formats",
    "write_sheets",
]
