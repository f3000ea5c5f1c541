"""The states in which a week begins and shall end; 0.1 T/A, so 6 T is 60 A."""

from __future__ import annotations

import pytest

from planner.files.start import end_state, persistent_coil, resting_gates, start_state
from planner.plan import Charge, Coil, CoilMode, State
from tests.builders import DRY, REMOVED, Changes, rig, week


def start(present: Changes) -> State:
    return start_state(week({"present": {"level": "90 %", **present}}), rig())


def test_a_rig_at_rest() -> None:
    state = start({})
    assert state.coil == Coil()
    assert state.stage.temperature_K == 0.02
    assert state.stage.charge == Charge("circulating")
    assert state.gates_V == (("S1/back", 0.0), ("S1/top", 0.0))
    assert state.light == (("S1", "dark"),)


def test_a_field_alone_means_driven() -> None:
    for present in ({"field": "-6 T"}, {"field": "-6 T", "coil": "driven"}):
        coil = start(present).coil
        assert coil.mode is CoilMode.DRIVEN
        assert coil.field_T == (0, 0, -6)
        assert coil.lead_current_A == pytest.approx((0, 0, -60))
        assert coil.persistent_current_A is None


def test_a_persistent_field_keeps_what_was_logged() -> None:
    coil = start({"field": "6 T", "coil": "persistent", "persistent_current": "60.02 A", "lead_current": "1 A"}).coil
    field_T = coil.field_T[2]  # the recorded current says more exactly what the field is: 60.02 A at 0.1 T/A
    assert field_T == pytest.approx(6.002)
    assert coil == Coil((0, 0, field_T), CoilMode.PERSISTENT, (0, 0, 1), (0, 0, 60.02))
    unknown = start({"field": "6 T", "coil": "persistent", "persistent_current": "unknown"}).coil
    assert unknown == Coil((0, 0, 6), CoilMode.PERSISTENT, (0, 0, 0), "unknown")


@pytest.mark.parametrize(
    ("present", "says"),
    [
        ({"coil": "zero", "field": "1 T"}, "coil: is zero, but the field is not"),
        ({"coil": "driven", "field": "1 T", "persistent_current": "10 A"}, "persistent_current: only with coil"),
        ({"coil": "persistent", "field": "1 T"}, "persistent_current: expected the logged current"),
    ],
)
def test_a_present_coil_that_contradicts_itself(present: Changes, says: str) -> None:
    with pytest.raises(ValueError, match=says):
        start(present)


def test_temperature_and_gates_as_stated_the_rest_at_rest() -> None:
    gate = {"samples.0.gates.0.rest": "-0.5 V"}
    state = start_state(
        week({**gate, "present": {"level": "90 %", "temperature": "300 mK", "gates": {"S1/back": "1 V"}}}), rig()
    )
    assert state.stage.temperature_K == 0.3
    assert state.gates_V == (("S1/back", 1.0), ("S1/top", -0.5))
    assert resting_gates(week(gate)) == (("S1/back", 0.0), ("S1/top", -0.5))


def test_the_end_has_gates_at_rest_and_the_wanted_field() -> None:
    assert end_state(week(), rig()) == start({})
    wanted = end_state(week({"wanted_end": {"field": "2 T", "temperature": "100 mK"}}), rig())
    assert wanted.coil.mode is CoilMode.DRIVEN
    assert wanted.coil.lead_current_A == pytest.approx((0, 0, 20))
    assert wanted.stage.temperature_K == 0.1
    assert wanted.gates_V == (("S1/back", 0.0), ("S1/top", 0.0))


def test_the_end_may_be_persistent() -> None:
    wanted = end_state(week({"wanted_end": {"field": "6 T", "coil": "persistent"}}), rig())
    assert wanted.coil.mode is CoilMode.PERSISTENT
    assert wanted.coil.lead_current_A == (0, 0, 0)
    assert wanted.coil.persistent_current_A == pytest.approx((0, 0, 60))


def test_a_continuous_stage_holds_no_charge() -> None:
    state = start_state(week({"present.level": REMOVED}), rig(DRY))
    assert state.stage.charge == Charge("none")
    assert state.stage.temperature_K == 1.5


def test_a_persistent_coil_at_zero_field_is_just_zero() -> None:
    assert persistent_coil(rig(), 0.0) == Coil()
