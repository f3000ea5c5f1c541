"""The kinds of target a week file may hold. `TARGET_KINDS` is their registry."""

from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import Field, model_validator

from planner.files.asks import (
    FieldRange,
    Filling,
    FillingOrRange,
    FillingRange,
    Temperature,
    TemperatureAsk,
    VoltRange,
)
from planner.files.hours import Hours, Span
from planner.files.model import LINE, Table
from planner.units import In, Kelvin, PositiveSeconds, PositiveTesla, Seconds, Tesla, TeslaRate, Volt

Name = Annotated[str, Field(min_length=1, max_length=60, pattern=LINE)]
Note = Annotated[str, Field(max_length=200, pattern=LINE)]
Names = Annotated[tuple[Name, ...], Field(max_length=500)]
Gates = Annotated[dict[str, Volt], Field(max_length=50)]
Windows = Annotated[tuple[Span, ...], Field(max_length=100)]
WeeklyHours = Annotated[tuple[Hours, ...], Field(max_length=50)]
MOST_POINTS = 10_000_000
Direction = Literal["up", "down", "both", "either"]
BASE = TemperatureAsk(None, at_most=False, text="base")


class LockIn(Table):
    """The lock-in's output filter, and how many independent points a feature needs."""

    time_constant_s: PositiveSeconds
    poles: Annotated[int, Field(ge=1, le=8)] = 1
    points_across: Annotated[int, Field(ge=1, le=1000)] = 10
    settled_percent: Annotated[float, In("percent", above=50, most=99.999)] = 99.0


class Target(Table):
    """What every target has."""

    name: Name
    sample: Name
    user: Name | None = Field(default=None, description="left out: the sample's user")
    priority: Annotated[int, Field(ge=1, le=5)] = Field(default=3, description="5 matters most")
    must: bool = False
    temperature: Temperature = BASE
    gates: Gates = Field(default={}, description="voltages held; gates not named stay at rest")
    after: Names = ()
    before: Names = ()
    attended: bool = Field(default=False, description="somebody must be there all the while")
    windows: Windows = ()
    hours: WeeklyHours = ()
    repeats: Annotated[int, Field(ge=1, le=100)] = 1
    decide_s: Seconds = Field(default=0.0, description="a pause, with staff, to look and decide what comes next")
    lockin: LockIn | None = Field(default=None, description="left out: the sample's")
    excitation: Note = ""
    contacts: Note = ""
    file: Note = ""

    @property
    def takes(self) -> int:
        """How many takes it expands to."""
        return self.repeats


class AtOneField(Target):
    """A target measured at one field, given in tesla or as a filling of its sample."""

    field_T: Tesla | None = None
    filling: Filling | None = None
    coil: Literal["driven", "persistent", "either"] = "either"

    @model_validator(mode="after")
    def _one_field(self) -> AtOneField:
        if (self.field_T is None) == (self.filling is None):
            raise ValueError("expected either `field` or `filling`")
        return self


class Hold(AtOneField):
    """Stay at a field, a temperature and gate voltages for a while."""

    kind: Literal["hold"]
    duration_s: PositiveSeconds


class FieldSweep(Target):
    """Sweep the field over a range of field or filling, or over a window around one filling."""

    kind: Literal["field sweep"]
    field: FieldRange | None = None
    filling: FillingOrRange | None = None
    width_T: PositiveTesla | None = Field(default=None, description="with one filling: the whole window around it")
    rate_T_per_s: TeslaRate | None = Field(
        default=None, description="left out: the fastest the lock-in and magnet allow"
    )
    feature_T: PositiveTesla | None = Field(default=None, description="width of the narrowest feature to resolve")
    direction: Direction = "both"

    @model_validator(mode="after")
    def _one_range(self) -> FieldSweep:
        if (self.field is None) == (self.filling is None):
            raise ValueError("expected either `field` or `filling`")
        single = isinstance(self.filling, float)
        if single and self.width_T is None:
            raise ValueError("a sweep around one filling needs its `width`")
        if not single and self.width_T is not None:
            raise ValueError("`width` goes with one filling, not with a range")
        return self


class GateSweep(AtOneField):
    """Sweep one gate at a fixed field; with a second gate, once for each of its values."""

    kind: Literal["gate sweep"]
    gate: Name
    sweep: VoltRange
    points: Annotated[int, Field(ge=2, le=100_000)]
    dwell_s: PositiveSeconds | None = Field(default=None, description="a point; left out: the lock-in's settling")
    second_gate: Name | None = None
    second_sweep: VoltRange | None = None
    second_points: Annotated[int, Field(ge=2, le=10_000)] | None = None
    direction: Direction = "either"

    @model_validator(mode="after")
    def _second_gate_whole(self) -> GateSweep:
        given = [part is not None for part in (self.second_gate, self.second_sweep, self.second_points)]
        if any(given) and not all(given):
            raise ValueError("a second gate needs `second_gate`, `second_sweep` and `second_points`")
        if self.second_gate == self.gate:
            raise ValueError("second_gate: must be another gate")
        if self.points * (self.second_points or 1) > MOST_POINTS:
            raise ValueError(f"second_points: expected at most {MOST_POINTS} points in all")
        _none_held(self, self.gate, self.second_gate)
        return self


class TemperatureSeries(AtOneField):
    """The same measurement at several temperatures, at one field; one take a temperature."""

    kind: Literal["temperature series"]
    temperatures_K: Annotated[tuple[Kelvin, ...], Field(min_length=1, max_length=100)]
    duration_s: PositiveSeconds = Field(description="of the measurement at each temperature, settling apart")

    @property
    def takes(self) -> int:
        """One a temperature."""
        return self.repeats * len(self.temperatures_K)


class Map(Target):
    """A gate sweep at each of several fields (rungs); one take a rung."""

    kind: Literal["map"]
    field: FieldRange | None = None
    filling: FillingRange | None = None
    fields_T: Annotated[tuple[Tesla, ...], Field(max_length=1000)] = ()
    fillings: Annotated[tuple[Filling, ...], Field(max_length=1000)] = ()
    rungs: Annotated[int, Field(ge=2, le=1000)] | None = Field(
        default=None, description="with a range: how many fields"
    )
    gate: Name
    sweep: VoltRange
    points: Annotated[int, Field(ge=2, le=100_000)]
    dwell_s: PositiveSeconds | None = None
    direction: Direction = "either"
    coil: Literal["driven", "persistent", "either"] = "either"

    @model_validator(mode="after")
    def _rungs_known(self) -> Map:
        given = [self.field is not None, self.filling is not None, bool(self.fields_T), bool(self.fillings)]
        if sum(given) != 1:
            raise ValueError("expected one of `field`, `filling`, `fields` and `fillings`")
        if (given[0] or given[1]) != (self.rungs is not None):
            raise ValueError("`rungs` goes with a range of field or filling, and is needed there")
        _none_held(self, self.gate)
        return self

    @property
    def takes(self) -> int:
        """One a rung."""
        return self.repeats * (self.rungs or len(self.fields_T) or len(self.fillings))


def _none_held(target: Target, *swept: str | None) -> None:
    for name in swept:
        if name in target.gates:
            raise ValueError(f"gates.{name}: this gate is swept, so it cannot be held as well")


class OtherWork(Target):
    """A timed job of any other kind that needs the rig in a given state."""

    kind: Literal["other work"]
    what: Annotated[str, Field(min_length=1, max_length=200, pattern=LINE)]
    duration_s: PositiveSeconds
    field_T: Tesla = 0.0
    people: Annotated[int, Field(ge=1, le=9)] = 1
    training: Name | None = None


AnyTarget = Annotated[
    Hold | FieldSweep | GateSweep | TemperatureSeries | Map | OtherWork,
    Field(discriminator="kind"),
]

TARGET_KINDS: dict[str, type[Target]] = {
    kind.model_fields["kind"].annotation.__args__[0]: kind  # type: ignore[union-attr]
    for kind in (Hold, FieldSweep, GateSweep, TemperatureSeries, Map, OtherWork)
}


def gates_used(target: Any) -> tuple[str, ...]:
    """Names of the gates a target holds or sweeps."""
    names = (getattr(target, "gate", None), getattr(target, "second_gate", None))
    return tuple(dict.fromkeys([*target.gates, *(name for name in names if name)]))
