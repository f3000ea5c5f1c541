"""Between the text in a field and the value in a file; and what to say to somebody who has typed something else."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass
from datetime import date, datetime, time
from typing import Any

from pydantic import ValidationError

from planner.desk.fields import Field, FieldKind
from planner.desk.wording import plain_amount
from planner.files.asks import Range, TemperatureAsk
from planner.files.problems import problems_of
from planner.units import Amount

_YES, _NO = ("yes", "y", "true"), ("no", "n", "false")
_NAMED = re.compile(r"(.+?)[\s=:]+([+\-−]?(?:\d|\.\d).*)")
_HOURS = re.compile(r"(.+?)\s+(\d{1,2}:\d{2})\s*(?:-|–|to)\s*(\d{1,2}:\d{2})")
_SPAN = re.compile(r"(.+?)\s+to\s+(.+)")
_BARE = re.compile(r"[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d+)?")


@dataclass(frozen=True, slots=True)
class Explained:
    """What a text means in a field: ``value`` for the file if it is usable; ``message`` for whoever types."""

    usable: bool
    message: str
    value: Any = None


def shown(value: Any) -> str:
    """A value of a file as a field shows it; typed back, it gives the same value."""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, datetime):
        whole = value.isoformat(sep=" ")
        return re.sub(r"(\d\d:\d\d):00(?=$|[+Z-])", r"\1", whole)
    if isinstance(value, (date, time)):
        return value.isoformat()
    if isinstance(value, list):
        if value and all(isinstance(row, dict) for row in value):
            return "; ".join(_row_shown(row) for row in value)
        texts = [shown(one) for one in value]
        if any("," in text for text in texts):  # names with commas in them are set apart by semicolons
            return "; ".join(texts) + (";" if len(texts) == 1 else "")
        return ", ".join(texts)
    if isinstance(value, dict):
        return "; ".join(f"{name} {shown(one)}" for name, one in value.items())
    return "" if value is None else str(value)


def _row_shown(row: dict[str, Any]) -> str:
    if {"days", "from", "to"} <= row.keys():
        return f"{row['days']} {shown(row['from'])}-{shown(row['to'])}"
    if {"from", "to"} <= row.keys():
        return f"{shown(row['from'])} to {shown(row['to'])}"
    return " ".join(shown(one) for one in row.values())


def wanted(field: Field) -> str:
    """What a field wants: its kind and an example."""
    examples = " or ".join(field.examples[:3])
    if field.choices:
        many = field.kind is FieldKind.CHOICES
        return ("some of " if many else "one of ") + ", ".join(field.choices)
    if field.kind is FieldKind.QUANTITY:
        return f"a number with its unit, such as {examples}"
    return f"such as {examples}" if examples else ""


def explain(field: Field, text: str) -> Explained:
    """Whether a text may stand in a field, and what it means or what is wanted instead."""
    text = text.strip()
    if not text:
        if field.required:
            told = wanted(field)
            return Explained(False, f"needed: {told}" if told else "needed")
        return Explained(True, f"left out: {field.default or 'nothing'}")
    try:
        value = _READERS.get(field.kind, _text)(field, text)
        read = field.adapter.validate_python(value)
    except ValidationError as error:
        problem = problems_of(error, field.model, "")[0]
        hint = f" ({problem.hint})" if problem.hint else ""
        return Explained(False, f"{problem.expected}{hint}")
    except ValueError as error:
        return Explained(False, str(error))
    return Explained(True, meaning(field, read, text), value)


def meaning(field: Field, read: Any, text: str) -> str:
    """What was understood, where that says more than the text itself."""
    if isinstance(read, Amount) and field.kind is FieldKind.QUANTITY:
        unit = _BARE.sub("", text, count=1).strip()
        if (unit == field.unit and unit != "min") or _bare_unit(unit) == _bare_unit(
            {"min": "s"}.get(field.unit, field.unit)
        ):
            return ""
        said = plain_amount(float(read), field.unit)
        return "" if said.replace(" ", "") == text.replace(" ", "") else f"= {said}"
    if isinstance(read, TemperatureAsk) and read.kelvin is not None:
        said = plain_amount(read.kelvin, "mK")
        return "" if said == text else f"{'at most' if read.at_most else '='} {said}"
    if isinstance(read, Range):
        return f"{read.first:.6g} to {read.last:.6g}"
    if field.kind in (FieldKind.QUANTITIES, FieldKind.FILLINGS, FieldKind.NAMES, FieldKind.HOURS, FieldKind.SPANS):
        count = len(read)
        return f"{count} of them" if count > 1 else ""
    return ""


def _bare_unit(unit: str) -> str:
    """A simple unit without its prefix, so that 25 mT is not told to be 0.025 T; others are kept as they are."""
    for simple in ("T", "A", "V", "K", "L", "H", "ohm", "V/s", "s"):
        if unit.endswith(simple) and unit[: -len(simple)] in ("", "m", "µ", "μ", "u", "n", "k", "M"):
            return simple
    return unit


def _text(_field: Field, text: str) -> Any:
    return text


def _whole(_field: Field, text: str) -> Any:
    return int(text) if re.fullmatch(r"[+-]?\d{1,18}", text) else text


def _yes_no(_field: Field, text: str) -> Any:
    if text.lower() in _YES:
        return True
    if text.lower() in _NO:
        return False
    raise ValueError("expected yes or no")


def _choice(field: Field, text: str) -> Any:
    """The choice itself, or the only one that begins so."""
    if text in field.choices:
        return text
    begun = [one for one in field.choices if one.lower().startswith(text.lower())]
    if len(begun) == 1:
        return begun[0]
    raise ValueError(f"expected one of {', '.join(field.choices)}")


def _split(text: str, marks: str = ",;") -> list[str]:
    return [part.strip() for part in re.split(f"[{marks}]", text) if part.strip()]


def _quantities(_field: Field, text: str) -> Any:
    """A list of quantities; a bare number has the unit of the next one that has any."""
    parts = _split(text)
    unit = ""
    for at in range(len(parts) - 1, -1, -1):
        if _BARE.fullmatch(parts[at]):
            parts[at] = f"{parts[at]} {unit}".strip()
        elif (match := _BARE.match(parts[at])) is not None:
            unit = parts[at][match.end() :].strip()
    return parts


def _named(_field: Field, text: str) -> Any:
    found = {}
    for part in _split(text):
        match = _NAMED.fullmatch(part)
        if match is None:
            raise ValueError("expected a name and a quantity, such as top -0.5 V; back 1 V")
        found[match[1].strip()] = match[2]
    return found


def _filling(_field: Field, text: str) -> Any:
    if re.fullmatch(r"[+-]?\d{1,9}", text):
        return int(text)
    return float(text) if re.fullmatch(r"[+-]?\d+\.\d+", text) else text


def _fillings(field: Field, text: str) -> Any:
    return [_filling(field, part) for part in _split(text)]


def _names(_field: Field, text: str) -> Any:
    return _split(text, ";" if ";" in text else ",")


def _choices(field: Field, text: str) -> Any:
    return [_choice(field, part) for part in _split(text)]


def _moment(text: str) -> Any:
    try:
        return datetime.fromisoformat(text) if re.match(r"\d{4}-", text) and ":" in text else text
    except ValueError:
        return text


def _when(_field: Field, text: str) -> Any:
    return _moment(text)


def _hours(_field: Field, text: str) -> Any:
    rows = []
    for part in _split(text, ";"):
        match = _HOURS.fullmatch(part)
        if match is None:
            raise ValueError("expected weekdays and times, such as Mon-Fri 08:30-18:00; Sat 09:00-12:00")
        rows.append({"days": match[1], "from": match[2], "to": match[3]})
    return rows


def _spans(_field: Field, text: str) -> Any:
    rows = []
    for part in _split(text, ";"):
        match = _SPAN.fullmatch(part)
        if match is None:
            raise ValueError("expected stretches of time, such as Tue 20:00 to Wed 06:00")
        rows.append({"from": _moment(match[1]), "to": _moment(match[2])})
    return rows


_READERS: dict[FieldKind, Callable[[Field, str], Any]] = {
    FieldKind.WHOLE: _whole,
    FieldKind.YES_NO: _yes_no,
    FieldKind.CHOICE: _choice,
    FieldKind.CHOICES: _choices,
    FieldKind.QUANTITIES: _quantities,
    FieldKind.NAMED_QUANTITIES: _named,
    FieldKind.FILLING: _filling,
    FieldKind.FILLINGS: _fillings,
    FieldKind.NAMES: _names,
    FieldKind.WHEN: _when,
    FieldKind.HOURS: _hours,
    FieldKind.SPANS: _spans,
}
