"""Command lines that cannot work: a clear message, status 2, nothing on stdout, nothing written.

What the messages say is the project's own choice (no source); that such lines are typed is common practice, no source.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from planner import open_week, plan_request
from tests.builders import rig_text, week_text
from tests.cli.run import put, run

HOLD = {"name": "T1", "kind": "hold", "field": "1 T", "duration": "1 h"}


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    put(tmp_path, week=week_text(None, [HOLD]), rig=rig_text())
    (tmp_path / "sub").mkdir()
    (tmp_path / "good.csv").write_text("name,kind,field (T),duration (h)\nA,hold,1,1\n", encoding="utf-8")
    return tmp_path


LINES: list[tuple[tuple[str, ...], str]] = [
    (("paln", "week.toml"), "No such command 'paln'"),
    (("plan",), "Missing argument 'WEEK'"),
    (("plan", "week.toml", "round.rig.toml"), "unexpected extra argument"),
    (("plan", "week.toml", "--fast"), "No such option '--fast'"),
    (("plan", "week.toml", "--seconds", "soon"), "'soon' is not a valid float"),
    (("plan", "week.toml", "--seconds", "0"), "not in the range 0.1<=x<=86400"),
    (("plan", "week.toml", "--seconds", "nan"), "is not in the range"),
    (("plan", "week.toml", "--seconds", "inf"), "is not in the range"),
    (("plan", "week.toml", "--seed", "-1"), "is not in the range"),
    (("plan", "week.toml", "--seed", "1.5"), "is not a valid integer"),
    (("plan", "none.toml"), "there is no such file"),
    (("plan", "sub"), "expected a file"),
    (("plan", "round.rig.toml"), "expected a week file"),
    (("plan", "x" * 300 + ".toml"), "cannot be read"),
    (("plan", "week.toml", "-o", "good.csv"), "is a file"),
    (("plan", "week.toml", "-o", "good.csv/sheets"), "expected a folder that can be written into"),
    (("plan", "week.toml", "-o", "/proc/none/sheets"), "expected a folder that can be written into"),
    (("check",), "Missing argument 'WEEK|PLAN'"),
    (("check", "none.json"), "there is no such file"),
    (("check", "sub.json"), "there is no such file"),
    (("check", "good.csv"), "not valid TOML"),
    (("sheet",), "Missing argument 'PLAN'"),
    (("sheet", "week.toml"), "not valid JSON"),
    (("sheet", "none.json"), "there is no such file"),
    (("sheet", "sub"), "expected a file"),
    (("sheet", "/dev/zero"), "expected a file"),
    (("plan", "/dev/zero"), "expected a file"),
    (("targets", "good.csv", "--into", "/dev/zero"), "expected a file"),
    (("new", "rig", "a.toml", "--from", "/dev/zero"), "expected a file"),
    (("new", "rig", "/dev/null"), "is there already"),
    (("schema", "week"), "unexpected extra argument"),
    (("targets",), "Missing argument 'SHEET'"),
    (("targets", "none.csv"), "there is no such file"),
    (("targets", "sub"), "expected a spreadsheet, .xlsx or .csv"),
    (("targets", "week.toml"), "expected a spreadsheet, .xlsx or .csv"),
    (("targets", "good.csv", "--into", "none.toml"), "there is no such file"),
    (("targets", "good.csv", "--into", "round.rig.toml"), "expected a week file"),
    (("targets", "good.csv", "--kind", "holt"), "expected one of hold, field sweep"),
    (("targets", "good.csv"), "sample: is missing"),
    (("new",), "Usage: fridgeweek new"),
    (("new", "wekk"), "No such command 'wekk'"),
    (("new", "rig", "week.toml"), "is there already"),
    (("new", "rig", "sub"), "is a folder"),
    (("new", "rig", "none/our.rig.toml"), "its folder is not there"),
    (("new", "rig", "a.toml", "--from", "none.toml"), "there is no such file"),
    (("new", "rig", "a.toml", "--from", "week.toml"), "expected a rig file"),
    (("new", "week", "a.toml", "--from", "round.rig.toml"), "expected a week file"),
    (("new", "week", "sub/a.toml"), "there is no rig file that can be used here or below"),
    (("new", "rig", "x" * 300), "is no usable path"),
]


@pytest.mark.parametrize(("line", "says"), LINES, ids=[" ".join(line)[:60] for line, _ in LINES])
def test_command_lines(folder: Path, line: tuple[str, ...], says: str) -> None:
    ran = run(folder, *line)
    assert ran.status == 2, ran.err
    assert ran.out == ""
    assert says in ran.err
    assert "Traceback" not in ran.err
    assert ran.after == ran.before


@pytest.fixture(scope="module")
def plan_data(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Any]:
    folder = tmp_path_factory.mktemp("plan")
    put(folder, week=week_text(None, [HOLD]), rig=rig_text())
    made = plan_request(open_week(folder / "week.toml"), seconds=0.2, reproducible=True)
    data: dict[str, Any] = json.loads(made.to_json())
    return data


PLANS: list[tuple[str, Any, str]] = [
    ("format", 2, "this program reads plan format 1"),
    ("format", "one", "this program reads plan format 1"),
    ("zone", "Europe/Vien", "expected an IANA time zone"),
    ("start", "2031-03-03T08:00:00", "with its offset from UTC"),
    ("start", "0001-01-01T00:00:00Z", "in a year from 1970 to 2199"),
    ("start", "soon", "is damaged"),
    ("steps", {}, "is damaged"),
    ("steps.0.kind", "dance", "is damaged"),
    ("steps.0.start_s", 10**18, "a size up to 1e+10"),
    ("steps.0.start_s", 1.5, "is damaged"),
    ("steps.0.helium_before_L", "NaN", "a size up to 1e+10"),
    ("steps.0.before.stage.temperature_K", 0, "above 0 K"),
    ("steps.0.before.coil.field_T", [0, 0], "is damaged"),
    ("sources", [], "expected one week and one rig"),
    ("sources.0.role", "rig", "expected one week and one rig"),
    ("sources.0.text", "format = 1", "kind: is missing"),
    ("sources.1.text", "", "the file is empty"),
    ("score", None, "is damaged"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("place", "value", "says"), PLANS, ids=[f"{place}={value!r}"[:60] for place, value, _ in PLANS]
)
@pytest.mark.parametrize("command", [("check",), ("sheet", "-o", "out"), ("sheet", "--review")])
def test_damaged_plans(
    folder: Path, plan_data: dict[str, Any], place: str, value: Any, says: str, command: tuple[str, ...]
) -> None:
    data = json.loads(json.dumps(plan_data))
    *path, last = place.split(".")
    table: Any = data
    for part in path:
        table = table[int(part)] if isinstance(table, list) else table[part]
    table[last] = value
    put(folder, **{"plan.json": json.dumps(data)})
    ran = run(folder, command[0], "plan.json", *command[1:])
    assert ran.status == 2, ran.err
    assert ran.out == ""
    assert says in ran.err
    assert ran.after == ran.before


JSON_BYTES: list[tuple[str, bytes, str]] = [
    ("empty", b"", "not valid JSON"),
    ("NUL", b"\0", "not valid JSON"),
    ("not UTF-8", b'{"title": "\xff"}', "not valid JSON"),
    ("cut short", b'{"title": "a', "not valid JSON"),
    ("deep", b"[" * 100_000, "not valid JSON"),
    ("of another program", b'{"rows": [1, 2, 3]}', "is no plan made by this program"),
    ("a list", b"[]", "is no plan made by this program"),
    ("a number", b"7", "is no plan made by this program"),
    ("null", b"null", "is no plan made by this program"),
]


@pytest.mark.parametrize(("content", "says"), [row[1:] for row in JSON_BYTES], ids=[row[0] for row in JSON_BYTES])
@pytest.mark.parametrize("command", ["check", "sheet"])
def test_what_is_no_plan_at_all(folder: Path, command: str, content: bytes, says: str) -> None:
    put(folder, **{"plan.json": content})
    ran = run(folder, command, "plan.json")
    assert ran.status == 2, ran.err
    assert ran.out == ""
    assert says in ran.err
    assert len(ran.lines) == 1
    assert ran.after == ran.before


@pytest.mark.parametrize(
    ("formats", "says"),
    [
        ("pdf", 'format is "pdf": expected one of html, csv, json'),
        ("htm", 'did you mean "html"?'),
        (",", "at least one"),
    ],
)
def test_unknown_sheet_formats(folder: Path, plan_data: dict[str, Any], formats: str, says: str) -> None:
    put(folder, **{"plan.json": json.dumps(plan_data)})
    ran = run(folder, "sheet", "plan.json", "--as", formats)
    assert ran.status == 2
    assert says in ran.err
    assert ran.after == ran.before


def test_a_folder_that_is_a_file_is_found_before_the_search(folder: Path) -> None:
    ran = run(folder, "plan", "week.toml", "-o", "good.csv/out", "--seconds", "86400")
    assert ran.status == 2
    assert "points" not in ran.err
