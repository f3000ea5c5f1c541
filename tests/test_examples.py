"""The example weeks are what they say they are: size, kinds of work, reach, and the helium that takes two transfers.

What is promised of them is this project's own list of demo data. The helium arithmetic is written out here from the
numbers in the rig file; it uses none of the planner's own book of helium or of people.
"""

from __future__ import annotations

from datetime import datetime, timedelta
from itertools import pairwise
from pathlib import Path

import pytest

from planner.calendars import both
from planner.files import Request, read_week
from planner.files.rig import Bath
from planner.files.targets import TARGET_KINDS, FieldSweep, GateSweep, Target
from planner.planning.people import Availability
from planner.takes import Impossible, Take, context_of, expand

EXAMPLES = Path(__file__).parents[1] / "example_plans"
HOUR_S = 3600
DAY = timedelta(days=1)

Expanded = tuple[list[Take], list[Impossible]]


@pytest.fixture(scope="module")
def shared() -> Request:
    return read_week(EXAMPLES / "shared_week.toml")


@pytest.fixture(scope="module")
def dry() -> Request:
    return read_week(EXAMPLES / "dry_week.toml")


@pytest.fixture(scope="module")
def shared_takes(shared: Request) -> Expanded:
    return expand(context_of(shared))


@pytest.fixture(scope="module")
def dry_takes(dry: Request) -> Expanded:
    return expand(context_of(dry))


def _filling_text(target: Target) -> str:
    filling = getattr(target, "filling", None)
    return "" if filling is None else str(filling.text)


def _least_s(take: Take) -> int:
    return min(sum(part.seconds for part in way.stretches) for way in take.alternatives)


def _no_room(request: Request, takes: list[Take]) -> list[str]:
    """Takes whose measurement fits no single stretch of time in which it may be done."""
    availability = Availability(request.week)
    found = []
    for take in takes:
        window = availability.windows(take.ask, take.user)
        first = [way.stretches[0] for way in take.alternatives]
        if not any(
            finish - begin >= part.seconds
            for part in first
            for begin, finish in both(window, availability.meets(part.needs))
        ):
            found.append(take.name)
    return found


def test_shared_week_has_the_promised_size(shared: Request, shared_takes: Expanded) -> None:
    week, (takes, impossible) = shared.week, shared_takes
    assert week.end - week.start == timedelta(days=7)
    assert week.horizon_s == 7 * 24 * HOUR_S  # true time too: no clock change inside
    assert f"{week.start:%a %H:%M}" == "Mon 08:00"
    assert len(week.users) == 3
    assert len(week.samples) == 4
    assert 40 <= len(week.targets) <= 50
    assert 90 <= len(takes) <= 130
    assert impossible == []
    assert len({take.name for take in takes}) == len(takes)
    assert {week.sample(target.sample).name for target in week.targets} == {sample.name for sample in week.samples}


def test_shared_week_uses_every_kind_of_target_and_of_ask(shared: Request) -> None:
    targets = shared.week.targets
    assert {getattr(target, "kind", "") for target in targets} == set(TARGET_KINDS)
    assert {getattr(target, "direction", "") for target in targets} >= {"up", "down", "both", "either"}
    assert {target.priority for target in targets} == {1, 2, 3, 4, 5}
    assert {_filling_text(target) for target in targets} >= {"1/3", "2", "2.5", "-1", "3/7 to 2/5"}
    used = {
        "at most a temperature": any(target.temperature.at_most for target in targets),
        "a temperature": any(target.temperature.kelvin and not target.temperature.at_most for target in targets),
        "one gate": any(isinstance(target, GateSweep) and not target.second_gate for target in targets),
        "two gates": any(isinstance(target, GateSweep) and target.second_gate for target in targets),
        "gates held": any(target.gates for target in targets),
        "repeats": any(target.repeats > 1 for target in targets),
        "after": any(target.after for target in targets),
        "before": any(target.before for target in targets),
        "attended": any(target.attended for target in targets),
        "windows": any(target.windows for target in targets),
        "hours": any(target.hours for target in targets),
        "decide": any(target.decide_s for target in targets),
        "a lock-in of its own": any(target.lockin for target in targets),
        "contacts": any(target.contacts for target in targets),
        "some must": 2 <= sum(target.must for target in targets) <= 10,
        "slots": any(user.slots for user in shared.week.users),
        "quiet": any(row.forbids == "ramps" for row in shared.week.quiet),
        "delivery": len(shared.week.helium.deliveries) == 1,
    }
    assert [name for name, there in used.items() if not there] == []


def test_shared_week_measures_something_with_a_file_of_its_own(shared: Request) -> None:
    files = [target.file for target in shared.week.targets if target.kind != "other work"]
    assert all(files)
    assert len(set(files)) == len(files)
    assert all(target.excitation for target in shared.week.targets if target.kind != "other work")


def test_five_halves_is_asked_only_of_the_densest_sample(shared: Request) -> None:
    """5/2 needs the lowest temperatures and the best sample: Willett et al., Phys. Rev. Lett. 59, 1776 (1987)."""
    densest = max(shared.week.samples, key=lambda sample: sample.density_per_m2)
    assert densest.gates == ()
    at_5_2 = [t for t in shared.week.targets if any(way in _filling_text(t) for way in ("5/2", "2.5"))]
    assert len(at_5_2) >= 3
    assert {target.sample for target in at_5_2} == {densest.name}


def test_every_take_of_the_shared_week_has_room_somewhere(shared: Request, shared_takes: Expanded) -> None:
    assert _no_room(shared, shared_takes[0]) == []


def test_shared_week_asks_for_more_than_a_week(shared: Request, shared_takes: Expanded) -> None:
    """Measuring alone, without a single move, takes longer than the week: something must be left out."""
    assert sum(_least_s(take) for take in shared_takes[0]) > shared.week.horizon_s


def _litres(bath: Bath, level_percent: float) -> float:
    """Litres at a gauge level, straight lines between the calibration's points."""
    for low, high in pairwise(bath.calibration):
        if low.level_percent <= level_percent <= high.level_percent:
            part = (level_percent - low.level_percent) / (high.level_percent - low.level_percent)
            return low.volume_L + part * (high.volume_L - low.volume_L)
    raise AssertionError(f"{level_percent} % is outside the calibration")


def _transfer_hours(request: Request) -> list[tuple[datetime, datetime]]:
    """Every day's hours for transfers, by the wall."""
    assert request.rig.bath is not None
    midnight = request.week.start.replace(hour=0, minute=0)
    return [
        (datetime.combine(day.date(), row.from_), datetime.combine(day.date(), row.to))
        for day in (midnight + number * DAY for number in range(8))
        for row in request.rig.bath.transfer.hours
        if day.weekday() in row.days
    ]


def _at(request: Request, written: datetime | str) -> datetime:
    return request.week.clock.read(written).replace(tzinfo=None)


def test_static_loss_alone_takes_two_transfers(shared: Request) -> None:
    """Two of the musts ramp the field up, one midweek, one at the end: no single transfer keeps both above the line.

    Nothing but the static loss is counted: what ramps, leads and heater take only makes it worse.
    """
    bath, week = shared.rig.bath, shared.week
    assert bath is not None
    assert week.present.level_percent == pytest.approx(80, abs=5)
    timed = [target for target in week.targets if target.must and target.windows]
    assert [isinstance(target, FieldSweep) and target.direction == "both" for target in timed] == [True, True]
    spans = sorted((_at(shared, t.windows[0].from_), _at(shared, t.windows[0].to)) for t in timed)
    (midweek, midweek_end), (closing, _) = spans
    loss_L_per_h = bath.losses.static_L_per_s * HOUR_S
    line_L = _litres(bath, bath.lines.start_ramp_percent + bath.gauge_error_percent)
    full_L = _litres(bath, bath.transfer.fill_to_percent)

    def hours(begin: datetime, finish: datetime) -> float:
        return (finish - begin) / timedelta(hours=1)

    # 80 % = 57 L; 58 h × 0.40 L/h later 33.8 L are left, and the line stands at 52 % = 36 L: one transfer before.
    untouched_L = _litres(bath, week.present.level_percent) - loss_L_per_h * hours(week.start, midweek)
    assert untouched_L < line_L
    # No transfer hours inside the midweek window, so that one is over by Wednesday 16:00. 88 h later a bath filled to
    # 98 % = 70.5 L holds 35.3 L, below the line again: a second one between the two.
    transfers = _transfer_hours(shared)
    assert not [begin for begin, finish in transfers if begin < midweek_end and finish > midweek]
    latest = max(finish for _, finish in transfers if finish <= midweek)
    assert full_L - loss_L_per_h * hours(latest, closing) < line_L


def test_shared_week_has_helium_and_people_for_two_transfers(shared: Request) -> None:
    """The stock with its delivery can pay for filling the bath twice from the start-ramp line, and people are there."""
    bath, helium = shared.rig.bath, shared.week.helium
    assert bath is not None
    assert 60 <= helium.stock_L <= 80
    line_L = _litres(bath, bath.lines.start_ramp_percent + bath.gauge_error_percent)
    pour_L = _litres(bath, bath.transfer.fill_to_percent) - line_L
    drawn_L = bath.transfer.line_loss_L + pour_L / (bath.transfer.efficiency_percent / 100)
    assert helium.stock_L >= drawn_L
    assert helium.stock_L + sum(row.volume_L for row in helium.deliveries) >= 2 * drawn_L
    trained = [person for person in shared.week.people if bath.transfer.training in person.trained]
    assert len(trained) >= bath.transfer.people


def test_dry_week_is_small_and_needs_no_helium(dry: Request, dry_takes: Expanded) -> None:
    week, (takes, impossible) = dry.week, dry_takes
    assert dry.rig.bath is None
    assert week.present.level_percent is None
    assert 3 * DAY <= week.end - week.start <= 4 * DAY
    assert 8 <= len(week.targets) <= 12
    assert impossible == []
    assert _no_room(dry, takes) == []
    assert sum(_least_s(take) for take in takes) < week.horizon_s


def test_dry_week_reaches_both_carriers(dry: Request, dry_takes: Expanded) -> None:
    """Graphene's plateaus lie at ν = ±2, ±6: Novoselov et al., Nature 438, 197 (2005); Zhang et al., ibid. 201."""
    texts = {_filling_text(target) for target in dry.week.targets}
    assert texts >= {"2", "-2", "6", "-6"}
    fields = [way.entry.coil.field_T[2] for take in dry_takes[0] for way in take.alternatives]
    assert max(map(abs, fields)) <= dry.rig.magnet.rated_field_T
    # B = n h / (e ν); at -11 V the gate leaves 4.0e11 - 11 × 0.72e11 = -3.92e11 cm^-2, so ν = -2 lies at 8.11 T.
    holes = [take for take in dry_takes[0] if _filling_text(take.ask) == "-2"]
    expected_T = -3.92e15 * 6.62607015e-34 / (1.602176634e-19 * -2)
    assert expected_T == pytest.approx(8.106, abs=1e-3)
    fields = [way.entry.coil.field_T[2] for take in holes for way in take.alternatives]
    assert fields == pytest.approx([expected_T] * len(fields))
