"""Read a spreadsheet, CSV or XLSX, as rows of plain cells. No formula is evaluated and no macro is looked at."""

from __future__ import annotations

import csv
import io
import warnings
import zipfile
import zlib
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from datetime import date, datetime, time
from pathlib import Path
from typing import Any

from planner.errors import InputError, Problem
from planner.files.references import nearest

LARGEST_SHEET = 5_000_000
LARGEST_UNPACKED = 60_000_000
MOST_ROWS = 10_000
MOST_COLUMNS = 200
LONGEST_CELL = 2000

_WORKBOOKS = (".xlsx", ".xlsm")
_TEXTS = (".csv", ".tsv", ".txt")


@dataclass(frozen=True, slots=True)
class Unusable:
    """A cell whose value cannot be taken, and why."""

    why: str


Cell = str | int | float | bool | date | time | Unusable | None


@dataclass(frozen=True, slots=True)
class Row:
    """One row with the number that a spreadsheet program shows for it."""

    number: int
    cells: tuple[Cell, ...]

    def cell(self, column: int) -> Cell:
        """The cell of a column; None beyond the last."""
        return self.cells[column] if column < len(self.cells) else None


@dataclass(frozen=True, slots=True)
class Sheet:
    """A sheet: the headings, and the rows under them that are not empty."""

    name: str
    heading: Row
    rows: tuple[Row, ...]


def read_sheet(path: Path, sheet: str | None = None) -> Sheet:
    """Read a CSV file, or one sheet of a workbook (its first one, unless ``sheet`` names another).

    A row whose first cell begins with "#" is a remark. Cells with nothing in them, or NaN, are None.

    Raises
    ------
    InputError
        If the file is missing, too large, of another kind, or broken.
    """
    ending = path.suffix.lower()
    if ending not in _WORKBOOKS + _TEXTS:
        hint = "save it as .xlsx or as .csv in UTF-8"
        raise _error(path, "expected a spreadsheet, .xlsx or .csv", hint)
    content = _content(path)
    found = _of_workbook(path, content, sheet) if ending in _WORKBOOKS else _of_csv(path, content)
    rows = [row for row in found if any(cell is not None for cell in row.cells) and not _is_remark(row)]
    if not rows:
        raise _error(path, "there are no rows in it")
    return Sheet(path.name, rows[0], tuple(rows[1:]))


def _error(path: Path, expected: str, hint: str = "", where: str = "") -> InputError:
    return InputError([Problem(path.name[:200] or str(path), where, "", expected, hint)])


def _content(path: Path) -> bytes:
    try:
        if not path.is_file():
            raise _error(path, "there is no such file" if not path.exists() else "expected a file")
        if path.stat().st_size > LARGEST_SHEET:
            raise _error(path, f"expected at most {LARGEST_SHEET} bytes")
        return path.read_bytes()
    except (OSError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        raise _error(path, f"cannot be read: {str(error)[:200]}") from None


def _is_remark(row: Row) -> bool:
    return isinstance(row.cells[0], str) and row.cells[0].startswith("#")


def _tidy(cell: Any) -> Cell:
    """A cell as it came, without surrounding space; nothing where it says nothing."""
    if isinstance(cell, str):
        text = cell.strip()
        if len(text) > LONGEST_CELL:
            return Unusable(f"has {len(text)} characters: expected at most {LONGEST_CELL}")
        return None if text.lower() in ("", "nan") else text
    if isinstance(cell, float) and cell != cell:
        return None
    if cell is None or isinstance(cell, (bool, int, float, date, time)):
        return cell
    return Unusable(f"expected text or a number, not a {type(cell).__name__}")


def _bounded(path: Path, rows: Iterable[Row]) -> Iterator[Row]:
    for row in rows:
        if row.number > MOST_ROWS:
            raise _error(path, f"expected at most {MOST_ROWS} rows")
        if len(row.cells) > MOST_COLUMNS and any(cell is not None for cell in row.cells[MOST_COLUMNS:]):
            raise _error(path, f"expected at most {MOST_COLUMNS} columns", where=f"row {row.number}")
        yield row


# CSV


def _of_csv(path: Path, content: bytes) -> list[Row]:
    if b"\0" in content:
        raise _error(path, "expected text, not binary data", "a workbook needs its own ending, .xlsx")
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise _error(path, "expected text in UTF-8", 'a spreadsheet program calls it "CSV UTF-8"') from None
    reader = csv.reader(io.StringIO(text, newline=""), delimiter=_delimiter(text), strict=True)
    rows = (Row(number, tuple(_csv_cell(cell) for cell in cells)) for number, cells in enumerate(reader, 1))
    try:
        return list(_bounded(path, rows))
    except csv.Error as error:
        raise _error(path, f"not valid CSV: {error}", where=f"line {reader.line_num}") from None


def _delimiter(text: str) -> str:
    """What separates the headings: the sign that occurs most in the first line that says something."""
    lines = (line for line in text.splitlines()[:100] if line.strip() and not line.startswith("#"))
    first = next(lines, "")
    return max((",", ";", "\t"), key=first.count)


def _csv_cell(text: str) -> Cell:
    return _not_a_formula(text) if text.lstrip().startswith("=") else _tidy(text)


def _not_a_formula(text: str) -> Unusable:
    return Unusable(f'is a formula, "{text[:40]}": put its value there, formulas are not evaluated')


# XLSX


def _of_workbook(path: Path, content: bytes, sheet: str | None) -> list[Row]:
    """The rows of one sheet; whatever a broken workbook makes the reader raise, it is one message."""
    _check_archive(path, content)
    from openpyxl import load_workbook  # type: ignore[import-untyped]

    broken = (
        *(zipfile.BadZipFile, KeyError, ValueError, TypeError, AttributeError, IndexError, EOFError, OSError),
        *(zlib.error, SyntaxError, NotImplementedError, RuntimeError, OverflowError, AssertionError),
    )
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("ignore")  # the reader warns of styles and extensions that matter to nobody here
            book = load_workbook(io.BytesIO(content), read_only=True, data_only=False, keep_links=False)
            try:
                return list(_bounded(path, _sheet_rows(_chosen(path, book, sheet))))
            finally:
                book.close()
    except InputError:
        raise
    except broken as error:
        raise _error(path, f"cannot be read as a workbook: {str(error)[:200] or type(error).__name__}") from None


def _check_archive(path: Path, content: bytes) -> None:
    """Refuse an archive that would unpack to more than any list of targets needs."""
    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            entries = archive.infolist()
    except (zipfile.BadZipFile, ValueError, OSError, NotImplementedError) as error:
        hint = "an .xls file is of an older kind: save it as .xlsx"
        raise _error(path, f"cannot be read as a workbook: {str(error)[:200]}", hint) from None
    if len(entries) > 2000 or sum(entry.file_size for entry in entries) > LARGEST_UNPACKED:
        raise _error(path, f"expected a workbook of at most {LARGEST_UNPACKED} bytes when unpacked")


def _chosen(path: Path, book: Any, sheet: str | None) -> Any:
    named = {each.title: each for each in book.worksheets}
    if sheet is None:
        shown = [each for each in book.worksheets if each.sheet_state == "visible"] or book.worksheets
        if not shown:
            raise _error(path, "there are no sheets in it")
        return shown[0]
    if sheet not in named:
        raise _error(path, f'there is no sheet "{sheet[:60]}" in it', nearest(sheet, list(named)))
    return named[sheet]


def _sheet_rows(sheet: Any) -> Iterator[Row]:
    sheet.reset_dimensions()  # what the file claims about its size is not believed
    for number, cells in enumerate(sheet.iter_rows(), 1):
        yield Row(number, tuple(_workbook_cell(cell) for cell in cells))


def _workbook_cell(cell: Any) -> Cell:
    if cell.data_type == "f":
        return _not_a_formula(str(getattr(cell.value, "text", cell.value) or "="))
    if cell.data_type == "e":
        return Unusable(f"is an error of the spreadsheet, {cell.value}")
    found = cell.value
    if isinstance(found, datetime) and found.time() == time(0):
        found = found.date()
    return _tidy(found)
