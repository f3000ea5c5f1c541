"""The rig file: the hardware of one cryostat and the rules of its site. Every number of a rig is a value here."""

from __future__ import annotations

from itertools import pairwise
from typing import Annotated, Literal

from pydantic import Field, model_validator

from planner.files.hardware import Conductor, Cooldown, Winding
from planner.files.hours import Hours
from planner.files.model import LINE, LINES, Table
from planner.units import (
    AmpereRate,
    CubicMetres,
    Henry,
    In,
    Kelvin,
    LitreRate,
    LitreRatePerAmpere,
    Litres,
    LitresPerTesla,
    Ohm,
    Percent,
    PositiveAmpere,
    PositiveLitreRate,
    PositiveSeconds,
    PositiveTesla,
    PositiveVolt,
    Seconds,
    TeslaPerAmpere,
    TeslaRate,
)

RIG_FORMAT: Literal[1] = 1
Line = Annotated[str, Field(max_length=200, pattern=LINE)]


class RampSegment(Table):
    """Fastest allowed ramp for |B| up to ``to_T``; the edge belongs to this, the lower-field, segment."""

    to_T: PositiveTesla
    rate_T_per_s: TeslaRate


class Supply(Table):
    """The magnet's power supply."""

    max_current_A: PositiveAmpere
    max_voltage_V: PositiveVolt
    lead_resistance_ohm: Ohm
    polarity: Literal["bipolar", "unipolar"] = "bipolar"
    reversal_s: Seconds = Field(default=0.0, description="at zero current, to change the polarity of a unipolar supply")


class Switch(Table):
    """The persistent switch and the order in which it is worked."""

    warm_s: Seconds
    cool_s: Seconds
    hold_before_s: Seconds = Field(description="at the target field before the heater goes off")
    settle_after_s: Seconds = Field(description="after the leads have moved, before the heater goes on")
    leads_A_per_s: AmpereRate = Field(description="lead current with the switch closed")
    match_A: PositiveAmpere = Field(description="largest mismatch of lead and coil current when the heater goes on")
    attended: bool = Field(default=True, description="somebody must be there when leads and heater are worked at field")


class Magnet(Table):
    """The superconducting solenoid."""

    rated_field_T: PositiveTesla
    field_per_current_T_per_A: TeslaPerAmpere
    inductance_H: Henry
    ramp_table: Annotated[tuple[RampSegment, ...], Field(min_length=1, max_length=100)]
    settle_s: Seconds = Field(default=0.0, description="after a ramp, before data")
    supply: Supply
    switch: Switch | None = None
    lambda_field_T: PositiveTesla | None = Field(
        default=None,
        description="rated with the coil below the lambda point; no week is planned beyond rated_field",
    )
    lambda_table: tuple[RampSegment, ...] = Field(default=(), description="ramp_table's rows beyond rated_field")
    lambda_temperature_K: Kelvin | None = Field(default=None, description="of the coil below the lambda point")
    conductor: tuple[Conductor, ...] = Field(default=(), description="sections of the winding")
    winding: Winding | None = None

    @model_validator(mode="after")
    def _table_covers_the_field(self) -> Magnet:
        edges = [segment.to_T for segment in self.ramp_table]
        if any(high <= low for low, high in pairwise(edges)):
            raise ValueError("ramp_table: the `to` fields must rise from row to row")
        if edges[-1] < self.rated_field_T:
            raise ValueError(f"ramp_table: ends at {edges[-1]:g} T, below the rated field of {self.rated_field_T:g} T")
        leads_V = edges[-1] / self.field_per_current_T_per_A * self.supply.lead_resistance_ohm
        if leads_V >= self.supply.max_voltage_V:
            raise ValueError(
                f"supply.max_voltage: at {edges[-1]:g} T the leads alone take {leads_V:.3g} V, none is left to charge"
            )
        needed_A = self.rated_field_T / self.field_per_current_T_per_A
        if needed_A > self.supply.max_current_A * (1 + 1e-9):
            given_A = self.supply.max_current_A
            raise ValueError(
                f"supply.max_current: the rated field needs {needed_A:.4g} A, the supply gives {given_A:.4g} A"
            )
        return self

    @model_validator(mode="after")
    def _sections_differ(self) -> Magnet:
        names = [section.name for section in self.conductor]
        if len(set(names)) < len(names):
            raise ValueError("conductor: each section needs a name of its own")
        return self

    @model_validator(mode="after")
    def _lambda_field_lies_above(self) -> Magnet:
        highest_T = self.lambda_field_T
        if highest_T is None:
            if self.lambda_table or self.lambda_temperature_K is not None:
                raise ValueError("lambda_field: is missing beside lambda_table or lambda_temperature")
            return self
        if highest_T <= self.rated_field_T:
            raise ValueError("lambda_field: expected more than rated_field")
        needed_A, given_A = highest_T / self.field_per_current_T_per_A, self.supply.max_current_A
        if needed_A > given_A * (1 + 1e-9):
            raise ValueError(f"lambda_field: needs {needed_A:.4g} A, the supply gives {given_A:.4g} A")
        edges = [self.rated_field_T, *(segment.to_T for segment in self.lambda_table)]
        if any(high <= low for low, high in pairwise(edges)):
            raise ValueError("lambda_table: the `to` fields must begin above rated_field and rise from row to row")
        if self.lambda_table and edges[-1] < highest_T:
            raise ValueError(f"lambda_table: ends at {edges[-1]:g} T, below lambda_field")
        return self


class LevelPoint(Table):
    """One row of the gauge's calibration."""

    level_percent: Percent
    volume_L: Litres


class Lines(Table):
    """The helium lines, judged on the trusted level (gauge reading less its error)."""

    start_ramp_percent: Percent = Field(description="no ramp to higher field starts below")
    at_field_percent: Percent = Field(description="the run-down must have begun by then")
    coil_top_percent: Percent = Field(description="never with current below")
    reserve_percent: Percent = Field(description="never below, with or without current")


class Losses(Table):
    """What empties the bath. They add up."""

    static_L_per_s: LitreRate
    switch_open_L_per_s: LitreRate = Field(default=0.0, description="while the coil is driven")
    leads_L_per_s_A: LitreRatePerAmpere = Field(default=0.0, description="per ampere in the leads")
    moving_L_per_T: LitresPerTesla = Field(default=0.0, description="per tesla of field change")


class Transfer(Table):
    """How and when helium is transferred here. Hours left out mean any staffed hour."""

    rate_L_per_s: PositiveLitreRate = Field(description="into the bath")
    efficiency_percent: Annotated[float, In("percent", above=0, most=100)]
    line_cooling_s: Seconds
    line_loss_L: Litres = 0.0
    fill_to_percent: Percent = 100.0
    least_pour_L: Litres = Field(default=5.0, description="less is not worth cooling the line")
    people: Annotated[int, Field(ge=1, le=9)] = 2
    training: Line = "transfer"
    coil: Literal["zero", "persistent or zero"] = "zero"
    hours: Annotated[tuple[Hours, ...], Field(max_length=50)] = ()


class Bath(Table):
    """A liquid-helium bath around the coil."""

    calibration: Annotated[tuple[LevelPoint, ...], Field(min_length=2, max_length=1000)]
    gauge_error_percent: Percent
    lines: Lines
    losses: Losses
    transfer: Transfer

    @model_validator(mode="after")
    def _tables_make_sense(self) -> Bath:
        for low, high in pairwise(self.calibration):
            if high.level_percent <= low.level_percent or high.volume_L <= low.volume_L:
                raise ValueError("calibration: level and volume must rise from row to row")
        lines = self.lines
        if not lines.reserve_percent <= lines.coil_top_percent <= lines.at_field_percent <= lines.start_ramp_percent:
            raise ValueError("lines: expected reserve ≤ coil_top ≤ at_field ≤ start_ramp")
        least, most = self.calibration[0].level_percent, self.calibration[-1].level_percent
        if lines.reserve_percent + self.gauge_error_percent < least or self.transfer.fill_to_percent > most:
            raise ValueError(
                f"calibration: covers {least:g} % to {most:g} %, which leaves out a line or the fill level"
            )
        return self


class Cooler(Table):
    """A cryogen-free cooler: no bath, no helium book."""

    name: Line = "cooler"


class WarmingPoint(Table):
    """How long from base to ``to_K``, settled."""

    to_K: Kelvin
    time_s: Seconds


class CoolingPoint(Table):
    """How long from ``from_K`` down to base, settled."""

    from_K: Kelvin
    time_s: Seconds


class SettleAfterRamp(Table):
    """How long the stage takes to come back after the field has moved, for a wanted temperature below ``below_K``."""

    below_K: Kelvin
    time_s: Seconds


class ThermalModel(Table):
    """Exponential approach with one time constant each way, where nobody has measured a table."""

    warming_constant_s: PositiveSeconds
    cooling_constant_s: PositiveSeconds
    within_percent: Annotated[float, In("percent", above=0, most=50)] = Field(description="settled when this near")


class StagePart(Table):
    """The cold stage with the samples: its range and how long its temperature takes, by measured table or by model."""

    kind: Literal["dilution", "continuous"]
    base_K: Kelvin
    highest_K: Kelvin = Field(description="with the mixture circulating")
    warming: Annotated[tuple[WarmingPoint, ...], Field(max_length=100)] = ()
    cooling: Annotated[tuple[CoolingPoint, ...], Field(max_length=100)] = ()
    model: ThermalModel | None = None
    after_ramp: Annotated[tuple[SettleAfterRamp, ...], Field(max_length=100)] = ()

    @model_validator(mode="after")
    def _one_way_to_know(self) -> StagePart:
        if self.highest_K < self.base_K:
            raise ValueError("highest: must not be below base")
        if (self.model is None) == (not self.warming and not self.cooling):
            raise ValueError("expected either the measured tables warming and cooling, or a model")
        if self.model is None and not (self.warming and self.cooling):
            raise ValueError("expected both tables, warming and cooling")
        for name, temperatures, times in (
            ("warming", [p.to_K for p in self.warming], [p.time_s for p in self.warming]),
            ("cooling", [p.from_K for p in self.cooling], [p.time_s for p in self.cooling]),
        ):
            if any(b <= a for a, b in pairwise(temperatures)) or any(b < a for a, b in pairwise(times)):
                raise ValueError(f"{name}: temperatures must rise from row to row, times must not fall")
            if temperatures and (temperatures[0] <= self.base_K or temperatures[-1] < self.highest_K):
                raise ValueError(f"{name}: must begin above base and reach highest ({self.highest_K:g} K)")
        return self


class Contact(Table):
    """Whom to call: a role and how to reach it."""

    role: Line
    reach: Line


class Room(Table):
    """The room of the rig: its volume for the oxygen figure, and whom to call."""

    volume_m3: CubicMetres | None = None
    contacts: Annotated[tuple[Contact, ...], Field(max_length=50)] = ()


class Policies(Table):
    """Site rules. What is left out is no rule."""

    together: frozenset[Literal["field", "temperature", "gates"]] = frozenset({"field", "temperature", "gates"})
    unattended_persistent: bool = Field(default=True, description="a persistent field may stand with nobody there")


class Rig(Table):
    """One cryostat."""

    format: Literal[1]
    kind: Literal["rig"]
    name: Annotated[str, Field(min_length=1, max_length=80, pattern=LINE)]
    notes: Annotated[str, Field(max_length=2000, pattern=LINES)] = ""
    magnet: Magnet
    bath: Bath | None = None
    cooler: Cooler | None = None
    stage: StagePart
    room: Room = Room()
    policies: Policies = Policies()
    cooldown: Cooldown | None = None

    @model_validator(mode="after")
    def _wet_or_dry(self) -> Rig:
        if (self.bath is None) == (self.cooler is None):
            raise ValueError("expected one of the tables [bath] and [cooler]")
        return self
