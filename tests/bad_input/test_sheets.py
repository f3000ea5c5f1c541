"""Broken spreadsheets: every bad row with its number, status 2, and the week file as it was."""

from __future__ import annotations

import datetime
import io
import zipfile
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from tests.builders import rig_text, week_text
from tests.cli.run import put, run

HEAD = "name,kind,field (T),duration (h)"
GOOD = f"{HEAD}\nA,hold,1,1\n"


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    put(
        tmp_path,
        week=week_text(None, [{"name": "T1", "kind": "hold", "field": "1 T", "duration": "1 h"}]),
        rig=rig_text(),
    )
    return tmp_path


CSVS: list[tuple[str, str | bytes, tuple[str, ...]]] = [
    ("empty", "", ("there are no rows in it",)),
    ("headings only", HEAD + "\n", ("there are no rows under the headings",)),
    ("NUL", GOOD + "\0", ("expected text, not binary data",)),
    ("not UTF-8", GOOD.encode() + b"\xe4,hold,1,1\n", ('calls it "CSV UTF-8"',)),
    ("a quote left open", GOOD + '"B,hold,1,1\n', ("not valid CSV",)),
    ("no such column", "name,kind,feild (T)\nA,hold,1\n", ("row 1, column C", 'did you mean "field"?')),
    ("a column twice", "name,kind,field (T),B (T)\nA,hold,1,1\n", ("means the same as column C",)),
    ("no heading", "name,kind,,field (T)\nA,hold,1,1\n", ("row 1, column C: has no heading",)),
    ("wrong unit in the heading", "name,kind,field (K)\nA,hold,1\n", ('expected a unit such as "T", not "K"',)),
    ("unit where none belongs", "name,kind,filling (T)\nA,hold,1\n", ("no quantity with a unit",)),
    ("not for a sheet", "name,kind,windows\nA,hold,1\n", ("write it into the week file",)),
    ("no unit", "name,kind,field,duration (h)\nA,hold,1,1\n", ("row 2, field", "the unit is missing")),
    ("wrong unit in a cell", f"{HEAD}\nA,hold,1 K,1\n", ("row 2, field", '"K" is not a unit of this kind')),
    ("two bad rows", f"{HEAD}\nA,hold,1,1\nB,holt,1,1\nC,hold,1,-1\n", ("row 3, kind", "row 4, duration")),
    ("formula", f"{HEAD}\nA,hold,=1+1,1\n", ("row 2, field (T): is a formula", "not evaluated")),
    ("infinity", f"{HEAD}\nA,hold,inf,1\n", ("row 2, field",)),
    ("NaN is not given", f"{HEAD}\nA,hold,NaN,1\n", ("row 2: expected either `field` or `filling`",)),
    ("decimal comma", "name;kind;field (T);duration (h)\nA;hold;1,5;1\n", ("row 2, field", "a decimal point")),
    (
        "list or decimal comma",
        'name,kind,field (T),temperatures (mK),duration (h)\nA,temperature series,1,"1,5",1\n',
        ("row 2, temperatures (mK)", "is it a list or a decimal comma?"),
    ),
    ("name twice", f"{HEAD}\nA,hold,1,1\nA,hold,2,1\n", ("row 3, name", "taken already")),
    ("name of the week's own", f"{HEAD}\nT1,hold,1,1\n", ("row 2, name", "taken already")),
    ("no such sample", "name,kind,sample,field (T),duration (h)\nA,hold,S2,1,1\n", ("row 2, sample",)),
    ("no such gate", "name,kind,field (T),duration (h),gate tip (V)\nA,hold,1,1,0.5\n", ("row 2, gates.tip",)),
    ("no such target", "name,kind,field (T),duration (h),after\nA,hold,1,1,Z\n", ("row 2, after",)),
    ("circle", f"{HEAD},after\nA,hold,1,1,B\nB,hold,1,1,A\n", ("go round in a circle",)),
    ("yes or no", f"{HEAD},must\nA,hold,1,1,perhaps\n", ("row 2, must", "expected yes or no")),
    ("whole number", f"{HEAD},priority\nA,hold,1,1,2.5\n", ("row 2, priority", "expected a whole number")),
    ("no pace", "name,kind,field (T),gate,sweep (V),points\nA,gate sweep,1,top,0 to 1,5\n", ("row 2, dwell",)),
    ("long cell", f"{HEAD},what\nA,hold,1,1,{'x' * 3000}\n", ("3000 characters",)),
    ("too many takes", f"{HEAD},repeats\n" + "".join(f"A{n},hold,1,1,100\n" for n in range(30)), ("3001 takes",)),
]  # fmt: skip


@pytest.mark.parametrize(("content", "says"), [row[1:] for row in CSVS], ids=[row[0] for row in CSVS])
def test_broken_csv(folder: Path, content: str | bytes, says: tuple[str, ...]) -> None:
    put(folder, **{"list.csv": content})
    ran = run(folder, "targets", "list.csv", "--into", "week.toml")
    assert ran.status == 2, ran.err
    assert ran.out == ""
    for fragment in says:
        assert fragment in ran.err
    assert ran.after == ran.before


def workbook(*rows: tuple[Any, ...]) -> bytes:
    book = openpyxl.Workbook()
    for row in rows:
        book.active.append(row)
    out = io.BytesIO()
    book.save(out)
    return out.getvalue()


def replaced(content: bytes, name: str, old: bytes, new: bytes) -> bytes:
    """A workbook with bytes inside one of its parts replaced."""
    out = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(content)) as old_book, zipfile.ZipFile(out, "w") as new_book:
        for part in old_book.namelist():
            data = old_book.read(part)
            new_book.writestr(part, data.replace(old, new) if part == name else data)
    return out.getvalue()


HEADING = ("name", "kind", "field (T)", "filling", "duration (h)")
PLAIN = workbook(HEADING, ("A", "hold", 1, None, 1))
SHEET = "xl/worksheets/sheet1.xml"
ENTITY = b'<!DOCTYPE worksheet [<!ENTITY a SYSTEM "file:///etc/hostname">]><worksheet'
BOOKS: list[tuple[str, bytes, tuple[str, ...]]] = [
    ("empty", b"", ("cannot be read as a workbook",)),
    ("a text", GOOD.encode(), ("cannot be read as a workbook",)),
    ("cut short", PLAIN[: len(PLAIN) // 2], ("cannot be read as a workbook",)),
    ("no sheet", replaced(PLAIN, "xl/workbook.xml", b"<sheets>", b"<shoots>"), ("cannot be read as a workbook",)),
    ("broken XML", replaced(PLAIN, SHEET, b"</row>", b""), ("cannot be read as a workbook",)),
    ("other parts", replaced(PLAIN, "[Content_Types].xml", b"Override", b"Overrode"), ("as a workbook",)),
    ("empty sheet", workbook(), ("there are no rows in it",)),
    ("formula", workbook(HEADING, ("A", "hold", "=1+1", None, 1)), ('row 2, field (T): is a formula, "=1+1"',)),
    ("error value", workbook(HEADING, ("A", "hold", "#DIV/0!", None, 1)), ("row 2, field (T)", "#DIV/0!")),
    (
        "a filling turned into a date",
        workbook(HEADING, ("A", "hold", None, datetime.datetime(2031, 3, 1), 1)),  # noqa: DTZ001 - as a sheet keeps it
        ("row 2, filling is 2031-03-01", "format the column as text"),
    ),
    ("no unit", workbook(("name", "kind", "field", "duration"), ("A", "hold", 1, 2)), ("the unit is missing",)),
    ("a number as heading", workbook((1, 2), ("A", "hold")), ("expected a heading in words",)),
    ("a row far below", replaced(PLAIN, SHEET, b'<row r="2"', b'<row r="1048576"'), ("at most 10000 rows",)),
    ("entities", replaced(replaced(PLAIN, SHEET, b"<worksheet", ENTITY), SHEET, b">A<", b">&a;<"), ("as a workbook",)),
]  # fmt: skip


@pytest.mark.parametrize(("content", "says"), [row[1:] for row in BOOKS], ids=[row[0] for row in BOOKS])
def test_broken_workbooks(folder: Path, content: bytes, says: tuple[str, ...]) -> None:
    put(folder, **{"list.xlsx": content})
    ran = run(folder, "targets", "list.xlsx", "--into", "week.toml")
    assert ran.status == 2, ran.err
    assert ran.out == ""
    for fragment in says:
        assert fragment in ran.err
    assert ran.after == ran.before


def test_a_sheet_that_is_not_there(folder: Path) -> None:
    put(folder, **{"list.xlsx": PLAIN})
    ran = run(folder, "targets", "list.xlsx", "--sheet", "Shet", "--into", "week.toml")
    assert ran.status == 2
    assert 'there is no sheet "Shet" in it (did you mean "Sheet"?)' in ran.err
    assert ran.after == ran.before


@pytest.mark.parametrize("name", ["list.xls", "list.ods", "list"])
def test_other_kinds_of_spreadsheet(folder: Path, name: str) -> None:
    put(folder, **{name: b"\xd0\xcf\x11\xe0"})
    ran = run(folder, "targets", name)
    assert ran.status == 2
    assert "save it as .xlsx or as .csv in UTF-8" in ran.err
