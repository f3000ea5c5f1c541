"""The CSV read back with pandas: one row a step, units in the names, times with offset, no formulas."""

from __future__ import annotations

import io
from pathlib import Path

import pandas as pd
import pytest

from planner.plan import Plan, StepKind
from planner.runsheet.sheet import Sheet
from planner.runsheet.sheet_csv import text_cell, write
from tests.runsheet.plans import HOSTILE, clock_change_plan, dry_plan


def table(plan: Plan) -> pd.DataFrame:
    return pd.read_csv(io.BytesIO(write(Sheet.of(plan))), keep_default_na=True)


def test_rows_and_numbers_equal_the_plan(small: Plan, small_files: tuple[Path, ...]) -> None:
    read = pd.read_csv(small_files[1])
    frame = small.frame()
    assert list(read["step"]) == list(frame["step"])
    assert list(read["start_s"]) == list(frame["start_s"])
    for ours, theirs in (
        ("field_from_T", "field_from_T"),
        ("field_to_T", "field_to_T"),
        ("temperature_to_K", "temperature_to_K"),
        ("helium_before_L", "helium_before_L"),
        ("helium_after_L", "helium_after_L"),
        ("poured_L", "poured_L"),
    ):
        assert list(read[ours]) == pytest.approx(list(frame[theirs]), abs=6e-4)
    assert list(read["current_to_A"]) == pytest.approx([field / 0.125 for field in frame["field_to_T"]], abs=1e-4)
    assert list(read["attended"]) == list(frame["attended"])


def test_times_carry_their_offset_and_agree_with_the_seconds() -> None:
    plan = clock_change_plan()
    read = table(plan)
    starts = pd.to_datetime(read["start"], utc=True)
    assert list((starts - starts.iloc[0]).dt.total_seconds()) == list(read["start_s"] - read["start_s"].iloc[0])
    assert read["start"].iloc[0].endswith("+02:00")
    assert read["start"].iloc[-1].endswith("+01:00")


def test_set_points_in_both_units(small: Plan) -> None:
    read = table(small).set_index("step")
    # step 4 of the small plan: 1 T to 11.5 T through the table's edges at 7 and 10 T (0.125 T/A)
    assert read.loc[4, "set_points_T"] == "[7.0; 10.0; 11.5]"
    assert read.loc[4, "set_points_A"] == "[56.0; 80.0; 92.0]"
    assert read.loc[4, "rates_A_per_min"] == "[2.24; 1.12; 0.56]"
    assert read.loc[4, "fastest_T_per_min"] == pytest.approx(0.28)
    assert read.loc[4, "fastest_A_per_min"] == pytest.approx(2.24)


def test_a_rig_without_bath_leaves_helium_empty() -> None:
    read = table(dry_plan())
    assert read[["helium_after_L", "gauge_after_percent", "lowest_throughout_percent", "poured_L"]].isna().all().all()


def test_text_from_users_begins_no_formula(hostile: Plan) -> None:
    raw = pd.read_csv(io.BytesIO(write(Sheet.of(hostile))), dtype=str, keep_default_na=False)
    words = ["what", "user", "sample", "target", "take", "direction", "pace", "people", "details", "notes", "gates"]
    cells = [cell for name in words for cell in raw[name] if cell]
    assert len(cells) > 200
    assert not [cell for cell in cells if cell.lstrip()[:1] in {"=", "+", "-", "@", "\t", "\r", "＝", "＋", "－", "＠"}]
    assert not [cell for cell in cells if set(cell) & set("\x00\x1b\r\n\t\u202e")]
    assert len(raw) == len(hostile.steps)


@pytest.mark.parametrize("word", HOSTILE)
def test_harmless_text_is_kept(word: str) -> None:
    cell = text_cell(word)
    assert cell == text_cell(cell).removeprefix("''")
    assert text_cell("Gap at 2/3") == "Gap at 2/3"
    assert text_cell("=1") == "'=1"
    assert text_cell(" \t@x") == "'@x"


def test_waits_of_no_length_are_rows_too(small: Plan) -> None:
    empty = [step.number for step in small.steps if step.kind == StepKind.WAIT and step.seconds == 0]
    assert empty
    assert set(empty) <= set(table(small)["step"])


def test_json_reads_back_as_the_same_plan(small: Plan, small_files: tuple[Path, ...]) -> None:
    assert Plan.from_json(small_files[2].read_bytes()) == small
