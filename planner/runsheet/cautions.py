"""The cautions of every sheet, and what the bath's helium would do to the room's air.

Published facts: 19.5 % oxygen as the edge of an oxygen-deficient atmosphere, 29 CFR 1910.146(b); 0.5 mT as the line
that people with implanted devices do not cross, ICNIRP guidelines on static magnetic fields, 2009 (from memory). All
other wording is common practice, no source.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from planner.files import Rig
from planner.runsheet.wording import clean, fixed, significant

AID = (
    "This sheet is a planning aid. It protects neither the magnet nor people. The maker’s limits, the rig’s own "
    "interlocks, local codes and licensed people come first."
)

FOOTER = (
    "PLANNING AID ONLY: protects neither magnet nor people. Maker’s limits, interlocks, local codes and licensed "
    "people come first. Oxygen alarm or quench: leave, warn others, stay out until it is declared safe. "
    "The field is there even with the supply off: implants stay outside the 0.5 mT line, iron stays away. "
    "Cold gas and metal burn. Closed or blocked vessels burst. "
    "Reading and sheet differ: do nothing more, call."
)


@dataclass(frozen=True, slots=True)
class Caution:
    """A heading and what to heed."""

    about: str
    text: str


@dataclass(frozen=True, slots=True)
class Oxygen:
    """What the whole helium of a full bath would do to the oxygen of its room, if released at once.

    ``displaced`` is the share of oxygen if the gas first pushes out air only, ``mixed`` if it mixes while it pushes.
    """

    liquid_L: float
    gas_m3: float
    room_m3: float
    displaced: float
    mixed: float
    hazard: float


def oxygen_of(rig: Rig) -> Oxygen | None:
    """The oxygen figure of a rig, or None where it has no bath or its room's volume is not given."""
    if rig.bath is None or rig.room.volume_m3 is None:
        return None
    from planner.physics.helium import gas_volume_m3
    from planner.physics.oxygen import HAZARD_OXYGEN, oxygen_displaced, oxygen_mixed

    liquid_L = float(rig.bath.calibration[-1].volume_L)
    room_m3 = float(rig.room.volume_m3)
    gas_m3 = float(gas_volume_m3(liquid_L))
    displaced = float(oxygen_displaced(min(gas_m3, room_m3), room_m3))
    return Oxygen(liquid_L, gas_m3, room_m3, displaced, float(oxygen_mixed(gas_m3, room_m3)), HAZARD_OXYGEN)


def cautions_of(rig: Rig) -> tuple[Caution, ...]:
    """The cautions of a rig, most general first."""
    return (
        Caution("Planning aid", AID),
        Caution(
            "Before each step",
            "Compare what the rig shows with what the sheet expects. If they differ, do nothing more and call. "
            "Running the magnet down is always allowed.",
        ),
        Caution("Oxygen", f"{_oxygen_words(rig)} Oxygen alarm: leave at once, warn others, nobody goes back in until "
                "the air is normal and the cause is known. No lift together with a dewar."),
        Caution(
            "Quench",
            "The stored energy boils the bath off within moments and the reliefs blow cold gas. Leave, keep clear of "
            "the vents, call. Nobody energises the magnet again without the person responsible for the rig.",
        ),
        Caution(
            "Strong field, implants",
            "People with implanted devices stay outside the 0.5 mT line, on the floors above and below too. Iron, "
            "tools and gas bottles stay away. A persistent field is there with the supply off. Never undo a lead with "
            "current in the coil.",
        ),
        Caution(
            "Cold burns",
            "Cold gas, liquid and bare metal burn skin and eyes: loose insulating gloves, face shield, long sleeves.",
        ),
        Caution(
            "Pressure",
            "Liquid shut in bursts its vessel; frozen air blocks lines. Reliefs and recovery line open, transfer line "
            "cold before it pours, no vessel or line ever closed tight.",
        ),
    )  # fmt: skip


def _oxygen_words(rig: Rig) -> str:
    if rig.bath is None:
        return "Escaping helium or nitrogen gas displaces air and gives no warning."
    found = oxygen_of(rig)
    if found is None:
        return (
            "Helium gas displaces air and gives no warning. The rig file gives no volume for the room, so what the "
            "whole bath would do to the oxygen is not known here: treat it as deadly."
        )
    verdict = "below" if found.displaced < found.hazard else "not below"
    words = (
        f"Helium gas displaces air and gives no warning. The whole bath, {significant(found.liquid_L)} L, is "
        f"{fixed(found.gas_m3, 0)} m³ of gas; released into {significant(found.room_m3)} m³ it would leave "
        f"{fixed(100 * found.displaced, 1)} to {fixed(100 * found.mixed, 1)} % oxygen, {verdict} the "
        f"{significant(100 * found.hazard)} % line. Under the ceiling it is worse. A planning figure, no assessment."
    )
    return re.sub(r"(?<=\d) (?=[L%m])", "\u00a0", words)


def contacts_of(rig: Rig) -> tuple[tuple[str, str], ...]:
    """Whom to call, as (role, how to reach)."""
    return tuple((clean(contact.role), clean(contact.reach)) for contact in rig.room.contacts)
