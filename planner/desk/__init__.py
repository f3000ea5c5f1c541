"""What both faces call: open, plan, check, write."""

from planner.desk.asking_files import NewFile, zone_named
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
from planner.desk.spreadsheet_week import append_targets, read_targets
from planner.planning import Progress

__all__ = [
    "NewFile",
    "Progress",
    "append_targets",
    "changed_files",
    "check_plan_file",
    "check_week_file",
    "open_plan",
    "open_week",
    "plan_request",
    "read_targets",
    "schemas",
    "sheet_formats",
    "write_sheets",
    "zone_named",
]
