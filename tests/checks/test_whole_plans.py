"""Whole plans: two busy days by hand without a false alarm, a dry rig, what JSON gives back, and nonsense."""

from __future__ import annotations

import random
from dataclasses import replace
from pathlib import Path

import pytest

from planner.checks import check_plan, check_week
from planner.files import Request, read_week, request_of
from planner.plan import Coil, CoilMode, Finding, Kind, Leg, Plan, Step, StepKind, along_z
from tests.checks.build import HOUR, SCORE, Writer, driven, gates_leg, rebooked, request, rules, serious, stage_leg
from tests.checks.plants_work import DOWN_S, UP_S
from tests.checks.weeks import SETTLING, target, week

EXAMPLES = Path(__file__).parent.parent.parent / "example_plans"
LOW = {"S/top": -0.4}
HIGH = {"S/top": 0.4}
REST = {"S/top": 0.0}
RUNGS = {"gate": '"top"', "sweep": '"-0.4 V to 0.4 V"', "points": "81"}
TARGETS = "".join(
    [
        target("Contacts", "other work", what='"contacts"', duration='"40 min"', attended="true", must="true",
               before='["Hall"]'),
        target("Hall", "field sweep", field='"-1 T to 1 T"', rate='"0.1 T/min"', feature='"30 mT"', decide='"20 min"',
               must="true"),
        target("Map", "map", field='"1 T to 2 T"', rungs="2", direction='"either"', after='["Hall"]', **RUNGS),
        target("Series", "temperature series", field='"4 T"', temperatures='["15 mK", "100 mK"]', duration='"20 min"'),
        target("Night", "hold", field='"4 T"', duration='"6 h"', coil='"persistent"',
               hours='[{ days = "daily", from = "20:00", to = "07:00" }]'),
        target("Guest", "hold", field='"0 T"', duration='"1 h"', temperature='"≤ 30 mK"').replace(
            'sample = "S"', 'sample = "Z"'),
    ]
)  # fmt: skip
SHARED = {
    "end": "2031-03-05T18:00:00",
    "slots": 'slots = [{ from = "Wed 13:00", to = "Wed 15:00" }]\nonly_in_slots = true\n',
    "quiet": '\n[[quiet]]\nname = "Next door"\nfrom = "Mon 19:00"\nto = "Tue 08:00"\n',
    "present": 'level = "90 %"',
}


def two_days() -> tuple[Request, Plan]:
    """Contacts, Hall, map, series, a persistent night, a transfer, a guest's slot."""
    plan = Writer(request(week(TARGETS, **SHARED), SETTLING))
    plan.take("Contacts", [plan.still(2400)], attended=True, people=("Ada",))
    plan.ramp([-1], [0.3], settle=900)
    legs, here = [], -1.0
    for stop in (0.0, 1.0, 0.0, -1.0):
        legs.append(plan.leg("sweep", 600, driven(here), driven(stop), 0.1 / 60))
        here = stop
    plan.take("Hall", legs, direction="up, down")
    plan.take("Hall", [plan.still(1200)], label="look, then decide", attended=True, people=("Ada",))
    up = [plan.leg("ramp", 200, driven(-1), driven(0), 0.3 / 60), plan.leg("ramp", 200, driven(0), driven(1), 0.3 / 60)]
    settle = plan.leg("settle", 900, driven(1), driven(1))
    plan.write(StepKind.MOVE, "ramp", [*up, settle, gates_leg(0, 20, REST, LOW)])
    plan.take("Map", [plan.still(152), gates_leg(0, 152, LOW, HIGH, "gate sweep")], take="Map · 1", direction="up")
    plan.ramp([2], [0.3], settle=900)
    plan.take("Map", [plan.still(152), gates_leg(0, 152, HIGH, LOW, "gate sweep")], take="Map · 2", direction="down")
    plan.ramp([4], [0.3], settle=900, beside=[gates_leg(0, 20, LOW, REST)])
    plan.take("Series", [plan.still(1200)], take="Series · 1")
    plan.change(UP_S, [stage_leg(0, UP_S, 0.015, 0.1)])
    plan.take("Series", [plan.still(1200)], take="Series · 2")
    plan.change(DOWN_S, [stage_leg(0, DOWN_S, 0.1, 0.015, "cool")])
    plan.close_switch()
    plan.wait_until(int(11.5 * HOUR))
    plan.take("Night", [plan.still(6 * HOUR)])
    plan.wait_until(24 * HOUR)
    plan.open_switch()
    plan.ramp([0], [0.3])
    plan.wait_until(int(48.5 * HOUR))
    plan.transfer(20)
    plan.wait_until(int(52.5 * HOUR))
    plan.take("Guest", [plan.still(HOUR)])
    return plan.request, plan.plan()


def test_two_busy_days_raise_no_alarm() -> None:
    asked, plan = two_days()
    assert not serious(check_week(asked))
    assert not serious(check_plan(asked, plan))


def test_a_plan_read_back_from_json_is_judged_the_same() -> None:
    asked, plan = two_days()
    broken = replace(plan, steps=tuple(s for s in plan.steps if s.label != "open switch"))
    again = Plan.from_json(broken.to_json())
    found = check_plan(request_of(again.sources), again)
    assert found == check_plan(asked, broken)
    assert {"states follow on", "time without gaps"} <= rules(found)


def test_findings_come_by_seriousness_then_time() -> None:
    asked, plan = two_days()
    found = check_plan(asked, replace(plan, steps=plan.steps[3:]))
    order = [(list(Kind).index(f.kind), f.at_s if f.at_s is not None else float("inf")) for f in found]
    assert order == sorted(order)
    assert len(rules(found)) > 3  # all reasons at once


def test_times_in_texts_are_wall_times_across_a_clock_change() -> None:
    # Europe/Vienna goes to summer time on Sunday 2031-03-30 at 02:00
    text = week(present='level = "45 %"', end="2031-03-31T18:00:00")
    text = text.replace("2031-03-03T08:30:00", "2031-03-29T20:00:00")
    plan = Writer(request(text))
    found = [f for f in check_plan(plan.request, plan.plan()) if f.rule == "helium reserve"]
    # 13 % × 0.8 L/% / 0.55 L/h = 18.909 h after Saturday 20:00 winter time: Sunday 15:54:33 summer time
    assert found[0].at_s == pytest.approx(18.90909 * HOUR, abs=1)
    assert "Sun 15:54:33" in found[0].text


DRY_WEEK = """
format = 1
kind = "week"
title = "Dry"
rig = "dry_insert.rig.toml"
zone = "Europe/Vienna"
start = 2031-03-03T08:30:00
end = 2031-03-03T18:00:00
[present]
field = "0 T"
[[users]]
name = "Group"
letter = "A"
[[samples]]
name = "S"
user = "Group"
density = "1e11 cm^-2"
"""


def dry(rate: float) -> tuple[Finding, ...]:
    """Findings of a dry plan that ramps to 9 T with its last leg at a rate."""
    asked = request(DRY_WEEK, (EXAMPLES / "dry_insert.rig.toml").read_text(encoding="utf-8"))
    plan = Writer(asked)

    def at(field: float) -> Coil:
        return Coil() if field == 0 else driven(field, 0.09)

    legs, here = [], 0.0
    for stop, speed in ((6.0, 0.2), (9.0, rate), (6.0, 0.1), (0.0, 0.2)):
        seconds = round(abs(stop - here) * 60 / speed)
        legs.append(plan.leg("ramp", seconds, at(here), at(stop), speed / 60))
        here = stop
    plan.write(StepKind.MOVE, "ramp", legs)
    whole = plan.plan()
    assert check_week(asked) == ()
    return check_plan(asked, replace(whole, steps=tuple(replace(step, stock_after_L=None) for step in whole.steps)))


def test_a_dry_rig_has_no_helium_and_no_switch() -> None:
    assert dry(0.1) == ()
    assert rules(dry(0.12)) == {"ramp rate"}


def test_an_empty_plan_is_no_plan() -> None:
    asked = request(week())
    clock = asked.week.clock
    end = clock.moment(asked.week.horizon_s)
    plan = Plan("x", "x", "Europe/Vienna", clock.start, end, asked.sources, (), (), SCORE)
    assert rules(check_plan(asked, plan)) == {"time without gaps"}


def _mangled(step: Step, dice: random.Random) -> Step:
    """A step with something in it turned into nonsense."""
    other = Coil(along_z(dice.choice([-13.0, 0.0, 5.0])), dice.choice(list(CoilMode)), along_z(dice.uniform(-120, 120)))
    gate = (("S/top", dice.uniform(-2, 2)), ("nobody/knows", 1.0))
    leg = dice.choice([0, -1])
    edits = [
        {"legs": ()},
        {"legs": step.legs[1:]},
        {"legs": tuple(replace(one, rate=dice.choice([None, 0.0, -1.0, 9.0])) for one in step.legs)},
        {"legs": tuple(replace(one, end_s=one.start_s - leg) for one in step.legs)},
        {"legs": (*step.legs, Leg("gates", "x", step.start_s, step.end_s, "", gates_V=((), gate)))},
        {"legs": (*step.legs, Leg("stage", "x", step.start_s, step.start_s, "", stage_K=(0.0, 400.0)))},
        {"start_s": step.end_s, "end_s": step.start_s},
        {"before": replace(step.before, coil=other)},
        {"after": replace(step.after, coil=replace(other, persistent_current_A="unknown"))},
        {"after": replace(step.after, gates_V=gate)},
        {"target": "Hall", "kind": StepKind.TAKE},
        {"helium_before_L": None, "poured_L": 400.0, "drawn_L": -3.0},
        {"people": ("Nobody", "3 × staff"), "attended": True},
        {"service": "helium transfer"},
    ]
    return replace(step, **dice.choice(edits))  # type: ignore[arg-type]


@pytest.mark.parametrize("seed", range(40))
def test_nonsense_is_found_and_never_breaks_the_checks(seed: int) -> None:
    asked, plan = two_days()
    dice = random.Random(seed)
    at = dice.randrange(len(plan.steps))
    mangled = _mangled(plan.steps[at], dice)
    steps = (*plan.steps[:at], mangled, *plan.steps[at + 1 :])
    found = check_plan(asked, replace(plan, steps=steps))
    assert serious(found) or mangled == plan.steps[at]  # one edit may call a transfer a transfer


@pytest.mark.parametrize(
    ("shift", "expected"), [(1, set()), (HOUR, set()), (3 * HOUR, {"transfer hours", "user slots"})]
)
def test_a_day_moved_by_a_little_is_told_where_it_no_longer_fits(shift: int, expected: set[str]) -> None:
    asked, plan = two_days()
    first = replace(plan.steps[0], kind=StepKind.WAIT, label="wait", target="", take="", attended=False, people=())
    still = replace(first.legs[0], end_s=shift)
    steps = [replace(first, end_s=shift, legs=(still,), number=1)]
    for step in plan.steps[:-1]:
        legs = tuple(replace(leg, start_s=leg.start_s + shift, end_s=leg.end_s + shift) for leg in step.legs)
        late = replace(step, number=step.number + 1, start_s=step.start_s + shift, end_s=step.end_s + shift, legs=legs)
        steps.append(late)
    last = replace(plan.steps[-1], number=len(steps) + 1, start_s=plan.steps[-1].start_s + shift)
    last = replace(last, legs=(replace(last.legs[0], start_s=last.start_s),))
    moved = rebooked(asked, replace(plan, steps=(*steps, last)))
    assert rules(serious(check_plan(asked, moved))) == expected


def test_example_weeks_are_sound() -> None:
    for name in ("first_week.toml", "shared_week.toml"):
        assert not serious(check_week(read_week(EXAMPLES / name)))
