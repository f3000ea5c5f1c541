"""Faults of people, sharing, gates, stage and continuity, by hand on the reference rig."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace

from planner.plan import Step
from tests.checks.build import HOUR, Writer, at_step, gates_leg, request, stage_leg
from tests.checks.plants import Judged, plant, sound
from tests.checks.plants_magnet import done, empty
from tests.checks.weeks import SETTLING, rig, target, week

CHECKS = target("Checks", "other work", what='"contacts"', duration='"1 h"', attended="true")
PAIR = target("Pair", "other work", what='"lift"', duration='"1 h"', attended="true", people="2", training='"transfer"')
STAY = target("Stay", "hold", field='"0 T"', duration='"1 h"')
TWO_DAYS = "2031-03-04T18:00:00"


def taken(text: str, name: str, begin_s: int, seconds: int = HOUR, **more: object) -> Judged:
    """A week with one take of a target."""
    plan = Writer(request(text))
    plan.wait_until(begin_s)
    plan.take(name, [plan.still(seconds)], **more)
    return done(plan)


def edited(made: Judged, number: int, edit: Callable[[Step], Step]) -> Judged:
    """The same with one step edited."""
    asked, plan = made
    assert plan is not None
    return asked, at_step(plan, number, edit)


# ---- people --------------------------------------------------------------------------------------------------------


@sound("staffed hours")
def attended_to_the_very_end() -> Judged:
    return taken(week(CHECKS, end=TWO_DAYS), "Checks", int(8.5 * HOUR), attended=True, people=("Ada",))


@plant("staffed hours", also=("people present",), value=1, limit=0, at_s=9.5 * HOUR, unit="min")
def attended_a_minute_too_long() -> Judged:
    return taken(week(CHECKS, end=TWO_DAYS), "Checks", int(8.5 * HOUR) + 60, attended=True, people=("Ada",))


@plant("staffed hours")
def attended_work_that_is_not_marked() -> Judged:
    return taken(week(CHECKS), "Checks", 0)


@plant("staffed hours", also=("transfer hours",), subject="Checks", value=30, limit=60, unit="min")
def week_with_work_longer_than_anybody_is_there() -> Judged:
    return request(week(CHECKS, staffed='days = "Mon", from = "08:30", to = "09:00"')), None


@plant("staffed hours", subject="Night", value=0, unit="min")
def week_with_attended_work_at_night() -> Judged:
    night = target(
        "Night", "hold", field='"0 T"', duration='"1 h"', attended="true",
        hours='[{ days = "daily", from = "20:00", to = "23:00" }]',
    )  # fmt: skip
    return request(week(night, end=TWO_DAYS)), None


@plant("people present", value=1, limit=2)
def one_of_two_is_not_trained() -> Judged:
    return taken(week(PAIR), "Pair", 0, attended=True, people=("Ada", "Cleo"))


@plant("people present", value=0, limit=1)
def somebody_who_is_away() -> Judged:
    away = 'away = [{ from = "Mon 09:00", to = "Mon 10:00" }]\n'
    return taken(week(CHECKS, away=away), "Checks", 0, attended=True, people=("Ben",))


@sound("people present")
def two_who_are_trained() -> Judged:
    return taken(week(PAIR), "Pair", 0, attended=True, people=("Ada", "Ben"))


@plant("one place at a time", also=("time without gaps", "legs cover the step"), value=600, limit=0)
def somebody_in_two_places() -> Judged:
    plan = Writer(request(week(CHECKS + target("More", "other work", what='"x"', duration='"1 h"', attended="true"))))
    plan.take("Checks", [plan.still(HOUR)], attended=True, people=("Ada",))
    plan.take("More", [plan.still(HOUR)], attended=True, people=("Ada",))
    return edited(done(plan), 1, lambda step: replace(step, end_s=step.end_s + 600))


# ---- slots and quiet hours -----------------------------------------------------------------------------------------

SLOT = 'slots = [{ from = "Mon 12:00", to = "Mon 14:00" }]\n'


@plant("user slots", value=10, limit=0, at_s=3.5 * HOUR, unit="min")
def ten_minutes_into_a_slot() -> Judged:
    return taken(week(STAY, slots=SLOT), "Stay", int(2.5 * HOUR) + 600)


@sound("user slots")
def up_to_a_slot() -> Judged:
    return taken(week(STAY, slots=SLOT), "Stay", int(2.5 * HOUR))


@plant("user slots")
def outside_ones_own_slots() -> Judged:
    theirs = STAY.replace('sample = "S"', 'sample = "Z"')
    return taken(week(theirs, slots=SLOT + "only_in_slots = true\n"), "Stay", 0)


QUIET = '\n[[quiet]]\nname = "Next door"\nfrom = "Mon 10:00"\nto = "Mon 12:00"\nforbids = "{forbids}"\nabove = "2 T"\n'


def quiet_ramp(begin_s: int, forbids: str = "ramps", stop: float = 1) -> Judged:
    """Up, stay to half past eleven, down after noon."""
    plan = empty(quiet=QUIET.format(forbids=forbids))
    plan.wait_until(begin_s)
    plan.ramp([stop], [0.3])
    plan.wait_until(int(3.5 * HOUR))
    plan.ramp([0], [0.3])
    return done(plan)


@sound("quiet hours")
def ramp_that_ends_as_quiet_begins() -> Judged:
    return quiet_ramp(int(1.5 * HOUR) - 230)


@plant("quiet hours", value=10 / 60, limit=0, at_s=1.5 * HOUR, unit="min")
def ramp_ten_seconds_into_quiet() -> Judged:
    return quiet_ramp(int(1.5 * HOUR) - 220)


@sound("quiet hours")
def field_at_its_quiet_limit() -> Judged:
    return quiet_ramp(HOUR, "field", 2)


@plant("quiet hours", value=3, limit=2, at_s=1.5 * HOUR, unit="T")
def field_above_its_quiet_limit() -> Judged:
    return quiet_ramp(HOUR, "field", 3)


@plant("quiet hours", value=1, limit=0, unit="h", subject="Guests")
def slot_in_quiet_hours() -> Judged:
    slots = 'slots = [{ from = "Mon 11:00", to = "Mon 14:00" }]\n'
    return request(week(quiet=QUIET.format(forbids="ramps"), slots=slots)), None


# ---- gates ---------------------------------------------------------------------------------------------------------

TOP = target("Gated", "hold", field='"0 T"', duration='"1 h"', gates="{ top = 0.4 }").replace("0.4", '"0.4 V"')


def gated(volt: float, seconds: int, text: str = TOP) -> Judged:
    """Gate top to a voltage in some seconds, an hour there, and back."""
    plan = Writer(request(week(text)))
    there = {"S/top": volt}
    plan.change(seconds, [gates_leg(0, seconds, {"S/top": 0.0}, there)])
    plan.take("Gated" if text == TOP else "Stay", [plan.still(HOUR)])
    plan.change(30, [gates_leg(0, 30, there, {"S/top": 0.0})])
    return done(plan)


@sound("gate rate")
def gate_at_its_rate() -> Judged:
    return gated(0.4, 20)


@plant("gate rate", value=0.4 / 19 * 1e3, limit=20, unit="mV/s")
def gate_too_fast() -> Judged:
    return gated(0.4, 19)


@plant("gate rate", at_s=HOUR)
def gate_that_jumps() -> Judged:
    plan = Writer(request(week()))
    plan.wait_until(HOUR)
    plan.change(30, [gates_leg(0, 30, {"S/top": 0.2}, {"S/top": 0.0})])
    return done(plan)


@plant("gate rate", value=100, limit=20, subject="Sweep", unit="mV/s")
def week_with_a_dwell_too_short_for_the_gate() -> Judged:
    sweep = {"gate": '"top"', "sweep": '"-0.5 V to 0.5 V"', "points": "101", "dwell": f'"{10 / 101} s"'}
    return request(week(target("Sweep", "gate sweep", field='"0 T"', **sweep))), None


@plant("gate window", also=("gates of a take",), value=0.6, limit=0.5, unit="V")
def gate_out_of_its_window() -> Judged:
    return gated(0.6, 30)


@plant("gate window", value=-0.8, limit=-0.5, subject="Far")
def week_with_a_voltage_out_of_its_window() -> Judged:
    text = target("Far", "gate sweep", field='"0 T"', gate='"top"', sweep='"-0.8 V to 0 V"', points="11")
    return request(week(text)), None


@plant("gates at rest", value=0.3, limit=0, unit="V")
def gate_left_up_for_somebody_elses_take() -> Judged:
    return gated(0.3, 30, STAY)


@plant("gates of a take", value=0.3, limit=0.4)
def gate_at_another_voltage_than_asked() -> Judged:
    return gated(0.3, 30)


# ---- stage ---------------------------------------------------------------------------------------------------------

WARM = target("Warm", "hold", field='"0 T"', duration='"1 h"', temperature='"100 mK"')
# the model: 300 s × ln(85 mK / 1 % of 100 mK) = 1332.8 s up, 900 s × ln(85 / 0.15) = 5705.9 s down
UP_S, DOWN_S = math.ceil(300 * math.log(85)), math.ceil(900 * math.log(85 / 0.15))


def warmed(up_s: int = UP_S, kelvin: float = 0.1, down_s: int = DOWN_S) -> Judged:
    """To a temperature, an hour there, back to base."""
    plan = Writer(request(week(WARM)))
    plan.change(up_s, [stage_leg(0, up_s, 0.015, kelvin)])
    plan.take("Warm", [plan.still(HOUR)])
    plan.change(down_s, [stage_leg(0, down_s, kelvin, 0.015, "cool")])
    return done(plan)


@sound("temperature time")
def temperature_in_its_time() -> Judged:
    return warmed()


@plant("temperature time", value=UP_S - 1, limit=300 * math.log(85), unit="s")
def warmed_a_second_too_fast() -> Judged:
    return warmed(UP_S - 1)


@plant("temperature time", value=DOWN_S - 1, limit=900 * math.log(85 / 0.15))
def cooled_a_second_too_fast() -> Judged:
    return warmed(down_s=DOWN_S - 1)


@plant("temperature range", also=("temperature of a take",), value=1.0, limit=0.9, unit="K")
def warmer_than_the_mixture_allows() -> Judged:
    return warmed(3000, 1.0, 9000)


@plant("temperature range", value=1.2, limit=0.9, subject="Hot")
def week_that_asks_for_too_warm() -> Judged:
    hot = target("Hot", "temperature series", field='"0 T"', temperatures='["0.5 K", "1.2 K"]', duration='"20 min"')
    return request(week(hot)), None


@plant("temperature of a take", value=0.09, limit=0.1, unit="K")
def measured_at_another_temperature() -> Judged:
    return warmed(1400, 0.09)


def settled(seconds: int) -> Judged:
    """A take at base after a ramp, the stage given some seconds."""
    plan = Writer(request(week(target("Stay", "hold", field='"1 T"', duration='"30 min"')), SETTLING))
    plan.ramp([1], [0.3], settle=seconds)
    plan.take("Stay", [plan.still(1800)])
    plan.ramp([0], [0.3])
    return done(plan)


@plant("stage settles after a ramp", value=899, limit=900, unit="s")
def measured_before_the_stage_is_back() -> Judged:
    return settled(899)


@plant("moved together")
def field_with_temperature_where_it_moves_alone() -> Judged:
    plan = Writer(request(week(), rig(together='["field", "gates"]')))
    plan.ramp([8], [0.3], beside=[stage_leg(0, UP_S, 0.015, 0.1)])
    plan.ramp([0], [0.3])
    plan.change(DOWN_S, [stage_leg(0, DOWN_S, 0.1, 0.015, "cool")])
    return done(plan)


@sound("moved together")
def field_with_temperature_where_it_may() -> Judged:
    plan = Writer(request(week()))
    plan.ramp([8], [0.3], beside=[stage_leg(0, UP_S, 0.015, 0.1)])
    plan.ramp([0], [0.3])
    plan.change(DOWN_S, [stage_leg(0, DOWN_S, 0.1, 0.015, "cool")])
    return done(plan)


@plant("quiet hours", value=2.5, limit=2, at_s=1.5 * HOUR + 40, unit="T")
def field_that_passes_its_quiet_limit_in_quiet() -> Judged:
    # 0.3 T/min: 1.8 T as quiet begins, 2 T 40 s later, 2.5 T after 500 s in all
    return quiet_ramp(int(1.5 * HOUR) - 30 - 360, "field", 2.5)
