"""Faults of takes against what their targets asked, of order, of lock-in, by hand on the reference rig."""

from __future__ import annotations

from dataclasses import replace

from planner.plan import LeftOut
from tests.checks.build import HOUR, Writer, driven, gates_leg, request
from tests.checks.plants import Judged, plant, sound
from tests.checks.plants_magnet import done
from tests.checks.plants_work import STAY, taken
from tests.checks.weeks import target, week

AT_1 = target("One", "hold", field='"1 T"', duration='"1 h"')


def at_field(text: str, name: str, field: float, seconds: int = HOUR, **keys: str) -> Judged:
    """Ramp, a take, ramp back."""
    plan = Writer(request(week(text, **keys)))  # type: ignore[arg-type]
    plan.ramp([field], [0.3])
    plan.take(name, [plan.still(seconds)])
    plan.ramp([0], [0.3])
    return done(plan)


@sound("field of a take")
def at_the_field_asked() -> Judged:
    return at_field(AT_1, "One", 1)


@plant("field of a take", value=1.001, limit=1, unit="T")
def a_millitesla_off() -> Judged:
    return at_field(AT_1, "One", 1.001)


@sound("field of a take")
def at_the_field_of_a_filling() -> Judged:
    # h/e = 4.135667697e-15 Wb (SI of 2019): 1.1e15 m^-2 / 2 → 2.27461723 T
    return at_field(target("Two", "hold", filling="2", duration='"1 h"'), "Two", 4.135667697 * 1.1 / 2)


@plant("field of a take", value=4.135667697 * 1.1, limit=4.135667697 * 0.94)
def field_that_forgets_the_gate() -> Judged:
    # the gate at −0.4 V takes 0.16e11 of 1.1e11 cm^-2 away
    text = target("Two", "hold", filling="1", duration='"1 h"', gates='{ top = "-0.4 V" }')
    plan = Writer(request(week(text)))
    there = {"S/top": -0.4}
    plan.ramp([4.135667697 * 1.1], [0.3], beside=[gates_leg(0, 20, {"S/top": 0.0}, there)])
    plan.take("Two", [plan.still(HOUR)])
    plan.ramp([0], [0.3], beside=[gates_leg(0, 20, there, {"S/top": 0.0})])
    return done(plan)


@plant("field of a take")
def driven_where_persistent_was_asked() -> Judged:
    return at_field(AT_1 + 'coil = "persistent"\n', "One", 1)


@plant("take time", value=HOUR - 1, limit=HOUR, unit="s")
def a_second_too_short() -> Judged:
    return at_field(AT_1, "One", 1, HOUR - 1)


SWEEP = {"gate": '"top"', "sweep": '"-0.4 V to 0.4 V"', "points": "81"}
# ln 100 × 0.3 s = 1.38155 s a point (one RC stage to 99 %); 81 × 1.38155 + 0.8 V / 20 mV/s = 151.9 s one way


def gate_swept(direction: str, claimed: str, seconds: int, last: float) -> Judged:
    """A gate sweep from −0.4 V as the step claims it."""
    plan = Writer(request(week(target("Gate", "gate sweep", field='"0 T"', direction=f'"{direction}"', **SWEEP))))
    low = {"S/top": -0.4}
    plan.change(20, [gates_leg(0, 20, {"S/top": 0.0}, low)])
    plan.take(
        "Gate", [plan.still(seconds), gates_leg(0, seconds, low, {"S/top": last}, "gate sweep")], direction=claimed
    )
    plan.change(20, [gates_leg(0, 20, {"S/top": last}, {"S/top": 0.0})])
    return done(plan)


@sound("gates of a take")
def gate_up_and_down() -> Judged:
    return gate_swept("both", "up, down", 304, -0.4)


@sound("take time")
def gate_one_way_in_its_time() -> Judged:
    return gate_swept("up", "up", 152, 0.4)


@plant("take time", value=151, limit=81 * 1.381551 + 40)
def gate_too_short_for_its_points() -> Judged:
    return gate_swept("up", "up", 151, 0.4)


@plant("gates of a take", value=0.3, limit=0.4, unit="V")
def gate_that_stops_short() -> Judged:
    return gate_swept("up", "up", 152, 0.3)


@plant("return sweep")
def gate_without_its_return() -> Judged:
    return gate_swept("both", "up", 304, 0.4)


FIELD = {"field": '"-1 T to 1 T"', "rate": '"0.1 T/min"', "direction": '"both"'}
HALL = target("Hall", "field sweep", **FIELD)


@sound("sweep range")
def swept_both_ways() -> Judged:
    return _swept_driven(HALL, [1, -1])


def _swept_driven(text: str, turns: list[float], rate: float = 0.1, first: float = -1) -> Judged:
    """Sweep between turns, every leg on one side of zero and driven at zero."""
    plan = Writer(request(week(text)))
    plan.ramp([first], [0.3])
    legs, here = [], first
    for turn in turns:
        for stop in [0.0, turn] if here * turn < 0 else [turn]:
            seconds = round(abs(stop - here) * 60 / rate)
            legs.append(plan.leg("sweep", seconds, driven(here), driven(stop), rate / 60))
            here = stop
    plan.take("Hall", legs)
    plan.ramp([0], [0.3])
    return done(plan)


@plant("sweep range", value=0.9, limit=1, unit="T")
def sweep_that_stops_short() -> Judged:
    return _swept_driven(HALL, [0.9, -1])


@plant("sweep range", limit=4.135667697 * 1.1 * 1.02 / 2 + 0.1)
def sweep_not_widened_for_the_density() -> Judged:
    text = target("Hall", "field sweep", filling="2", width='"0.2 T"', rate='"0.1 T/min"')
    asked = week(text).replace('density = "1.1e11 cm^-2"', 'density = "1.1e11 cm^-2"\ndensity_error = "2 %"')
    middle = 4.135667697 * 1.1 / 2
    plan = Writer(request(asked))
    low, high = middle * 0.98 - 0.1, middle + 0.1
    plan.ramp([low], [0.3])
    plan.take("Hall", plan.ramp_legs([high, low], [0.1, 0.1], "sweep"))
    plan.ramp([0], [0.3])
    return done(plan)


@plant("return sweep")
def sweep_without_its_return() -> Judged:
    return _swept_driven(HALL, [1])


@plant("sweep rate asked", value=150, limit=100, unit="mT/min")
def swept_faster_than_asked() -> Judged:
    return _swept_driven(HALL, [1, -1], 0.15)


@plant("sweep against lock-in", value=100, limit=20 / (10 * 4.605170 * 0.3) * 60, unit="mT/min")
def swept_faster_than_the_lockin() -> Judged:
    return _swept_driven(HALL + 'feature = "20 mT"\n', [1, -1])


@plant("sweep against lock-in", value=200, subject="Hall", unit="mT/min")
def week_that_asks_for_more_than_the_lockin_follows() -> Judged:
    return request(week(HALL.replace("0.1 T/min", "0.2 T/min") + 'feature = "20 mT"\n')), None


# ---- order ---------------------------------------------------------------------------------------------------------

MUST = STAY + "must = true\n"


@plant("must be done", value=0, limit=1, subject="Stay")
def a_must_that_is_missing() -> Judged:
    plan = Writer(request(week(MUST)))
    plan.left_out.append(LeftOut("Stay", "Stay", "Group", 3, "no room"))
    return done(plan)


@plant("must be done", also=("filling in reach",), subject="Far")
def week_with_a_must_out_of_reach() -> Judged:
    return request(week(target("Far", "hold", filling='"1/3"', duration='"1 h"') + "must = true\n")), None


@plant("left out is said", value=0, limit=1)
def left_out_in_silence() -> Judged:
    return done(Writer(request(week(STAY))))


@sound("left out is said")
def left_out_and_said() -> Judged:
    plan = Writer(request(week(STAY)))
    plan.left_out.append(LeftOut("Stay", "Stay", "Group", 3, "no room"))
    return done(plan)


@plant("asked for")
def the_same_take_twice() -> Judged:
    plan = Writer(request(week(STAY)))
    plan.take("Stay", [plan.still(HOUR)])
    plan.take("Stay", [plan.still(HOUR)])
    return done(plan)


@plant("asked for")
def a_take_nobody_asked_for() -> Judged:
    _, plan = taken(week(STAY), "Stay", 0)
    assert plan is not None
    step = replace(plan.steps[0], target="Own idea")
    other = request(week())
    return other, replace(plan, steps=(step, *plan.steps[1:]), sources=other.sources)


@sound("asked for")
def as_often_as_asked() -> Judged:
    plan = Writer(request(week(STAY + "repeats = 2\n")))
    plan.take("Stay", [plan.still(HOUR)], take="Stay × 1")
    plan.take("Stay", [plan.still(HOUR)], take="Stay × 2")
    return done(plan)


WINDOW = STAY + 'windows = [{ from = "Mon 10:00", to = "Mon 12:00" }]\n'


@sound("windows of a target")
def to_the_end_of_its_window() -> Judged:
    return taken(week(WINDOW), "Stay", int(2.5 * HOUR))


@plant("windows of a target", value=1, limit=0, at_s=3.5 * HOUR, unit="min")
def a_minute_beyond_its_window() -> Judged:
    return taken(week(WINDOW), "Stay", int(2.5 * HOUR) + 60)


@plant("windows of a target", value=30, limit=60, unit="min")
def week_with_a_window_too_short() -> Judged:
    return request(week(WINDOW.replace("Mon 12:00", "Mon 10:30"))), None


@plant("windows of a target", value=0, limit=60)
def week_with_a_window_outside() -> Judged:
    return request(week(WINDOW.replace("Mon 10:00", "Wed 10:00").replace("Mon 12:00", "Wed 12:00"))), None


ORDERED = STAY + target("Then", "hold", field='"0 T"', duration='"1 h"', after='["Stay"]')


def ordered(first: str, second: str) -> Judged:
    """Two takes, one after the other."""
    plan = Writer(request(week(ORDERED)))
    plan.take(first, [plan.still(HOUR)])
    plan.take(second, [plan.still(HOUR)])
    return done(plan)


@sound("order of targets")
def in_the_order_asked() -> Judged:
    return ordered("Stay", "Then")


@plant("order of targets", value=0, limit=2 * HOUR, subject="Then")
def in_the_other_order() -> Judged:
    return ordered("Then", "Stay")


@plant("order of targets", also=("filling in reach",), subject="Then")
def week_that_waits_for_the_impossible() -> Judged:
    far = target("Stay", "hold", filling='"1/3"', duration='"1 h"')
    return request(week(far + target("Then", "hold", field='"0 T"', duration='"1 h"', after='["Stay"]'))), None


@plant("time to decide", value=0, limit=1200, unit="s")
def no_pause_to_decide() -> Judged:
    return taken(week(STAY + 'decide = "20 min"\n'), "Stay", 0)


@sound("time to decide")
def a_pause_to_decide() -> Judged:
    plan = Writer(request(week(STAY + 'decide = "20 min"\n')))
    plan.take("Stay", [plan.still(HOUR)])
    plan.take("Stay", [plan.still(1200)], label="look, then decide", attended=True, people=("Ada",))
    return done(plan)


@plant("time in the week", value=12, limit=9.5, unit="h")
def week_too_short_for_its_musts() -> Judged:
    longer = MUST.replace('"1 h"', '"6 h"')
    return request(week(longer + longer.replace('"Stay"', '"More"'))), None


@plant("take time", value=59.5 * 60, limit=HOUR)
def a_series_cut_short() -> Judged:
    series = target("Stay", "temperature series", field='"0 T"', temperatures='["15 mK"]', duration='"1 h"')
    return taken(week(series), "Stay", 0, 3570)


@plant("temperature of a take", value=0, limit=1)
def a_series_without_one_of_its_temperatures() -> Judged:
    series = target("Stay", "temperature series", field='"0 T"', temperatures='["15 mK", "100 mK"]', duration='"1 h"')
    plan = Writer(request(week(series)))
    plan.take("Stay", [plan.still(HOUR)], take="Stay · 1")
    plan.take("Stay", [plan.still(HOUR)], take="Stay · 2")
    return done(plan)


@plant("field of a take", value=0, limit=1, unit="takes")
def a_map_without_one_of_its_rungs() -> Judged:
    rungs = target("Map", "map", field='"0 T to 1 T"', rungs="2", direction='"up"', **SWEEP).replace(
        '"0 T to 1 T"', '"1 T to 2 T"'
    )
    plan = Writer(request(week(rungs)))
    low, high = {"S/top": -0.4}, {"S/top": 0.4}
    plan.ramp([1], [0.3], beside=[gates_leg(0, 20, {"S/top": 0.0}, low)])
    for number in (1, 2):
        plan.take(
            "Map", [plan.still(152), gates_leg(0, 152, low, high, "gate sweep")], take=f"Map · {number}", direction="up"
        )
        end = low if number == 1 else {"S/top": 0.0}
        plan.change(40, [gates_leg(0, 40, high, end)])
    plan.ramp([0], [0.3])
    return done(plan)


SECOND = {"second_gate": '"side"', "second_sweep": '"-0.1 V to 0.1 V"', "second_points": "3"}


def two_gates(last: float) -> Judged:
    """Three lines of a gate sweep, the second gate from −0.1 V to some voltage."""
    text = week(target("Two", "gate sweep", field='"0 T"', direction='"up"', **SWEEP, **SECOND))
    side = '  { name = "side", lowest = "-0.5 V", highest = "0.5 V", rate = "20 mV/s" },\n]\n\n[[samples]]'
    plan = Writer(request(text.replace("]\n\n[[samples]]", side, 1)))
    first, end = {"S/top": -0.4, "S/side": -0.1}, {"S/top": 0.4, "S/side": last}
    rest = {"S/top": 0.0, "S/side": 0.0}
    plan.change(20, [gates_leg(0, 20, rest, first)])
    plan.take("Two", [plan.still(560), gates_leg(0, 560, first, end, "gate sweep")], direction="up")
    plan.change(20, [gates_leg(0, 20, end, rest)])
    return done(plan)


@sound("gates of a take")
def both_gates_over_their_ranges() -> Judged:
    return two_gates(0.1)


@plant("gates of a take", value=0.05, limit=0.1)
def second_gate_that_stops_short() -> Judged:
    return two_gates(0.05)
