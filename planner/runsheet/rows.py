"""The rows of the sheet: one a step, grouped by day, every value already in the words of the page."""

from __future__ import annotations

from dataclasses import dataclass, replace
from datetime import date, datetime, time, timedelta

from planner.calendars import Calendar, both
from planner.files import Rig
from planner.plan import Plan, Step, StepKind
from planner.runsheet.levels import floor_of, gauge_percent
from planner.runsheet.setpoints import SetPoint, coil_set_points, gate_lines, mode_change
from planner.runsheet.wording import WallTimes, ampere, clean, day_name, duration, elapsed, fixed, kelvin, tesla

DECIDE = "look, then decide"


@dataclass(frozen=True, slots=True)
class Level:
    """Helium at the end of a step: expected, lowest allowed to begin it and all through it, in gauge % and litres."""

    expected: str
    lowest: tuple[str, ...]
    below: bool
    poured: str


@dataclass(frozen=True, slots=True)
class Row:
    """One step as the sheet prints it."""

    number: str
    kind: str
    what: str
    how: str
    weekday: str
    begins: str
    since: str
    ends: str
    lasts: str
    about: tuple[tuple[str, str], ...]
    coil_from: str
    coil_to: str
    mode: str
    set_points: tuple[SetPoint, ...]
    stage_from: str
    stage_to: str
    gates: tuple[str, ...]
    pace: str
    level: Level | None
    attended: bool
    decide: bool
    who: str
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Day:
    """The rows that begin on one date; ``staffed`` are that day's staffed hours."""

    name: str
    staffed: str
    rows: tuple[Row, ...]
    going_on: str | None


def shown_steps(plan: Plan) -> list[tuple[str, Step]]:
    """The steps a reader needs, with their numbers ("25", "25–26").

    Nothing of zero length in which nothing happens; consecutive waits are one.
    """
    shown: list[tuple[str, Step]] = []
    for step in plan.steps:
        if step.seconds == 0 and (step.kind == StepKind.WAIT or step.before == step.after):
            continue
        last = shown[-1][1] if shown else None
        if last is not None and last.kind == step.kind == StepKind.WAIT and last.label == step.label:
            shown[-1] = (f"{last.number}–{step.number}", _as_one(last, step))
        else:
            shown.append((str(step.number), step))
    return shown


def _as_one(first: Step, second: Step) -> Step:
    return replace(
        first,
        end_s=second.end_s,
        after=second.after,
        legs=first.legs + second.legs,
        helium_after_L=second.helium_after_L,
        attended=first.attended or second.attended,
        people=tuple(dict.fromkeys(first.people + second.people)),
        notes=tuple(dict.fromkeys(first.notes + second.notes)),
    )


def row_of(number: str, step: Step, rig: Rig, walls: WallTimes, letters: dict[str, str]) -> Row:
    """A step in the words of the page."""
    before, after = step.before, step.after
    per_current = float(rig.magnet.field_per_current_T_per_A)
    fields_T = [state.coil.field_T[2] for state in (before, after)]
    fields = [f"{tesla(field_T)} = {ampere(field_T / per_current)}" for field_T in fields_T]
    what, how = _title(step)
    set_points = coil_set_points(step, walls, per_current)
    kelvins = [kelvin(state.stage.temperature_K) for state in (before, after)]
    return Row(
        number=number,
        kind=str(step.kind),
        what=what,
        how=how,
        weekday=walls.weekday(step.start_s),
        begins=walls.time(step.start_s),
        since=elapsed(step.start_s),
        ends=walls.later(step.end_s, step.start_s),
        lasts=duration(step.seconds),
        about=_about(step, letters),
        coil_from=fields[0],
        coil_to=fields[1] if fields[1] != fields[0] else "",
        mode=mode_change(before.coil, after.coil),
        set_points=set_points if len(set_points) > 1 or any(point.target for point in set_points) else (),
        stage_from=kelvins[0],
        stage_to=kelvins[1] if kelvins[1] != kelvins[0] else "",
        gates=gate_lines(step),
        pace=clean(step.pace),
        level=_level(step, rig),
        attended=step.attended,
        decide=step.label.startswith(DECIDE),
        who=", ".join(clean(name) for name in step.people),
        notes=tuple(clean(note) for note in step.notes),
    )


def _title(step: Step) -> tuple[str, str]:
    """What a row is called, and what is done if the name does not say it: a take goes by its user's name for it."""
    label, take = clean(step.label), clean(step.take)
    if not take or step.kind != StepKind.TAKE:
        return label, ""
    if step.label.startswith(DECIDE):
        return (label if take in label else f"{label}: {take}"), ""
    return take, label if label != take else ""


def _about(step: Step, letters: dict[str, str]) -> tuple[tuple[str, str], ...]:
    user = clean(step.user)
    letter = letters.get(step.user, "")
    pairs = [
        ("user", f"{letter} · {user}" if letter else user),
        ("sample", step.sample),
        ("direction", step.direction),
        *step.details,
    ]
    return tuple((clean(name), clean(text)) for name, text in pairs if clean(text))


def _level(step: Step, rig: Rig) -> Level | None:
    begins, ends = gauge_percent(rig, step.helium_before_L), gauge_percent(rig, step.helium_after_L)
    if rig.bath is None or begins is None or ends is None or step.helium_after_L is None:
        return None
    floor = floor_of(step, rig.bath)
    lowest = [f"≥ {fixed(floor.through_percent, 1)} % ({fixed(floor.through_L, 1)} L) {floor.through_why}"]
    if floor.start_why != floor.through_why:
        lowest.insert(0, f"≥ {fixed(floor.start_percent, 1)} % ({fixed(floor.start_L, 1)} L) {floor.start_why}")
    slack = 1e-6
    below = begins < floor.start_percent - slack or min(begins, ends) < floor.through_percent - slack
    poured = ""
    if step.poured_L > 0:
        poured = f"pour {fixed(step.poured_L, 1)} L, draw {fixed(step.drawn_L, 1)} L"
        if step.stock_after_L is not None:
            poured += f", {fixed(step.stock_after_L, 1)} L left in stock"
    return Level(f"{fixed(ends, 1)} % · {fixed(step.helium_after_L, 1)} L", tuple(lowest), below, poured)


def days_of(
    plan: Plan, rig: Rig, walls: WallTimes, letters: dict[str, str], staffed: Calendar, horizon_s: int
) -> tuple[Day, ...]:
    """Every date of the week with its rows; a date on which nothing begins says which step goes on."""
    steps = shown_steps(plan)
    starts: dict[date, list[tuple[str, Step]]] = {}
    for number, step in steps:
        starts.setdefault(walls.clock.moment(step.start_s).date(), []).append((number, step))
    days = []
    today = walls.clock.moment(0)
    while today.date() <= walls.clock.moment(horizon_s).date():
        begins_s = walls.clock.second(walls.clock.wall(today, time(0)))
        tomorrow = today + timedelta(days=1)
        ends_s = walls.clock.second(walls.clock.wall(tomorrow, time(0)))
        rows = tuple(row_of(number, step, rig, walls, letters) for number, step in starts.get(today.date(), []))
        going_on = next((number for number, step in steps if step.start_s < begins_s < step.end_s), None)
        if rows or going_on is not None:
            hours = both(staffed, ((begins_s, ends_s),))
            days.append(Day(day_name(today), _hours(hours, walls, tomorrow), rows, going_on))
        today = tomorrow
    return tuple(days)


def _hours(hours: Calendar, walls: WallTimes, tomorrow: datetime) -> str:
    midnight_s = walls.clock.second(walls.clock.wall(tomorrow, time(0)))
    spans = [f"{walls.time(begin)}–{'24:00' if end == midnight_s else walls.time(end)}" for begin, end in hours]
    return "staffed " + ", ".join(spans) if spans else "not staffed"
