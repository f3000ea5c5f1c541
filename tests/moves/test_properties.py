"""Properties that hold for any rig, field and order, judged by a walk of the test's own."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.files import Rig
from planner.moves import Lines, field_legs, move, setup_of
from planner.plan import CoilMode, Leg, State
from tests.builders import REMOVED, rig, state_at, week

STEPS = 40
WEEK = week({"present.level": REMOVED})


@dataclass(frozen=True)
class Machine:
    """The numbers of a random magnet beside the rig made of them."""

    edges_T: tuple[float, ...]
    rates_T_per_s: tuple[float, ...]
    voltage_V: float
    resistance_ohm: float
    rig: Rig

    def allowed_T_per_s(self, field_T: float) -> float:
        """The table's rate at |B|; the edge belongs to the lower-field row."""
        rows = zip(self.edges_T, self.rates_T_per_s, strict=True)
        return next(rate for edge, rate in rows if abs(field_T) <= edge + 1e-12)


@st.composite
def machines(draw: st.DrawFn, *, weak: bool = True, unipolar: bool = True, slowest: int = 1) -> Machine:
    """A rig with one to four rows in its table, rates from ``slowest`` · 0.1 mT/s, perhaps with a weak supply."""
    rows = draw(st.integers(1, 4))
    widths_T = draw(st.lists(st.integers(5, 40), min_size=rows, max_size=rows))
    edges_T = tuple(sum(widths_T[: at + 1]) / 10 for at in range(rows))
    rates = tuple(draw(st.integers(slowest, 90)) * 1e-4 for _ in range(rows))
    resistance_ohm = draw(st.sampled_from([0.0, 1e-3, 5e-3]))
    spare_V = draw(st.sampled_from([0.02, 0.1, 0.3])) if weak and draw(st.booleans()) else 5.0
    voltage_V = edges_T[-1] * 10 * resistance_ohm + spare_V
    changes: dict[str, object] = {
        "magnet.rated_field": f"{edges_T[-1]!r} T",
        "magnet.ramp_table": [
            {"to": f"{edge!r} T", "rate": f"{rate!r} T/s"} for edge, rate in zip(edges_T, rates, strict=True)
        ],
        "magnet.supply.max_current": "200 A",
        "magnet.supply.max_voltage": f"{voltage_V!r} V",
        "magnet.supply.lead_resistance": f"{resistance_ohm!r} ohm",
    }
    if unipolar and draw(st.booleans()):
        changes |= {"magnet.supply.polarity": "unipolar", "magnet.supply.reversal": "37 s"}
    return Machine(edges_T, rates, voltage_V, resistance_ohm, rig(changes))


@st.composite
def ramps(draw: st.DrawFn, ends: int = 2, *, weak: bool = True, unipolar: bool = True) -> tuple[Machine, list[float]]:
    """A machine and some fields within its reach, also exactly at edges and at zero."""
    machine = draw(machines(weak=weak, unipolar=unipolar))
    most_T = machine.edges_T[-1]
    special = st.sampled_from([0.0, *machine.edges_T, *(-edge for edge in machine.edges_T)])
    anywhere = st.integers(-1000, 1000).map(lambda part: part / 1000 * most_T)
    return machine, [draw(special | anywhere) for _ in range(ends)]


def fields(leg: Leg) -> tuple[float, float]:
    assert leg.coil is not None
    return leg.coil[0].field_T[2], leg.coil[1].field_T[2]


def seconds(legs: tuple[Leg, ...]) -> int:
    return sum(leg.seconds for leg in legs)


@settings(max_examples=100, deadline=None)
@given(ramps())
def test_no_leg_breaks_the_table_or_the_supply(case: tuple[Machine, list[float]]) -> None:
    machine, (begin_T, finish_T) = case
    for leg in field_legs(machine.rig, begin_T, finish_T):
        if leg.action == "reverse":
            continue
        from_T, to_T = fields(leg)
        assert leg.rate is not None
        assert abs(to_T - from_T) <= leg.rate * leg.seconds * (1 + 1e-9) + 1e-8  # it arrives in its time
        for step in range(STEPS):
            at_T = from_T + (to_T - from_T) * (step + 0.5) / STEPS
            assert leg.rate <= machine.allowed_T_per_s(at_T) * (1 + 1e-9)
            rising = (to_T - from_T) * at_T > 0
            induced_V = 10 * leg.rate / 0.1  # L dI/dt with L = 10 H and 0.1 T/A
            resistive_V = abs(at_T) / 0.1 * machine.resistance_ohm
            needed_V = induced_V + resistive_V if rising else induced_V - resistive_V
            assert needed_V <= machine.voltage_V * (1 + 1e-9)


@settings(max_examples=100, deadline=None)
@given(ramps())
def test_legs_join_and_never_straddle_an_edge_or_zero(case: tuple[Machine, list[float]]) -> None:
    machine, (begin_T, finish_T) = case
    legs = field_legs(machine.rig, begin_T, finish_T)
    if begin_T == finish_T:
        assert legs == ()
        return
    assert fields(legs[0])[0] == begin_T
    assert fields(legs[-1])[1] == finish_T
    assert legs[0].start_s == 0
    for one, other in pairwise(legs):
        assert one.end_s == other.start_s
        assert one.coil is not None
        assert other.coil is not None
        assert one.coil[1] == other.coil[0]
    stops = [0.0, *machine.edges_T, *(-edge for edge in machine.edges_T)]
    for leg in legs:
        low, high = sorted(fields(leg))
        assert not [stop for stop in stops if low < stop < high]


@settings(max_examples=100, deadline=None)
@given(ramps(weak=False))
def test_there_takes_as_long_as_back_where_the_voltage_is_no_limit(case: tuple[Machine, list[float]]) -> None:
    machine, (begin_T, finish_T) = case
    there, back = field_legs(machine.rig, begin_T, finish_T), field_legs(machine.rig, finish_T, begin_T)
    assert seconds(there) == seconds(back)


@settings(max_examples=100, deadline=None)
@given(ramps(3))
def test_a_midpoint_is_never_quicker(case: tuple[Machine, list[float]]) -> None:
    machine, (begin_T, middle_T, finish_T) = case
    direct = field_legs(machine.rig, begin_T, finish_T)
    detour = seconds(field_legs(machine.rig, begin_T, middle_T)) + seconds(field_legs(machine.rig, middle_T, finish_T))
    assert seconds(direct) <= detour + len(direct)  # a second a leg for rounding


@settings(max_examples=100, deadline=None)
@given(ramps(), st.integers(1, 60))
def test_a_slower_rate_asked_is_kept_and_costs_time(case: tuple[Machine, list[float]], asked: int) -> None:
    machine, (begin_T, finish_T) = case
    rate = asked * 1e-4
    swept = field_legs(machine.rig, begin_T, finish_T, rate_T_per_s=rate, asked="asked")
    assert all(leg.rate <= rate * (1 + 1e-12) for leg in swept if leg.rate is not None)
    assert seconds(swept) >= seconds(field_legs(machine.rig, begin_T, finish_T))
    assert seconds(swept) >= abs(finish_T - begin_T) / rate - 1e-6


@st.composite
def states(draw: st.DrawFn, machine: Machine) -> State:
    """Any state of the machine at rest."""
    most_T = machine.edges_T[-1]
    field_T = draw(
        st.sampled_from([0.0, *machine.edges_T]) | st.integers(-100, 100).map(lambda part: part / 100 * most_T)
    )
    gates_V = (("S1/back", draw(st.sampled_from([-2.0, 0.0, 0.3]))), ("S1/top", draw(st.sampled_from([0.0, 0.7]))))
    return state_at(field_T, draw(st.sampled_from([0.02, 0.03, 0.16, 0.5])), gates_V, persistent=draw(st.booleans()))


def burn_L(legs: list[Leg]) -> float:
    """Litres by the rules of the rig file, leg by leg, in the test's own words."""
    total_L = 0.0
    for leg in legs:
        assert leg.coil is not None
        before, after = leg.coil
        open_switch = leg.action == "heater on" or (before.mode is CoilMode.DRIVEN and leg.action != "heater off")
        amperes = (abs(before.lead_current_A[2]) + abs(after.lead_current_A[2])) / 2
        rate = 1e-4 + (5e-5 if open_switch else 0.0) + 1e-6 * amperes
        total_L += rate * leg.seconds + 0.1 * abs(after.field_T[2] - before.field_T[2])
    return total_L


@settings(max_examples=120, deadline=None)
@given(st.data())
def test_coil_legs_cover_their_stretch_and_carry_its_litres(data: st.DataObject) -> None:
    machine = data.draw(machines())
    together = data.draw(st.lists(st.sampled_from(["field", "temperature", "gates"]), unique=True))
    changed = machine.rig.model_copy(
        update={"policies": machine.rig.policies.model_copy(update={"together": frozenset(together)})}
    )
    before, after = data.draw(states(machine)), data.draw(states(machine))
    here = before
    for stretch in move(setup_of(changed, WEEK), Lines(changed), before, after):
        assert stretch.before == here
        here = stretch.after
        coil = [leg for leg in stretch.legs if leg.channel == "coil"]
        assert coil[0].start_s == 0
        assert coil[-1].end_s == stretch.seconds
        assert all(one.end_s == other.start_s for one, other in pairwise(coil))
        assert all(one.coil and other.coil and one.coil[1] == other.coil[0] for one, other in pairwise(coil))
        assert coil[0].coil is not None
        assert coil[-1].coil is not None
        assert coil[0].coil[0] == stretch.before.coil
        assert coil[-1].coil[1] == stretch.after.coil
        assert all(0 <= leg.start_s < leg.end_s <= stretch.seconds for leg in stretch.legs)
        assert stretch.litres == pytest.approx(burn_L(coil), rel=1e-9)
        assert sum(leg.litres for leg in coil) == pytest.approx(stretch.litres, rel=1e-12)
        assert all(leg.litres == 0 for leg in stretch.legs if leg.channel != "coil")
        assert stretch.needs.ramps == any(leg.action == "ramp" for leg in coil)
        assert stretch.needs.highest_T == max(abs(field_T) for leg in coil for field_T in fields(leg))
    assert here == after


@settings(max_examples=100, deadline=None)
@given(st.data())
def test_the_least_content_keeps_every_line_and_a_drop_less_breaks_one(data: st.DataObject) -> None:
    """A level walk of the test's own: start line 54.4 L, at field 37.6 L, reserve 17.6 L (see tests of helium)."""
    machine = data.draw(machines(weak=False, slowest=10))
    before, after = data.draw(states(machine)), data.draw(states(machine))
    for stretch in move(setup_of(machine.rig, WEEK), Lines(machine.rig), before, after):
        coil = [leg for leg in stretch.legs if leg.channel == "coil"]
        assert keeps_lines(coil, stretch.least_start_L + 1e-9)
        if stretch.least_start_L > 0:
            assert not keeps_lines(coil, stretch.least_start_L - 1e-6)


def keeps_lines(legs: list[Leg], content_L: float) -> bool:
    """Whether a walk that starts with this content keeps every line.

    A run-down from 16 T at 1 mT/s takes 1.6 L for the field and 16000 s at no more than 0.23 mL/s, in all less than the
    12 L between the coil's top and the at-field line: that line binds.
    """
    was_rising = False
    for leg in legs:
        from_T, to_T = (abs(field_T) for field_T in fields(leg))
        rising = to_T > from_T
        if rising and not was_rising and content_L < 54.4:
            return False
        was_rising = rising
        content_L -= leg.litres
        if to_T >= from_T and content_L < (37.6 if to_T else 17.6):
            return False
    return True
