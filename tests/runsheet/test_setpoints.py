"""Set-points in tesla and ampere, by hand from the demo rig: 0.125 T/A; 0.28, 0.14, 0.07 T/min to 7, 10, 12 T."""

from __future__ import annotations

from dataclasses import replace

from planner.plan import Coil, CoilMode, Leg, Plan, along_z
from planner.runsheet.setpoints import coil_set_points, gate_lines, joined, mode_change
from planner.runsheet.wording import WallTimes
from tests.runsheet.builder import Builder


def points(build: Builder, at: int = -1) -> list[tuple[str, str, str]]:
    walls = WallTimes.of(build.week.clock, build.week.horizon_s)
    found = coil_set_points(build.steps[at], walls, 0.125)
    return [(point.action, point.target, point.rate) for point in found]


def test_a_ramp_has_one_line_for_each_rate() -> None:
    assert points(Builder().move(8.0)) == [
        ("switch heater ON, wait", "", ""),
        ("ramp to", "+7.0000 T = +56.000 A", "0.28 T/min = 2.24 A/min"),
        ("ramp to", "+8.0000 T = +64.000 A", "0.14 T/min = 1.12 A/min"),
        ("settle", "", ""),
    ]


def test_a_sweep_through_zero_at_one_rate_is_one_line_and_turns_are_kept() -> None:
    found = points(Builder().sweep("Hall", (1.0, -1.0, 1.0), 0.1 / 60))
    assert found[1:] == [
        ("sweep to", "+1.0000 T = +8.000 A", "0.1 T/min = 0.8 A/min"),
        ("sweep to", "−1.0000 T = −8.000 A", "0.1 T/min = 0.8 A/min"),
        ("sweep to", "+1.0000 T = +8.000 A", "0.1 T/min = 0.8 A/min"),
    ]


def test_the_switch_is_worked_in_order_with_lead_currents() -> None:
    build = Builder().move(-6.0).park().unpark()
    assert points(build, 1) == [
        ("hold", "", ""),
        ("switch heater OFF, wait", "", ""),
        ("leads to", "0.000 A", "110 A/min"),
    ]
    assert points(build, 2) == [
        ("leads to", "−48.000 A", "110 A/min"),
        ("settle", "", ""),
        ("switch heater ON, wait", "", ""),
    ]


def test_times_of_the_lines_follow_the_legs() -> None:
    build = Builder().move(8.0)
    walls = WallTimes.of(build.week.clock, build.week.horizon_s)
    found = coil_set_points(build.steps[0], walls, 0.125)
    # 08:30 heater 30 s; 7 T at 0.28 T/min is 25 min; 1 T at 0.14 T/min is 7 min 9 s
    assert [point.at for point in found] == ["08:30", "08:30", "08:55", "09:02"]
    assert [point.lasts for point in found] == ["30 s", "25 min", "7 min 9 s", "2 min"]


def test_joined_legs_keep_time_and_litres() -> None:
    build = Builder().sweep("Hall", (1.0, -1.0), 0.1 / 60)
    legs = build.steps[0].legs
    whole = joined(legs)
    assert len(whole) < len(legs)
    assert sum(leg.seconds for leg in whole) == build.steps[0].seconds
    assert abs(sum(leg.litres for leg in whole) - sum(leg.litres for leg in legs)) < 1e-12


def test_an_unknown_trapped_current_is_said() -> None:
    coil = Coil(along_z(3.0), CoilMode.PERSISTENT, along_z(0.0), "unknown")
    assert mode_change(coil, coil) == "persistent, trapped current UNKNOWN, leads 0.000 A"


def test_gates_moved_swept_and_held() -> None:
    build = Builder()
    rest = dict(build.state.gates_V)
    build.move(1.0, gates=tuple((name, -0.5 if name == "chip 1/top" else volt) for name, volt in rest.items()))
    assert gate_lines(build.steps[0]) == ("chip 1/top 0 → −0.5 V at 20 mV/s",)
    build.gate_sweep("Map", 3600, "chip 2/top", (0.4, -1.0))
    assert gate_lines(build.steps[1]) == (
        "chip 2/top sweep 0 → 0.4 V at 5 mV/s",
        "chip 2/top sweep 0.4 → −1 V at 5 mV/s",
        "chip 1/top −0.5 V",
    )


def test_a_gate_move_without_a_rate_says_how_long_it_takes() -> None:
    build = Builder().gate_sweep("Map", 3600, "chip 2/top", (0.4, -1.0))
    step = build.steps[0]
    slow = replace(step, legs=tuple(replace(leg, rate=None) for leg in step.legs))
    assert gate_lines(slow)[1] == "chip 2/top sweep 0.4 → −1 V in 30 min"


def test_many_gate_moves_are_cut_and_it_is_said() -> None:
    build = Builder().gate_sweep("Map", 3600, "chip 2/top", tuple(0.01 * at for at in range(1, 41)))
    lines = gate_lines(build.steps[0])
    assert lines[-1] == "… and 34 more gate moves (all are in the plan file)"


def test_every_coil_leg_of_a_plan_is_covered(large: Plan) -> None:
    for step in large.steps:
        coil: list[Leg] = [leg for leg in step.legs if leg.channel == "coil"]
        whole = joined(step.legs)
        assert sum(leg.seconds for leg in whole) == sum(leg.seconds for leg in coil)
