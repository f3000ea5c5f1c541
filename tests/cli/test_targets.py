"""``targets``: a spreadsheet printed as TOML, or put into a week file whose comments stay."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from planner.files import parse_week
from tests.builders import rig_text, week_text
from tests.cli.run import put, run

SHEET = """name,kind,sample,field (T),ν,temperature [mK],duration / h,priority,after,width (mT),rate
One,hold,S1,5,,≤ 50,1.5,4,,,
Two,hold,S1,,1/1,30,90 min,,One,,
# not this one
Three,field sweep,S1,,2,base,,2,One; Two,300,0.1 T/min
"""
HEAD = """# our week
format = 1
kind = "week"  # as it must be
title = "A week"
rig = "round.rig.toml"
zone = "Europe/Vienna"
start = 2031-03-03T08:00:00
end = 2031-03-08T08:00:00
present = { level = "90 %" }
users = [{ name = "U1", letter = "A" }]
samples = [{ name = "S1", user = "U1", density = "2e11 cm^-2" }]
"""
FIRST = '\n[[targets]]\nname = "First" # ours\nkind = "hold"\nsample = "S1"\nfield = "1 T"\nduration = "1 h"\n'


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    put(tmp_path, **{"rig": rig_text(), "week": HEAD + FIRST, "list.csv": SHEET})
    return tmp_path


def test_targets_are_printed_as_they_stand_in_a_week(folder: Path) -> None:
    ran = run(folder, "targets", "list.csv")
    assert ran.status == 0, ran.err
    assert ran.err == ""
    assert ran.after == ran.before
    week = parse_week(HEAD + "\n" + ran.out)
    assert [target.name for target in week.targets] == ["One", "Two", "Three"]
    one, two, three = tomllib.loads(ran.out)["targets"]
    assert one["field"] == "5 T"
    assert one["temperature"] == "≤ 50 mK"
    assert one["duration"] == "1.5 h"
    assert two == {"name": "Two", "kind": "hold", "sample": "S1", "filling": "1/1", "temperature": "30 mK",
                   "duration": "90 min", "after": ["One"]}  # fmt: skip
    assert (three["width"], three["rate"], three["after"]) == ("300 mT", "0.1 T/min", ["One", "Two"])


def test_into_a_week_keeps_every_character_that_was_there(folder: Path) -> None:
    ran = run(folder, "targets", "list.csv", "--into", "week.toml")
    assert ran.status == 0, ran.err
    assert ran.out == ""
    assert ran.lines == ["put 3 targets into week.toml"]
    text = ran.after["week.toml"].decode()
    assert text.startswith(HEAD + FIRST)
    assert [target.name for target in parse_week(text).targets] == ["First", "One", "Two", "Three"]


def test_a_bad_row_keeps_all_of_them_out_unless_the_good_are_wanted(folder: Path) -> None:
    put(folder, **{"list.csv": SHEET + "Bad,hold,S1,5 K,,,1,,,,\nWorse,hold,S1,5,,,1,,Bad,,\n"})
    refused = run(folder, "targets", "list.csv", "--into", "week.toml")
    assert refused.status == 2
    assert "row 6, field" in refused.err
    assert refused.after == refused.before
    kept = run(folder, "targets", "list.csv", "--into", "week.toml", "--keep-good")
    assert kept.status == 0, kept.err
    said = [line for line in kept.lines if line.startswith("left out: ")]
    assert [line.split(",")[0] for line in said] == ["left out: list.csv: row 6", "left out: list.csv: row 7"]
    week = parse_week(kept.after["week.toml"].decode())
    assert [target.name for target in week.targets] == ["First", "One", "Two", "Three"]


def test_no_good_row_at_all(folder: Path) -> None:
    put(folder, **{"list.csv": "name,kind,field (T),duration (h)\nA,holt,1,1\n"})
    ran = run(folder, "targets", "list.csv", "--into", "week.toml", "--keep-good")
    assert ran.status == 2
    assert "row 2, kind" in ran.err
    assert ran.after == ran.before


@pytest.mark.parametrize(
    "before", [HEAD, HEAD + "targets = []\n", week_text() + FIRST.replace("\n[[targets]]", "x", 0)]
)
def test_weeks_of_other_layouts(folder: Path, before: str) -> None:
    before = before if before.startswith("# our") else week_text()
    put(folder, week=before)
    ran = run(folder, "targets", "list.csv", "--into", "week.toml")
    assert ran.status == 0, ran.err
    assert len(parse_week(ran.after["week.toml"].decode()).targets) == 3


def test_line_ends_and_a_byte_order_mark_stay(folder: Path) -> None:
    put(folder, week=b"\xef\xbb\xbf" + (HEAD + FIRST).replace("\n", "\r\n").encode())
    ran = run(folder, "targets", "list.csv", "--into", "week.toml")
    assert ran.status == 0, ran.err
    raw = ran.after["week.toml"]
    assert raw.startswith(b"\xef\xbb\xbf")
    assert raw.count(b"\n") == raw.count(b"\r\n")


def test_the_kind_for_rows_that_do_not_say(folder: Path) -> None:
    put(folder, **{"list.csv": "name,field (T),duration (h)\nA,1,1\n"})
    ran = run(folder, "targets", "list.csv", "--kind", "hold", "--into", "week.toml")
    assert ran.status == 0, ran.err
    assert parse_week(ran.after["week.toml"].decode()).targets[-1].kind == "hold"
