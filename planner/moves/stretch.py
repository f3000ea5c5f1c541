"""A stretch: legs done in one go, what they need, and the states at both ends."""

from __future__ import annotations

from dataclasses import dataclass, replace

from planner.moves.helium import Lines, with_litres
from planner.plan import Coil, Leg, State, magnitude


@dataclass(frozen=True, slots=True)
class Needs:
    """What must hold all through a stretch.

    ``people`` with ``training`` ("" means anybody on the roster); whether the field moves; the highest |B| on the way.
    """

    people: int = 0
    training: str = ""
    ramps: bool = False
    highest_T: float = 0.0


@dataclass(frozen=True, slots=True)
class Stretch:
    """Legs from second 0 to ``seconds``; their coil legs cover it and carry its ``litres``."""

    label: str
    before: State
    after: State
    seconds: int
    legs: tuple[Leg, ...]
    needs: Needs
    litres: float
    least_start_L: float
    pace: str


def delayed(legs: tuple[Leg, ...], seconds: int) -> tuple[Leg, ...]:
    """The same legs, later."""
    return tuple(replace(leg, start_s=leg.start_s + seconds, end_s=leg.end_s + seconds) for leg in legs)


def end_of(legs: tuple[Leg, ...]) -> int:
    """When the last leg ends; 0 without legs."""
    return max((leg.end_s for leg in legs), default=0)


def held(legs: tuple[Leg, ...], coil: Coil, until_s: int, reason: str) -> tuple[Leg, ...]:
    """Coil legs, with a hold from their end to ``until_s`` where they end sooner."""
    at = end_of(legs)
    if until_s <= at:
        return legs
    return (*legs, Leg("coil", "hold", at, until_s, reason, coil=(coil, coil)))


def stretch(
    lines: Lines,
    label: str,
    before: State,
    after: State,
    legs: tuple[Leg, ...],
    *,
    people: int = 0,
    training: str = "",
    pace: str = "",
) -> Stretch:
    """Put legs together: litres, least content, whether the field moves, the highest field.

    Legs of no length are dropped.
    """
    used = with_litres(lines.rig, (leg for leg in legs if leg.seconds > 0))
    coils = [coil for leg in used if leg.coil for coil in leg.coil]
    ramps = any(leg.action in ("ramp", "sweep") for leg in used)
    highest_T = max((magnitude(coil.field_T) for coil in coils), default=0.0)
    needs = Needs(people, training, ramps, highest_T)
    litres = sum(leg.litres for leg in used)
    return Stretch(label, before, after, end_of(used), used, needs, litres, lines.least_start_L(used), pace)
