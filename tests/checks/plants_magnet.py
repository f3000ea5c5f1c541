"""Faults of field, ramps, supply and switch, by hand on the reference rig; numbers worked out from its file."""

from __future__ import annotations

from dataclasses import replace

from planner.plan import Coil, StepKind, along_z
from tests.checks.build import HOUR, Writer, at_step, driven, leg_of, persistent, rebooked, request
from tests.checks.plants import Judged, plant, sound
from tests.checks.weeks import SETTLING, rig, target, week

HOLD = target("Stay", "hold", field='"1 T"', duration='"30 min"')


def done(plan: Writer) -> Judged:
    """What is judged."""
    return plan.request, plan.plan()


def empty(text: str | None = None, **keys: str) -> Writer:
    """A writer for a week without targets."""
    return Writer(request(week(**keys), rig() if text is None else text))  # type: ignore[arg-type]


@plant("rated field", value=12.5, limit=12, at_s=30 + 1600 + 1200 + 750, unit="T")
def beyond_the_rated_field() -> Judged:
    plan = empty(rig(max_current='"110 A"'))
    plan.ramp([8, 11, 12, 12.5], [0.3, 0.15, 0.08, 0.08])
    plan.ramp([12, 11, 8, 0], [0.08, 0.08, 0.15, 0.3])
    return done(plan)


@sound("rated field")
def up_to_the_rated_field() -> Judged:
    plan = empty()
    plan.ramp([8, 11, 12], [0.3, 0.15, 0.08])
    plan.ramp([11, 8, 0], [0.08, 0.15, 0.3])
    return done(plan)


@plant("rated field", value=13, limit=12, subject="Far")
def asked_beyond_the_rated_field() -> Judged:
    return request(week(target("Far", "hold", field='"-13 T"', duration='"1 h"'))), None


@plant("filling in reach", limit=12, subject="Far")
def filling_out_of_reach() -> Judged:
    return request(week(target("Far", "hold", filling='"1/3"', duration='"1 h"'))), None


@plant("provisional filling", limit=12, subject="Near")
def filling_that_straddles() -> Judged:
    text = week(target("Near", "hold", filling="0.38", duration='"1 h"'))  # 4.13567 × 1.1 / 0.38 = 11.97 T
    return request(text.replace('density = "1.1e11 cm^-2"', 'density = "1.1e11 cm^-2"\ndensity_error = "2 %"')), None


@plant("ramp rate", value=0.0808, limit=0.08, at_s=30 + 1600 + 1200, unit="T/min")
def one_percent_too_fast_in_the_last_segment() -> Judged:
    plan = empty()
    plan.ramp([8, 11, 12], [0.3, 0.15, 0.0808])
    plan.ramp([11, 8, 0], [0.08, 0.15, 0.3])
    return done(plan)


@plant("ramp rate", value=0.3, limit=0.15, at_s=30 + 1600)
def one_leg_across_an_edge_at_the_lower_rate() -> Judged:
    plan = empty()
    plan.ramp([9], [0.3])
    plan.ramp([8, 0], [0.15, 0.3])
    return done(plan)


@sound("ramp rate")
def edge_belongs_to_the_lower_segment() -> Judged:
    plan = empty()
    plan.ramp([8], [0.3])
    plan.ramp([-8, 0], [0.3, 0.3])
    return done(plan)


@plant("ramp time", value=195, limit=200, unit="s")
def a_ramp_that_is_not_yet_there() -> Judged:
    plan = empty()
    plan.ramp([1], [0.3])
    late = plan.leg("ramp", 195, driven(1), driven(2), 0.3 / 60)
    plan.write(StepKind.MOVE, "ramp", [late])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("field moves only in ramps", value=0.5)
def field_that_drifts_in_a_hold() -> Judged:
    plan = empty()
    plan.ramp([1], [0.3])
    plan.write(StepKind.MOVE, "drift", [plan.leg("hold", 600, driven(1), driven(1.5))])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("field moves only in ramps", also=("lead current carries the field",))
def field_that_moves_with_the_switch_closed() -> Judged:
    plan = empty()
    plan.ramp([1], [0.3])
    plan.close_switch()
    moved = persistent(1.5)
    moved = replace(moved, persistent_current_A=plan.state.coil.persistent_current_A)
    plan.write(StepKind.MOVE, "ramp", [plan.leg("ramp", 100, plan.state.coil, moved, 0.3 / 60)])
    plan.write(StepKind.MOVE, "ramp", [plan.leg("ramp", 100, moved, replace(moved, field_T=along_z(1)), 0.3 / 60)])
    plan.open_switch()
    plan.ramp([0], [0.3])
    return done(plan)


@plant("magnet settles", value=30, limit=60, unit="s")
def data_before_the_magnet_settles() -> Judged:
    plan = Writer(request(week(HOLD), rig(settle='"60 s"')))
    plan.ramp([1], [0.3], settle=30)
    plan.take("Stay", [plan.still(1800)])
    plan.ramp([0], [0.3])
    return done(plan)


@sound("magnet settles")
def data_when_the_magnet_has_settled() -> Judged:
    plan = Writer(request(week(HOLD), SETTLING))
    plan.ramp([1], [0.3], settle=900)
    plan.take("Stay", [plan.still(1800)])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("sweep rate in the table", value=0.5, limit=0.08, subject="Fast", unit="T/min")
def sweep_above_the_table() -> Judged:
    return request(week(target("Fast", "field sweep", field='"0 T to 12 T"', rate='"0.5 T/min"'))), None


@sound("sweep rate in the table")
def sweep_at_the_table() -> Judged:
    return request(week(target("Fast", "field sweep", field='"0 T to 8 T"', rate='"0.3 T/min"'))), None


# 0.3 T/min / 0.12 T/A = 0.041667 A/s; × 20 H = 0.83333 V, + 66.667 A × 3 mΩ = 1.03333 V at 8 T going up
RESISTIVE = rig(max_voltage='"1.03 V"', lead_resistance='"3 mohm"')


@plant("charging voltage", value=1.033333, limit=1.03, at_s=30 + 1600, unit="V")
def voltage_going_up() -> Judged:
    plan = empty(RESISTIVE)
    plan.ramp([8], [0.3])
    plan.ramp([0], [0.3])  # down the resistance helps: 0.83 V
    return done(plan)


@sound("charging voltage")
def voltage_that_just_suffices() -> Judged:
    plan = empty(rig(max_voltage='"1.0333333333334 V"', lead_resistance='"3 mohm"'))
    plan.ramp([8], [0.3])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("charging voltage", value=0.833333, limit=0.8)
def voltage_going_down() -> Judged:
    plan = empty(rig(max_voltage='"0.8 V"'))
    plan.ramp([8], [0.2])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("supply current", value=100.05, limit=100, unit="A")
def leads_above_the_supply() -> Judged:
    plan = empty()
    plan.ramp([8, 11, 12], [0.3, 0.15, 0.08])
    plan.close_switch()
    down, over = plan.state.coil, persistent(12, 100.05)
    legs = [plan.leg("leads", 51, down, over, 1.99), plan.leg("leads", 51, over, down, 1.99)]
    plan.write(StepKind.MOVE, "try the leads", legs, attended=True, people=("Ada",))
    plan.open_switch()
    plan.ramp([11, 8, 0], [0.08, 0.15, 0.3])
    return done(plan)


UNIPOLAR = rig(polarity='"unipolar"\nreversal = "90 s"')


@plant("supply polarity", value=0, limit=90, unit="s")
def through_zero_with_a_unipolar_supply() -> Judged:
    plan = empty(UNIPOLAR)
    plan.ramp([1, 0], [0.3, 0.3])
    plan.ramp([-1, 0], [0.3, 0.3])
    return done(plan)


@plant("supply polarity", value=89, limit=90)
def reversed_in_too_little_time() -> Judged:
    return _reversed(89)


@sound("supply polarity")
def reversed_in_just_enough_time() -> Judged:
    return _reversed(90)


def _reversed(seconds: int) -> Judged:
    plan = empty(UNIPOLAR)
    plan.ramp([1, 0], [0.3, 0.3])
    plan.write(StepKind.MOVE, "reverse", [plan.still(seconds, "reverse")])
    plan.ramp([-1, 0], [0.3, 0.3])
    return done(plan)


@plant("lead current carries the field", value=8.2, limit=8.333333, unit="A")
def lead_current_of_another_field() -> Judged:
    plan = empty()
    plan.ramp([1], [0.3])
    wrong = replace(driven(1), lead_current_A=along_z(8.2))
    plan = empty()
    plan.write(
        StepKind.MOVE,
        "ramp",
        [plan.leg("heater on", 30, Coil(), driven(0)), plan.leg("ramp", 200, driven(0), wrong, 0.3 / 60)],
    )
    plan.write(StepKind.MOVE, "ramp", [plan.leg("ramp", 200, wrong, Coil(), 0.3 / 60)])
    return done(plan)


# ---- the switch ----------------------------------------------------------------------------------------------------


def parked(text: str | None = None, **keys: str) -> Writer:
    """At 6 T, persistent, leads at zero, 45 min after the week's start or so."""
    plan = empty(text, **keys)
    plan.ramp([6], [0.3])
    plan.close_switch()
    return plan


def back(plan: Writer) -> Judged:
    """Open the switch and run down."""
    plan.open_switch()
    plan.ramp([0], [0.3])
    return done(plan)


@sound("switch order")
def in_and_out_as_it_should_be() -> Judged:
    return back(parked())


@plant("switch order", also=("lead current carries the field",))
def leads_down_on_a_driven_coil() -> Judged:
    plan = empty()
    plan.ramp([6], [0.3])
    bare = replace(driven(6), lead_current_A=along_z(0))
    legs = [plan.leg("leads", 25, driven(6), bare, 2.0), plan.leg("leads", 25, bare, driven(6), 2.0)]
    plan.write(StepKind.MOVE, "leads", legs, attended=True, people=("Ada",))
    plan.ramp([0], [0.3])
    return done(plan)


@plant("switch order")
def leads_that_move_while_the_switch_cools() -> Judged:
    plan = empty()
    plan.ramp([6], [0.3])
    up, down = driven(6), persistent(6)
    legs = [plan.leg("hold", 300, up, up), plan.leg("heater off", 60, up, down)]
    plan.write(StepKind.MOVE, "close switch", legs, attended=True, people=("Ada",))
    return back(plan)


@plant("switch order")
def closed_by_no_heater() -> Judged:
    plan = empty()
    plan.ramp([6], [0.3])
    legs = [plan.leg("hold", 400, driven(6), persistent(6, 50.0))]
    plan.write(StepKind.MOVE, "close switch", legs, attended=True, people=("Ada",))
    plan.write(StepKind.MOVE, "leads", [plan.leg("leads", 25, persistent(6, 50.0), persistent(6), 2.0)],
               attended=True, people=("Ada",))  # fmt: skip
    return back(plan)


def _switch_leg(action: str, seconds: int, step: int) -> Judged:
    """The plan of `in_and_out_as_it_should_be` with one leg of the switch of another length."""
    plan = parked()
    if step == 3:
        _, whole = back(plan)
    else:
        _, whole = back(plan)
    assert whole is not None
    edited = at_step(whole, step, lambda s: leg_of(s, action, lambda leg: replace(leg, end_s=leg.start_s + seconds)))
    moved, at = [], 0
    for one in edited.steps:
        legs = []
        start = at
        for leg in one.legs:
            legs.append(replace(leg, start_s=at, end_s=at + leg.seconds))
            at += leg.seconds
        if one is edited.steps[-1]:
            at = plan.week.horizon_s
            legs[-1] = replace(legs[-1], end_s=at)
        moved.append(replace(one, start_s=start, end_s=at, legs=tuple(legs)))
    return plan.request, rebooked(plan.request, replace(edited, steps=tuple(moved)))


@plant("switch times", value=299, limit=300, source="rig: magnet.switch.hold_before")
def held_a_second_too_short() -> Judged:
    return _switch_leg("hold", 299, 2)


@plant("switch times", value=59, limit=60, source="rig: magnet.switch.cool")
def cooled_a_second_too_short() -> Judged:
    return _switch_leg("heater off", 59, 2)


@plant("switch times", value=9, limit=10, source="rig: magnet.switch.settle_after")
def settled_a_second_too_short() -> Judged:
    return _switch_leg("settle", 9, 3)


@plant("switch times", value=29, limit=30, source="rig: magnet.switch.warm")
def warmed_a_second_too_short() -> Judged:
    return _switch_leg("heater on", 29, 3)


@plant("lead rate", value=50 / 24 * 60, limit=120, unit="A/min")
def leads_too_fast() -> Judged:
    return _switch_leg("leads", 24, 2)


def _opened_at(leads_A: float) -> Judged:
    plan = parked()
    down, there = plan.state.coil, persistent(6, leads_A)
    seconds = max(1, -int(-abs(leads_A) / 2 // 1))
    legs = [
        plan.leg("leads", seconds, down, there, 2.0 if leads_A else None),
        plan.leg("settle", 10, there, there),
        plan.leg("heater on", 30, there, driven(6)),
    ]
    plan.write(StepKind.MOVE, "open switch", legs, attended=True, people=("Ada",))
    plan.ramp([0], [0.3])
    return done(plan)


@plant("lead current matches the coil", also=("switch order",), value=50, limit=0.1, unit="A")
def heater_on_at_no_current() -> Judged:
    return _opened_at(0.0)


@plant("lead current matches the coil", also=("switch order",), value=100, limit=0.1)
def heater_on_at_the_wrong_sign() -> Judged:
    return _opened_at(-50.0)


@plant("lead current matches the coil", also=("switch order",), value=0.11, limit=0.1)
def heater_on_a_little_off() -> Judged:
    return _opened_at(49.89)


@plant("persistent current is known", also=("last state",))
def switch_worked_with_an_unknown_current() -> Judged:
    there = 'level = "95 %", field = "6 T", coil = "persistent", persistent_current = "unknown"'
    plan = empty(present=there)
    down = plan.state.coil
    there_A = replace(down, lead_current_A=along_z(50.0))
    plan.write(StepKind.MOVE, "leads", [plan.leg("leads", 25, down, there_A, 2.0)], attended=True, people=("Ada",))
    plan.write(StepKind.MOVE, "leads", [plan.leg("leads", 25, there_A, down, 2.0)], attended=True, people=("Ada",))
    return done(plan)


@plant("switch attended", also=("staffed hours", "people present"), at_s=int(9.5 * HOUR) + 60)
def switch_closed_after_hours() -> Judged:
    plan = empty(end="2031-03-04T18:00:00")
    plan.ramp([6], [0.3])
    plan.wait_until(int(9.5 * HOUR) - 240)
    plan.close_switch()
    plan.wait_until(24 * HOUR)
    return back(plan)


@plant("switch attended")
def switch_closed_by_nobody() -> Judged:
    _, plan = back(parked())
    assert plan is not None
    alone = at_step(plan, 2, lambda step: replace(step, attended=False, people=()))
    return parked().request, alone


FORBIDDEN = rig(unattended_persistent="false")


@plant("unattended persistent field", at_s=int(9.5 * HOUR))
def persistent_overnight_where_forbidden() -> Judged:
    plan = parked(FORBIDDEN, end="2031-03-04T18:00:00")
    plan.wait_until(24 * HOUR)
    return back(plan)


@sound("unattended persistent field")
def persistent_by_day_where_forbidden() -> Judged:
    return back(parked(FORBIDDEN))


@sound("charging voltage")
def voltage_that_the_leads_help_down() -> Judged:
    # up at 0.2 T/min: 0.5556 + 0.2 V; down at 0.3 T/min: −0.8333 + 0.2 V to −0.8333 V
    plan = empty(rig(max_voltage='"0.8334 V"', lead_resistance='"3 mohm"'))
    plan.ramp([8], [0.2])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("switch order")
def leads_that_open_the_switch_by_themselves() -> Judged:
    plan = parked()
    opened = plan.leg("leads", 25, plan.state.coil, driven(6), 2.0)
    plan.write(StepKind.MOVE, "open switch", [opened], attended=True, people=("Ada",))
    plan.ramp([0], [0.3])
    return done(plan)
