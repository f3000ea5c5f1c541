"""A magnet along its field: how near its critical surface it works, what its supply shows, what a quench would do.

Planning figures from the rig file. What the file does not hold is said instead of guessed. The maker's data, the
interlocks and the responsible person decide.
"""

from __future__ import annotations

from dataclasses import asdict, dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.files.hardware import Conductor
from planner.files.rig import Magnet, Rig
from planner.physics import nb3sn, nbti
from planner.physics.helium import gas_volume_m3
from planner.physics.load_line import (
    LOWEST_T,
    Surface,
    operating_fraction,
    short_sample_A,
    temperature_margin_K,
)
from planner.physics.magnet import charging_voltage_V, current_A, quench_liquid_L, stored_energy_J
from planner.physics.oxygen import HAZARD_OXYGEN, oxygen_displaced, oxygen_mixed
from planner.physics.stray_field import (
    IMPLANTS_IEC_2022_T,
    IMPLANTS_T,
    LOOSE_STEEL_T,
    NEAREST_IN_LENGTHS,
    axial_distance_m,
    dipole_moment_A_m2,
    equatorial_distance_m,
)

if TYPE_CHECKING:
    import pandas as pd

STRAY_LIMITS = (
    (IMPLANTS_T, "implants, ICNIRP 2009 (from memory)"),
    (IMPLANTS_IEC_2022_T, "controlled area of imaging magnets, IEC 60601-2-33:2022"),
    (LOOSE_STEEL_T, "loose steel may fly (from memory)"),
)

CAUTIONS = (
    (
        "A planning aid: it protects neither magnet nor people. The maker's limits, the rig's interlocks, local rules "
        "and licensed people come first."
    ),
    "Quench: leave, keep clear of the vents, call. Nobody energises the magnet again without the person responsible.",
    (
        "Oxygen alarm: leave at once, warn others; nobody goes back in until the air is normal and the cause is known. "
        "No lift together with a dewar."
    ),
    (
        "People with implants stay outside the 0.5 mT line, on the floors above and below too; iron and gas bottles "
        "stay away. A persistent field is there with the supply off."
    ),
)
"""The cautions of the page: common practice, no source, but for the 0.5 mT line (ICNIRP 2009, from memory)."""

_STEPS = 12


@dataclass(frozen=True, slots=True)
class SectionRow:
    """One section of the winding at one field; margins are None below 1 T of peak field and beyond critical."""

    section: str
    field_T: float
    peak_T: float
    temperature_K: float
    short_sample_A: float
    fraction: float
    margin_K: float | None


@dataclass(frozen=True, slots=True)
class MagnetRow:
    """One field: current, fastest ramp and the supply's voltage there, largest fraction and smallest margin.

    ``section`` is the one of the largest fraction; the smallest margin may be another's, and is None where that of any
    section is.

    ``below_lambda`` marks fields for which the coil must be below the lambda point. Voltages are the supply's while
    ramping up and down at the rate of the rig's table, None where the table has no rate.
    """

    field_T: float
    current_A: float
    below_lambda: bool
    rate_T_per_s: float | None
    up_V: float | None
    down_V: float | None
    fraction: float | None
    margin_K: float | None
    section: str


@dataclass(frozen=True, slots=True)
class Quench:
    """Energy of the coil at a field, and the most that a quench can boil off and do to the room's air."""

    field_T: float
    energy_J: float
    liquid_L: float | None
    gas_m3: float | None
    oxygen_displaced: float | None
    oxygen_mixed: float | None


@dataclass(frozen=True, slots=True)
class StrayRow:
    """How far from the magnet's centre the field at rated field falls to a value; None where it cannot be said."""

    field_T: float
    meaning: str
    axial_m: float | None
    across_m: float | None
    source: str


@dataclass(frozen=True, slots=True)
class MagnetPage:
    """Everything the rig file lets one say of its magnet; ``missing`` is what it does not."""

    name: str
    rated_T: float
    lambda_T: float | None
    max_V: float
    rows: tuple[MagnetRow, ...]
    sections: tuple[SectionRow, ...]
    quenches: tuple[Quench, ...]
    room_m3: float | None
    stray: tuple[StrayRow, ...]
    missing: tuple[str, ...]
    words: tuple[str, ...]
    cautions: tuple[str, ...] = CAUTIONS

    def data(self) -> dict[str, Any]:
        """Everything as JSON-ready values, units in the keys."""
        return asdict(self)

    def frame(self) -> pd.DataFrame:
        """The rows along the field as a table, units in the column names."""
        import pandas as pd

        return pd.DataFrame([asdict(row) for row in self.rows])


def surface_of(conductor: Conductor) -> Surface:
    """Return the critical surface a rig file names, under its strain."""
    strain = float(conductor.strain_percent) / 100.0
    surfaces: dict[str, Surface] = {
        "NbTi A": nbti.SET_A,
        "NbTi B": nbti.SET_B,
        "NbTi routine": nbti.ROUTINE,
        "Nb3Sn Summers": replace(nb3sn.SUMMERS, strain=strain),
        "Nb3Sn strand": replace(nb3sn.ITER_STRAND, strain=strain),
    }
    return surfaces[conductor.material]


def magnet_page(rig: Rig) -> MagnetPage:
    """Lay out a rig's magnet along its field.

    Raises
    ------
    OutOfRangeError
        If a section's numbers lie outside the range of its critical surface.
    """
    magnet = rig.magnet
    beyond = None if magnet.lambda_field_T is None else float(magnet.lambda_field_T)
    fields = _fields_T(magnet)
    sections = [row for field in fields for row in _sections_at(magnet, field)]
    rows = tuple(_row(magnet, field, [row for row in sections if row.field_T == field]) for field in fields)
    tops = [float(magnet.rated_field_T), *([beyond] if beyond is not None else [])]
    return MagnetPage(
        name=rig.name,
        rated_T=tops[0],
        lambda_T=beyond,
        max_V=float(magnet.supply.max_voltage_V),
        rows=rows,
        sections=tuple(row for row in sections if row.field_T in tops),
        quenches=tuple(_quench(rig, field) for field in tops),
        room_m3=None if rig.room.volume_m3 is None else float(rig.room.volume_m3),
        stray=_stray(magnet),
        missing=tuple(_missing(rig)),
        words=tuple(_words(rig, rows)),
    )


def _fields_T(magnet: Magnet) -> list[float]:
    """Fields of the table: even steps, both ends of each ramp row, the rated field and those below the lambda point."""
    rated = float(magnet.rated_field_T)
    decade = 10.0 ** np.floor(np.log10(rated / _STEPS))
    step = float(next(size * decade for size in (1.0, 2.0, 2.5, 5.0, 10.0) if size * decade >= rated / _STEPS * 0.999))
    fields = {float(f"{step * count:.6g}") for count in range(1, int(rated / step) + 1)}
    fields |= {float(row.to_T) for row in magnet.ramp_table if row.to_T <= rated} | {rated}
    if magnet.lambda_field_T is not None:
        fields |= {float(row.to_T) for row in magnet.lambda_table if row.to_T <= magnet.lambda_field_T}
        fields |= {float(magnet.lambda_field_T)}
    return sorted(fields)


def rate_at_T_per_s(magnet: Magnet, field_T: float) -> float | None:
    """Return the fastest ramp just below a field, from the row it lies in; None beyond the tables."""
    rows = magnet.lambda_table if field_T > magnet.rated_field_T else magnet.ramp_table
    return next((float(row.rate_T_per_s) for row in rows if field_T <= row.to_T * (1 + 1e-12)), None)


def _row(magnet: Magnet, field_T: float, sections: list[SectionRow]) -> MagnetRow:
    ampere = float(current_A(field_T, magnet.field_per_current_T_per_A))
    rate = rate_at_T_per_s(magnet, field_T)
    up = down = None
    if rate is not None:
        slope = rate / float(magnet.field_per_current_T_per_A)
        ohm, henry = float(magnet.supply.lead_resistance_ohm), float(magnet.inductance_H)
        up, down = (float(charging_voltage_V(henry, way * slope, ampere, ohm)) for way in (1, -1))
    worst = max(sections, key=lambda row: row.fraction, default=None)
    margins = [row.margin_K for row in sections if row.margin_K is not None]
    return MagnetRow(
        field_T=field_T,
        current_A=ampere,
        below_lambda=field_T > magnet.rated_field_T,
        rate_T_per_s=rate,
        up_V=up,
        down_V=down,
        fraction=None if worst is None else worst.fraction,
        margin_K=min(margins) if margins and len(margins) == len(sections) else None,
        section="" if worst is None else worst.section,
    )


def _sections_at(magnet: Magnet, field_T: float) -> list[SectionRow]:
    below_lambda = field_T > magnet.rated_field_T
    if below_lambda and magnet.lambda_temperature_K is None:
        return []
    return [_section(magnet, conductor, field_T, below_lambda=below_lambda) for conductor in magnet.conductor]


def _section(magnet: Magnet, conductor: Conductor, field_T: float, *, below_lambda: bool) -> SectionRow:
    surface, area = surface_of(conductor), float(conductor.area_m2)
    kappa = float(conductor.peak_field_T_per_A)
    ampere = float(current_A(field_T, magnet.field_per_current_T_per_A))
    kelvin = float(conductor.temperature_K)
    if below_lambda and magnet.lambda_temperature_K is not None:
        kelvin = float(magnet.lambda_temperature_K)
    peak = kappa * ampere
    fraction = operating_fraction(ampere, surface, area, kappa, kelvin)
    margin = None
    if peak >= LOWEST_T and fraction <= 1.0:
        margin = temperature_margin_K(ampere, surface, area, peak, kelvin)
    short = short_sample_A(surface, area, kappa, kelvin)
    return SectionRow(conductor.name, field_T, peak, kelvin, short, fraction, margin)


def _quench(rig: Rig, field_T: float) -> Quench:
    magnet = rig.magnet
    energy = float(stored_energy_J(magnet.inductance_H, float(current_A(field_T, magnet.field_per_current_T_per_A))))
    if rig.bath is None:
        return Quench(field_T, energy, None, None, None, None)
    liquid = float(quench_liquid_L(energy, float(rig.bath.calibration[-1].volume_L)))
    gas = float(gas_volume_m3(liquid))
    if rig.room.volume_m3 is None:
        return Quench(field_T, energy, liquid, gas, None, None)
    room = float(rig.room.volume_m3)
    displaced = float(oxygen_displaced(min(gas, room), room))
    return Quench(field_T, energy, liquid, gas, displaced, float(oxygen_mixed(gas, room)))


def _stray(magnet: Magnet) -> tuple[StrayRow, ...]:
    winding = magnet.winding
    if winding is None:
        return ()
    rows = [
        StrayRow(
            float(each.field_T),
            next((text for limit, text in STRAY_LIMITS if np.isclose(limit, each.field_T)), ""),
            None if each.axial_m is None else float(each.axial_m),
            None if each.across_m is None else float(each.across_m),
            "measured",
        )
        for each in winding.measured
    ]
    if winding.shielded or winding.mean_radius_m is None or winding.length_m is None:
        return tuple(sorted(rows, key=lambda row: row.field_T))
    radius, length = float(winding.mean_radius_m), float(winding.length_m)
    moment = float(dipole_moment_A_m2(magnet.rated_field_T, radius, length))
    nearest = NEAREST_IN_LENGTHS * float(np.hypot(radius, length / 2.0))
    known = {round(row.field_T, 9) for row in rows}
    for limit, meaning in STRAY_LIMITS:
        if round(limit, 9) not in known:
            ways = float(axial_distance_m(moment, limit)), float(equatorial_distance_m(moment, limit))
            far = [way if way >= nearest else None for way in ways]
            rows.append(StrayRow(limit, meaning, far[0], far[1], "dipole"))
    return tuple(sorted(rows, key=lambda row: row.field_T))


def _missing(rig: Rig) -> list[str]:
    magnet, missing = rig.magnet, []
    if not magnet.conductor:
        missing.append("operating fraction and temperature margin: the rig file has no [[magnet.conductor]] rows")
    elif magnet.lambda_field_T is not None and magnet.lambda_temperature_K is None:
        missing.append("fraction and margin below the lambda point: the rig file has no magnet.lambda_temperature")
    if magnet.lambda_field_T is not None and not magnet.lambda_table:
        missing.append("charging voltage above the rated field: the rig file has no magnet.lambda_table")
    if rig.bath is None:
        missing.append("litres and gas of a quench: a rig without a helium bath; the coil keeps the energy as heat")
    elif rig.room.volume_m3 is None:
        missing.append("oxygen in the room: the rig file has no room.volume; treat a quench as deadly")
    winding = magnet.winding
    if winding is None:
        missing.append("stray field: the rig file has no [magnet.winding]; use the maker's map")
    elif winding.shielded and not winding.measured:
        missing.append("stray field: a shielded magnet is no dipole; give measured distances or use the maker's map")
    elif any(None in (row.axial_m, row.across_m) and row.source == "dipole" for row in _stray(magnet)):
        missing.append("stray field where the coil is too near to be a dipole: use the maker's map there")
    return missing


def _words(rig: Rig, rows: tuple[MagnetRow, ...]) -> list[str]:
    words = []
    limit = float(rig.magnet.supply.max_voltage_V)
    slow = [row for row in rows if row.up_V is not None and row.up_V > limit * (1 + 1e-9)]
    if slow:
        words.append(
            f"From {slow[0].field_T:g} T the ramp table asks for more than the supply's {limit:g} V: ramps there are "
            "slower."
        )
    beyond = next((row for row in rows if row.fraction is not None and row.fraction > 1), None)
    if beyond is not None:
        words.append(
            f"At {beyond.field_T:g} T the section {beyond.section} is beyond its critical surface: check its numbers."
        )
    if rig.magnet.conductor:
        words.append("Critical surfaces are published fits; real wire scatters by 10 % about them.")
    if rig.bath is not None:
        words.append(
            "A quench boils off at most what its energy evaporates, and no more than the bath holds; part stays in the "
            "coil. Helium gathers under the ceiling: locally there is less oxygen than the figure says."
        )
        words.append(f"Below {100 * HAZARD_OXYGEN:g} % air is oxygen-deficient: 29 CFR 1910.146(b).")
    if any(row.source == "dipole" for row in _stray(rig.magnet)):
        words.append("Distances by the dipole of an unshielded coil in free space; steel and shielding void them.")
    return words
