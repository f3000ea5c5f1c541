"""Read a trace of R_xy and R_xx over field from a CSV file whose header carries the units."""

from __future__ import annotations

import csv
import io
import math
import re
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from planner.errors import InputError, Problem
from planner.units import parse_amount

LARGEST_TRACE = 50_000_000
"""Bytes of a trace."""
MOST_POINTS = 1_000_000
FEWEST_POINTS = 20
_MOST_PROBLEMS = 20
_HEADER = re.compile(r"\s*(.*?)\s*(?:\(([^()]*)\)|\[([^\[\]]*)\])\s*")
_COLUMNS = {
    "field": ("T", {"field", "b", "magneticfield"}),
    "Rxy": ("ohm", {"rxy", "hall", "hallresistance"}),
    "Rxx": ("ohm", {"rxx", "longitudinal", "longitudinalresistance"}),
}
_WANTED = 'expected a header such as "field (T),Rxy (ohm),Rxx (ohm)": field, and Rxy or Rxx, each with its unit'


@dataclass(frozen=True, slots=True)
class Trace:
    """Recorded field in T, R_xy and R_xx in Ω (None where not recorded), in the order taken."""

    field_T: NDArray[np.float64]
    hall_ohm: NDArray[np.float64] | None
    longitudinal_ohm: NDArray[np.float64] | None = None


def read_trace(path: Path | str) -> Trace:
    """Read a trace from a CSV file.

    Cells are parted by commas, semicolons or tabs; lines that begin with # are passed over. Columns are field, Rxy and
    Rxx in any order, with their units in the header; others are left alone.

    Raises
    ------
    InputError
        If the file cannot be read, a column or its unit is missing, or a cell is no number, with every such line.
    """
    path = Path(path)
    return parse_trace(_text_of(path), path.name)


def parse_trace(text: str, file: str = "trace") -> Trace:
    """Read a trace from CSV text; raises InputError as `read_trace` does."""
    lines = [
        (number, line)
        for number, line in enumerate(text.removeprefix("\ufeff").splitlines(), start=1)
        if line.strip() and not line.lstrip().startswith("#")
    ]
    if not lines:
        raise InputError([Problem(file, "", "", f"the file is empty: {_WANTED}")])
    header_number, header = lines[0]
    mark = max((",", ";", "\t"), key=header.count)
    factors = _factors(_cells(header, mark), file, header_number)
    if len(lines) - 1 > MOST_POINTS:
        raise InputError([Problem(file, "", f"{len(lines) - 1} rows", f"expected at most {MOST_POINTS}")])
    wide = max(place for place, _ in factors.values()) + 1
    rows: list[list[float]] = []
    problems: list[Problem] = []
    for number, line in lines[1:]:
        cells = _cells(line, mark)
        if len(cells) < wide:
            problems.append(Problem(file, f"line {number}", f"{len(cells)} cells", f"expected at least {wide}"))
        else:
            found = {name: _number(cells[place]) for name, (place, _) in factors.items()}
            problems += _bad_cells(found, cells, factors, file, number)
            rows.append([math.nan if value is None else value for value in found.values()])
        if len(problems) >= _MOST_PROBLEMS:
            break
    if problems:
        raise InputError(problems[:_MOST_PROBLEMS])
    if len(rows) < FEWEST_POINTS:
        raise InputError([Problem(file, "", f"{len(rows)} rows", f"expected at least {FEWEST_POINTS}")])
    scaled = np.array(rows, dtype=np.float64) * [factor for _, factor in factors.values()]
    by_name = dict(zip(factors, scaled.T, strict=True))
    if np.ptp(by_name["field"]) == 0.0:
        raise InputError([Problem(file, "field", "", "is the same in every row: expected a sweep")])
    return Trace(by_name["field"], by_name.get("Rxy"), by_name.get("Rxx"))


def _text_of(path: Path) -> str:
    name = path.name[:200] or "."
    try:
        if not path.is_file():
            wrong = "there is no such file" if not path.exists() else "expected a file"
        elif path.stat().st_size > LARGEST_TRACE:
            wrong = f"expected at most {LARGEST_TRACE} bytes"
        else:
            text = path.read_bytes().decode("utf-8")
            if "\0" not in text:
                return text
            wrong = "expected a text file of comma-separated values"
    except UnicodeDecodeError:
        wrong = "expected text in UTF-8"
    except (OSError, ValueError) as error:
        wrong = f"cannot be read: {str(error)[:200]}"
    raise InputError([Problem(name, "", "", wrong)])


def _cells(line: str, mark: str) -> list[str]:
    try:
        return next(csv.reader(io.StringIO(line), delimiter=mark, strict=False), [])
    except csv.Error:
        return []


def _factors(names: list[str], file: str, number: int) -> dict[str, tuple[int, float]]:
    """For each column known: its place, and what one of its unit is in tesla or ohm."""
    found: dict[str, tuple[int, float]] = {}
    problems: list[Problem] = []
    where = f"line {number}"
    for place, written in enumerate(names):
        match = _HEADER.fullmatch(written)
        bare = re.sub(r"[\s_\-]", "", match[1] if match else written).lower()
        name = next((key for key, (_, known) in _COLUMNS.items() if bare in known), None)
        if name is None:
            continue
        unit = _COLUMNS[name][0]
        if match is None:
            problems.append(
                Problem(file, where, f'"{written.strip()}"', f'expected its unit, such as "{name} ({unit})"')
            )
        elif name in found:
            problems.append(Problem(file, where, f'"{written.strip()}"', f"a second column of {name}"))
        else:
            try:
                found[name] = place, float(parse_amount(f"1 {(match[2] or match[3] or '').strip()}", unit))
            except ValueError as error:
                problems.append(Problem(file, where, f'"{written.strip()}"', str(error)))
    if not problems and ("field" not in found or len(found) < 2):
        shown = ", ".join(names)[:60]
        problems.append(Problem(file, where, f'"{shown}"', _WANTED))
    if problems:
        raise InputError(problems)
    return found


def _number(cell: str) -> float | None:
    try:
        value = float(cell.strip().replace("−", "-"))
    except ValueError:
        return None
    return value if math.isfinite(value) and abs(value) < 1e12 else None


def _bad_cells(
    found: dict[str, float | None], cells: list[str], factors: dict[str, tuple[int, float]], file: str, number: int
) -> Iterator[Problem]:
    for name, value in found.items():
        if value is None:
            written = cells[factors[name][0]].strip()[:40]
            comma = "write a decimal point, not a comma" if re.fullmatch(r"[+\-−]?\d+,\d+", written) else ""
            yield Problem(file, f"line {number}, {name}", f'"{written}"', "expected a finite number", comma)
