"""Gauge readings worked by hand: lines 50, 42, 30, 20 %, error 2 %; 27 L at 40 %, 72 L at 100 %, straight between."""

from __future__ import annotations

from itertools import pairwise

import pytest

from planner.plan import Plan
from planner.runsheet.levels import floor_of, gauge_percent, litres_over_time
from tests.runsheet.builder import DRY, Builder, week_text


def floor(build: Builder) -> tuple[float, str, float, str]:
    assert build.rig.bath is not None
    found = floor_of(build.steps[-1], build.rig.bath)
    return found.start_percent, found.start_why, found.through_percent, found.through_why


def test_lowest_readings_by_what_the_step_does() -> None:
    build = Builder().hold("check", 600)
    assert floor(build) == (22, "always", 22, "always")
    build.move(8.0)
    assert floor(build) == (52, "to begin a ramp", 44, "while at field")
    build.hold("measure", 600)
    assert floor(build) == (44, "while at field", 44, "while at field")
    build.move(4.0)
    assert floor(build) == (44, "while at field", 44, "while at field")
    build.park()
    assert floor(build) == (44, "while at field", 44, "while at field")
    build.unpark().move(0.0)
    assert floor(build) == (44, "to begin the run-down", 32, "until the current is out")
    build.sweep("Hall", (-1.0,), 0.1 / 60)
    assert floor(build) == (52, "to begin a ramp", 44, "while at field")


def test_lowest_readings_in_litres() -> None:
    build = Builder().move(8.0)
    assert build.rig.bath is not None
    found = floor_of(build.steps[-1], build.rig.bath)
    assert found.start_L == pytest.approx(27 + 12 * 0.75)  # 52 %
    assert found.through_L == pytest.approx(27 + 4 * 0.75)  # 44 %


def test_gauge_reading() -> None:
    rig = Builder().rig
    assert gauge_percent(rig, 27.0) == pytest.approx(40.0)
    assert gauge_percent(rig, 49.5) == pytest.approx(70.0)
    assert gauge_percent(rig, None) is None
    dry = Builder(week_text(users=("Hall group",), rig="dry_insert.rig.toml", level=None), DRY).rig
    assert gauge_percent(dry, 1.0) is None


def test_the_curve_passes_through_every_step_and_never_jumps(large: Plan) -> None:
    curve = litres_over_time(large, Builder().rig)
    assert [at for at, _ in curve] == sorted(at for at, _ in curve)
    at_time = dict(curve)
    for step in large.steps:
        assert at_time[step.end_s] == pytest.approx(step.helium_after_L)
    for (first_s, first_L), (second_s, second_L) in pairwise(curve):
        if first_s == second_s:
            assert first_L == pytest.approx(second_L)
