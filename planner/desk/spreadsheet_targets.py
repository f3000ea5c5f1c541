"""Targets from the rows of a spreadsheet: columns by their plain names, units in the heading or in the cells."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from datetime import date, time
from typing import Any

from planner.desk.spreadsheet import Cell, Row, Sheet, Unusable
from planner.errors import InputError, Problem
from planner.files.model import key_of
from planner.files.references import nearest
from planner.files.targets import TARGET_KINDS, LockIn
from planner.units import parse_amount, short

Parts = tuple[str, ...]

_UNITS: dict[Parts, str] = {
    ("field",): "T",
    ("fields",): "T",
    ("width",): "T",
    ("feature",): "T",
    ("rate",): "T/s",
    ("duration",): "s",
    ("dwell",): "s",
    ("decide",): "s",
    ("temperature",): "K",
    ("temperatures",): "K",
    ("sweep",): "V",
    ("second_sweep",): "V",
    ("gates",): "V",
    ("lockin", "time_constant"): "s",
    ("lockin", "settled"): "percent",
}
_OTHER_NAMES: dict[str, Parts] = {
    "target": ("name",),
    "title": ("name",),
    "type": ("kind",),
    "chip": ("sample",),
    "b": ("field",),
    "magnetic field": ("field",),
    "nu": ("filling",),
    "ν": ("filling",),
    "filling factor": ("filling",),
    "temp": ("temperature",),
    "t": ("temperature",),
    "temps": ("temperatures",),
    "sweep rate": ("rate",),
    "field rate": ("rate",),
    "time": ("duration",),
    "gate range": ("sweep",),
    "gate sweep": ("sweep",),
    "number of points": ("points",),
    "time constant": ("lockin", "time_constant"),
    "lock in time constant": ("lockin", "time_constant"),
    "poles": ("lockin", "poles"),
    "lock in poles": ("lockin", "poles"),
}
_IN_THE_FILE_ONLY = ("windows", "hours", "lockin")
_WHOLE: set[Parts] = {(key,) for key in ("priority", "repeats", "points", "second_points", "rungs", "people")} | {
    ("lockin", "poles"),
    ("lockin", "points_across"),
}
_YES_NO: set[Parts] = {("must",), ("attended",)}
_NAMES: set[Parts] = {("after",), ("before",)}
_LISTS: set[Parts] = {("fields",), ("temperatures",), ("fillings",)}

_HEADING = re.compile(r"(.*?)\s*(?:\(([^()]*)\)|\[([^\[\]]*)\]|/\s*\(?([^()\[\]]*?)\)?|\sin\s+(\S+))\s*")
_GATE = re.compile(r"gates?\s*[.:]?\s+(\S.*)|gates?[.:](\S.*)")
_NUMBER = re.compile(r"[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d{1,3})?")
_TIGHT_COMMA = re.compile(r"\d,\d")


@dataclass(frozen=True, slots=True)
class Column:
    """A column: where its values go in a target, and the unit that its heading gives to bare numbers."""

    at: int
    parts: Parts
    unit: str
    heading: str


def columns_of(sheet: Sheet) -> tuple[Column, ...]:
    """The columns of a sheet by their headings.

    A column without a heading must be empty; one whose heading begins with "#" is left out.

    Raises
    ------
    InputError
        With every heading that is not understood or comes twice.
    """
    found: list[Column] = []
    problems: list[Problem] = []
    for at in range(max(len(row.cells) for row in (sheet.heading, *sheet.rows))):
        heading = sheet.heading.cell(at)
        where = f"row {sheet.heading.number}, column {letters(at)}"
        if heading is None:
            if any(row.cell(at) is not None for row in sheet.rows):
                problems.append(Problem(sheet.name, where, "", "has no heading"))
        elif not isinstance(heading, str):
            problems.append(Problem(sheet.name, where, "", "expected a heading in words"))
        elif not heading.startswith("#"):
            try:
                column = _column(at, heading)
            except ValueError as error:
                problems.append(Problem(sheet.name, where, f'"{heading[:60]}"', str(error)))
                continue
            if twin := next((one for one in found if one.parts == column.parts), None):
                expected = f"means the same as column {letters(twin.at)}"
                problems.append(Problem(sheet.name, where, f'"{heading[:60]}"', expected))
            found.append(column)
    if problems:
        raise InputError(problems)
    return tuple(found)


def letters(column: int) -> str:
    """The letters that a spreadsheet program shows over a column: 0 is A, 26 is AA."""
    text = ""
    column += 1
    while column:
        column, rest = divmod(column - 1, 26)
        text = chr(ord("A") + rest) + text
    return text


def _known_names() -> dict[str, Parts]:
    keys = {
        info.alias or key_of(attribute)
        for kind in TARGET_KINDS.values()
        for attribute, info in kind.model_fields.items()
    }
    names: dict[str, Parts] = {key.replace("_", " "): (key,) for key in sorted(keys)}
    for attribute, info in LockIn.model_fields.items():
        key = info.alias or key_of(attribute)
        names[f"lockin.{key.replace('_', ' ')}"] = ("lockin", key)
    return names | _OTHER_NAMES


def _column(at: int, heading: str) -> Column:
    match = _HEADING.fullmatch(heading) if len(heading) <= 120 else None
    name, units = (match[1], [unit for unit in match.groups()[1:] if unit is not None]) if match else (heading, [])
    unit = units[0].strip() if units else ""
    plain = " ".join(re.sub(r"[_\-]", " ", name.strip()).lower().split())
    known = _known_names()
    gate = _GATE.fullmatch(re.sub(r"\s+", " ", name.strip()), 0) if plain not in known else None
    if gate is not None:
        parts: Parts = ("gates", (gate[1] or gate[2]).strip())
    elif plain in known:
        parts = known[plain]
    else:
        hint = nearest(plain, sorted(known))
        raise ValueError(f'is no column of a target, {hint}; put "#" before it to leave the column out')
    if parts[0] in _IN_THE_FILE_ONLY and len(parts) == 1:
        raise ValueError("does not come from a spreadsheet: write it into the week file")
    _check_unit(parts, unit)
    return Column(at, parts, unit, heading)


def _base_unit(parts: Parts) -> str:
    return _UNITS.get(parts) or (_UNITS[("gates",)] if parts[0] == "gates" else "")


def _check_unit(parts: Parts, unit: str) -> None:
    base = _base_unit(parts)
    if not unit:
        return
    if not base:
        raise ValueError(f'"{unit[:40]}" is not needed here: it is no quantity with a unit')
    try:
        parse_amount(f"1 {unit}", base)
    except ValueError:
        raise ValueError(f'expected a unit such as "{short(base)}", not "{unit[:40]}"') from None


def row_target(columns: tuple[Column, ...], row: Row, name: str) -> tuple[dict[str, Any], list[Problem]]:
    """What a row asks for, as a target of a week file, and what in it cannot be used.

    Parameters
    ----------
    name
        The sheet's name in messages.
    """
    target: dict[str, Any] = {}
    problems = []
    for column in columns:
        cell = row.cell(column.at)
        if cell is None:
            continue
        try:
            value = _value(column, cell)
        except ValueError as error:
            shown = "" if isinstance(cell, Unusable) else _shown(cell)
            where = f"row {row.number}, {column.heading[:60]}"
            problems.append(Problem(name, where, shown, str(error)))
            continue
        table = target
        for part in column.parts[:-1]:
            table = table.setdefault(part, {})
        if isinstance(value, dict):
            table.setdefault(column.parts[-1], {}).update(value)
        else:
            table[column.parts[-1]] = value
    return target, problems


def _shown(cell: Cell) -> str:
    return f'"{cell[:60]}"' if isinstance(cell, str) else str(cell)


def _value(column: Column, cell: Cell) -> Any:
    if isinstance(cell, Unusable):
        raise ValueError(cell.why)
    if isinstance(cell, (date, time)):
        raise ValueError("is a date or a time of day to the spreadsheet: format the column as text, then type it again")
    if _base_unit(column.parts):
        return _quantity(column, cell)
    for parts, read in _READERS:
        if column.parts in parts:
            return read(cell)
    return cell if isinstance(cell, str) else _number(cell)


def _number(cell: Cell) -> str:
    """A number as its author saw it: fifteen digits, as a spreadsheet keeps them."""
    return f"{cell:.15g}" if isinstance(cell, float) else str(cell)


def _quantity(column: Column, cell: Cell) -> Any:
    """Text with a unit; a number without one takes the unit of the heading."""
    if isinstance(cell, bool):
        raise ValueError("expected a quantity")
    text = cell if isinstance(cell, str) else _number(cell)
    if column.parts == ("gates",):
        pairs = (re.split(r"\s*[=:]\s*|\s+", part.strip(), maxsplit=1) for part in text.split(";"))
        return {pair[0]: _with_unit(pair[1] if len(pair) > 1 else "", column.unit) for pair in pairs}
    if column.parts in _LISTS:
        return [_with_unit(part, column.unit) for part in _split(text)]
    if column.parts == ("temperature",) and text == "base":
        return text
    return " to ".join(_with_unit(end, column.unit) for end in re.split(r"\s+to\s+", text))


def _with_unit(text: str, unit: str) -> str:
    """ "5" with the unit of the heading, "≤ 50" too; text with a unit of its own as it is."""
    limit = re.match(r"\s*(≤|<=)\s*", text)
    number = text[limit.end() if limit else 0 :].strip()
    if not _NUMBER.fullmatch(number):
        return text.strip()
    if not unit:
        raise ValueError('the unit is missing: give it in the heading, as in "field (T)", or in the cell')
    return f"{'≤ ' if limit else ''}{number} {unit}"


def _split(text: str) -> list[str]:
    """The parts of a list, between semicolons, or between commas that cannot be meant as decimal points."""
    if ";" in text:
        return [part.strip() for part in text.split(";") if part.strip()]
    if _TIGHT_COMMA.search(text):
        raise ValueError('is it a list or a decimal comma? Write "1; 5" or "1.5"')
    return [part.strip() for part in text.split(",") if part.strip()]


def _whole(cell: Cell) -> Any:
    if isinstance(cell, float) and cell.is_integer() and abs(cell) < 1e15:
        return int(cell)
    if isinstance(cell, str) and re.fullmatch(r"[+-]?[0-9]{1,15}", cell):
        return int(cell)
    return cell


def _yes_no(cell: Cell) -> Any:
    known = {"yes": True, "y": True, "true": True, "x": True, "no": False, "n": False, "false": False}
    known |= {"1": True, "0": False}
    word = _number(cell).lower() if isinstance(cell, float) else str(cell).lower()
    if word not in known:
        raise ValueError("expected yes or no")
    return known[word]


def _filling(cell: Cell) -> Any:
    if isinstance(cell, str):
        text = cell.strip()
        return int(text) if re.fullmatch(r"[+-]?[0-9]{1,9}", text) else text
    return _whole(cell)


def _fillings(cell: Cell) -> Any:
    return [_filling(part) for part in _split(cell)] if isinstance(cell, str) else [_filling(cell)]


def _names(cell: Cell) -> Any:
    text = cell if isinstance(cell, str) else _number(cell)
    return [part.strip() for part in text.split(";") if part.strip()]


_READERS: tuple[tuple[set[Parts], Callable[[Cell], Any]], ...] = (
    (_WHOLE, _whole),
    (_YES_NO, _yes_no),
    (_NAMES, _names),
    ({("filling",)}, _filling),
    ({("fillings",)}, _fillings),
)
