"""Gate sweeps and maps by hand: gate `top` goes at 10 mV/s, `back` at 0.1 V/s."""

from __future__ import annotations

import math

import pytest
from scipy.stats import gamma

from planner.plan import Gates
from tests.builders import Changes
from tests.takes.wishes import FILLING_1_T, field_T, one_take, refusal, seconds, takes_of, wish

LINE: Changes = {"gate": "top", "sweep": "-0.5 V to 0.5 V", "points": 101, "dwell": "2 s", "coil": "driven"}
SECOND: Changes = {"second_gate": "back", "second_sweep": "0 V to 1 V", "second_points": 5}


def sweep(**keys: object) -> Changes:
    return wish("gate sweep", **{"field": "1 T", **LINE, **keys})


def gates(top_V: float, back_V: float = 0.0) -> Gates:
    return (("S1/back", back_V), ("S1/top", top_V))


@pytest.mark.parametrize(
    ("direction", "ways"),
    [
        # 101 points of 2 s and 1 V at 10 mV/s: 302 s a line
        ("up", [("up", 302, -0.5, 0.5)]),
        ("down", [("down", 302, 0.5, -0.5)]),
        ("either", [("up", 302, -0.5, 0.5), ("down", 302, 0.5, -0.5)]),
        ("both", [("up, down", 604, -0.5, -0.5), ("down, up", 604, 0.5, 0.5)]),
    ],
)
def test_a_line(direction: str, ways: list[tuple[str, int, float, float]]) -> None:
    take = one_take(sweep(direction=direction))
    found = [
        (way.direction, way.stretches[0].seconds, way.entry.gates_V, way.exit.gates_V) for way in take.alternatives
    ]
    assert found == [(name, length, gates(first), gates(last)) for name, length, first, last in ways]
    for way in take.alternatives:
        assert not way.stretches[0].needs.ramps
        coil = [leg for leg in way.stretches[0].legs if leg.channel == "coil"]
        assert [(leg.action, leg.seconds) for leg in coil] == [("hold", way.stretches[0].seconds)]


@pytest.mark.parametrize("direction", ["up", "both"])
def test_the_gate_legs_cover_the_line_and_join(direction: str) -> None:
    (way, *_) = one_take(sweep(direction=direction)).alternatives
    legs = [leg for leg in way.stretches[0].legs if leg.channel == "gates"]
    assert legs[0].start_s == 0
    assert legs[-1].end_s == way.stretches[0].seconds
    volts = [way.entry.gates_V, *(leg.gates_V[1] for leg in legs if leg.gates_V)]
    assert volts == ([gates(-0.5), gates(0.5)] if direction == "up" else [gates(-0.5), gates(0.5), gates(-0.5)])


def test_a_range_written_downwards_is_the_same_range() -> None:
    assert one_take(sweep(sweep="0.5 V to -0.5 V", direction="up")).alternatives[0].entry.gates_V == gates(-0.5)


@pytest.mark.parametrize(
    ("direction", "total"),
    [
        # 5 lines of 302 s; between them `top` goes back 1 V in 100 s while `back` moves on 0.25 V in 2.5 s
        ("up", 5 * 302 + 4 * 100),
        # 5 lines there and back; between them `back` moves on in 2.5 s
        ("both", 5 * 604 + 10),
    ],
)
def test_a_second_gate_is_a_line_for_each_of_its_values(direction: str, total: int) -> None:
    way = one_take(sweep(direction=direction, **SECOND)).alternatives[0]
    assert way.stretches[0].seconds == total
    assert way.entry.gates_V == gates(-0.5, 0.0)
    assert way.exit.gates_V == gates(0.5 if direction == "up" else -0.5, 1.0)


def test_a_slow_second_gate_sets_the_pace_between_lines() -> None:
    slow = {"samples.0.gates.1.rate": "1 mV/s"}
    # 0.25 V at 1 mV/s is 250 s, longer than the 100 s back
    assert seconds(one_take(sweep(direction="up", **SECOND), week=slow)) == [5 * 302 + 4 * 250]


@pytest.mark.parametrize(("poles", "percent"), [(1, 99.0), (4, 99.0), (8, 99.9)])
def test_without_a_dwell_each_point_waits_for_the_lock_in(poles: int, percent: float) -> None:
    settle_s = float(gamma.ppf(percent / 100, a=poles, scale=0.3))
    target = sweep(direction="up", lockin={"time_constant": "300 ms", "poles": poles, "settled": f"{percent} %"})
    take = one_take({key: value for key, value in target.items() if key != "dwell"})
    assert seconds(take) == [math.ceil(101 * settle_s + 100)]
    assert take.alternatives[0].stretches[0].pace.endswith("lock-in settling")


def test_a_dwell_asked_goes_before_the_lock_in() -> None:
    take = one_take(sweep(direction="up", lockin={"time_constant": "100 s"}))
    assert seconds(take) == [302]
    assert take.alternatives[0].stretches[0].pace == "101 points of 2 s, dwell asked"


def test_driven_or_persistent_times_up_or_down() -> None:
    take = one_take(sweep(coil="either"))
    assert [(way.direction, way.coil) for way in take.alternatives] == [
        ("up", "driven"),
        ("up", "persistent"),
        ("down", "driven"),
        ("down", "persistent"),
    ]


def test_a_held_gate_stays_through_the_sweep() -> None:
    way = one_take(sweep(direction="up", gates={"back": "1.5 V"})).alternatives[0]
    assert (way.entry.gates_V, way.exit.gates_V) == (gates(-0.5, 1.5), gates(0.5, 1.5))


@pytest.mark.parametrize(
    ("keys", "says"),
    [
        ({"sweep": "-0.5 V to 1.5 V"}, "1.5 V on S1/top: its window is -1 V to 1 V"),
        ({"gates": {"back": "2.5 V"}}, "2.5 V on S1/back: its window is -2 V to 2 V"),
        ({**SECOND, "second_sweep": "0 V to -3 V"}, "-3 V on S1/back"),
    ],
)
def test_beyond_a_gates_window(keys: Changes, says: str) -> None:
    assert says in refusal(sweep(**keys))


def test_the_swept_gate_counts_at_its_reference() -> None:
    target = wish("gate sweep", filling=2, gates={"back": "1 V"}, **LINE)
    slopes: Changes = {"samples.0.gates.1.density_slope": "0.2e11 cm^-2/V", "samples.0.gates.0.rest": "-0.4 V"}
    # 2e15 and 0.2e15 from `back`; `top`, which is swept, adds nothing though it rests at -0.4 V
    assert field_T(one_take(target, week=slopes).alternatives[0]) == pytest.approx(FILLING_1_T / 2 * 2.2 / 2)


# Maps


def fan(**keys: object) -> Changes:
    return wish("map", **{**LINE, "direction": "up", **keys})


def rung_fields_T(**keys: object) -> list[float]:
    return [field_T(take.alternatives[0]) for take in takes_of(fan(**keys))]


def test_rungs() -> None:
    assert rung_fields_T(field="1 T to 3 T", rungs=5) == pytest.approx([1, 1.5, 2, 2.5, 3])
    assert rung_fields_T(fields=["3 T", "0 T", "-1 T"]) == [3, 0, -1]
    assert rung_fields_T(fillings=[2, "5/2", 4]) == pytest.approx([FILLING_1_T / nu for nu in (2, 2.5, 4)])
    ends = FILLING_1_T / 4, FILLING_1_T / 2
    # rungs of a range of fillings lie at equal steps of field
    assert rung_fields_T(filling="4 to 2", rungs=3) == pytest.approx([ends[0], sum(ends) / 2, ends[1]])


def test_a_rung_is_a_take_with_a_line() -> None:
    takes = takes_of(fan(fields=["1 T", "2 T"]))
    assert [take.name for take in takes] == ["T1 · 1", "T1 · 2"]
    assert [seconds(take) for take in takes] == [[302], [302]]
    assert takes[1].label == "rung 2: top -0.5 V to 0.5 V at 2 T"


def test_a_map_with_a_rung_beyond_reach_is_impossible_as_a_whole() -> None:
    assert "reaches 10 T" in refusal(fan(fields=["1 T", "11 T"]))


def test_uncertain_rungs_say_so() -> None:
    first, last = takes_of(fan(filling="4 to 2", rungs=2), week={"samples.0.density_error": "5 %"})
    assert "between 1.964 and 2.171 T" in first.notes[0]
    assert "between 3.929 and 4.342 T" in last.notes[0]
