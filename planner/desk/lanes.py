"""A plan as lanes over time: what is measured, field, coil, temperature, helium with its lines, people, services."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from planner.calendars import Calendar, tidy, weekly
from planner.files import Request, Rig, Week
from planner.files.level import level_at
from planner.plan import CoilMode, Plan, Step, StepKind
from planner.runsheet.levels import litres_over_time


@dataclass(frozen=True, slots=True)
class Bar:
    """A stretch of time on a lane: its letter, its look (a user's place in the list), the step it belongs to."""

    start_s: int
    end_s: int
    letter: str
    look: str
    step: int | None = None


@dataclass(frozen=True, slots=True)
class BarLane:
    """A lane of bars; later ones lie on earlier ones."""

    name: str
    bars: tuple[Bar, ...]


@dataclass(frozen=True, slots=True)
class Line:
    """A level that must be kept, drawn across its lane."""

    name: str
    value: float


@dataclass(frozen=True, slots=True)
class CurveLane:
    """A lane of a value over time, straight between its points. ``pick`` says which value stands for a cell of time."""

    name: str
    unit: str
    points: tuple[tuple[int, float], ...]
    low: float
    high: float
    log: bool = False
    lines: tuple[Line, ...] = ()
    pick: str = "largest"


Lane = BarLane | CurveLane


@dataclass(frozen=True, slots=True)
class Lanes:
    """All lanes of a plan. ``letters`` are the users' in the order of their looks."""

    plan: Plan
    horizon_s: int
    works_until_s: int
    lanes: tuple[Lane, ...]
    letters: tuple[tuple[str, str], ...]


def lanes_of(plan: Plan, request: Request) -> Lanes:
    """The lanes of a plan; ``request`` is the one it was made from."""
    week, rig = request.week, request.rig
    letters = tuple((user.letter, user.name) for user in week.users)
    lanes: list[Lane] = [
        BarLane("measures", tuple(_measured(plan, {name: letter for letter, name in letters}))),
        CurveLane("field", "T", tuple(_field(plan)), 0.0, float(rig.magnet.rated_field_T)),
        BarLane("coil", tuple(_coil(plan))),
        _temperature(plan, rig),
        *_helium(plan, rig),
        BarLane("people", tuple(_people(plan, week))),
        BarLane("services", tuple(_services(plan))),
    ]
    horizon_s = plan.clock.second(plan.end)
    last = max((step.end_s for step in plan.steps if step.kind is not StepKind.WAIT), default=horizon_s)
    return Lanes(plan, horizon_s, last, tuple(lanes), letters)


def _measured(plan: Plan, letters: dict[str, str]) -> Iterator[Bar]:
    looks = {letter: f"user-{at}" for at, letter in enumerate(letters.values())}
    for at, step in enumerate(plan.steps):
        if step.kind is StepKind.MOVE:
            yield Bar(step.start_s, step.end_s, "", "move", at)
        elif step.kind is StepKind.TAKE:
            letter = letters.get(step.user, "?")
            yield Bar(step.start_s, step.end_s, letter, looks.get(letter, "user-0"), at)


def _field(plan: Plan) -> Iterator[tuple[int, float]]:
    for step in plan.steps:
        yield step.start_s, step.before.coil.field_T[2]
        for leg in step.legs:
            if leg.channel == "coil" and leg.coil is not None:
                yield leg.start_s, leg.coil[0].field_T[2]
                yield leg.end_s, leg.coil[1].field_T[2]
        yield step.end_s, step.after.coil.field_T[2]


def _coil(plan: Plan) -> Iterator[Bar]:
    for at, step in enumerate(plan.steps):
        modes = [(step.start_s, step.end_s, step.before.coil.mode)]
        if legs := [leg for leg in step.legs if leg.channel == "coil" and leg.coil is not None]:
            modes = [(leg.start_s, leg.end_s, leg.coil[0].mode) for leg in legs if leg.coil]
        for start_s, end_s, mode in modes:
            if mode is not CoilMode.ZERO:
                yield Bar(start_s, end_s, "P" if mode is CoilMode.PERSISTENT else "d", str(mode), at)


def _temperature(plan: Plan, rig: Rig) -> CurveLane:
    points: list[tuple[int, float]] = []
    for step in plan.steps:
        points.append((step.start_s, step.before.stage.temperature_K))
        for leg in step.legs:
            if leg.channel == "stage" and leg.stage_K is not None:
                points += [(leg.start_s, leg.stage_K[0]), (leg.end_s, leg.stage_K[1])]
        points.append((step.end_s, step.after.stage.temperature_K))
    warmest = max((kelvin for _, kelvin in points), default=1.0)
    base = min([float(rig.stage.base_K), *(kelvin for _, kelvin in points)])
    return CurveLane("stage", "K", tuple(points), base / 1.5, max(warmest * 1.2, base * 3), log=True)


def _helium(plan: Plan, rig: Rig) -> list[Lane]:
    if rig.bath is None:
        return []
    points = tuple((at, level_at(rig.bath, litres)) for at, litres in litres_over_time(plan, rig))
    lines, error = rig.bath.lines, float(rig.bath.gauge_error_percent)
    named = (
        Line("start ramp", lines.start_ramp_percent + error),
        Line("at field", lines.at_field_percent + error),
        Line("coil top", lines.coil_top_percent + error),
        Line("reserve", lines.reserve_percent + error),
    )
    return [CurveLane("helium", "%", points, 0.0, 100.0, lines=named, pick="smallest")]


def staffed_hours(plan: Plan, week: Week) -> Calendar:
    """Staffed hours in seconds of the week."""
    horizon_s = plan.clock.second(plan.end)
    rows = [weekly(plan.clock, horizon_s, row.days, row.from_, row.to) for row in week.staffed]
    return tidy(span for row in rows for span in row)


def _people(plan: Plan, week: Week) -> Iterator[Bar]:
    for start_s, end_s in staffed_hours(plan, week):
        yield Bar(start_s, end_s, "", "staffed")
    for at, step in enumerate(plan.steps):
        if step.attended and step.seconds:
            yield Bar(step.start_s, step.end_s, str(len(step.people) or 1), "attended", at)


def _services(plan: Plan) -> Iterator[Bar]:
    for at, step in enumerate(plan.steps):
        if step.kind is StepKind.SERVICE:
            yield Bar(step.start_s, step.end_s, service_letter(step), "service", at)


def service_letter(step: Step) -> str:
    """The letter that stands for a service."""
    return (step.service or step.label or "?")[0].upper()
