"""The plan: JSON there and back, its version, its table."""

from __future__ import annotations

import json
from dataclasses import replace
from datetime import datetime, timedelta

import pandas as pd
import pytest
from pydantic import ValidationError

from planner.plan import PLAN_FORMAT, Plan, Score
from planner.plan.table import COLUMNS
from tests.plan.plans import START, VIENNA, small_plan


def test_a_plan_comes_back_from_json_equal_and_writes_the_same_bytes() -> None:
    plan = small_plan()
    text = plan.to_json()
    again = Plan.from_json(text)
    assert again == plan
    assert again.to_json() == text == small_plan().to_json()
    assert Plan.from_json(text.decode("utf-8")) == plan


def test_json_carries_the_version_and_reads_as_plain_data() -> None:
    data = json.loads(small_plan().to_json())
    assert data["format"] == PLAN_FORMAT == 1
    assert data["start"] == "2031-03-03T08:30:00+01:00"
    assert data["steps"][1]["kind"] == "take"
    assert data["steps"][3]["before"]["coil"]["persistent_current_A"] == "unknown"
    assert data["steps"][0]["legs"][0]["rate"] == 0.005
    assert data["findings"][0]["kind"] == "warn"
    assert "ν ≤ Ω" in data["sources"][0]["text"]


@pytest.mark.parametrize(
    ("key", "value"),
    [("format", 2), ("format", "1"), ("steps", None), ("start", "Monday"), ("sources", [{"role": "x"}])],
)
def test_what_is_no_plan_of_this_version_is_refused(key: str, value: object) -> None:
    data = json.loads(small_plan().to_json())
    with pytest.raises(ValidationError):
        Plan.from_json(json.dumps({**data, key: value}))


def test_text_that_is_no_json_is_refused() -> None:
    with pytest.raises(ValidationError):
        Plan.from_json(b"\xff\x00")


def test_a_plan_across_a_clock_change_keeps_its_instants() -> None:
    start = datetime(2031, 10, 25, 12, tzinfo=VIENNA)
    plan = replace(small_plan(), start=start, end=start + timedelta(days=1))
    again = Plan.from_json(plan.to_json())
    assert again.clock.second(again.end) == 25 * 3600
    assert again.clock.moment(25 * 3600).hour == 12


def test_the_clock_and_the_sources() -> None:
    plan = small_plan()
    assert plan.clock.moment(3600) == START + timedelta(hours=1)
    assert plan.source("rig").path == "r.toml"
    assert plan.source("week").text == "title = 'ν ≤ Ω'"


def test_the_table_has_one_row_a_step_with_units_in_the_names() -> None:
    frame = small_plan().frame()
    assert list(frame.columns) == list(COLUMNS)
    assert {name: str(kind) for name, kind in frame.dtypes.items()} == COLUMNS
    assert list(frame["step"]) == [1, 2, 3, 4]
    assert list(frame["seconds"]) == [1200, 3600, 1200, 1200]
    assert list(frame["field_from_T"]) == [0, 6, 6, 6]
    assert list(frame["field_to_T"]) == [6, 6, 6, 6]
    assert list(frame["lead_current_to_A"]) == [60, 60, 0, 0]
    assert list(frame["coil_mode"]) == ["driven", "driven", "persistent", "persistent"]
    assert frame["gates_to_V"][0] == "S1/back 0, S1/top -0.25"
    assert frame["start"][1] == START + timedelta(minutes=20)
    assert frame["end"][1].tzinfo is VIENNA
    assert frame["people"][1] == "Operator 1, Operator 2"
    assert list(frame["poured_L"]) == [0, 0, 20, 0]
    assert pd.isna(frame["helium_before_L"][3])  # no bath was stated there


def test_a_plan_without_steps_has_an_empty_table_of_the_same_kind() -> None:
    frame = replace(small_plan(), steps=()).frame()
    assert len(frame) == 0
    assert {name: str(kind) for name, kind in frame.dtypes.items()} == COLUMNS


@pytest.mark.parametrize(
    ("cost_h", "bound_h", "gap"), [(10.0, 8.0, 0.2), (10.0, 10.0, 0.0), (10.0, 11.0, 0.0), (0.0, 0.0, 0.0)]
)
def test_the_gap_is_relative_and_never_negative(cost_h: float, bound_h: float, gap: float) -> None:
    score = Score(1, 1, 0, 0.0, cost_h, bound_h, 0, 0.25, proven=True, stopped="")
    assert score.gap == pytest.approx(gap)


def test_lengths_of_steps_and_legs() -> None:
    step = small_plan().steps[0]
    assert step.seconds == 1200
    assert [leg.seconds for leg in step.legs] == [1200, 600, 25]
