"""What a rig is at one instant: coil, stage, gates, light history, last fills."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum
from typing import Literal

Vector = tuple[float, float, float]
"""A field or a current per axis, x, y, z. A plain solenoid uses z."""

Gates = tuple[tuple[str, float], ...]
"""Gate voltages in volt by name ("sample/gate"), sorted by name."""

ZERO: Vector = (0.0, 0.0, 0.0)


class CoilMode(StrEnum):
    """Who carries the coil's current."""

    ZERO = "zero"  # no current anywhere, switch cold
    DRIVEN = "driven"  # the supply, switch open
    PERSISTENT = "persistent"  # the coil itself, switch closed


@dataclass(frozen=True, slots=True)
class Coil:
    """Magnet and supply.

    ``persistent_current_A`` is None where nothing is trapped and "unknown" where nobody logged it.
    """

    field_T: Vector = ZERO
    mode: CoilMode = CoilMode.ZERO
    lead_current_A: Vector = ZERO
    persistent_current_A: Vector | Literal["unknown"] | None = None


@dataclass(frozen=True, slots=True)
class Charge:
    """What the stage holds: mixture circulating, partly collected or in tanks; 3He condensed; or nothing to hold."""

    kind: Literal["circulating", "partly collected", "in tanks", "condensed", "none"] = "none"
    since_s: int | None = None


@dataclass(frozen=True, slots=True)
class Stage:
    """The cold stage that carries the samples."""

    temperature_K: float
    charge: Charge = Charge()


@dataclass(frozen=True, slots=True)
class Fills:
    """When helium and nitrogen were last filled, in seconds from the week's start; None where unknown."""

    helium_s: int | None = None
    nitrogen_s: int | None = None


@dataclass(frozen=True, slots=True)
class State:
    """The whole rig at one instant. ``light`` maps a sample to "dark" or "illuminated" in this cooldown."""

    coil: Coil
    stage: Stage
    gates_V: Gates = ()
    light: tuple[tuple[str, str], ...] = ()
    fills: Fills = Fills()


def along_z(value: float) -> Vector:
    """A vector along the solenoid's axis."""
    return (0.0, 0.0, value)


def magnitude(vector: Vector) -> float:
    """Length of a vector; exact for one along an axis."""
    used = [abs(part) for part in vector if part]
    if len(used) <= 1:
        return sum(used)
    return math.hypot(*used)
