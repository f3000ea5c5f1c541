"""From a spreadsheet into a week: every row judged with its number, then all good ones appended in one go."""

from __future__ import annotations

import copy
import re
import tomllib
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from planner.desk import toml_text
from planner.desk.spreadsheet import Sheet, read_sheet
from planner.desk.spreadsheet_targets import columns_of, row_target
from planner.desk.texts import atomic_write
from planner.errors import InputError, Problem
from planner.files import Request, read_week
from planner.files.model import Table
from planner.files.problems import problems_of
from planner.files.reading import fit_problems, parse_week, text_of, week_of
from planner.files.references import reference_problems
from planner.files.targets import TARGET_KINDS, AnyTarget

_OF_TARGET = re.compile(r"targets\[(\d+)\]\.?(.*)")
_MOST_ROUNDS = 20
_ALL = 100_000


class _Rows(Table):
    """Targets alone, as a week file holds them."""

    targets: tuple[AnyTarget, ...]


@dataclass(frozen=True, slots=True)
class Targets:
    """Targets from a sheet: one table and one row number each; and what is wrong with the rows left out."""

    tables: tuple[dict[str, Any], ...]
    numbers: tuple[int, ...]
    problems: tuple[Problem, ...] = ()

    def text(self) -> str:
        """The targets as they stand in a week file."""
        return toml_text.appended_rows("", ("targets",), list(self.tables)).lstrip("\n")


def read_targets(
    sheet: Path,
    *,
    into: Path | None = None,
    name: str | None = None,
    kind: str | None = None,
    keep_good: bool = False,
) -> Targets:
    """Targets from a CSV or XLSX file. Nothing is written.

    Parameters
    ----------
    sheet
        The spreadsheet.
    into
        The week file that they are for: names, gates and samples are then judged with it.
    name
        Name of the sheet inside a workbook; left out, its first one.
    kind
        Kind of target of rows that do not say.
    keep_good
        Leave bad rows out, and say so, instead of refusing them all.

    Raises
    ------
    InputError
        If the sheet or the week cannot be read; if any row is bad, with every bad row and its number, unless
        ``keep_good``; then only if no good row is left.
    """
    _check_kind(kind)
    request = None if into is None else read_week(into)
    cells = read_sheet(sheet, name)
    found, problems = _rows_of(cells, request, kind)
    found, left_out = _sifted(_Judge(cells, request), found, problems, keep_good)
    if not found:
        raise InputError(left_out or [Problem(cells.name, "", "", "there are no rows under the headings")])
    numbers, tables = zip(*found, strict=True)
    return Targets(tables, numbers, tuple(sorted(left_out, key=_row_of)))


def _check_kind(kind: str | None) -> None:
    if kind is not None and kind not in TARGET_KINDS:
        raise InputError([Problem("kind", "", f'"{kind[:40]}"', f"expected one of {', '.join(TARGET_KINDS)}")])


def append_targets(week: Path, targets: Targets) -> None:
    """Put targets at the end of a week file's own, in one go; its comments and its order stay.

    Raises
    ------
    InputError
        If the result cannot be read as a week any more, or the file cannot be written. It is then as it was.
    """
    text = text_of(week)
    body = text.removeprefix("\ufeff")
    edited = toml_text.appended_rows(body, ("targets",), list(targets.tables))
    if "\r\n" in body:
        edited = edited.replace("\r\n", "\n").replace("\n", "\r\n")
    edited = text[: len(text) - len(body)] + edited
    parse_week(edited, week.name)
    if text_of(week) != text:
        raise InputError([Problem(week.name, "", "", "has changed meanwhile: nothing was written")])
    try:
        atomic_write(week, edited.encode())
    except OSError as error:
        raise InputError([Problem(str(week), "", "", f"cannot be written: {error.strerror}")]) from error


Numbered = tuple[int, dict[str, Any]]


def _sifted(
    judge: _Judge, found: list[Numbered], problems: list[Problem], keep_good: bool
) -> tuple[list[Numbered], list[Problem]]:
    """The good rows, and what is wrong with the others; a good row that needs a bad one is bad too."""
    left_out: list[Problem] = []
    for _ in range(_MOST_ROUNDS):
        told, bad = judge.problems(found)
        unread = {_row_of(problem) for problem in problems}
        problems += [problem for problem in told if _row_of(problem) not in unread or not _follows(problem)]
        if not keep_good and problems:
            raise InputError(sorted(problems, key=_row_of))
        dropped = bad | {_row_of(problem) for problem in problems}
        if not dropped:
            return found, left_out
        left_out += problems
        found = [row for row in found if row[0] not in dropped]
        problems = []
    raise InputError(left_out)


def _rows_of(cells: Sheet, request: Request | None, kind: str | None) -> tuple[list[Numbered], list[Problem]]:
    """The rows as tables, and what in their cells cannot be used."""
    columns = columns_of(cells)
    samples = [sample.name for sample in request.week.samples] if request is not None else []
    found, problems = [], []
    for row in cells.rows:
        table, wrong = row_target(columns, row, cells.name)
        problems += wrong
        if kind is not None:
            table.setdefault("kind", kind)
        if len(samples) == 1:
            table.setdefault("sample", samples[0])
        first = {key: table[key] for key in ("name", "kind", "sample") if key in table}
        found.append((row.number, first | table))
    return found, problems


def _follows(problem: Problem) -> bool:
    """Whether it may be due to a cell of the row that could not be used: something is missing, or is not whole."""
    return problem.expected == "is missing" or "," not in problem.where


def _row_of(problem: Problem) -> int:
    match = re.match(r"row (\d+)", problem.where)
    return int(match[1]) if match else 0


class _Judge:
    """Says what is wrong with rows as targets, alone and together with the week they are for."""

    def __init__(self, cells: Sheet, request: Request | None) -> None:
        self._file = cells.name
        self._request = request
        self._data: dict[str, Any] = {}
        if request is not None:
            self._data = tomllib.loads(request.sources[0].text.removeprefix("\ufeff"))

    def problems(self, rows: list[Numbered]) -> tuple[list[Problem], set[int]]:
        """Every problem, and the numbers of the rows that have any."""
        data = copy.deepcopy(self._data)
        before = len(data.get("targets", ()))
        data["targets"] = [*data.get("targets", ()), *(table for _, table in rows)]
        found = []
        for problem in self._all(data, rows, before):
            match = _OF_TARGET.fullmatch(problem.where)
            at = int(match[1]) - before if match else -1
            if match is None or at < 0:
                raise InputError([problem])  # of the sheet as a whole: a circle, too many takes
            where = f"row {rows[at][0]}" + (f", {match[2]}" if match[2] else "")
            found.append(Problem(self._file, where, problem.value, problem.expected, problem.hint))
        return found, {_row_of(problem) for problem in found}

    def _all(self, data: dict[str, Any], rows: list[Numbered], before: int) -> Iterator[Problem]:
        alone = [problem for at, (_, table) in enumerate(rows) for problem in self._alone(before + at, table)]
        yield from alone
        if self._request is None:
            names = [table.get("name") for _, table in rows]
            for at, name in enumerate(names):
                if name is not None and name in names[:at]:
                    yield Problem(self._file, f"targets[{at}].name", f'"{name}"', "this name is taken already")
            return
        yield from reference_problems(data, self._file, most=_ALL)
        if not alone:
            try:
                yield from fit_problems(week_of(data, self._file), self._request.rig, self._file)
            except InputError as error:
                already = {_OF_TARGET.fullmatch(problem.where) is not None for problem in error.problems}
                yield from error.problems if already == {False} else ()

    def _alone(self, at: int, table: dict[str, Any]) -> list[Problem]:
        try:
            _Rows.model_validate({"targets": [table]})
        except ValidationError as error:
            return [
                Problem(problem.file, problem.where.replace("targets[0]", f"targets[{at}]"), *_rest(problem))
                for problem in problems_of(error, _Rows, self._file)
            ]
        return []


def _rest(problem: Problem) -> tuple[str, str, str]:
    return problem.value, problem.expected, problem.hint
