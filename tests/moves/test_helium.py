"""Litres by hand: 1e-4 L/s always, 5e-5 L/s switch open, 1e-6 L/s a lead ampere (mean of the leg), 0.1 L a tesla.

Lines with 2 % gauge error: start of a ramp 62 % = 54.4 L, at field 47 % = 37.6 L, coil top 32 % = 25.6 L,
reserve 22 % = 17.6 L.
"""

from __future__ import annotations

from dataclasses import replace

import pytest

from planner.moves import Lines, field_legs, rate_L_per_s
from planner.moves.helium import leg_litres, with_litres
from planner.moves.switch import closing_legs, opening_legs
from planner.plan import ZERO, Coil, CoilMode, Leg, along_z
from tests.builders import DRY, coil_at, rig

RIG = rig()
LINES = Lines(RIG)


def held(seconds: int, coil: Coil) -> Leg:
    return Leg("coil", "hold", 0, seconds, "", coil=(coil, coil))


@pytest.mark.parametrize(
    ("coil", "rate"),
    [
        (Coil(), 1e-4),
        (coil_at(6.0), 1e-4 + 5e-5 + 60e-6),
        (coil_at(-6.0), 1e-4 + 5e-5 + 60e-6),
        (coil_at(6.0, persistent=True), 1e-4),
        (replace(coil_at(6.0, persistent=True), lead_current_A=along_z(60.0)), 1e-4 + 60e-6),
        (Coil(ZERO, CoilMode.DRIVEN, ZERO), 1e-4 + 5e-5),
    ],
)
def test_litres_a_second_while_nothing_moves(coil: Coil, rate: float) -> None:
    assert rate_L_per_s(RIG, coil) == pytest.approx(rate, rel=1e-12)
    assert leg_litres(RIG, held(1000, coil)) == pytest.approx(1000 * rate, rel=1e-12)


def test_litres_of_ramps() -> None:
    up = [leg_litres(RIG, leg) for leg in field_legs(RIG, 0, 9)]
    # mean lead currents 30, 70 and 85 A; 1200, 1000 and 1000 s; 6, 2 and 1 T
    assert up == pytest.approx([1200 * 180e-6 + 0.6, 1000 * 220e-6 + 0.2, 1000 * 235e-6 + 0.1])
    assert [leg_litres(RIG, leg) for leg in field_legs(RIG, 9, 0)] == pytest.approx(up[::-1])


def test_litres_of_closing_the_switch() -> None:
    assert RIG.magnet.switch is not None
    hold, cool, leads = (leg_litres(RIG, leg) for leg in closing_legs(RIG, RIG.magnet.switch, 6.0))
    assert hold == pytest.approx(300 * 210e-6)
    assert cool == pytest.approx(60 * 160e-6)  # the heater is off: static and 60 A in the leads
    assert leads == pytest.approx(30 * 130e-6)  # 30 A on average; no field changes, so nothing a tesla


def test_litres_of_opening_the_switch() -> None:
    assert RIG.magnet.switch is not None
    legs = opening_legs(RIG.magnet.switch, coil_at(6.0, persistent=True))
    leads, settle, heater = (leg_litres(RIG, leg) for leg in legs)
    assert leads == pytest.approx(30 * 130e-6)
    assert settle == pytest.approx(10 * 160e-6)
    assert heater == pytest.approx(30 * 210e-6)  # the heater is on


def test_a_rig_without_a_bath_keeps_no_book() -> None:
    dry = rig(DRY)
    assert rate_L_per_s(dry, coil_at(6.0)) == 0
    assert [leg_litres(dry, leg) for leg in field_legs(dry, 0, 9)] == [0, 0, 0]
    lines = Lines(dry)
    assert (lines.start_ramp_L, lines.reserve_L, lines.stay_L(coil_at(9.0))) == (0, 0, 0)
    assert lines.least_start_L(field_legs(dry, 0, 9)) == 0


def test_the_lines_in_litres() -> None:
    assert LINES.start_ramp_L == pytest.approx(54.4)
    assert LINES.reserve_L == pytest.approx(17.6)
    assert LINES.stay_L(Coil()) == pytest.approx(17.6)
    assert LINES.stay_L(coil_at(6.0)) == pytest.approx(37.6)  # coil top and run-down, 25.6 + 0.816 L, are less
    assert LINES.stay_L(coil_at(-6.0, persistent=True)) == pytest.approx(37.6)
    assert Lines(RIG, recovering=True).reserve_L == 0
    assert Lines(RIG, recovering=True).stay_L(coil_at(6.0)) == pytest.approx(37.6)


def test_a_costly_run_down_raises_the_line() -> None:
    costly = Lines(rig({"bath.losses.moving": "5 L/T"}))
    # run-down from 6 T: 1200 s at 180e-6 L/s and 30 L, above the coil's top at 25.6 L
    assert costly.stay_L(coil_at(6.0)) == pytest.approx(25.6 + 0.216 + 30)
    assert costly.stay_L(coil_at(2.0)) == pytest.approx(37.6)  # 25.6 + 10 + a little is less


def test_least_content_for_a_ramp_up() -> None:
    legs = with_litres(RIG, field_legs(RIG, 0, 6))
    assert LINES.least_start_L(legs) == pytest.approx(54.4)
    warm = Leg("coil", "heater on", 0, 30, "", coil=(Coil(), Coil(mode=CoilMode.DRIVEN)))
    assert LINES.least_start_L(with_litres(RIG, (warm, *legs))) == pytest.approx(54.4 + 30 * 150e-6)


def test_only_the_first_rising_leg_of_a_run_meets_the_start_line() -> None:
    through = with_litres(RIG, field_legs(RIG, 0, 9))
    assert LINES.least_start_L(through) == pytest.approx(54.4)
    halted = with_litres(RIG, (*field_legs(RIG, 0, 6), held(36000, coil_at(6.0)), *field_legs(RIG, 6, 9)))
    # after 0.816 L of the first ramp and 7.56 L of the hold the next ramp starts anew
    assert LINES.least_start_L(halted) == pytest.approx(54.4 + 0.816 + 36000 * 210e-6)


def test_least_content_for_a_stay() -> None:
    assert LINES.least_start_L(with_litres(RIG, [held(36000, coil_at(6.0))])) == pytest.approx(37.6 + 7.56)
    parked = held(36000, coil_at(6.0, persistent=True))
    assert LINES.least_start_L(with_litres(RIG, [parked])) == pytest.approx(37.6 + 3.6)
    assert LINES.least_start_L(with_litres(RIG, [held(36000, Coil())])) == pytest.approx(17.6 + 3.6)


def test_running_down_asks_for_nothing_but_what_follows_does() -> None:
    down = with_litres(RIG, field_legs(RIG, 6, 3))
    assert LINES.least_start_L(down) == 0
    stay = with_litres(RIG, (*field_legs(RIG, 6, 3), held(1000, coil_at(3.0))))
    # 600 s at a mean 45 A and 3 T, then 1000 s at 30 A
    assert LINES.least_start_L(stay) == pytest.approx(37.6 + 600 * 195e-6 + 0.3 + 1000 * 180e-6)


def test_through_zero_the_rise_on_the_far_side_meets_the_start_line() -> None:
    legs = with_litres(RIG, field_legs(RIG, 3, -3))
    # down: 600 s at a mean 15 A and 3 T
    assert LINES.least_start_L(legs) == pytest.approx(54.4 + 600 * 165e-6 + 0.3)
