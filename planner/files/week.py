"""The week file: one request. Who wants what, when people are there, what state the rig is in."""

from __future__ import annotations

from typing import Annotated, Literal
from zoneinfo import ZoneInfo

from pydantic import AfterValidator, Field, model_validator

from planner.clock import Clock, localise, zone
from planner.files.hours import DateAndTime, Moment, Span
from planner.files.model import LINE, Table
from planner.files.targets import AnyTarget, LockIn, Name, Names, Note, WeeklyHours, Windows
from planner.units import (
    Ampere,
    Density,
    DensityPerVolt,
    HoursPerLitre,
    In,
    Litres,
    Percent,
    PositiveLitres,
    Tesla,
    Volt,
    VoltRate,
)

WEEK_FORMAT: Literal[1] = 1
KelvinOrBase = Annotated[float | Literal["base"], In("K", above=0, word="base")]


def _zone_exists(name: str) -> str:
    zone(name)
    return name


class Gate(Table):
    """One gate of a sample and the window it may be driven in."""

    name: Name
    lowest_V: Volt
    highest_V: Volt
    rate_V_per_s: VoltRate
    rest_V: Volt = 0.0
    density_slope_per_m2_V: DensityPerVolt | None = Field(default=None, description="carriers per area and volt")
    reference_V: Volt = Field(default=0.0, description="where the sample's density holds")

    @model_validator(mode="after")
    def _window(self) -> Gate:
        if not self.lowest_V <= self.rest_V <= self.highest_V or self.lowest_V == self.highest_V:
            raise ValueError("expected lowest ≤ rest ≤ highest, and lowest below highest")
        return self


class Sample(Table):
    """One chip in this load."""

    name: Name
    user: Name
    density_per_m2: Density
    density_error_percent: Annotated[float, In("percent", least=0, most=50)] = 0.0
    carriers: Literal["electrons", "holes"] = "electrons"
    gates: Annotated[tuple[Gate, ...], Field(max_length=50)] = ()
    lockin: LockIn | None = None
    contacts: Note = ""

    def gate(self, name: str) -> Gate:
        """The gate of that name; StopIteration if there is none (references are checked on reading)."""
        return next(gate for gate in self.gates if gate.name == name)


class User(Table):
    """A user or group who shares the magnet. A slot reserves it: nobody else's takes run in it."""

    name: Name
    letter: Annotated[str, Field(pattern=r"^[A-Z]$")]
    slots: Windows = ()
    only_in_slots: bool = False


class Person(Table):
    """Somebody on the roster. Hours left out mean all staffed hours."""

    name: Name
    trained: Names = ()
    hours: WeeklyHours = ()
    away: Windows = ()


class Quiet(Table):
    """A neighbour's quiet time: no change of field, or no field above a limit."""

    name: Name
    from_: Moment = Field(alias="from")
    to: Moment
    forbids: Literal["ramps", "field"] = "ramps"
    above_T: Annotated[float, In("T", least=0)] = 0.0


class Delivery(Table):
    """Helium that arrives."""

    at: Moment
    volume_L: PositiveLitres


class Helium(Table):
    """Liquid helium in storage vessels, and what will be delivered."""

    stock_L: Litres = 0.0
    deliveries: Annotated[tuple[Delivery, ...], Field(max_length=100)] = ()


class Present(Table):
    """The rig as the week begins."""

    level_percent: Percent | None = Field(default=None, description="as the gauge reads; for a rig with a bath")
    field_T: Tesla = 0.0
    coil: Literal["zero", "driven", "persistent"] | None = Field(
        default=None, description="left out: zero, or driven at a field"
    )
    lead_current_A: Ampere | None = None
    persistent_current_A: Annotated[float | Literal["unknown"], In("A", word="unknown")] | None = None
    temperature_K: KelvinOrBase = "base"
    gates: dict[str, Volt] = Field(default={}, description='by "sample/gate"; the others are at rest')

    @model_validator(mode="after")
    def _coil_fits(self) -> Present:
        if self.coil == "zero" and self.field_T != 0:
            raise ValueError("coil: is zero, but the field is not")
        if self.coil != "persistent" and self.persistent_current_A is not None:
            raise ValueError('persistent_current: only with coil = "persistent"')
        if self.coil == "persistent" and self.persistent_current_A is None:
            raise ValueError('persistent_current: expected the logged current, or "unknown"')
        return self


class WantedEnd(Table):
    """The rig as the week shall end. At a field the coil is driven unless it shall be left persistent, leads down."""

    field_T: Tesla = 0.0
    coil: Literal["driven", "persistent"] = "driven"
    temperature_K: KelvinOrBase = "base"


class Objective(Table):
    """What a litre of helium is worth in hours of moving."""

    hours_per_litre: HoursPerLitre = 0.25


class Week(Table):
    """One request for fridge time."""

    format: Literal[1]
    kind: Literal["week"]
    title: Annotated[str, Field(min_length=1, max_length=120, pattern=LINE)]
    rig: Annotated[str, Field(min_length=1, max_length=200, pattern=LINE)]
    zone: Annotated[str, AfterValidator(_zone_exists)]
    start: DateAndTime
    end: DateAndTime
    present: Present
    wanted_end: WantedEnd = WantedEnd()
    staffed: WeeklyHours = ()
    people: Annotated[tuple[Person, ...], Field(max_length=60)] = ()
    users: Annotated[tuple[User, ...], Field(min_length=1, max_length=26)]
    quiet: Annotated[tuple[Quiet, ...], Field(max_length=200)] = ()
    helium: Helium = Helium()
    samples: Annotated[tuple[Sample, ...], Field(max_length=100)] = ()
    targets: tuple[AnyTarget, ...] = ()
    objective: Objective = Objective()

    @property
    def clock(self) -> Clock:
        """The week's clock; second 0 is its start."""
        where: ZoneInfo = zone(self.zone)
        return Clock(localise(self.start, where))

    @property
    def horizon_s(self) -> int:
        """True length of the week in seconds."""
        clock = self.clock
        return clock.second(localise(self.end, clock.where))

    def seconds(self, span: Span | Quiet) -> tuple[int, int]:
        """Begin and finish of a span in the week's seconds, not cut to the week."""
        clock = self.clock
        return clock.second(clock.read(span.from_)), clock.second(clock.read(span.to))

    def sample(self, name: str) -> Sample:
        """The sample of that name (references are checked on reading)."""
        return next(sample for sample in self.samples if sample.name == name)

    def user(self, name: str) -> User:
        """The user of that name (references are checked on reading)."""
        return next(user for user in self.users if user.name == name)
