"""What a rig file may say about its magnet's wire and its masses: for the pages on the magnet and on the cooldown.

Nothing here is needed to plan a week.
"""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, model_validator

from planner.files.model import Table
from planner.units import (
    In,
    Kelvin,
    Kilograms,
    Litres,
    Metres,
    PositiveSeconds,
    PositiveTesla,
    SquareMetres,
    TeslaPerAmpere,
)

Line = Annotated[str, Field(min_length=1, max_length=80, pattern=r"^[^\x00-\x1f\x7f]+$")]


class Conductor(Table):
    """One section of the winding: its superconductor and how near its critical surface it works."""

    name: Line = "winding"
    material: Literal["NbTi A", "NbTi B", "NbTi routine", "Nb3Sn Summers", "Nb3Sn strand"] = Field(
        description="published fit of the critical surface; choose the area so that it matches your wire"
    )
    area_m2: SquareMetres = Field(description="superconductor in one wire; for Nb3Sn all that is not copper")
    peak_field_T_per_A: TeslaPerAmpere = Field(description="highest field on this section per ampere")
    temperature_K: Kelvin = Field(description="of the coil at work")
    strain_percent: Annotated[float, In("percent", least=-0.8, most=0.3)] = Field(
        default=0.0, description="of Nb3Sn filaments, negative in compression"
    )

    @model_validator(mode="after")
    def _fit_holds(self) -> Conductor:
        if self.temperature_K < 1.8:
            raise ValueError("temperature: the fits hold from 1.8 K up")
        if self.strain_percent and not self.material.startswith("Nb3Sn"):
            raise ValueError("strain: only Nb3Sn is given with a strain")
        return self


class StrayDistance(Table):
    """How far from the magnet's centre its stray field falls to a value, measured or from the maker's map."""

    field_T: PositiveTesla
    axial_m: Metres | None = Field(default=None, description="along the axis")
    across_m: Metres | None = Field(default=None, description="across the axis")

    @model_validator(mode="after")
    def _one_way(self) -> StrayDistance:
        if self.axial_m is None and self.across_m is None:
            raise ValueError("expected axial, across, or both")
        return self


class Winding(Table):
    """The size of the winding for the stray field far away, or distances measured at the rated field."""

    mean_radius_m: Metres | None = None
    length_m: Metres | None = None
    shielded: bool = Field(default=False, description="active shielding or steel: then only measured distances count")
    measured: tuple[StrayDistance, ...] = Field(default=(), description="at the rated field")

    @model_validator(mode="after")
    def _size_or_distances(self) -> Winding:
        if (self.mean_radius_m is None) != (self.length_m is None):
            raise ValueError("expected mean_radius and length together")
        if self.mean_radius_m is None and not self.measured:
            raise ValueError("expected mean_radius and length, or measured distances")
        return self


class ChainPart(Table):
    """One part of a cooldown, from the warm rig to base."""

    what: Line
    time_s: PositiveSeconds
    helium: bool = Field(default=False, description="liquid helium must be in the house when this begins")


class Cooldown(Table):
    """What is cooled from room temperature to base, and how long each part of that takes here."""

    copper_kg: Kilograms = 0.0
    aluminium_kg: Kilograms = 0.0
    stainless_kg: Kilograms = 0.0
    precool: Literal["nitrogen", "none"] = Field(default="none", description="to 77 K before the helium")
    fill_L: Litres = Field(default=0.0, description="liquid helium wanted in the bath at the end")
    nitrogen_fill_L: Litres = Field(
        default=0.0, description="nitrogen that stands in the vessel before it is blown out"
    )
    chain: Annotated[tuple[ChainPart, ...], Field(min_length=1)]
    order_lead_days: Annotated[int, Field(ge=0, le=250)] = Field(
        default=0, description="working days from order to delivery of helium"
    )

    @model_validator(mode="after")
    def _something_to_cool(self) -> Cooldown:
        if not (self.copper_kg or self.aluminium_kg or self.stainless_kg):
            raise ValueError("expected the mass of copper, aluminium or stainless steel")
        if self.nitrogen_fill_L and self.precool != "nitrogen":
            raise ValueError('nitrogen_fill: only with precool = "nitrogen"')
        return self
