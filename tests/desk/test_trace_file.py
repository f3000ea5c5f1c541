"""Traces from CSV: what is read, and what a bad file is told."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from planner.desk.trace_file import parse_trace, read_trace
from planner.errors import InputError

ROWS = "".join(f"{0.05 * i:.2f},{3000 * 0.05 * i:.1f},{40 + i}\n" for i in range(25))


@pytest.mark.parametrize(
    ("header", "factor"),
    [
        ("field (T),Rxy (ohm),Rxx (ohm)", 1.0),
        ("B [T],R_xy [ohm],R_xx [ohm]", 1.0),
        ("Field (mT),Hall (kohm),longitudinal (Ω)", 1e-3),
        ("# a comment\n\nmagnetic field (T), Rxy (ohm), Rxx (ohm)", 1.0),
        ("\ufefffield (T),Rxy (ohm),Rxx (ohm)", 1.0),
    ],
)
def test_headers_carry_the_units(header: str, factor: float) -> None:
    trace = parse_trace(f"{header}\n{ROWS}")
    field_factor = 1e-3 if "(mT)" in header else 1.0
    assert trace.field_T[-1] == pytest.approx(1.2 * field_factor)
    assert trace.hall_ohm is not None
    assert trace.hall_ohm[1] == pytest.approx(150 * (1e3 if "kohm" in header else 1))
    assert trace.longitudinal_ohm is not None
    assert trace.longitudinal_ohm[0] == 40
    assert factor > 0


@pytest.mark.parametrize("mark", [";", "\t"])
def test_other_marks_between_cells_and_other_columns_are_fine(mark: str) -> None:
    text = "time (s),Rxx (ohm),field (T)\n" + "".join(f"{i},{5 + i},{0.1 * i}\n" for i in range(30))
    trace = parse_trace(text.replace(",", mark))
    assert trace.hall_ohm is None
    assert trace.longitudinal_ohm is not None
    assert np.array_equal(trace.longitudinal_ohm, 5.0 + np.arange(30))


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("", "the file is empty"),
        ("# only a comment\n", "the file is empty"),
        ("field (T),Rxy (ohm)\n" + ROWS.replace(",", ";"), "expected at least 2"),
        (f"field,Rxy (ohm)\n{ROWS}", 'expected its unit, such as "field (T)"'),
        (f"field (A),Rxy (ohm)\n{ROWS}", "is not a unit of this kind"),
        (f"field (kG),Rxy (ohm)\n{ROWS}", "give the field in tesla"),
        (f"field (T),Rxy ()\n{ROWS}", "the unit is missing"),
        (f"field (T),voltage (V)\n{ROWS}", "expected a header such as"),
        (f"field (T),B (T),Rxy (ohm)\n{ROWS}", "a second column of field"),
        (f"field (T),Rxy (ohm)\n{ROWS}1.3,nan\n", 'line 27, Rxy is "nan": expected a finite number'),
        (f"field (T),Rxy (ohm)\n{ROWS}1.3,inf\n", "expected a finite number"),
        (f"field (T),Rxy (ohm)\n{ROWS}1.3,\n", 'line 27, Rxy is "": expected a finite number'),
        (f"field (T),Rxy (ohm)\n{ROWS}1.3\n", "line 27 is 1 cells: expected at least 2"),
        ("field (T);Rxy (ohm)\n" + "0,1;5\n" * 30, "write a decimal point, not a comma"),
        ("field (T),Rxy (ohm)\n" + "0.1,5\n" * 30, "is the same in every row"),
        ("field (T),Rxy (ohm)\n0.1,5\n0.2,6\n", "2 rows: expected at least 20"),
        ("0.1,5\n0.2,6\n", "expected a header such as"),
    ],
)
def test_bad_files_are_told_clearly(text: str, says: str) -> None:
    with pytest.raises(InputError) as caught:
        parse_trace(text)
    assert says in str(caught.value)


def test_every_bad_line_is_named_up_to_twenty() -> None:
    with pytest.raises(InputError) as caught:
        parse_trace("field (T),Rxy (ohm)\n" + "0.1,x\n" * 50)
    assert len(caught.value.problems) == 20


@pytest.mark.parametrize(
    ("content", "says"),
    [(b"field (T)\xff\xfe", "UTF-8"), (b"field (T),Rxy (ohm)\n\0\0", "text file"), (None, "no such file")],
)
def test_files_that_cannot_be_read(content: bytes | None, says: str, tmp_path: Path) -> None:
    path = tmp_path / "trace.csv"
    if content is not None:
        path.write_bytes(content)
    with pytest.raises(InputError, match=says):
        read_trace(path)
    with pytest.raises(InputError, match="expected a file"):
        read_trace(tmp_path)
