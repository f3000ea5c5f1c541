"""Edits of TOML text: what is meant is said, and every other character stays."""

from __future__ import annotations

import difflib
import tomllib
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.desk.toml_spans import Scan
from planner.desk.toml_text import CannotEditError, add_row, move_row, remove, set_value, written

EXAMPLES = sorted((Path(__file__).parents[2] / "example_plans").glob("*.toml"))
WEEK = (EXAMPLES[0].parent / "first_week.toml").read_text(encoding="utf-8")
RIG = (EXAMPLES[0].parent / "wet_dilution.rig.toml").read_text(encoding="utf-8")

ODD = '''\
# about the file
title = "a # no comment" # a comment
[present] # here
level = "88 %"   # as the gauge reads
gates = { "H1/top" = "-0.5 V", back = '1 V' }

# what is wanted
[wanted_end]
field = "0 T"
deep.down.below = [1, 2, # two
  3]

[[people]]
name = """Operator
"1\\""""

# about the second
# in two lines
[[people]]
name = \'\'\'x'\'\'\'
hours = [
  # mornings
  { days = "Mon", from = "08:00", to = "12:00" }, # early
  { days = "Tue" }
]
[people.more]
a = 1

[last]
x = [ ]
'''


def changed_lines(before: str, after: str) -> list[str]:
    """The lines taken out and put in."""
    lines = difflib.unified_diff(before.splitlines(), after.splitlines(), lineterm="", n=0)
    return [line for line in lines if line[0] in "+-" and not line.startswith(("+++", "---"))]


def test_a_value_changes_and_its_comment_stays() -> None:
    edited = set_value(ODD, ("present", "level"), "77 %")
    assert changed_lines(ODD, edited) == [
        '-level = "88 %"   # as the gauge reads',
        '+level = "77 %"   # as the gauge reads',
    ]


@pytest.mark.parametrize(
    ("parts", "value", "line"),
    [
        (("present", "coil"), "zero", '+coil = "zero"'),
        (("zone",), "Europe/Vienna", '+zone = "Europe/Vienna"'),
        (("people", 1, "away"), [{"from": "Tue 20:00", "to": "Wed 06:00"}],
         '+away = [{ from = "Tue 20:00", to = "Wed 06:00" }]'),
        (("people", 0, "lockin", "poles"), 4, "+lockin = { poles = 4 }"),
        (("wanted_end", "deep", "down", "other"), True, "+deep.down.other = true"),
        (("helium", "stock"), "60 L", "+[helium]"),
    ],
)  # fmt: skip
def test_a_new_key_stands_at_the_end_of_its_table(parts: Any, value: Any, line: str) -> None:
    edited = set_value(ODD, parts, value)
    assert line in changed_lines(ODD, edited)
    assert not [one for one in changed_lines(ODD, edited) if one.startswith("-")]


def test_a_key_of_a_table_in_one_line() -> None:
    edited = set_value(ODD, ("present", "gates", "side gate"), "2 V")
    assert 'gates = { "H1/top" = "-0.5 V", back = \'1 V\', "side gate" = "2 V" }' in edited
    assert 'gates = { back = \'1 V\' }' in remove(ODD, ("present", "gates", "H1/top"))  # fmt: skip
    assert "gates = {}" in remove(remove(ODD, ("present", "gates", "H1/top")), ("present", "gates", "back"))


def test_a_deleted_row_takes_the_comment_above_it_along_and_leaves_the_next_ones() -> None:
    edited = remove(ODD, ("people", 0))
    assert "# about the second\n# in two lines\n[[people]]" in edited
    edited = remove(ODD, ("people", 1))
    assert "about the second" not in edited
    assert edited.endswith("[last]\nx = [ ]\n")


def test_a_moved_row_takes_its_comments_along() -> None:
    edited = move_row(ODD, ("people", 1), 0)
    assert edited.index("# in two lines") < edited.index("# early") < edited.index("Operator")
    assert move_row(edited, ("people", 0), 1).index("Operator") < edited.index("# in two lines") + 60
    edited = move_row(ODD, ("people", 1, "hours", 1), 0)
    assert tomllib.loads(edited)["people"][1]["hours"][0] == {"days": "Tue"}
    assert "# mornings" in edited


def test_rows_in_one_line_and_in_many() -> None:
    assert "x = [{ a = 1 }]" in add_row(ODD, ("last", "x"), 0, {"a": 1})
    edited = add_row(RIG, ("magnet", "ramp_table"), 1, {"to": "8 T", "rate": "0.2 T/min"})
    assert changed_lines(RIG, edited) == ['+  { to = "8 T", rate = "0.2 T/min" },']
    assert remove(edited, ("magnet", "ramp_table", 1)) == RIG
    edited = add_row(WEEK, ("samples",), 1, {"name": "H2", "user": "Hall group"})
    assert sorted(changed_lines(WEEK, edited)) == ["+", "+[[samples]]", '+name = "H2"', '+user = "Hall group"']
    assert remove(edited, ("samples", 1)) == WEEK


def test_the_last_row_takes_its_list_along() -> None:
    edited = remove(WEEK, ("samples", 0))
    assert "samples" not in tomllib.loads(edited)
    assert tomllib.loads(add_row(edited, ("samples",), 0, {"name": "X"}))["samples"] == [{"name": "X"}]


def test_a_table_with_a_heading_is_taken_out_whole() -> None:
    edited = remove(RIG, ("magnet", "switch"))
    assert "switch" not in tomllib.loads(edited)["magnet"]
    assert [line for line in changed_lines(RIG, edited) if line.startswith("+")] == []


def test_what_cannot_be_done_without_disturbing_is_refused() -> None:
    with pytest.raises(CannotEditError):
        set_value(ODD, ("present",), 1)


def test_line_ends_of_windows() -> None:
    text = 'a = "1"\r\n[b]\r\nc = 2\r\n'
    assert tomllib.loads(set_value(text, ("b", "c"), 3)) == {"a": "1", "b": {"c": 3}}
    assert tomllib.loads(set_value(text, ("b", "d"), 3)) == {"a": "1", "b": {"c": 2, "d": 3}}


def leaves(data: Any, parts: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """Every place in plain data but the whole."""
    found = [parts] if parts else []
    items = data.items() if isinstance(data, dict) else enumerate(data) if isinstance(data, list) else ()
    for key, value in items:
        found += leaves(value, (*parts, key))
    return found


TEXTS = [ODD, *(path.read_text(encoding="utf-8") for path in EXAMPLES)]


@pytest.mark.parametrize("text", TEXTS)
def test_every_value_is_found_where_it_stands(text: str) -> None:
    data, scan = tomllib.loads(text), Scan(text)
    for parts in leaves(data):
        value: Any = data
        for part in parts:
            value = value[part]
        found = scan.find(parts)
        if found is not None:
            assert tomllib.loads(f"x = {text[found.start : found.end]}")["x"] == value
        else:
            assert isinstance(value, (dict, list)), parts


@settings(max_examples=150, deadline=None)
@given(st.data())
def test_any_edit_says_what_is_meant_and_can_be_read(data: st.DataObject) -> None:
    """The functions confirm their result with tomllib; here, that they refuse nothing ordinary and change little."""
    text = data.draw(st.sampled_from(TEXTS))
    plain = tomllib.loads(text)
    parts = data.draw(st.sampled_from(leaves(plain)))
    value: Any = plain
    for part in parts:
        value = value[part]
    if data.draw(st.booleans()) and not isinstance(value, (dict, list)):
        new = data.draw(st.one_of(st.text(max_size=12), st.integers(-9, 9), st.booleans(), st.floats(-1, 1)))
        edited = set_value(text, parts, new)
        assert len(changed_lines(text, edited)) <= 6  # a text of several lines becomes one of one line
    else:
        edited = remove(text, parts)
        assert len(edited) < len(text)
        comments = [line for line in edited.splitlines() if line.strip().startswith("#")]
        assert set(comments) <= {line for line in text.splitlines() if line.strip().startswith("#")}


LEAVES = st.one_of(st.text(max_size=8), st.integers(-99, 99), st.booleans())


@given(
    st.recursive(
        LEAVES,
        lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(st.text(max_size=4), inner, max_size=3)),
        max_leaves=6,
    )
)
def test_a_value_written_reads_back(value: Any) -> None:
    assert tomllib.loads(f"x = {written(value)}")["x"] == value
