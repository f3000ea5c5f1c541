"""From answers to a file: a new one with a comment beside every value, or an old one with its own comments kept."""

from __future__ import annotations

import textwrap
import tomllib
from collections.abc import Mapping
from datetime import datetime
from typing import Any

import tomlkit

from planner.desk import toml_text
from planner.desk.asking import Answer, Parts
from planner.desk.toml_text import written

WIDTH = 110
_ROWS_WITH_HEADING = ("people", "users", "samples", "targets")


def fresh_text(content: dict[str, Any], answers: tuple[Answer, ...], preamble: str) -> str:
    """TOML of a new file: the reason of each question above its key, offers taken unseen marked."""
    return _Page(answers).text(content, preamble)


class _Page:
    """One file in the making."""

    def __init__(self, answers: tuple[Answer, ...]) -> None:
        self._why = {answer.question.parts: answer.question.why for answer in answers}
        self._heading = {answer.question.parts: answer.question.heading for answer in answers}
        self._marks = {answer.question.parts: answer.question.mark for answer in answers if answer.unseen}
        self._lines: list[str] = []
        self._under = ""

    def text(self, content: dict[str, Any], preamble: str) -> str:
        self._lines += [f"# {line}" for line in textwrap.wrap(preamble, WIDTH)]
        self._table((), content, tell=True)
        return "\n".join(self._lines) + "\n"

    def _table(self, at: Parts, table: Mapping[str, Any], *, tell: bool) -> None:
        """The keys of a table, then the tables inside it; ``tell`` puts the reasons above the keys."""
        later = [key for key, inner in table.items() if self._stands_alone((*at, key), inner)]
        for key, inner in table.items():
            if key not in later:
                self._key((*at, key), inner, tell=tell)
        for key in later:
            self._inner((*at, key), table[key])

    def _stands_alone(self, at: Parts, inner: Any) -> bool:
        if isinstance(inner, dict):
            return not any(isinstance(part, int) for part in at)
        return isinstance(inner, list) and len(at) == 1 and at[0] in _ROWS_WITH_HEADING

    def _inner(self, at: Parts, inner: Any) -> None:
        name = ".".join(tomlkit.key(str(part)).as_string() for part in at)
        if isinstance(inner, dict):
            self._lines += ["", *self._section(at), f"[{name}]"]
            self._table(at, inner, tell=True)
            return
        for row, content in enumerate(inner):
            self._lines += ["", *self._section((*at, row)), f"[[{name}]]"]
            self._table((*at, row), content, tell=row == 0)

    def _section(self, at: Parts) -> list[str]:
        """A line with the heading under which the first question inside was asked, where it is a new one."""
        heading = next((head for parts, head in self._heading.items() if parts[: len(at)] == at), "")
        if not heading or heading == self._under:
            return []
        self._under = heading
        return [f"# ---- {heading} " + "-" * max(0, 60 - len(heading))]

    def _key(self, at: Parts, inner: Any, *, tell: bool) -> None:
        if tell and (why := self._why_of(at)):
            self._lines += [f"# {line}" for line in textwrap.wrap(why, WIDTH)]
        mark = next((f" # {mark}" for parts, mark in self._marks.items() if mark and parts[: len(at)] == at), "")
        name = tomlkit.key(str(at[-1])).as_string()
        if isinstance(inner, list) and len(inner) > 1 and all(isinstance(row, dict) for row in inner):
            rows = [f"  {written(row)}," for row in inner]
            self._lines += [f"{name} = [", *rows, f"]{mark}"]
        else:
            self._lines.append(f"{name} = {_written(inner)}{mark}")

    def _why_of(self, at: Parts) -> str:
        """The reason of the question for this place; of a list or small table, the reasons inside it."""
        if at in self._why:
            return self._why[at]
        inside = [why for parts, why in self._why.items() if parts[: len(at)] == at]
        return " ".join(dict.fromkeys(inside))


def _written(value: Any) -> str:
    return value.isoformat() if isinstance(value, datetime) else written(value)


def amended_text(text: str, content: dict[str, Any]) -> str:
    """The text of an existing file with this content; what has not changed keeps its place and its comments."""
    body = text.removeprefix("\ufeff")
    edited = _amended(body, (), tomllib.loads(body), content)
    if tomllib.loads(edited) != content:
        raise toml_text.CannotEditError("the file's layout does not let its values be changed one by one")
    return edited


def _amended(text: str, at: Parts, old: dict[str, Any], new: dict[str, Any]) -> str:
    for key in [key for key in old if key not in new]:
        text = toml_text.remove(text, (*at, key))
    for key, wanted in new.items():
        there = old.get(key)
        if isinstance(there, dict) and isinstance(wanted, dict):
            text = _amended(text, (*at, key), there, wanted)
        elif _is_rows(there) and _is_rows(wanted):
            text = _amended_rows(text, (*at, key), there or [], wanted)
        elif isinstance(wanted, dict) and there is None:
            for name, inner in wanted.items():
                text = toml_text.set_value(text, (*at, key, name), inner)
        elif there != wanted or type(there) is not type(wanted):
            text = toml_text.set_value(text, (*at, key), wanted)
    return text


def _is_rows(value: Any) -> bool:
    return isinstance(value, list) and bool(value) and all(isinstance(row, dict) for row in value)


def _amended_rows(text: str, at: Parts, old: list[Any], new: list[Any]) -> str:
    for row in reversed(range(len(new), len(old))):
        text = toml_text.remove(text, (*at, row))
    for row, (there, wanted) in enumerate(zip(old, new, strict=False)):
        if there.get("kind") != wanted.get("kind"):
            text = toml_text.add_row(toml_text.remove(text, (*at, row)), at, row, wanted)
        else:
            text = _amended(text, (*at, row), there, wanted)
    for row in range(len(old), len(new)):
        text = toml_text.add_row(text, at, row, new[row])
    return text
