"""The plan: timed steps, what was left out, the score, and the files it was made from. JSON with a version number."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from functools import cache
from typing import TYPE_CHECKING, Literal

from planner.clock import Clock, zone
from planner.plan.finding import Finding
from planner.plan.step import Step

if TYPE_CHECKING:
    import pandas as pd
    from pydantic import TypeAdapter

PLAN_FORMAT: Literal[1] = 1


@dataclass(frozen=True, slots=True)
class LeftOut:
    """A take, or a whole target where ``take`` is empty, that the plan does not do, and why."""

    target: str
    take: str
    user: str
    priority: int
    reason: str


@dataclass(frozen=True, slots=True)
class Score:
    """How good the plan is, and how much better any plan could be.

    ``points`` is the priority-weighted work done; ``cost_h`` = moving hours + litres × hours per litre. The bounds hold
    for every plan of the same week: none does more points; none that does at least these points costs less.
    """

    points: int
    points_bound: int
    moving_s: int
    litres: float
    cost_h: float
    cost_bound_h: float
    ends_s: int
    hours_per_litre: float
    proven: bool
    stopped: str

    @property
    def gap(self) -> float:
        """Relative gap of the cost: 0 where it is proven least."""
        return max(0.0, (self.cost_h - self.cost_bound_h) / self.cost_h) if self.cost_h > 0 else 0.0


@dataclass(frozen=True, slots=True)
class HandOrder:
    """An order people use by hand, put through the same moves, services and checks on the same takes.

    ``plan`` numbers are those of this plan restricted to the takes that the hand order also fits; ``takes`` counts
    them.
    """

    name: str
    takes: int
    points: int
    moving_s: int
    litres: float
    plan_takes: int
    plan_points: int
    plan_moving_s: int
    plan_litres: float


@dataclass(frozen=True, slots=True)
class Source:
    """A file the plan was made from: its path as the plan saw it, its SHA-256 and its text."""

    role: Literal["week", "rig"]
    path: str
    sha256: str
    text: str


@dataclass(frozen=True, slots=True)
class Plan:
    """The result. Steps are in time order and cover the week from second 0 to its end."""

    title: str
    rig: str
    zone: str
    start: datetime
    end: datetime
    sources: tuple[Source, ...]
    steps: tuple[Step, ...]
    left_out: tuple[LeftOut, ...]
    score: Score
    compared: tuple[HandOrder, ...] = ()
    findings: tuple[Finding, ...] = ()
    recovery: bool = False
    made_by: str = ""
    format: Literal[1] = PLAN_FORMAT

    @property
    def clock(self) -> Clock:
        """The clock whose second 0 is the week's start."""
        return Clock(self.start.astimezone(zone(self.zone)))

    def source(self, role: Literal["week", "rig"]) -> Source:
        """The week or rig file the plan was made from."""
        return next(source for source in self.sources if source.role == role)

    def frame(self) -> pd.DataFrame:
        """The steps as a table, one row a step, units in the column names."""
        from planner.plan.table import steps_frame

        return steps_frame(self.steps, self.clock)

    def to_json(self) -> bytes:
        """The plan as UTF-8 JSON; the same plan gives the same bytes."""
        return _adapter().dump_json(self, indent=1) + b"\n"

    @staticmethod
    def from_json(text: bytes | str) -> Plan:
        """Read a plan back.

        Raises
        ------
        pydantic.ValidationError
            If the text is no plan of this version.
        """
        return _adapter().validate_json(text)


@cache
def _adapter() -> TypeAdapter[Plan]:
    from pydantic import TypeAdapter

    return TypeAdapter(Plan)
