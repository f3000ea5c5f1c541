"""New rows and copies of rows: what stands in them to begin with."""

from __future__ import annotations

import copy
import re
from typing import Any

from planner.desk.document import Document
from planner.desk.place import Place

_NUMBERED = re.compile(r"(.*?)(?: (\d+))?")
_NAMES = {"people": "New person", "users": "New user", "samples": "New sample", "targets": "New target",
          "quiet": "Neighbour", "gates": "gate"}  # fmt: skip


def new_row(document: Document, rows: Place) -> dict[str, Any]:
    """What a new row of a list begins with; what only the user can know is left out, and then asked for."""
    week = document.data("week")
    key = str(rows.last)
    row: dict[str, Any] = {}
    if key in _NAMES:
        row["name"] = free_name(_NAMES[key], _names(document, rows))
    if key == "users":
        used = {user.get("letter") for user in week.get("users", []) if isinstance(user, dict)}
        row["letter"] = next((chr(code) for code in range(65, 91) if chr(code) not in used), "Z")
    if key == "samples":
        row["user"] = _first(week, "users")
    if key == "targets":
        row |= {"kind": "hold", "sample": _first(week, "samples")}
    return row


def copied_row(document: Document, row: Place) -> dict[str, Any]:
    """A copy of a row under a name of its own."""
    made: dict[str, Any] = copy.deepcopy(document.get(row))
    if isinstance(made.get("name"), str):
        made["name"] = free_name(made["name"], _names(document, row.above))
    if row.above.last == "users":
        made["letter"] = new_row(document, row.above)["letter"]
    if made.get("file") and row.above.last == "targets":
        made["file"] = ""  # two targets that write into one file would lose data
    return made


def free_name(name: str, taken: set[str]) -> str:
    """The name itself, or with the first number that makes it new."""
    if name not in taken:
        return name
    match = _NUMBERED.fullmatch(name)
    stem, number = (match[1], int(match[2] or 1)) if match else (name, 1)
    while f"{stem} {number + 1}" in taken:
        number += 1
    return f"{stem} {number + 1}"


def _names(document: Document, rows: Place) -> set[str]:
    there = document.get(rows)
    return {str(row.get("name")) for row in there if isinstance(row, dict)} if isinstance(there, list) else set()


def _first(week: dict[str, Any], key: str) -> str:
    rows = week.get(key)
    first = rows[0] if isinstance(rows, list) and rows else {}
    return str(first.get("name", "")) if isinstance(first, dict) else ""
