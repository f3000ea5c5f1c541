"""What a cooldown from room temperature takes: helium, nitrogen, hours, and the day by which helium is ordered.

Helium and nitrogen lie between two bounds: gas that leaves as warm as the metal (least), and latent heat alone (most).
"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import asdict, dataclass
from datetime import date, datetime, time, timedelta
from typing import Any

import numpy as np

from planner.errors import InputError, Problem
from planner.files.hardware import Cooldown
from planner.files.rig import Rig
from planner.physics.cooldown import (
    NITROGEN_BOILING_K,
    helium_full_L_per_kg,
    helium_latent_L_per_kg,
    metal_heat_J_per_kg,
    nitrogen_full_L_per_kg,
    nitrogen_latent_L_per_kg,
)

ROOM_K = 300.0
"""Where a cooldown begins: also the upper end of the fits of heat capacity."""


@dataclass(frozen=True, slots=True)
class Bounds:
    """Least (full exchange with the leaving gas) and most (latent heat only), in litres."""

    least_L: float
    most_L: float

    def plus(self, litres: float) -> Bounds:
        """Return both bounds with litres added."""
        return Bounds(self.least_L + litres, self.most_L + litres)

    def over(self, share: float) -> Bounds:
        """Return both bounds divided by an efficiency."""
        return Bounds(self.least_L / share, self.most_L / share)


@dataclass(frozen=True, slots=True)
class MetalRow:
    """One metal: its mass, the heat in it, and what takes that heat out; None for what the rig does not use."""

    metal: str
    mass_kg: float
    heat_J: float
    nitrogen: Bounds | None
    helium: Bounds | None


@dataclass(frozen=True, slots=True)
class OrderBy:
    """Days of a cooldown that is to be done by a day; without helium nothing is delivered or ordered."""

    ready: date
    begins: date
    delivered: date | None
    order: date | None
    lead_days: int


@dataclass(frozen=True, slots=True)
class CooldownPage:
    """A rig's cooldown. ``in_bath`` is the helium that reaches the bath, ``from_dewar`` what must be bought for it.

    ``unprecooled`` is what ``in_bath`` would be without nitrogen, None where none is used. ``helium`` is None for a rig
    without a bath, which is cooled by its cooler.
    """

    name: str
    metals: tuple[MetalRow, ...]
    nitrogen: Bounds | None
    in_bath: Bounds | None
    from_dewar: Bounds | None
    unprecooled: Bounds | None
    hours: float
    helium_after_h: float | None
    chain: tuple[tuple[str, float], ...]
    order: OrderBy | None
    words: tuple[str, ...]

    def data(self) -> dict[str, Any]:
        """Everything as JSON-ready values, units in the keys."""
        return asdict(self)


def cooldown_page(rig: Rig, by: date | None = None, holidays: Collection[date] = ()) -> CooldownPage:
    """Lay out the cooldown of a rig from 300 K.

    Parameters
    ----------
    rig
        With a [cooldown] table.
    by
        Day on which the rig is to be cold as the day begins; then the order-by date is given.
    holidays
        Days that are no working days besides Saturdays and Sundays.

    Raises
    ------
    InputError
        If the rig file has no [cooldown] table.
    """
    cooldown = rig.cooldown
    if cooldown is None:
        hint = (
            "give the masses of copper, aluminium and stainless steel, the litres to fill, and the hours of the chain"
        )
        raise InputError([Problem(rig.name, "cooldown", "", "the rig file has no [cooldown] table", hint)])
    precooled = cooldown.precool == "nitrogen"
    wet = rig.bath is not None
    start_K = NITROGEN_BOILING_K if precooled else ROOM_K
    metals = tuple(_metal(metal, mass, precooled, wet, start_K) for metal, mass in _masses(cooldown) if mass)
    nitrogen = _sum([row.nitrogen for row in metals]).plus(float(cooldown.nitrogen_fill_L)) if precooled else None
    in_bath = _sum([row.helium for row in metals]).plus(float(cooldown.fill_L)) if wet else None
    warm = _sum([_helium(metal, mass, ROOM_K) for metal, mass in _masses(cooldown)]).plus(float(cooldown.fill_L))
    from_dewar = None
    if rig.bath is not None and in_bath is not None:
        transfer = rig.bath.transfer
        from_dewar = in_bath.over(float(transfer.efficiency_percent) / 100.0).plus(float(transfer.line_loss_L))
    chain = tuple((part.what, float(part.time_s) / 3600.0) for part in cooldown.chain)
    hours = sum(part for _, part in chain)
    return CooldownPage(
        name=rig.name,
        metals=metals,
        nitrogen=nitrogen,
        in_bath=in_bath,
        from_dewar=from_dewar,
        unprecooled=warm if wet and precooled else None,
        hours=hours,
        helium_after_h=_helium_after_h(cooldown) if wet else None,
        chain=chain,
        order=None if by is None else _order(by, hours, cooldown.order_lead_days, holidays, wet=wet),
        words=tuple(_words(rig, cooldown, by)),
    )


def _masses(cooldown: Cooldown) -> tuple[tuple[str, float], ...]:
    return (
        ("copper", float(cooldown.copper_kg)),
        ("aluminium", float(cooldown.aluminium_kg)),
        ("stainless", float(cooldown.stainless_kg)),
    )


def _metal(metal: str, mass_kg: float, precooled: bool, wet: bool, start_K: float) -> MetalRow:
    nitrogen = None
    if precooled:
        nitrogen = Bounds(mass_kg * nitrogen_full_L_per_kg(metal), mass_kg * nitrogen_latent_L_per_kg(metal))
    helium = _helium(metal, mass_kg, start_K) if wet else None
    return MetalRow(metal, mass_kg, mass_kg * metal_heat_J_per_kg(metal), nitrogen, helium)


def _helium(metal: str, mass_kg: float, start_K: float) -> Bounds:
    return Bounds(mass_kg * helium_full_L_per_kg(metal, start_K), mass_kg * helium_latent_L_per_kg(metal, start_K))


def _sum(bounds: Sequence[Bounds | None]) -> Bounds:
    known = [each for each in bounds if each is not None]
    return Bounds(sum(each.least_L for each in known), sum(each.most_L for each in known))


def _helium_after_h(cooldown: Cooldown) -> float | None:
    """Hours from the beginning until liquid helium is first needed; None where the chain does not say."""
    passed = 0.0
    for part in cooldown.chain:
        if part.helium:
            return passed
        passed += float(part.time_s) / 3600.0
    return None


def _order(by: date, hours: float, lead_days: int, holidays: Collection[date], *, wet: bool) -> OrderBy:
    latest = datetime.combine(by, time()) - timedelta(hours=hours)
    begins = _working_day(latest.date(), 0, holidays)
    if not wet:
        return OrderBy(by, begins, None, None, lead_days)
    delivered = _working_day(begins, -1, holidays)
    return OrderBy(by, begins, delivered, _working_day(delivered, -lead_days, holidays), lead_days)


def _working_day(day: date, offset: int, holidays: Collection[date]) -> date:
    """The working day so many working days from a day; a day that is none counts as the working day before it."""
    found = np.busday_offset(
        np.datetime64(day, "D"), offset, roll="backward", holidays=[np.datetime64(each, "D") for each in holidays]
    )
    return date.fromisoformat(str(found))


def _words(rig: Rig, cooldown: Cooldown, by: date | None) -> list[str]:
    words = []
    if rig.bath is None:
        words.append("This rig is cooled by its cooler: no helium is needed.")
    else:
        words.append(
            "Least: the gas leaves as warm as the metal. Most: latent heat alone. Real transfers fall between: slow, "
            "with a cold line and the gas led past the metal, near the least."
        )
        if cooldown.precool == "nitrogen":
            words.append(
                "Every trace of nitrogen must be blown out before the helium: what stays freezes and warms again."
            )
        if not cooldown.fill_L:
            words.append("The rig file gives no litres to fill: the helium is for cooling alone.")
    words.append("Hours are those of the work itself; nights in which a part waits for people come on top.")
    if by is not None:
        helium = ", its helium delivered the working day before" if rig.bath is not None else ""
        words.append(
            f"A cooldown begins on a working day{helium}. Working days are Monday to Friday without the holidays given."
        )
    words.append(
        "Before it begins: leak check passed, contacts tested, field zero, reliefs free, oxygen monitor in date."
    )
    return words
