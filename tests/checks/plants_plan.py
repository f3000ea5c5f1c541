"""Faults of continuity, of a plan's files and of what calls itself a recovery, by hand on the reference rig."""

from __future__ import annotations

from dataclasses import replace

from planner.plan import Plan, Step, StepKind
from tests.checks.build import HOUR, at_step, request
from tests.checks.plants import Judged, plant, sound
from tests.checks.plants_magnet import done, empty
from tests.checks.plants_work import STAY, edited, gated, taken, warmed
from tests.checks.weeks import rig, week


def waits() -> Judged:
    """A plan of two waits."""
    plan = empty()
    plan.wait_until(HOUR)
    return done(plan)


@plant("time without gaps", also=("legs cover the step",), value=HOUR + 60, limit=HOUR)
def a_minute_lost() -> Judged:
    return edited(waits(), 2, lambda step: replace(step, start_s=step.start_s + 60))


@plant("time without gaps", also=("helium book",), limit=9.5 * HOUR)
def week_not_covered() -> Judged:
    asked, plan = waits()
    assert plan is not None
    return asked, replace(plan, steps=plan.steps[:1])


@plant("states follow on")
def a_state_that_is_not_where_the_last_ended() -> Judged:
    made = gated(0.4, 20)

    def elsewhere(step: Step) -> Step:
        wrong = replace(step.before, gates_V=(("S/top", 0.39), ("Z/back", 0.0)))
        return replace(step, before=wrong, after=wrong)

    found = edited(made, 2, elsewhere)
    text = found[0].sources[0].text.replace('top = "0.4 V"', 'top = "0.39 V"')
    again = request(text)
    return again, replace(found[1], sources=again.sources) if found[1] is not None else None


@plant("states follow on")
def numbers_that_do_not_rise() -> Judged:
    return edited(waits(), 2, lambda step: replace(step, number=1))


@plant("first state", also=("states follow on", "waits change nothing", "gate rate"))
def a_plan_that_begins_elsewhere() -> Judged:
    def warm(step: Step) -> Step:
        return replace(step, before=replace(step.before, gates_V=(("S/top", 0.1), ("Z/back", 0.0))))

    return edited(waits(), 1, warm)


@plant("last state", also=("helium after the week",))
def a_plan_that_ends_at_field() -> Judged:
    plan = empty()
    plan.ramp([1], [0.3])
    return done(plan)


@sound("last state")
def a_plan_that_ends_at_the_field_wanted() -> Judged:
    anytime = '[{ days = "daily", from = "00:00", to = "24:00" }]'
    plan = empty(rig(hours=anytime), wanted='field = "1 T"', staffed='days = "daily", from = "00:00", to = "24:00"')
    plan.ramp([1], [0.3])
    return done(plan)


@plant("legs cover the step", also=("helium book",), value=HOUR - 10, limit=HOUR)
def ten_seconds_without_a_leg() -> Judged:
    def shorter(step: Step) -> Step:
        return replace(step, legs=(replace(step.legs[0], end_s=step.end_s - 10),))

    return edited(waits(), 1, shorter)


@plant("legs cover the step")
def a_stage_leg_beyond_its_step() -> Judged:
    asked, plan = warmed()
    assert plan is not None
    longer = at_step(
        plan,
        1,
        lambda step: replace(
            step, legs=tuple(replace(leg, end_s=leg.end_s + (leg.channel == "stage")) for leg in step.legs)
        ),
    )
    return asked, longer


@plant("waits change nothing")
def a_wait_that_warms() -> Judged:
    asked, plan = warmed()
    assert plan is not None
    return asked, at_step(plan, 1, lambda step: replace(step, kind=StepKind.WAIT))


@plant("files of the plan")
def a_file_that_was_edited() -> Judged:
    asked, plan = waits()
    assert plan is not None
    source = replace(plan.sources[1], text=plan.sources[1].text + "# edited\n")
    return asked, _with_sources(plan, source)


@plant("files of the plan")
def a_plan_of_another_week() -> Judged:
    asked, plan = waits()
    assert plan is not None
    return request(week(present='level = "95.0 %"'), asked.sources[1].text), plan


def _with_sources(plan: Plan, rig_source: object) -> Plan:
    return replace(plan, sources=(plan.sources[0], rig_source))  # type: ignore[arg-type]


@plant("recovery plan")
def a_recovery_that_measures_first() -> Judged:
    asked, plan = taken(week(STAY), "Stay", 0)
    assert plan is not None
    return asked, replace(plan, recovery=True)
