"""Moves from state to state by hand, on the builder's rig."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import pytest

from planner.moves import Lines, Setup, Stretch, move, setup_of
from planner.plan import Coil, CoilMode, Leg, State, along_z
from tests.builders import DRY, REMOVED, Changes, coil_at, rig, state_at, week

WARM, MILD, BASE = 0.2, 0.16, 0.02
TOP: tuple[tuple[str, float], ...] = (("S1/back", 0.0), ("S1/top", 0.5))


def moved(before: State, after: State, changes: Changes | None = None) -> tuple[Stretch, ...]:
    machine = rig(changes)
    setup: Setup = setup_of(machine, week({"present.level": REMOVED}))
    return move(setup, Lines(machine), before, after)


def coil_actions(stretch: Stretch) -> list[tuple[str, int]]:
    return [(leg.action, leg.seconds) for leg in stretch.legs if leg.channel == "coil"]


def beside(stretch: Stretch, channel: str) -> list[tuple[str, int, int]]:
    return [(leg.action, leg.start_s, leg.end_s) for leg in stretch.legs if leg.channel == channel]


def test_nothing_to_change_is_no_move() -> None:
    for state in (state_at(0), state_at(6), state_at(6, persistent=True), state_at(-3, MILD, TOP)):
        assert moved(state, state) == ()


def test_from_zero_to_six_tesla_at_base() -> None:
    (change,) = moved(state_at(0), state_at(6))
    # switch 30 s, 6 T in 1200 s, magnet settles 120 s; the stage needs 900 s from the end of the ramp, 780 s more
    assert coil_actions(change) == [("heater on", 30), ("ramp", 1200), ("settle", 120), ("hold", 780)]
    assert beside(change, "stage") == [("settle stage", 1230, 2130)]
    assert (change.label, change.seconds, change.pace) == ("ramp", 2130, "rate table 0–6 T")
    # 30 s at 150e-6, 1200 s at 180e-6 and 6 T · 0.1, 900 s at 210e-6 L/s
    assert change.litres == pytest.approx(0.0045 + 0.816 + 0.189)
    assert change.least_start_L == pytest.approx(54.4045)
    assert change.needs.ramps
    assert change.needs.highest_T == 6
    assert change.needs.people == 0


def test_back_to_zero_ends_without_current_at_the_end_of_the_ramp() -> None:
    (change,) = moved(state_at(6), state_at(0))
    assert coil_actions(change) == [("ramp", 1200), ("settle", 120), ("hold", 780)]
    ramp, settle, hold = (leg for leg in change.legs if leg.channel == "coil")
    assert ramp.coil == (coil_at(6), Coil())
    assert settle.coil == hold.coil == (Coil(), Coil())
    assert change.litres == pytest.approx(0.816 + 900 * 1e-4)  # no heater at zero field
    assert change.least_start_L == pytest.approx(17.6 + change.litres)


def test_a_warm_stage_does_not_wait_after_a_ramp() -> None:
    (change,) = moved(state_at(3, WARM), state_at(4, WARM))
    assert coil_actions(change) == [("ramp", 200), ("settle", 120)]
    assert beside(change, "stage") == []


@pytest.mark.parametrize(
    ("from_K", "together", "stage", "seconds"),
    [
        # ramp over at 1230 s, stage back at 2130 s; its own cooling goes beside the ramp and counts towards that
        (0.16, ["field", "temperature"], [("cool", 0, 1800), ("settle stage", 1800, 2130)], 2130),
        (0.04, ["field", "temperature"], [("cool", 0, 600), ("settle stage", 1230, 2130)], 2130),
        (1.0, ["field", "temperature"], [("cool", 0, 3600)], 3600),
        # cooling first, then the field; or the field first, settled at 1350 s, and then cooling
        (0.04, ["temperature"], [("cool", 0, 600), ("settle stage", 1830, 2730)], 2730),
        (0.04, ["field"], [("cool", 1350, 1950), ("settle stage", 1950, 2130)], 2130),
    ],
)
def test_the_stage_settles_once_after_the_last_ramp(
    from_K: float, together: list[str], stage: list[tuple[str, int, int]], seconds: int
) -> None:
    (change,) = moved(state_at(0, from_K), state_at(6, BASE), {"policies": {"together": together}})
    assert beside(change, "stage") == stage
    assert change.seconds == seconds


def test_a_change_of_temperature_or_gates_alone_moves_no_field() -> None:
    (warmer,) = moved(state_at(6), state_at(6, MILD))
    assert coil_actions(warmer) == [("hold", 600)]
    assert beside(warmer, "stage") == [("warm", 0, 600)]
    assert not warmer.needs.ramps
    assert (warmer.label, warmer.pace) == ("change", "stage table")
    (gates,) = moved(state_at(6, persistent=True), state_at(6, gates_V=TOP, persistent=True))
    assert coil_actions(gates) == [("hold", 50)]  # 0.5 V at 10 mV/s, the field stays persistent
    assert beside(gates, "gates") == [("gate ramp", 0, 50)]
    assert gates.litres == pytest.approx(50 * 1e-4)


def test_gates_go_together_each_at_its_own_rate() -> None:
    (change,) = moved(state_at(0), state_at(0, gates_V=(("S1/back", -2.0), ("S1/top", 0.1))))
    assert change.seconds == 20  # 2 V at 0.1 V/s; 0.1 V at 10 mV/s would be 10 s


CHANNELS: list[tuple[list[str], int, int]] = [
    # field 30 + 1200 + 120 = 1350 s, temperature 600 s, gates 50 s; where the field begins
    (["field", "temperature", "gates"], 1350, 0),
    (["field", "temperature"], 1400, 0),
    (["field", "gates"], 1950, 0),
    (["temperature", "gates"], 1950, 600),
    (["field"], 2000, 0),
    (["temperature"], 2000, 600),
    (["gates"], 2000, 50),
    ([], 2000, 0),
]


@pytest.mark.parametrize(("together", "seconds", "field_begins_s"), CHANNELS)
def test_what_the_rig_allows_goes_together_the_rest_follows(
    together: list[str], seconds: int, field_begins_s: int
) -> None:
    (change,) = moved(state_at(0), state_at(6, MILD, TOP), {"policies": {"together": together}})
    assert change.seconds == seconds
    legs = [leg for leg in change.legs if leg.channel == "coil"]
    heater = next(leg for leg in legs if leg.action == "heater on")
    assert heater.start_s == field_begins_s
    if field_begins_s:
        assert legs[0].action == "hold"
        assert legs[0].coil == (Coil(), Coil())
    serial = [name for name in ("field", "temperature", "gates") if name not in together]
    begins = {
        "field": heater.start_s,
        "temperature": next(leg.start_s for leg in change.legs if leg.channel == "stage"),
        "gates": next(leg.start_s for leg in change.legs if leg.channel == "gates"),
    }
    lasts = {"field": 1350, "temperature": 600, "gates": 50}
    for one, other in pairwise(serial):
        assert begins[other] == begins[one] + lasts[one]
    assert all(begins[name] == 0 for name in together)


def test_into_persistent_mode_is_a_step_of_its_own() -> None:
    change, close = moved(state_at(0, MILD), state_at(6, MILD, persistent=True))
    assert coil_actions(change) == [("heater on", 30), ("ramp", 1200), ("settle", 120)]
    assert change.after.coil == coil_at(6)
    assert coil_actions(close) == [("hold", 300), ("heater off", 60), ("leads", 30)]
    assert (close.label, close.needs.people, close.needs.training) == ("close switch", 1, "switch")
    assert not close.needs.ramps
    assert close.before == change.after
    assert close.after == state_at(6, MILD, persistent=True)
    # 300 s at 210e-6, 60 s at 160e-6, 30 s at 130e-6 L/s
    assert close.litres == pytest.approx(0.063 + 0.0096 + 0.0039)
    assert close.least_start_L == pytest.approx(37.6 + 0.0765)


def test_out_of_persistent_mode_and_back_into_it_elsewhere() -> None:
    opened, change, close = moved(state_at(6, MILD, persistent=True), state_at(-3, MILD, persistent=True))
    assert coil_actions(opened) == [("leads", 30), ("settle", 10), ("heater on", 30)]
    assert opened.label == "open switch"
    assert opened.after.coil == coil_at(6)
    assert coil_actions(change) == [("ramp", 1200), ("ramp", 600), ("settle", 120)]
    assert coil_actions(close) == [("hold", 300), ("heater off", 60), ("leads", 15)]
    assert close.after.coil == coil_at(-3, persistent=True)


def test_between_driven_and_persistent_at_one_field_only_the_switch_is_worked() -> None:
    (close,) = moved(state_at(6), state_at(6, persistent=True))
    (opened,) = moved(state_at(6, persistent=True), state_at(6))
    assert (close.label, opened.label) == ("close switch", "open switch")


def test_an_unattended_switch_needs_nobody() -> None:
    (close,) = moved(state_at(6), state_at(6, persistent=True), {"magnet.switch.attended": False})
    assert close.needs.people == 0


def test_persistent_handover() -> None:
    """JOB scenario 5: 10.236 T persistent, leads at 0 A; next wants 6 T. REF-W table: 8 T 0.30, 11 T 0.15 T/min."""
    machine: Changes = {
        "magnet.rated_field": "12 T",
        "magnet.field_per_current": "0.12 T/A",
        "magnet.ramp_table": [
            {"to": "8 T", "rate": "0.30 T/min"},
            {"to": "11 T", "rate": "0.15 T/min"},
            {"to": "12 T", "rate": "0.08 T/min"},
        ],
    }
    parked = Coil(along_z(10.236), CoilMode.PERSISTENT, along_z(0.0), along_z(85.30))
    there = replace(state_at(6, MILD), coil=coil_at(6, per_current_T_per_A=0.12))
    opened, change = moved(replace(state_at(0, MILD), coil=parked), there, machine)
    assert coil_actions(opened) == [("leads", 43), ("settle", 10), ("heater on", 30)]
    ramps = [seconds for action, seconds in coil_actions(change) if action == "ramp"]
    assert ramps == [895, 400]  # 2.236 T at 0.15 T/min is 894.4 s, 2 T at 0.30 T/min is 400 s: 21.6 min
    assert sum(ramps) / 60 == pytest.approx(21.6, abs=0.05)


def test_an_unknown_persistent_current_stops_every_change_of_field() -> None:
    unknown = replace(state_at(6), coil=replace(coil_at(6, persistent=True), persistent_current_A="unknown"))
    with pytest.raises(ValueError, match="not known"):
        moved(unknown, state_at(0))
    (gates,) = moved(unknown, replace(unknown, gates_V=TOP))
    assert coil_actions(gates) == [("hold", 50)]


def test_a_rig_without_bath_and_switch() -> None:
    (change,) = moved(state_at(0, 1.5), state_at(3, 10.0), DRY)
    assert coil_actions(change) == [("ramp", 600), ("settle", 120), ("hold", 169)]  # the stage's 889 s pace it
    assert change.litres == 0
    assert change.pace == "stage model"


def test_settling_of_no_length_leaves_no_leg() -> None:
    (change,) = moved(state_at(3, WARM), state_at(4, WARM), {"magnet.settle": "0 s"})
    assert coil_actions(change) == [("ramp", 200)]
    legs: list[Leg] = [leg for leg in change.legs if leg.seconds == 0]
    assert legs == []
