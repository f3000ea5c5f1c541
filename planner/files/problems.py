"""What the models find wrong with a file, in the project's own words: place, value, what was expected, a hint."""

from __future__ import annotations

from typing import Any

from pydantic import BaseModel, ValidationError
from pydantic_core import ErrorDetails

from planner.errors import Problem
from planner.files.limits import MOST_PROBLEMS
from planner.files.model import Table
from planner.files.references import nearest
from planner.files.targets import TARGET_KINDS

_EXPECTED = {
    "string_type": "expected text in quotes",
    "string_too_short": "expected at least {min_length} characters",
    "string_too_long": "expected at most {max_length} characters",
    "int_type": "expected a whole number",
    "int_parsing": "expected a whole number",
    "int_from_float": "expected a whole number",
    "int_parsing_size": "expected a whole number",
    "bool_type": "expected true or false",
    "bool_parsing": "expected true or false",
    "greater_than_equal": "expected at least {ge}",
    "less_than_equal": "expected at most {le}",
    "tuple_type": "expected a list, in [ ]",
    "list_type": "expected a list, in [ ]",
    "frozen_set_type": "expected a list, in [ ]",
    "dict_type": "expected a table, in {{ }}",
    "model_type": "expected a table, in {{ }}",
    "model_attributes_type": "expected a table, in {{ }}",
    "too_short": "expected at least {min_length} of them",
    "too_long": "expected at most {max_length} of them",
}
_PATTERNS = {"^[A-Z]$": "expected one capital letter"}


def problems_of(error: ValidationError, model: type[BaseModel], file: str) -> list[Problem]:
    """Every problem of a file, one for each thing to mend; of very many the first `MOST_PROBLEMS`."""
    details = error.errors(include_url=False)[:MOST_PROBLEMS]
    return [
        _problem(file, model, detail)
        for detail in details
        if detail["type"] != "too_short" or not any(_inside(other["loc"], detail["loc"]) for other in details)
    ]


def _inside(loc: tuple[int | str, ...], outer: tuple[int | str, ...]) -> bool:
    """Whether a problem lies within another's place: a list whose only row is wrong is not short as well."""
    return len(loc) > len(outer) and loc[: len(outer)] == outer


def shown(value: Any) -> str:
    """A value as a message shows it, cut where it is long; nothing for a whole table or list."""
    if isinstance(value, (dict, list)):
        return ""
    text = str(value)
    text = text if len(text) <= 60 else text[:57] + "…"
    if isinstance(value, bool):
        return text.lower()
    return f'"{text}"' if isinstance(value, str) else text


def _problem(file: str, model: type[BaseModel], detail: ErrorDetails) -> Problem:
    kind, loc = detail["type"], detail["loc"]
    where = _where(loc)
    if kind == "missing":
        return Problem(file, where, "", "is missing")
    if kind == "extra_forbidden":
        return Problem(file, where, "", "unknown key", nearest(str(loc[-1]), _known_keys(model, loc)))
    if kind in ("union_tag_invalid", "union_tag_not_found"):
        written = detail["input"].get("kind") if isinstance(detail["input"], dict) else None
        value, hint = "" if written is None else shown(written), nearest(str(written), list(TARGET_KINDS))
        return Problem(file, f"{where}.kind", value, "expected a kind of target", hint)
    return Problem(file, where, shown(detail["input"]), _expected(detail))


def _expected(detail: ErrorDetails) -> str:
    kind, context = detail["type"], detail.get("ctx", {})
    if kind == "literal_error":
        return f"expected {context['expected']}"
    if kind == "string_pattern_mismatch":
        return _PATTERNS.get(context["pattern"], "expected text of one line, without control characters")
    if kind in _EXPECTED:
        return _EXPECTED[kind].format(**context)
    return detail["msg"].removeprefix("Value error, ")


def _is_kind(loc: tuple[int | str, ...], at: int) -> bool:
    """Whether this part of a place is the kind of target that the models put in, no key of the file."""
    return at == 2 and loc[0] == "targets" and loc[at] in TARGET_KINDS


def _where(loc: tuple[int | str, ...]) -> str:
    parts = [part for at, part in enumerate(loc) if not _is_kind(loc, at)]
    return "".join(f"[{part}]" if isinstance(part, int) else f".{part}" for part in parts).lstrip(".")


def _known_keys(model: type[BaseModel], loc: tuple[int | str, ...]) -> list[str]:
    """Keys of the table in which the last part of ``loc`` stands."""
    found: type[BaseModel] | None = model
    for at, part in enumerate(loc[:-1]):
        if isinstance(part, int) or found is None:
            continue
        if _is_kind(loc, at):
            found = TARGET_KINDS[part]
            continue
        fields = {field.alias or name: field for name, field in found.model_fields.items()}
        found = _table_in(fields[part].annotation) if part in fields else None
    if found is None:
        return []
    return [field.alias or name for name, field in found.model_fields.items()]


def _table_in(annotation: Any) -> type[Table] | None:
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return annotation
    inner = (_table_in(part) for part in getattr(annotation, "__args__", ()))
    return next((table for table in inner if table is not None), None)
