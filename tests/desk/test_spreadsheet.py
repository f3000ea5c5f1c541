"""Spreadsheets as rows and as targets: plain names, units in the heading or the cell, nothing evaluated."""

from __future__ import annotations

import io
import warnings
from pathlib import Path
from typing import Any

import openpyxl
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from planner.desk.spreadsheet import Row, Sheet, Unusable, read_sheet
from planner.desk.spreadsheet_targets import columns_of, letters, row_target
from planner.desk.spreadsheet_week import append_targets, read_targets
from planner.errors import InputError
from planner.files import parse_week
from tests.builders import rig_text, week_text
from tests.cli.run import put


def sheet_of(folder: Path, content: str, name: str = "list.csv") -> Sheet:
    put(folder, **{name: content})
    return read_sheet(folder / name)


def targets_of(folder: Path, content: str) -> list[dict[str, Any]]:
    """Rows as targets; the sheet's own problems fail the test."""
    sheet = sheet_of(folder, content)
    columns = columns_of(sheet)
    found = []
    for row in sheet.rows:
        table, problems = row_target(columns, row, sheet.name)
        assert problems == []
        found.append(table)
    return found


def test_rows_keep_the_numbers_that_a_spreadsheet_shows(tmp_path: Path) -> None:
    sheet = sheet_of(tmp_path, '\n# a remark\nname,what\n\nA,"two\nlines"\n,\nB,x\n')
    assert sheet.heading == Row(3, ("name", "what"))
    assert sheet.rows == (Row(5, ("A", "two\nlines")), Row(7, ("B", "x")))


@pytest.mark.parametrize("mark", [",", ";", "\t"])
def test_what_separates_the_cells_is_found(tmp_path: Path, mark: str) -> None:
    sheet = sheet_of(tmp_path, f"name{mark}kind{mark}field (T)\nA{mark}hold{mark}1\n")
    assert sheet.rows[0].cells == ("A", "hold", "1")


def test_a_byte_order_mark_is_no_part_of_the_first_heading(tmp_path: Path) -> None:
    assert sheet_of(tmp_path, "\ufeffname,kind\nA,hold\n").heading.cells[0] == "name"


def test_empty_and_nan_are_not_given(tmp_path: Path) -> None:
    sheet = sheet_of(tmp_path, "name,a,b,c,d\nA,, ,NaN,nan\n")
    assert sheet.rows[0].cells == ("A", None, None, None, None)


def test_a_formula_is_never_evaluated(tmp_path: Path) -> None:
    cell = sheet_of(tmp_path, "name,a\nA,=HYPERLINK(1)\n").rows[0].cells[1]
    assert cell == Unusable('is a formula, "=HYPERLINK(1)": put its value there, formulas are not evaluated')


def test_a_workbook(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    first, second = book.active, book.create_sheet("Second")
    first.append(["name", "x"])
    first.append(["A", 1.5, None, True, "=B2*2"])
    first.append([None, float("nan")])
    first.append(["B", 2])
    second.append(["other"])
    second.append(["C"])
    book.save(tmp_path / "list.xlsx")
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        sheet = read_sheet(tmp_path / "list.xlsx")
    assert [row.number for row in sheet.rows] == [2, 4]
    assert sheet.rows[0].cells[:4] == ("A", 1.5, None, True)
    assert isinstance(sheet.rows[0].cells[4], Unusable)
    assert read_sheet(tmp_path / "list.xlsx", "Second").rows == (Row(2, ("C",)),)
    first.sheet_state = "hidden"
    book.active = 1
    book.save(tmp_path / "list.xlsx")
    assert read_sheet(tmp_path / "list.xlsx").rows == (Row(2, ("C",)),)


def test_letters_over_the_columns() -> None:
    assert [letters(at) for at in (0, 25, 26, 51, 52, 701, 702)] == ["A", "Z", "AA", "AZ", "BA", "ZZ", "AAA"]


@pytest.mark.parametrize(
    ("heading", "parts", "unit"),
    [
        ("name", ("name",), ""),
        ("Target", ("name",), ""),
        ("field (T)", ("field",), "T"),
        ("field(mT)", ("field",), "mT"),
        ("Field [T]", ("field",), "T"),
        ("field / T", ("field",), "T"),
        ("field in T", ("field",), "T"),
        ("B/T", ("field",), "T"),
        ("rate (T/min)", ("rate",), "T/min"),
        ("rate / (mT/min)", ("rate",), "mT/min"),
        ("Sweep rate [T/min]", ("rate",), "T/min"),
        ("filling", ("filling",), ""),
        ("ν", ("filling",), ""),
        ("temperature [mK]", ("temperature",), "mK"),
        ("Temperatures / mK", ("temperatures",), "mK"),
        ("second_gate", ("second_gate",), ""),
        ("Second Sweep (V)", ("second_sweep",), "V"),
        ("time constant (ms)", ("lockin", "time_constant"), "ms"),
        ("lockin.poles", ("lockin", "poles"), ""),
        ("gate", ("gate",), ""),
        ("gates", ("gates",), ""),
        ("gate top (V)", ("gates", "top"), "V"),
        ("gates.back [mV]", ("gates", "back"), "mV"),
        ("gate: Top Left (V)", ("gates", "Top Left"), "V"),
    ],
)
def test_headings(heading: str, parts: tuple[str, ...], unit: str) -> None:
    (column,) = columns_of(Sheet("s", Row(1, (heading,)), ()))
    assert (column.parts, column.unit) == (parts, unit)


def test_units_come_from_the_heading_or_the_cell(tmp_path: Path) -> None:
    head = "field (T),duration (h),temperature [mK],temperatures (mK),sweep (mV),gate top (V),gates (V)\n"
    (row,) = targets_of(tmp_path, head + '5,90 min,≤ 50,"10; 20 mK; 0.1 K",0 to 500,-0.2,back = 1; tip 2 mV\n')
    assert row == {
        "field": "5 T",
        "duration": "90 min",
        "temperature": "≤ 50 mK",
        "temperatures": ["10 mK", "20 mK", "0.1 K"],
        "sweep": "0 mV to 500 mV",
        "gates": {"top": "-0.2 V", "back": "1 V", "tip": "2 mV"},
    }


def test_words_numbers_and_lists(tmp_path: Path) -> None:
    head = "filling,fillings,points,must,attended,after,file,temperature\n"
    rows = targets_of(
        tmp_path,
        head + '1/3,"-2; -1; 2/3",201,yes,x,"A; B, slowly",f1,base\n2,,,no,,,7,\n2.5,"1/3, 2/5",,0,1,,,\n',
    )
    assert rows[0] == {
        "filling": "1/3",
        "fillings": [-2, -1, "2/3"],
        "points": 201,
        "must": True,
        "attended": True,
        "after": ["A", "B, slowly"],
        "file": "f1",
        "temperature": "base",
    }
    assert rows[1] == {"filling": 2, "must": False, "file": "7"}
    assert rows[2] == {"filling": "2.5", "fillings": ["1/3", "2/5"], "must": False, "attended": True}


def test_numbers_of_a_workbook_lose_their_binary_noise(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    book.active.append(["field (T)", "priority", "filling", "name"])
    book.active.append([0.1 + 0.2, 3.0, 2.0, 17])
    book.save(tmp_path / "list.xlsx")
    sheet = read_sheet(tmp_path / "list.xlsx")
    table, problems = row_target(columns_of(sheet), sheet.rows[0], "s")
    assert problems == []
    assert table == {"field": "0.3 T", "priority": 3, "filling": 2, "name": "17"}


def test_a_decimal_comma_is_never_taken_for_a_list(tmp_path: Path) -> None:
    sheet = sheet_of(tmp_path, 'temperatures (K)\n"1,5"\n"1,5; 2,5"\n"1, 5"\n')
    told = [row_target(columns_of(sheet), row, "s") for row in sheet.rows]
    assert "decimal comma" in str(told[0][1][0])
    assert told[1][0]["temperatures"] == ["1,5", "2,5"]  # each is then refused by its own comma
    assert told[2][0]["temperatures"] == ["1 K", "5 K"]


def week_folder(folder: Path) -> Path:
    put(
        folder,
        rig=rig_text(),
        week=week_text(None, [{"name": "T1", "kind": "hold", "field": "1 T", "duration": "1 h"}]),
    )
    return folder / "week.toml"


def test_the_only_sample_is_meant_where_none_is_named(tmp_path: Path) -> None:
    week = week_folder(tmp_path)
    put(tmp_path, **{"list.csv": "name,kind,field (T),duration (h),after\nA,hold,1,1,T1\n"})
    found = read_targets(tmp_path / "list.csv", into=week)
    assert found.tables[0]["sample"] == "S1"
    assert found.numbers == (2,)


def test_nothing_is_written_where_the_week_changed_meanwhile(tmp_path: Path) -> None:
    week = week_folder(tmp_path)
    put(tmp_path, **{"list.csv": "name,kind,field (T),duration (h)\nT2,hold,1,1\n"})
    found = read_targets(tmp_path / "list.csv", into=week)
    put(tmp_path, week=week_text(None, [{"name": "T2", "kind": "hold", "field": "1 T", "duration": "1 h"}]))
    before = week.read_bytes()
    with pytest.raises(InputError, match="this name is taken already"):
        append_targets(week, found)
    assert week.read_bytes() == before


def test_good_rows_that_need_a_bad_one_go_with_it(tmp_path: Path) -> None:
    week = week_folder(tmp_path)
    # the temperature of B may be left out, but not be without its unit
    rows = "A,hold,1,1,,\nB,hold,1,1,,20\nC,hold,1,1,B,\nD,hold,1,1,C,\nE,hold,1,1,A,\n"
    put(tmp_path, **{"list.csv": f"name,kind,field (T),duration (h),after,temperature\n{rows}"})
    found = read_targets(tmp_path / "list.csv", into=week, keep_good=True)
    assert [table["name"] for table in found.tables] == ["A", "E"]
    assert [problem.where.split(",")[0] for problem in found.problems] == ["row 3", "row 4", "row 5"]
    append_targets(week, found)
    assert len(parse_week(week.read_text(encoding="utf-8")).targets) == 3


WORDS = [
    "hold",
    "map",
    "5",
    "5 T",
    "0 to 1",
    "1/3",
    "≤ 50",
    "=A1",
    "nan",
    "S1",
    "top",
    "yes",
    "T1",
    "1,5",
    "2; 3",
    "base",
]
NUMBERS = st.booleans() | st.integers(-5, 10**6) | st.floats(allow_nan=True)
CELLS = st.none() | NUMBERS | st.text(max_size=12) | st.sampled_from(WORDS)
HEADINGS = st.sampled_from(
    [
        *("name", "kind", "sample", "field (T)", "filling", "duration (h)", "temperature (mK)", "gate", "sweep (V)"),
        *("points", "after", "must", "priority", "gate top (V)", "temperatures (mK)", "time constant (ms)", "#note"),
        *("rate (T/min)", "odd"),
    ]
)


@settings(max_examples=60, deadline=None, suppress_health_check=list(HealthCheck))
@given(
    st.lists(HEADINGS, min_size=1, max_size=8, unique=True),
    st.lists(st.lists(CELLS, max_size=8), max_size=5),
    st.booleans(),
)
def test_any_sheet_gives_targets_or_an_input_error(
    tmp_path_factory: pytest.TempPathFactory, headings: list[str], rows: list[list[Any]], good: bool
) -> None:
    folder = tmp_path_factory.mktemp("any")
    week = week_folder(folder)
    book = openpyxl.Workbook()
    book.active.append(headings)
    for row in rows:
        try:
            book.active.append(row)
        except (ValueError, openpyxl.utils.exceptions.IllegalCharacterError):
            return  # a workbook cannot hold such a cell
    out = io.BytesIO()
    book.save(out)
    put(folder, **{"list.xlsx": out.getvalue()})
    try:
        found = read_targets(folder / "list.xlsx", into=week, keep_good=good)
    except InputError as error:
        assert error.problems  # noqa: PT017 - either outcome is right, nothing else is
    else:
        append_targets(week, found)
        assert len(parse_week(week.read_text(encoding="utf-8")).targets) == 1 + len(found.tables)
