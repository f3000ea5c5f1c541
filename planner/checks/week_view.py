"""A week as its judges see it: people, hours, transfers and asks, worked out once."""

from __future__ import annotations

from functools import cached_property

from planner.checks import wording
from planner.checks.spans import DAY_S, Span, Spans, less, same_all_through, shared, united, weekly
from planner.files import Request
from planner.files.level import level_at, litres_at
from planner.files.rig import Bath, Magnet
from planner.files.targets import AnyTarget, OtherWork, Target
from planner.files.week import Person
from planner.plan import Finding

BEYOND_S = 21 * DAY_S
"""How far past the week's end calendars are carried, to find the next attended transfer."""


class WeekView:
    """A request with its calendars.

    ``impossible`` maps the name of a target to the finding that makes it so; it is filled once all other rules
    have judged the week.
    """

    def __init__(self, request: Request) -> None:
        self.request = request
        self.week = request.week
        self.rig = request.rig
        self.magnet: Magnet = request.rig.magnet
        self.bath: Bath | None = request.rig.bath
        self.clock = request.week.clock
        self.horizon_s = request.week.horizon_s
        self.impossible: dict[str, Finding] = {}

    def wall(self, second: float) -> str:
        """A second as a wall time."""
        return wording.wall(self.clock, second, self.horizon_s)

    @cached_property
    def targets(self) -> dict[str, AnyTarget]:
        """The targets by name."""
        return {target.name: target for target in self.week.targets}

    def user_of(self, target: Target) -> str:
        """Whose target it is."""
        return target.user or self.week.sample(target.sample).user

    @cached_property
    def staffed(self) -> Spans:
        """Staffed hours, carried three weeks past the end."""
        return weekly(self.clock, self.week.staffed, 0, self.horizon_s + BEYOND_S)

    def present(self, person: Person) -> Spans:
        """When somebody of the roster is there."""
        own = weekly(self.clock, person.hours, 0, self.horizon_s + BEYOND_S) if person.hours else self.staffed
        away = united(self.span(entry) for entry in person.away)
        return less(shared(own, self.staffed), away)

    @cached_property
    def presence(self) -> dict[str, Spans]:
        """When everybody of the roster is there, by name."""
        return {person.name: self.present(person) for person in self.week.people}

    def trained(self, training: str) -> tuple[str, ...]:
        """Names of those who are trained for something; all for the empty training."""
        return tuple(person.name for person in self.week.people if not training or training in person.trained)

    def staff_for(self, target: Target) -> tuple[int, str]:
        """How many people a take of a target needs all the while, and what they must be trained for."""
        if isinstance(target, OtherWork) and (target.attended or target.training or target.people > 1):
            return target.people, target.training or ""
        return (1, "") if target.attended else (0, "")

    def people_there(self, count: int, training: str) -> Spans:
        """When the same ``count`` trained people are there; any staffed hour where the week has no roster."""
        if not self.week.people:
            return self.staffed
        return same_all_through(count, [self.presence[name] for name in self.trained(training)])

    @cached_property
    def transfer_hours(self) -> Spans:
        """Staffed hours in which the rig's rules allow transfers, whoever is there."""
        assert self.bath is not None
        rows = self.bath.transfer.hours
        allowed = weekly(self.clock, rows, 0, self.horizon_s + BEYOND_S) if rows else self.staffed
        return shared(allowed, self.staffed)

    @cached_property
    def transfer_spans(self) -> Spans:
        """When a transfer may run: its hours, with enough trained people there."""
        assert self.bath is not None
        transfer = self.bath.transfer
        return shared(self.transfer_hours, self.people_there(transfer.people, transfer.training))

    @cached_property
    def least_transfer_s(self) -> float:
        """How long the smallest transfer lasts."""
        assert self.bath is not None
        transfer = self.bath.transfer
        return float(transfer.line_cooling_s) + transfer.least_pour_L / transfer.rate_L_per_s

    @cached_property
    def slots(self) -> dict[str, Spans]:
        """The slots of each user, by name."""
        return {user.name: united(self.span(slot) for slot in user.slots) for user in self.week.users}

    def span(self, entry: object) -> Span:
        """Begin and end of a span of the week file, in seconds."""
        return self.week.seconds(entry)  # type: ignore[arg-type]

    @cached_property
    def deliveries(self) -> tuple[tuple[int, float], ...]:
        """Second and litres of every delivery, in order."""
        rows = [
            (self.clock.second(self.clock.read(row.at)), float(row.volume_L)) for row in self.week.helium.deliveries
        ]
        return tuple(sorted(rows))

    def stored_L(self, second: float) -> float:
        """Stock and deliveries up to a second, whatever was drawn."""
        return float(self.week.helium.stock_L) + sum(litres for at, litres in self.deliveries if at <= second)

    def windows(self, target: Target) -> Spans | None:
        """When a target may be measured; None where any time will do."""
        if not target.windows and not target.hours:
            return None
        spans = [self.span(window) for window in target.windows]
        return united([*spans, *weekly(self.clock, target.hours, 0, self.horizon_s)])

    def level(self, litres: float) -> float:
        """What the gauge reads, in percent."""
        assert self.bath is not None
        return level_at(self.bath, litres)

    def trusted(self, litres: float) -> float:
        """The gauge's reading less its error, in percent."""
        assert self.bath is not None
        return level_at(self.bath, litres) - self.bath.gauge_error_percent

    def line_L(self, line_percent: float) -> float:
        """Litres at which the trusted level just reaches a line."""
        assert self.bath is not None
        return litres_at(self.bath, line_percent + self.bath.gauge_error_percent)

    @property
    def start_L(self) -> float:
        """Litres in the bath as the week begins."""
        assert self.bath is not None
        assert self.week.present.level_percent is not None
        return litres_at(self.bath, float(self.week.present.level_percent))

    def reads(self, litres: float) -> str:
        """A level as findings say it."""
        return f"{wording.percent(self.level(litres))} (trusted {wording.percent(self.trusted(litres))})"
