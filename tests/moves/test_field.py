"""Ramps through the rate table by hand: 0.005 T/s up to 6 T, 0.002 T/s up to 8 T, 0.001 T/s up to 10 T."""

from __future__ import annotations

from itertools import pairwise

import pytest

from planner.moves import field_legs
from planner.moves.field import rate_stages
from planner.plan import CoilMode, Leg
from tests.builders import Changes, rig


def fields(leg: Leg) -> tuple[float, float]:
    assert leg.coil is not None
    return leg.coil[0].field_T[2], leg.coil[1].field_T[2]


def walked(begin_T: float, finish_T: float, changes: Changes | None = None) -> list[tuple[float, float, int]]:
    return [(*fields(leg), leg.seconds) for leg in field_legs(rig(changes), begin_T, finish_T)]


@pytest.mark.parametrize(
    ("begin_T", "finish_T", "legs"),
    [
        (0, 3, [(0, 3, 600)]),
        (0, 6, [(0, 6, 1200)]),  # the edge belongs to the lower-field row
        (0, 9, [(0, 6, 1200), (6, 8, 1000), (8, 9, 1000)]),
        (9, 0, [(9, 8, 1000), (8, 6, 1000), (6, 0, 1200)]),
        (6, 8, [(6, 8, 1000)]),
        (8, 6, [(8, 6, 1000)]),
        (8, 8.5, [(8, 8.5, 500)]),
        (5.9, 6.1, [(5.9, 6, 20), (6, 6.1, 50)]),
        (0, -7, [(0, -6, 1200), (-6, -7, 500)]),
        (-7, 2, [(-7, -6, 500), (-6, 0, 1200), (0, 2, 400)]),
        (2, -2, [(2, 0, 400), (0, -2, 400)]),
        (1, 1.001, [(1, 1.001, 1)]),  # 0.2 s, rounded up
        (1, 1.0051, [(1, 1.0051, 2)]),  # 1.02 s
        (5.9991, 6.0009, [(5.9991, 6, 1), (6, 6.0009, 1)]),  # 0.18 s and 0.45 s: each leg is rounded up
        (4, 4, []),
    ],
)
def test_ramps_by_hand(begin_T: float, finish_T: float, legs: list[tuple[float, float, int]]) -> None:
    assert walked(begin_T, finish_T) == legs


def test_a_leg_says_its_rate_and_who_set_it() -> None:
    up = field_legs(rig(), 0, 9)
    assert [leg.rate for leg in up] == pytest.approx([0.005, 0.002, 0.001])
    assert [leg.reason for leg in up] == ["rate table 0–6 T", "rate table 6–8 T", "rate table 8–10 T"]
    assert {(leg.channel, leg.action) for leg in up} == {("coil", "ramp")}
    assert [(leg.start_s, leg.end_s) for leg in up] == [(0, 1200), (1200, 2200), (2200, 3200)]


def test_the_supply_carries_all_through() -> None:
    for leg in field_legs(rig(), 3, -3):
        assert leg.coil is not None
        for coil in leg.coil:
            assert coil.mode is CoilMode.DRIVEN
            assert coil.lead_current_A[2] == pytest.approx(coil.field_T[2] / 0.1)
            assert coil.persistent_current_A is None


def test_a_rate_asked_slows_only_where_the_magnet_is_faster() -> None:
    legs = field_legs(rig(), 0, 9, action="sweep", rate_T_per_s=0.0015, asked="rate asked")
    # 6 T at 0.0015 T/s is 4000 s; 2 T at 0.0015 T/s is 1333.3 s; the last tesla at the table's 0.001 T/s
    assert [(leg.seconds, leg.reason) for leg in legs] == [
        (4000, "rate asked"),
        (1334, "rate asked"),
        (1000, "rate table 8–10 T"),
    ]
    assert {leg.action for leg in legs} == {"sweep"}


# Supply voltage: V = L dI/dt + I R; with L = 10 H and 0.1 T/A one volt left over drives 0.01 T/s

WEAK: Changes = {"magnet.supply.max_voltage": "0.55 V"}
"""R = 5 mΩ: at 60, 80 and 100 A the leads take 0.3, 0.4 and 0.5 V, so 0.25, 0.15 and 0.05 V are left to charge."""


def test_going_up_the_voltage_left_sets_the_pace() -> None:
    legs = field_legs(rig(WEAK), 0, 9)
    assert [leg.rate for leg in legs] == pytest.approx([0.0025, 0.0015, 0.0005])
    assert {leg.reason for leg in legs} == {"supply voltage"}
    assert [leg.seconds for leg in legs] == [2400, 1334, 2000]


def test_going_down_the_leads_help() -> None:
    legs = field_legs(rig(WEAK), 9, 0)
    # 0.55 V and more to discharge, worth 0.0055 T/s: the table is slower everywhere
    assert [leg.rate for leg in legs] == pytest.approx([0.001, 0.002, 0.005])
    assert [leg.reason for leg in legs] == ["rate table 8–10 T", "rate table 6–8 T", "rate table 0–6 T"]


def test_going_down_the_voltage_may_still_set_the_pace_at_low_field() -> None:
    weaker = rig({"magnet.supply.max_voltage": "0.3 V", "magnet.supply.lead_resistance": "1 mohm"})
    # up: 0.3 V less 0.06 V at 60 A; at 80 A 0.22 V, more than the table's 0.2 V; down: 0.3 V + 60 A · 1 mΩ above 6 T
    assert [(leg.rate, leg.reason) for leg in field_legs(weaker, 0, 8)] == [
        (pytest.approx(0.0024), "supply voltage"),
        (pytest.approx(0.002), "rate table 6–8 T"),
    ]
    assert [(leg.rate, leg.reason) for leg in field_legs(weaker, 8, 0)] == [
        (pytest.approx(0.002), "rate table 6–8 T"),
        (pytest.approx(0.003), "supply voltage"),
    ]


def test_the_table_has_a_rate_each_way() -> None:
    stages = rate_stages(rig(WEAK))
    assert [(s.low_T, s.high_T) for s in stages] == [(0, 6), (6, 8), (8, 10)]
    assert [s.up_T_per_s for s in stages] == pytest.approx([0.0025, 0.0015, 0.0005])
    assert [s.down_T_per_s for s in stages] == pytest.approx([0.005, 0.002, 0.001])


# A unipolar supply rests in positive polarity and is reversed at zero current

UNIPOLAR: Changes = {"magnet.supply.polarity": "unipolar", "magnet.supply.reversal": "40 s"}


@pytest.mark.parametrize(
    ("begin_T", "finish_T", "actions"),
    [
        (0, 3, [("ramp", 600)]),
        (3, 0, [("ramp", 600)]),
        (0, -3, [("reverse", 40), ("ramp", 600)]),
        (-3, 0, [("ramp", 600), ("reverse", 40)]),
        (3, -3, [("ramp", 600), ("reverse", 40), ("ramp", 600)]),
        (-3, 3, [("ramp", 600), ("reverse", 40), ("ramp", 600)]),
        (-3, -1, [("ramp", 400)]),
    ],
)
def test_reversal(begin_T: float, finish_T: float, actions: list[tuple[str, int]]) -> None:
    legs = field_legs(rig(UNIPOLAR), begin_T, finish_T)
    assert [(leg.action, leg.seconds) for leg in legs] == actions
    assert all(one.end_s == other.start_s for one, other in pairwise(legs))
    for leg in legs:
        if leg.action == "reverse":
            assert fields(leg) == (0, 0)
            assert leg.rate is None


def test_a_reversal_that_takes_no_time_is_no_leg() -> None:
    assert [leg.action for leg in field_legs(rig({"magnet.supply.polarity": "unipolar"}), 3, -3)] == ["ramp", "ramp"]
