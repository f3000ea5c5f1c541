"""A step of a plan and the legs it is made of."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import Literal

from planner.plan.state import Coil, Gates, State


class StepKind(StrEnum):
    """What a step is."""

    MOVE = "move"
    TAKE = "take"
    SERVICE = "service"
    WAIT = "wait"


@dataclass(frozen=True, slots=True)
class Leg:
    """A part of a step on one channel, at one steady pace.

    The legs of the channel "coil" cover their step without gap or overlap and carry its helium; those of "stage" and
    "gates" run beside them. ``rate`` is what the supply or source is set to, in T/s, A/s or V/s by what moves;
    ``reason`` says what set the pace.
    """

    channel: Literal["coil", "stage", "gates"]
    action: str
    start_s: int
    end_s: int
    reason: str
    litres: float = 0.0
    rate: float | None = None
    coil: tuple[Coil, Coil] | None = None
    stage_K: tuple[float, float] | None = None
    gates_V: tuple[Gates, Gates] | None = None

    @property
    def seconds(self) -> int:
        """Length of the leg."""
        return self.end_s - self.start_s


@dataclass(frozen=True, slots=True)
class Step:
    """One line of the run sheet. Helium levels are litres in the bath; None where the rig has no bath.

    ``people`` lists names, or roles where no roster names anyone; ``details`` carries excitation, contacts, file name
    and the like as (label, text).
    """

    number: int
    kind: StepKind
    label: str
    start_s: int
    end_s: int
    before: State
    after: State
    legs: tuple[Leg, ...] = ()
    helium_before_L: float | None = None
    helium_after_L: float | None = None
    poured_L: float = 0.0
    drawn_L: float = 0.0
    stock_after_L: float | None = None
    service: str = ""
    target: str = ""
    take: str = ""
    user: str = ""
    sample: str = ""
    direction: str = ""
    attended: bool = False
    people: tuple[str, ...] = ()
    pace: str = ""
    details: tuple[tuple[str, str], ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def seconds(self) -> int:
        """Length of the step."""
        return self.end_s - self.start_s
