"""Files made to be too much: refused with few words, in seconds of processor time and well under a gigabyte.

All run in one process of their own, which reports the processor time of each and its largest resident size so far.
"""

from __future__ import annotations

import io
import json
import subprocess
import sys
import zipfile
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from tests.bad_input.test_sheets import PLAIN, SHEET
from tests.builders import rig_text, week_text
from tests.cli.run import put

MOST_S, MOST_BYTES = 5.0, 1_000_000_000
CHECK = ("check", "week.toml")
PLAN = ("check", "plan.json")
INTO = ("targets", "list.csv", "--into", "week.toml")
SLOT = {"from": "Tue 08:00", "to": "Tue 09:00"}
ROW = '[[targets]]\nname = "{n}"\nkind = "hold"\nsample = "S1"\nfield = "1 T"\nduration = "1 h"\n{more}'


def base() -> str:
    return week_text({"samples.0.gates": []}).replace('"targets" = []\n', "")


def targets(count: int, more: str = "") -> str:
    return base() + "".join(ROW.format(n=f"target {n}", more=more.format(n=n)) for n in range(count))


def bomb() -> bytes:
    """A workbook of a few kilobytes that unpacks to 100 MB."""
    out = io.BytesIO(PLAIN)
    with zipfile.ZipFile(out, "a", zipfile.ZIP_DEFLATED) as book:
        book.writestr("xl/media/image1.png", b"\0" * 100_000_000)
    return out.getvalue()


def wide() -> bytes:
    """A workbook whose only row claims a cell in the last column, and whose sheet claims to be full."""
    out = io.BytesIO()
    cell = b'<c r="XFD1" t="inlineStr"><is><t>x</t></is></c></row>'
    with zipfile.ZipFile(io.BytesIO(PLAIN)) as old, zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as new:
        for part in old.namelist():
            data = old.read(part)
            if part == SHEET:
                data = data.replace(b"</row>", cell, 1).replace(b'ref="A1:E2"', b'ref="A1:XFD1048576"')
            new.writestr(part, data)
    return out.getvalue()


def csv_rows(count: int, tail: str = "") -> str:
    return "name,kind,sample,field (T),duration (h),after\n" + "".join(
        f"N{n},hold,S1,1,1,{tail.format(n=n)}\n" for n in range(count)
    )


HEAVY: list[tuple[str, Callable[[], dict[str, str | bytes]], tuple[str, ...], str]] = [
    ("empty steps", lambda: {"plan.json": b'{"steps": [' + b"{}," * 99_000 + b"{}]}"}, PLAN, "no plan made by this"),
    ("numbers for steps", lambda: {"plan.json": b'{"steps": [' + b"1," * 749_000 + b"1]}"}, PLAN, "no plan made by"),
    ("10 MB week", lambda: {"week": base() + "# x\n" * 2_500_000}, CHECK, "expected at most 1000000 bytes"),
    ("10 MB rig", lambda: {"rig": b"#" * 10_000_000}, CHECK, "expected at most 1000000 bytes"),
    ("10,000 targets", lambda: {"week": targets(10_000)}, CHECK, "expected at most"),
    ("5,000 targets", lambda: {"week": targets(5_000)}, CHECK, "a week holds 2000 at most"),
    ("no such names", lambda: {"week": targets(2_000, 'after = ["targt {n}"]\n')}, CHECK, "of this file"),
    ("unknown keys", lambda: {"week": base() + "\n".join(f"x{n} = 1" for n in range(80_000))}, CHECK, "rows"),
    ("wrong units", lambda: {"week": targets(2_000, 'decide = "{n} m"\n')}, CHECK, "minutes are written min"),
    ("tables in tables", lambda: {"week": base() + "".join(f"[a{n}.b.c.d]\n" for n in range(60_000))}, CHECK, "rows"),
    ("spaces", lambda: {"week": targets(180, 'excitation = "' + " " * 4900 + '\\u0007"\n')}, CHECK, "at most 200"),
    ("slots", lambda: {"week": week_text({"users.0.slots": [SLOT] * 4900})}, CHECK, "at most 100 of them"),
    ("10 MB CSV", lambda: {"list.csv": "x" * 10_000_000}, ("targets", "list.csv"), "expected at most 5000000 bytes"),
    (
        "rows without end",
        lambda: {"list.csv": csv_rows(100_000)},
        ("targets", "list.csv"),
        "expected at most 10000 rows",
    ),
    ("10,000 rows", lambda: {"list.csv": csv_rows(9_990)}, INTO, "a week holds 2000"),
    ("bad rows", lambda: {"list.csv": csv_rows(2_000, "Z{n}")}, INTO, "row 2001, after"),
    ("unpacks to 100 MB", lambda: {"list.xlsx": bomb()}, ("targets", "list.xlsx"), "when unpacked"),
    ("claims to be full", lambda: {"list.xlsx": wide()}, ("targets", "list.xlsx"), "at most 200 columns"),
    (
        "25 MB plan",
        lambda: {"plan.json": b"[" + b"1," * 12_500_000 + b"1]"},
        PLAN,
        "expected at most 20000000 bytes",
    ),
    (
        "19 MB of no plan",
        lambda: {"plan.json": b'{"steps": [' + b"{}," * 6_300_000 + b"{}]}"},
        PLAN,
        "no plan made by this",
    ),
]


@pytest.fixture(scope="module")
def report(tmp_path_factory: pytest.TempPathFactory) -> list[dict[str, Any]]:
    """What became of every case, all run in one process."""
    folder = tmp_path_factory.mktemp("heavy")
    cases = []
    for number, (_, files, line, _) in enumerate(HEAVY):
        place = folder / str(number)
        place.mkdir()
        put(place, **{"week": week_text(), "rig": rig_text(), **files()})
        cases.append((str(place), line))
    (folder / "cases.json").write_text(json.dumps(cases), encoding="utf-8")
    command = [sys.executable, "-m", "tests.bad_input.child", str(folder / "cases.json"), str(folder / "report.json")]
    ended = subprocess.run(command, cwd=Path(__file__).parents[2], capture_output=True, text=True, check=False)
    told: list[dict[str, Any]] = json.loads((folder / "report.json").read_text(encoding="utf-8"))
    assert len(told) == len(HEAVY), f"ended with {ended.returncode} at {HEAVY[len(told)][0]}: {ended.stderr[-2000:]}"
    return told


@pytest.mark.parametrize("number", range(len(HEAVY)), ids=[row[0] for row in HEAVY])
def test_too_much(report: list[dict[str, Any]], number: int) -> None:
    told, says = report[number], HEAVY[number][3]
    assert told["status"] == 2, told
    assert told["out"] == ""
    assert says in told["err"]
    assert "Traceback" not in told["err"]
    assert told["unchanged"]
    assert told["seconds"] < MOST_S
    assert told["bytes"] < MOST_BYTES
