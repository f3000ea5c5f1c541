"""Faults of helium and transfers, by hand on the reference rig.

0.8 L are a percent; 0.55 L/h go always, 0.9 L/h with the switch open.
"""

from __future__ import annotations

from dataclasses import replace

from planner.plan import StepKind
from tests.checks.build import HOUR, Writer, at_step, leg_of, request
from tests.checks.plants import Judged, plant, sound
from tests.checks.plants_magnet import done, empty
from tests.checks.weeks import rig, target, week

ANY_TIME = '[{ days = "daily", from = "00:00", to = "24:00" }]'
ALWAYS = 'days = "daily", from = "00:00", to = "24:00"'
DRY = rig(reserve='"10 %"', coil_top='"30 %"', hours=ANY_TIME)
"""A low reserve, so that each line can be passed without the one below it; transfers at any hour."""


@plant("helium to start a ramp", also=(), value=49.99, limit=50, at_s=30)
def ramp_just_below_its_line() -> Judged:
    heater_L = 0.9 / 120  # half a minute of warming at 0.9 L/h
    plan = empty(DRY, staffed=ALWAYS, present=f'level = "{51.99 + heater_L / 0.8} %"')
    plan.ramp([1], [0.3])
    plan.ramp([0], [0.3])
    return done(plan)


@sound("helium to start a ramp")
def ramp_exactly_at_its_line() -> Judged:
    plan = empty(DRY, staffed=ALWAYS, present=f'level = "{52 + 0.9 / 120 / 0.8} %"')
    plan.ramp([1], [0.3])
    plan.ramp([0], [0.3])
    return done(plan)


AT_8 = 'level = "{level} %", field = "8 T"'


@plant("helium at field", value=39.375, limit=40, at_s=1600, unit="%")
def driven_for_an_hour_at_the_floor() -> Judged:
    # 0.9 L/h are 1.125 %/h: 42.5 % − 2 % = 40.5 % trusted reaches 40 % after 0.444 h, and 39.375 % after an hour
    plan = empty(DRY, staffed=ALWAYS, present=AT_8.format(level=42.5))
    plan.wait_until(HOUR)
    plan.ramp([0], [0.3])
    return done(plan)


@sound("helium at field")
def run_down_begun_exactly_at_the_floor() -> Judged:
    plan = empty(DRY, staffed=ALWAYS, present=AT_8.format(level=43.125))
    plan.wait_until(HOUR)
    plan.ramp([0], [0.3])
    return done(plan)


@plant("helium over the coil", value=38.5, limit=39, unit="%")
def coil_uncovered_while_running_down() -> Judged:
    # 26.7 min at 0.9 L/h and 8 T take 1.2 L, 1.5 %: from 40 % trusted to 38.5 %
    plan = empty(
        rig(reserve='"10 %"', coil_top='"39 %"', hours=ANY_TIME), staffed=ALWAYS, present=AT_8.format(level=42)
    )
    plan.ramp([0], [0.3])
    return done(plan)


@plant("helium reserve", value=33 - 9.5 * 0.55 / 0.8 - 2, limit=30, at_s=5237, unit="%")
def idle_below_the_reserve() -> Judged:
    return done(empty(present='level = "33 %"'))


@sound("helium reserve")
def idle_exactly_to_the_reserve() -> Judged:
    level = 32 + 9.5 * 0.55 / 0.8
    return done(empty(rig(hours=ANY_TIME), staffed=ALWAYS, present=f'level = "{level} %"'))


@plant("helium reserve", also=("transfer stock",), value=60 - 48.5 * 0.55 / 0.8 - 2, limit=30)
def week_that_cannot_last() -> Judged:
    return request(week(present='level = "60 %"', helium='stock = "0 L"', end="2031-03-08T18:00:00")), None


@plant("helium at field", subject="Long", limit=40)
def hold_that_empties_the_bath() -> Judged:
    hold = target("Long", "hold", field='"6 T"', duration='"60 h"', coil='"driven"')
    return request(week(hold, end="2031-03-08T18:00:00")), None


@plant("helium at field", value=38, limit=40, at_s=0)
def week_that_begins_at_field_too_low() -> Judged:
    return request(week(present=AT_8.format(level=40)), DRY), None


@plant("helium over the coil", also=("helium at field",), value=28, limit=30, at_s=0)
def week_that_begins_uncovered() -> Judged:
    return request(week(present=AT_8.format(level=30)), DRY), None


@plant("helium book", at_s=0, unit="L")
def a_leg_that_claims_too_little() -> Judged:
    asked, plan = done(empty())
    assert plan is not None
    less = at_step(plan, 1, lambda s: leg_of(s, "hold", lambda leg: replace(leg, litres=leg.litres - 2e-6)))
    return asked, less


@plant("helium book", unit="L")
def a_level_that_is_not_what_is_left() -> Judged:
    asked, plan = done(empty())
    assert plan is not None
    assert plan.steps[0].helium_after_L is not None
    more = plan.steps[0].helium_after_L + 1e-5
    return asked, at_step(plan, 1, lambda step: replace(step, helium_after_L=more))


@plant("helium book")
def a_plan_that_forgets_the_open_switch() -> Judged:
    plan = empty()
    plan.ramp([6], [0.3])
    plan.wait_until(5 * HOUR)
    plan.ramp([0], [0.3])
    asked, whole = done(plan)
    assert whole is not None
    static = at_step(
        whole,
        2,
        lambda s: leg_of(s, "hold", lambda leg: replace(leg, litres=leg.seconds * 0.55 / HOUR)),
    )
    return asked, static


@plant("helium after the week", value=(40 - 9.5 * 0.55 / 0.8 - 32) * 0.8 / 0.55, limit=39, unit="h")
def week_that_ends_too_low_for_the_next_transfer() -> Judged:
    # the next transfer hours begin on Wednesday 09:00, 39 h after Monday 18:00
    return done(empty(present='level = "40 %"'))


# ---- transfers -----------------------------------------------------------------------------------------------------


def filled(poured: float, begin_s: int, text: str | None = None, level: float = 60, **keys: object) -> Writer:
    """A transfer of some litres beginning at a second of the Monday; transfer hours are 09:00 to 12:00."""
    helium = str(keys.pop("helium", 'stock = "100 L"'))
    plan = empty(text, present=f'level = "{level} %"', helium=helium, away=str(keys.pop("away", "")))
    plan.wait_until(begin_s)
    plan.transfer(poured, **keys)  # type: ignore[arg-type]
    return plan


@sound("transfer hours")
def transfer_that_ends_with_its_hours() -> Judged:
    return done(filled(20, int(2.8333333333334 * HOUR)))  # 40 min from 11:20


@plant("transfer hours", at_s=3.5 * HOUR, limit=3.5, unit="h")
def transfer_a_minute_too_late() -> Judged:
    return done(filled(20, int(2.8333333333334 * HOUR) + 60))


@plant("transfer people", value=1, limit=2)
def transfer_with_an_untrained_person() -> Judged:
    return done(filled(20, HOUR, people=("Ada", "Cleo")))


@plant("transfer people", value=1, limit=2)
def transfer_with_somebody_away() -> Judged:
    return done(filled(20, HOUR, away='away = [{ from = "Mon 10:00", to = "Mon 12:00" }]\n'))


@plant("transfer coil")
def transfer_with_current_in_the_leads() -> Judged:
    plan = empty(present='level = "80 %"')
    plan.ramp([1], [0.3])
    plan.wait_until(HOUR)
    driven_still = plan.still(2400)
    litres = driven_still.litres - 2400 * 0.55 / HOUR
    plan.write(
        StepKind.SERVICE, "helium transfer", [replace(driven_still, litres=litres)], service="helium transfer",
        attended=True, people=("Ada", "Ben"), poured_L=6.0, drawn_L=6.0 / 0.8,
    )  # fmt: skip
    plan.ramp([0], [0.3])
    return done(plan)


@plant("transfer fill", value=60 + 34 / 0.8 - 0.55 / 0.8, limit=100, unit="%")
def filled_over_the_neck() -> Judged:
    return done(filled(34, HOUR))


@sound("transfer fill")
def filled_to_the_brim() -> Judged:
    return done(filled(32 + 0.55, HOUR))


@plant("transfer least", value=4.9, limit=5, unit="L")
def poured_too_little_to_be_worth_it() -> Judged:
    return done(filled(4.9, HOUR))


@plant("transfer time", value=2399, limit=2400, unit="s")
def poured_in_a_second_too_little() -> Judged:
    return done(filled(20, HOUR, seconds=2399))


@plant("transfer stock", value=25, limit=20, unit="L")
def drawn_from_an_empty_vessel() -> Judged:
    return done(filled(20, HOUR, helium='stock = "20 L"'))


@sound("transfer stock")
def drawn_to_the_last_drop() -> Judged:
    return done(filled(20, HOUR, helium='stock = "25 L"'))


@plant("transfer stock")
def drawn_before_it_is_delivered() -> Judged:
    helium = 'stock = "20 L", deliveries = [{ at = "Mon 11:00", volume = "30 L" }]'
    plan = filled(20, HOUR, helium=helium)
    asked, whole = done(plan)
    assert whole is not None
    arrived = {step.number: 30.0 if step.end_s >= 2.5 * HOUR else 0.0 for step in whole.steps}
    later = replace(
        whole,
        steps=tuple(replace(s, stock_after_L=(s.stock_after_L or 0.0) + arrived[s.number]) for s in whole.steps),
    )
    return asked, later


@plant("transfer book", value=20, limit=25, unit="L")
def drawn_without_the_efficiency() -> Judged:
    asked, plan = done(filled(20, HOUR))
    assert plan is not None
    return asked, replace(
        plan,
        steps=tuple(
            replace(s, drawn_L=20.0 if s.poured_L else 0.0, stock_after_L=80.0 if s.end_s > HOUR else 100.0)
            for s in plan.steps
        ),
    )


@plant("transfer book", unit="L")
def poured_by_a_wait() -> Judged:
    asked, plan = done(empty(present='level = "60 %"'))
    assert plan is not None
    assert plan.steps[0].helium_after_L is not None
    more = plan.steps[0].helium_after_L + 5
    return asked, at_step(plan, 1, lambda step: replace(step, poured_L=5.0, helium_after_L=more))


@plant("transfer hours", limit=25)
def week_without_transfer_hours() -> Judged:
    return request(week(end="2031-03-03T09:20:00")), None


@plant("transfer people", value=1, limit=2, unit="people")
def week_with_one_trained_person() -> Judged:
    return request(week().replace('name = "Ben"\ntrained = ["transfer"]', 'name = "Ben"')), None


@plant("transfer people", value=0, limit=25, unit="min")
def week_in_which_two_are_never_there_together() -> Judged:
    away = 'hours = [{ days = "Mon", from = "13:00", to = "18:00" }]\n'
    return request(week(away=away)), None


@plant("transfer stock", value=6, limit=6.25, unit="L")
def week_with_too_little_stock() -> Judged:
    return request(week(helium='stock = "6 L"')), None


@plant("helium to start a ramp", value=46, limit=50, at_s=0)
def week_whose_ramps_wait_for_a_transfer() -> Judged:
    return request(week(target("Up", "hold", field='"1 T"', duration='"1 h"'), present='level = "48 %"')), None


# 30 s of warming at 0.9 L/h; 20 min of ramp at 0.9 L/h + 25 A × 0.002 and 0.6 L; 11 370 s at 6 T, 1.0 L/h
LEFT_L = 0.95 * 80 - 0.9 / 120 - (0.95 / 3 + 0.6) - 11_370 / 3600


@plant("helium after the week", also=("last state",), value=LEFT_L - 0.42 * 80, limit=45, unit="h")
def week_that_ends_driven_with_leads_that_burn() -> Judged:
    # driven at 6 T with 50 A: 0.9 + 0.002 × 50 = 1.0 L/h, so as many hours as litres above the floor, 40 % trusted
    burning = rig(switch_open='"0.35 L/h"\nleads = "0.002 L/h/A"')
    plan = empty(burning, end="2031-03-03T12:00:00")
    plan.ramp([6], [0.3])
    return done(plan)
