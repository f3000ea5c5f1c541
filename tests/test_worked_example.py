"""A small sheet recomputed by hand from its rig file, step by step: every number is worked out in place."""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from planner.files import read_week
from planner.plan import Plan, StepKind
from planner.planning import plan_week
from planner.runsheet import write_sheets

RIG = """
format = 1
kind = "rig"
name = "Worked example"

[magnet]
rated_field = "8 T"
field_per_current = "0.1 T/A"
inductance = "10 H"
settle = "60 s"
ramp_table = [{ to = "5 T", rate = "0.5 T/min" }, { to = "8 T", rate = "0.25 T/min" }]
supply = { max_current = "80 A", max_voltage = "5 V", lead_resistance = "0 ohm" }

[magnet.switch]
warm = "30 s"
cool = "60 s"
hold_before = "2 min"
settle_after = "10 s"
leads = "60 A/min"
match = "0.1 A"

[bath]
gauge_error = "2 %"
calibration = [{ level = "0 %", volume = "0 L" }, { level = "100 %", volume = "100 L" }]
lines = { start_ramp = "50 %", at_field = "40 %", coil_top = "30 %", reserve = "10 %" }
# a ten-thousandth of a litre a second each; a millionth a second and ampere
losses = { static = "0.36 L/h", switch_open = "0.36 L/h", leads = "0.0036 L/h/A", moving = "0.1 L/T" }
transfer = { rate = "60 L/h", efficiency = "80 %", line_cooling = "15 min" }

[stage]
kind = "dilution"
base = "20 mK"
highest = "100 mK"
warming = [{ to = "100 mK", time = "10 min" }]
cooling = [{ from = "100 mK", time = "20 min" }]
after_ramp = [{ below = "50 mK", time = "5 min" }]
"""

WEEK = """
format = 1
kind = "week"
title = "Worked example"
rig = "rig.toml"
zone = "UTC"
start = 2031-03-03T08:00:00
end = 2031-03-03T20:00:00
present = { level = "80 %" }
users = [{ name = "Hall group", letter = "A" }]
samples = [{ name = "S", user = "Hall group", density = "1e11 cm^-2" }]

[[targets]]
name = "sweep"
kind = "field sweep"
sample = "S"
field = "0 T to 6 T"
rate = "0.3 T/min"
direction = "up"

[[targets]]
name = "stay"
kind = "hold"
sample = "S"
field = "4 T"
temperature = "100 mK"
duration = "30 min"
coil = "driven"
after = ["sweep"]
"""


@pytest.fixture(scope="module")
def plan(tmp_path_factory: pytest.TempPathFactory) -> Plan:
    folder = tmp_path_factory.mktemp("worked")
    (folder / "rig.toml").write_text(RIG)
    (folder / "week.toml").write_text(WEEK)
    return plan_week(read_week(folder / "week.toml"), seconds=2, reproducible=True)


# What happens, when it starts and ends, helium at its end. The rig begins at zero field and base, so that nothing comes
# before the sweep; its first 30 s warm the switch.
#
# 1 sweep: 30 s; 0→5 T at 0.3 T/min 1000 s; 5→6 T at the table's 0.25 T/min 240 s: 1270 s.
#   Litres: 30·2e-4 + 1000·(2e-4 + 25·1e-6) + 5·0.1 + 240·(2e-4 + 55·1e-6) + 1·0.1 = 0.006 + 0.725 + 0.1612 = 0.8922.
# 2 to 4 T and 100 mK: 6→5 T 240 s, 5→4 T at 0.5 T/min 120 s, settle 60 s; the stage needs 600 s at the same time.
#   Litres: 240·2.55e-4 + 0.1 + 120·2.45e-4 + 0.1 + (600 − 360)·2.4e-4 = 0.1612 + 0.1294 + 0.0576 = 0.3482.
# 3 stay: 1800 s · 2.4e-4 = 0.432.
# 4 to zero and base: 4→0 T 480 s, settle 60 s; the stage cools 1200 s, longer than 480 s + 300 s of settling after it.
#   Litres: 480·(2e-4 + 20·1e-6) + 0.4 + (1200 − 480)·1e-4 = 0.5056 + 0.072 = 0.5776.
# 5 wait to 20:00: 43200 − 4870 = 38330 s · 1e-4 = 3.833.
BY_HAND = [
    (StepKind.TAKE, 0, 1270, 80.0, 80.0 - 0.8922),
    (StepKind.MOVE, 1270, 1870, 79.1078, 79.1078 - 0.3482),
    (StepKind.TAKE, 1870, 3670, 78.7596, 78.7596 - 0.432),
    (StepKind.MOVE, 3670, 4870, 78.3276, 78.3276 - 0.5776),
    (StepKind.WAIT, 4870, 43200, 77.75, 77.75 - 3.833),
]


def test_steps_are_those_worked_out_by_hand(plan: Plan) -> None:
    found = [(step.kind, step.start_s, step.end_s) for step in plan.steps]
    assert found == [row[:3] for row in BY_HAND]


def test_helium_is_that_worked_out_by_hand(plan: Plan) -> None:
    found = [(step.helium_before_L, step.helium_after_L) for step in plan.steps]
    assert [pair[0] for pair in found] == pytest.approx([row[3] for row in BY_HAND], abs=1e-9)
    assert [pair[1] for pair in found] == pytest.approx([row[4] for row in BY_HAND], abs=1e-9)


def test_set_points_are_those_worked_out_by_hand(plan: Plan) -> None:
    fields = [(step.before.coil.field_T[2], step.after.coil.field_T[2]) for step in plan.steps]
    assert fields == [(0, 6), (6, 4), (4, 4), (4, 0), (0, 0)]
    currents = [step.after.coil.lead_current_A[2] for step in plan.steps]
    assert currents == pytest.approx([60, 40, 40, 0, 0])  # tesla ÷ 0.1 T/A
    kelvins = [step.after.stage.temperature_K for step in plan.steps]
    assert kelvins == pytest.approx([0.02, 0.1, 0.1, 0.02, 0.02])


def test_what_set_the_pace(plan: Plan) -> None:
    sweep, to_stay, stay, home, _ = plan.steps
    assert [leg.reason for leg in sweep.legs] == ["switch warms", "rate asked", "rate table 5–8 T"]
    assert (to_stay.pace, stay.pace, home.pace) == ("stage table", "duration asked", "stage table")


def test_score_is_that_worked_out_by_hand(plan: Plan) -> None:
    score = plan.score
    assert score.moving_s == 600 + 1200
    assert score.litres == pytest.approx(0.8922 + 0.3482 + 0.432 + 0.5776 + 3.833, abs=1e-9)
    assert score.cost_h == pytest.approx(1800 / 3600 + 0.25 * 6.083, abs=1e-9)
    assert score.points == 300 + 300  # two targets of priority 3, 100 points a step
    assert score.proven
    assert score.cost_bound_h == pytest.approx(score.cost_h, abs=1e-6)


def test_the_sheet_carries_these_numbers(plan: Plan, tmp_path: Path) -> None:
    (sheet,) = write_sheets(plan, tmp_path, ["csv"])
    rows = list(csv.DictReader(sheet.read_text(encoding="utf-8-sig").splitlines()))
    assert [int(row["start_s"]) for row in rows] == [row[1] for row in BY_HAND]
    assert [int(row["duration_s"]) for row in rows] == [row[2] - row[1] for row in BY_HAND]
    assert [float(row["helium_after_L"]) for row in rows] == pytest.approx([row[4] for row in BY_HAND], abs=5e-4)
    assert [float(row["field_to_T"]) for row in rows] == [6, 4, 4, 0, 0]
