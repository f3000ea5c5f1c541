"""The plan itself as JSON, with the hashes and texts of the files it was made from."""

from __future__ import annotations

from planner.runsheet.sheet import Sheet


def write(sheet: Sheet) -> bytes:
    """The plan's own JSON; it reads back as the same plan."""
    return sheet.plan.to_json()
