"""A list of fillings × temperatures turned into targets at once."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any

from planner.desk.document import Document
from planner.desk.place import Place
from planner.desk.rows import free_name
from planner.files.asks import read_filling, read_temperature
from planner.units import parse_amount

PATTERN = "{sample} ν {filling} at {temperature}"


@dataclass(frozen=True, slots=True)
class Grid:
    """What is asked for, as typed."""

    sample: str
    fillings: str
    temperatures: str = "base"
    duration: str = "20 min"
    priority: str = "3"
    pattern: str = PATTERN


QUESTIONS = {
    "sample": ("sample", "the chip; one of this week's samples"),
    "fillings": ("fillings", "ν as integers, fractions or decimals, such as 1/3, 2/5, 2"),
    "temperatures": ("temperatures", "such as base, 50 mK, 0.2 K, or ≤ 30 mK"),
    "duration": ("duration", "of each measurement, such as 20 min"),
    "priority": ("priority", "1 to 5; 5 matters most"),
    "pattern": ("name", "of each target: {sample}, {filling} and {temperature} are filled in"),
}


def parts(text: str) -> list[str]:
    """The entries of a list as typed."""
    return [part.strip() for part in re.split("[,;]", text) if part.strip()]


def judged(document: Document, grid: Grid) -> dict[str, str]:
    """What is wrong with each answer; empty text where it is usable."""
    samples = [row.get("name") for row in document.data("week").get("samples", []) if isinstance(row, dict)]
    return {
        "sample": "" if grid.sample in samples else f"expected one of {', '.join(map(str, samples))}",
        "fillings": _wrong(grid.fillings, read_filling),
        "temperatures": _wrong(grid.temperatures, read_temperature),
        "duration": _wrong(grid.duration, lambda text: _positive(text), single=True),
        "priority": "" if grid.priority in ("1", "2", "3", "4", "5") else "expected 1 to 5",
        "pattern": _pattern_wrong(grid),
    }


def targets(document: Document, grid: Grid) -> list[dict[str, Any]]:
    """The new rows, fillings in turn and in each its temperatures; raises ValueError where an answer is unusable."""
    wrong = [text for text in judged(document, grid).values() if text]
    if wrong:
        raise ValueError(wrong[0])
    taken = {str(row.get("name")) for row in document.data("week").get("targets", []) if isinstance(row, dict)}
    rows = []
    for filling in parts(grid.fillings):
        for temperature in parts(grid.temperatures):
            name = free_name(_named(grid, filling, temperature), taken)
            taken.add(name)
            rows.append(
                {
                    "name": name,
                    "kind": "hold",
                    "sample": grid.sample,
                    "filling": int(filling) if re.fullmatch(r"[+-]?\d+", filling) else filling,
                    "temperature": temperature,
                    "duration": grid.duration.strip(),
                    "priority": int(grid.priority),
                }
            )
    return rows


def add(document: Document, grid: Grid) -> int:
    """Put the targets into the week, as one step; how many. Raises ValueError where an answer is unusable."""
    rows = targets(document, grid)
    document.add_rows(Place("week", ("targets",)), rows, f"add {len(rows)} targets")
    return len(rows)


def _named(grid: Grid, filling: str, temperature: str) -> str:
    return grid.pattern.replace("{sample}", grid.sample).replace("{filling}", filling).replace(
        "{temperature}", temperature
    )[:60].strip()  # fmt: skip


def _pattern_wrong(grid: Grid) -> str:
    if not grid.pattern.strip():
        return "expected a name"
    unknown = set(re.findall(r"\{(.*?)\}", grid.pattern)) - {"sample", "filling", "temperature"}
    return f"expected only {{sample}}, {{filling}}, {{temperature}} in braces, not {min(unknown)}" if unknown else ""


def _positive(text: str) -> None:
    if not parse_amount(text, "s") > 0:
        raise ValueError("expected more than 0 s")


def _wrong(text: str, read: Any, *, single: bool = False) -> str:
    entries = [text.strip()] if single else parts(text)
    if not entries or not entries[0]:
        return "needed"
    for entry in entries:
        try:
            read(entry)
        except ValueError as error:
            return f"{entry}: {error}"
    return ""
