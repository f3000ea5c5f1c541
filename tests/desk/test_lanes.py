"""Lanes as data, and their drawing into cells as a pure function."""

from __future__ import annotations

import re
from itertools import pairwise

import pytest

from planner.desk.drawing import GUTTER, Grid, Window, bar_cells, curve_cells, draw, heights, value_at
from planner.desk.lanes import Bar, BarLane, CurveLane, Lanes, Line, lanes_of
from planner.files import request_of
from planner.plan import Plan
from tests.runsheet.plans import clock_change_plan, dry_plan
from tests.screens.stored_plan import stored_plan


@pytest.fixture(scope="module")
def plan() -> Plan:
    return stored_plan()


@pytest.fixture(scope="module")
def lanes(plan: Plan) -> Lanes:
    return lanes_of(plan, request_of(plan.sources))


def _grid(lanes: Lanes, columns: int, end_s: float, start_s: float = 0.0) -> Grid:
    return Grid(Window(start_s, end_s), columns, lanes.plan.clock)


def _signs(cells: list[tuple[str, str]]) -> str:
    return "".join(sign for sign, _ in cells)


def test_the_lanes_of_a_plan(lanes: Lanes, plan: Plan) -> None:
    assert [lane.name for lane in lanes.lanes] == [
        "measures", "field", "coil", "stage", "helium", "people", "services",
    ]  # fmt: skip
    assert [letter for letter, _ in lanes.letters] == ["A", "B", "C"]
    helium = lanes.lanes[4]
    assert isinstance(helium, CurveLane)
    assert [(line.name, line.value) for line in helium.lines] == [
        ("start ramp", 52), ("at field", 44), ("coil top", 32), ("reserve", 22),
    ]  # the rig's lines, each with the gauge's error of 2 % on it  # fmt: skip
    services = lanes.lanes[6]
    assert isinstance(services, BarLane)
    assert [bar.letter for bar in services.bars].count("H") == sum(step.poured_L > 0 for step in plan.steps)


def test_a_dry_rig_has_no_helium() -> None:
    plan = dry_plan()
    assert "helium" not in [lane.name for lane in lanes_of(plan, request_of(plan.sources)).lanes]


@pytest.mark.parametrize("size", [(80, 12), (120, 22), (40, 10), (200, 60)])
def test_a_drawing_fills_its_width_and_keeps_to_its_rows(size: tuple[int, int], lanes: Lanes) -> None:
    width, rows = size
    for window in (Window(0, lanes.horizon_s), Window(7000, 20000), Window(0, 600)):
        for at in (None, 0, 40, len(lanes.plan.steps) - 1):
            drawn = draw(lanes, width, rows, window, at)
            assert len(drawn) <= max(rows, 10)
            assert {sum(len(run.text) for run in row) for row in drawn} == {width}


def test_heights_share_what_there_is(lanes: Lanes) -> None:
    assert sum(heights(lanes, 12).values()) == 9
    assert sum(heights(lanes, 22).values()) == 19
    assert set(heights(lanes, 5).values()) == {1}
    assert max(heights(lanes, 200).values()) == 8


def test_the_cursor_is_marked_in_the_ruler_and_in_every_lane(lanes: Lanes) -> None:
    step = lanes.plan.steps[20]
    drawn = draw(lanes, 120, 22, Window(0, lanes.horizon_s / 3), 20)
    pointer = "".join(run.text for run in drawn[2])[GUTTER:]
    first = pointer.index("▼")
    assert first == int(step.start_s / (lanes.horizon_s / 3) * (120 - GUTTER))
    assert all(any(run.cursor for run in row) for row in drawn[3:])
    outside = draw(lanes, 120, 22, Window(0, 3600), len(lanes.plan.steps) - 1)
    assert "▼" not in "".join(run.text for row in outside for run in row)


def test_edges_of_bars_are_drawn_in_eighths(lanes: Lanes) -> None:
    grid = _grid(lanes, 10, 80)  # a cell is 8 s, an eighth of it 1 s
    lane = BarLane("x", (Bar(3, 20, "", "user-0"), Bar(40, 41, "", "user-1"), Bar(56, 64, "", "user-1")))
    cells = bar_cells(lane, grid)
    assert _signs(cells) == "▍█▌  ▏ ▓  "
    assert cells[0] == ("▍", "user-0 reverse")  # the empty left three eighths, in reverse
    assert cells[2] == ("▌", "user-0")
    assert cells[7] == ("▓", "user-1")


def test_a_short_bar_is_never_lost(lanes: Lanes) -> None:
    grid = _grid(lanes, 10, 1_000_000)
    assert _signs(bar_cells(BarLane("x", (Bar(5, 6, "", "user-0"),)), grid)).strip() == "▏"


def test_users_are_told_apart_by_letter_and_pattern(lanes: Lanes) -> None:
    measures = lanes.lanes[0]
    assert isinstance(measures, BarLane)
    text = _signs(bar_cells(measures, _grid(lanes, 400, lanes.horizon_s)))
    assert {"A", "B", "C", "█", "▓", "▒", "╌"} <= set(text)
    assert re.search(r"A█+", text)
    assert re.search(r"B▓+", text)
    assert re.search(r"C▒+", text)


def test_a_curve_is_filled_in_eighths(lanes: Lanes) -> None:
    lane = CurveLane("x", "T", ((0, 0.0), (80, 8.0)), 0.0, 8.0)
    (cells,) = curve_cells(lane, _grid(lanes, 8, 80), 1)
    assert _signs(cells) == "▁▂▃▄▅▆▇█"
    upper, lower = curve_cells(lane, _grid(lanes, 8, 80), 2)
    assert _signs(lower) == "▂▄▆█████"
    assert _signs(upper) == "    ▂▄▆█"


def test_negative_fields_are_hatched(lanes: Lanes) -> None:
    lane = CurveLane("field", "T", ((0, -8.0), (39, -8.0), (40, 8.0), (80, 8.0)), 0.0, 8.0)
    (cells,) = curve_cells(lane, _grid(lanes, 8, 80), 1)
    assert _signs(cells) == "▒▒▒▒████"


def test_lines_are_drawn_across_and_a_level_below_one_is_marked(lanes: Lanes) -> None:
    lane = CurveLane(
        "helium", "%", ((0, 90.0), (80, 10.0)), 0.0, 100.0, lines=(Line("at field", 50.0),), pick="smallest"
    )
    rows = curve_cells(lane, _grid(lanes, 8, 80), 4)
    # 50 % is the foot of the second row, which spans 25 %; cells end at 70, 60, 50 %: 6.4, 3.2 and 0 eighths of it
    assert _signs(rows[1]) == "─▆▃▁────"
    assert rows[1][0] == ("─", "helium reverse")
    assert rows[1][7] == ("─", "line")
    lows = [look.endswith("low") for _, look in rows[3][:7]]
    assert lows == [False] * 4 + [True] * 3
    assert value_at(lane, 40) == 50.0
    assert value_at(lane, 81) is None


def test_the_ruler_names_the_days(lanes: Lanes) -> None:
    drawn = draw(lanes, 120, 22, Window(0, lanes.horizon_s), None)
    days = "".join(run.text for run in drawn[0])
    assert re.findall(r"│(\w{3} \d+)", days) == ["Tue 13", "Wed 14", "Thu 15", "Fri 16", "Sat 17", "Sun 18"]


def test_a_week_with_a_clock_change_is_drawn() -> None:
    plan = clock_change_plan()
    made = lanes_of(plan, request_of(plan.sources))
    drawn = draw(made, 200, 22, Window(0, made.horizon_s), 0)
    hours = "".join(run.text for run in drawn[1])[GUTTER:]
    columns = [match.start() for match in re.finditer("00", hours)]
    steps = [b - a for a, b in pairwise(columns)]
    # 26 October 2031, Europe/Vienna: clocks go back, that day has 25 hours (EU Directive 2000/84/EC)
    assert max(steps) >= 25 / 24 * min(steps) - 1


def test_a_window_stays_inside_the_week() -> None:
    whole = Window(0, 1000)
    assert whole.around(500, 2.0, 100_000) == Window(0, 2000)
    assert Window(0, 100_000).around(90_000, 0.5, 100_000) == Window(45_000, 95_000)
    assert Window(0, 10_000).showing(50_000, 50_100, 100_000) == Window(47_500, 57_500)
    assert Window(0, 10_000).showing(5_000, 5_100, 100_000) == Window(0, 10_000)
    assert Window(0, 10_000).showing(99_000, 100_000, 100_000) == Window(90_000, 100_000)
    assert Window(0, 700).around(100, 0.1, 100_000).end_s == pytest.approx(600, abs=100)
