"""The table of all moves at once agrees with `move`, pair by pair, on random states of many rigs."""

from __future__ import annotations

import random
from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest

from planner.files import Rig
from planner.moves import Lines, Setup, move, rate_L_per_s, setup_of
from planner.moves.table import CHANGE, CLOSE, OPEN, MoveTable, move_table
from planner.plan import State
from tests.builders import DRY, REMOVED, Changes, coil_at, rig, state_at, week

SLOTS = {"open switch": OPEN, "close switch": CLOSE, "ramp": CHANGE, "change": CHANGE}

RIGS: dict[str, Changes] = {
    "wet": {},
    "settle 0": {"magnet.settle": "0 s"},
    "no settling at all": {"magnet.settle": "0 s", "stage.after_ramp": REMOVED},
    "unipolar": {"magnet.supply.polarity": "unipolar", "magnet.supply.reversal": "37 s"},
    "unipolar, settle 0": {
        "magnet.supply.polarity": "unipolar",
        "magnet.supply.reversal": "37 s",
        "magnet.settle": "0 s",
        "stage.after_ramp": REMOVED,
    },
    "no switch": {"magnet.switch": REMOVED},
    "switch that warms at once": {"magnet.switch.warm": "0 s", "magnet.switch.settle_after": "0 s"},
    "weak supply": {"magnet.supply.max_voltage": "0.55 V"},
    "costly ramps": {"bath.losses.moving": "5 L/T"},
    "dry": DRY,
}
TOGETHER = [list(some) for size in range(4) for some in combinations(("field", "temperature", "gates"), size)]


def random_states(machine: Rig, count: int, seed: int) -> list[State]:
    """States at table edges, at zero, mirrored and anywhere, some persistent where there is a switch."""
    choose = random.Random(seed)
    kelvins = [machine.stage.base_K, machine.stage.base_K * 2, machine.stage.base_K * 8, machine.stage.base_K * 8.05]
    states = []
    for _ in range(count):
        field_T = choose.choice([0.0, 0.0, 6.0, -6.0, 8.0, -8.0, 10.0, 0.001, choose.uniform(-10, 10)])
        gates_V = (("S1/back", choose.choice([0.0, 1.5])), ("S1/top", choose.choice([0.0, 0.5, -0.123])))
        persistent = machine.magnet.switch is not None and choose.random() < 0.4
        states.append(state_at(field_T, float(choose.choice(kelvins)), gates_V, persistent=persistent))
    return states


def assert_agrees(setup: Setup, lines: Lines, states: list[State], table: MoveTable) -> int:
    """Compare every pair; the number of stretches that were there to compare."""
    compared = 0
    for at, before in enumerate(states):
        for to, after in enumerate(states):
            pair = (at, to)
            stretches = {SLOTS[stretch.label]: stretch for stretch in move(setup, lines, before, after)}
            assert set(stretches) == set(np.flatnonzero(table.present[pair])), pair
            for slot, stretch in stretches.items():
                place = (*pair, slot)
                what = (before, after, slot)
                assert table.seconds[place] == stretch.seconds, what
                assert table.litres[place] == pytest.approx(stretch.litres, rel=1e-12, abs=1e-12), what
                assert table.least_start_L[place] == pytest.approx(stretch.least_start_L, rel=1e-12, abs=1e-12), what
                assert table.ramps[place] == stretch.needs.ramps, what
                assert table.highest_T[place] == stretch.needs.highest_T, what
                assert table.wait_L_per_s[place] == pytest.approx(rate_L_per_s(setup.rig, stretch.after.coil)), what
                assert table.stay_L[place] == pytest.approx(lines.stay_L(stretch.after.coil)), what
            absent = [slot for slot in (OPEN, CHANGE, CLOSE) if slot not in stretches]
            assert not table.seconds[at, to, absent].any()
            assert not table.litres[at, to, absent].any()
            assert not table.least_start_L[at, to, absent].any()
            compared += len(stretches)
    return compared


@pytest.mark.parametrize("together", TOGETHER, ids=lambda some: "+".join(some) or "nothing")
@pytest.mark.parametrize("name", RIGS)
def test_the_table_is_every_move(name: str, together: list[str]) -> None:
    machine = rig({**RIGS[name], "policies": {"together": together}})
    setup, lines = setup_of(machine, week({"present.level": REMOVED})), Lines(machine)
    states = random_states(machine, 7, seed=100 * list(RIGS).index(name) + TOGETHER.index(together))
    compared = assert_agrees(setup, lines, states, move_table(setup, lines, states))
    assert compared > 25  # of 49 pairs; 80 tables make 3920


def test_a_reversal_that_ends_a_run_down_keeps_the_reserve_as_the_leg_does() -> None:
    """From -8 T to zero with a unipolar supply: the run-down asks for nothing, the reversal for the reserve."""
    machine = rig(RIGS["unipolar, settle 0"])
    setup, lines = setup_of(machine, week()), Lines(machine)
    states = [state_at(-8), state_at(0)]
    (change,) = move(setup, lines, *states)
    # 17.6 L; 8 T at 0.1 L/T; 1000 s at a mean 70 A and 1200 s at a mean 30 A; 37 s at 150e-6 L/s
    assert change.least_start_L == pytest.approx(17.6 + 0.8 + 1000 * 220e-6 + 1200 * 180e-6 + 37 * 150e-6)
    assert move_table(setup, lines, states).least_start_L[0, 1, CHANGE] == pytest.approx(change.least_start_L)


def test_the_table_of_a_start_with_the_current_unknown() -> None:
    machine = rig()
    setup, lines = setup_of(machine, week()), Lines(machine)
    unknown = replace(state_at(6), coil=replace(coil_at(6, persistent=True), persistent_current_A="unknown"))
    table = move_table(
        setup, lines, [unknown, state_at(0), replace(unknown, gates_V=(("S1/back", 1.0), ("S1/top", 0.0)))]
    )
    assert table.seconds[0, 1, OPEN] >= 10**9  # no move out of it ever fits
    assert not table.present[0, 2, OPEN]
    assert table.seconds[0, 2, CHANGE] == 10


def test_a_table_of_one_state() -> None:
    machine = rig()
    table = move_table(setup_of(machine, week()), Lines(machine), [state_at(6)])
    assert table.present.shape == (1, 1, 3)
    assert not table.present.any()


def test_a_recovering_week_asks_for_no_reserve_in_either() -> None:
    machine = rig()
    setup, lines = setup_of(machine, week()), Lines(machine, recovering=True)
    states = random_states(machine, 9, seed=5)
    assert assert_agrees(setup, lines, states, move_table(setup, lines, states)) > 40
