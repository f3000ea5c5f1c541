"""What a solve returns: the order, what it is worth, what is proven, and the timed trace the plan is built from."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import StrEnum

from planner.optimise.problem import Floats


class Failure(StrEnum):
    """Why an order cannot be done."""

    HORIZON = "horizon"
    CALENDAR = "calendar"
    LEVEL = "level"
    SOURCE = "source"
    FULL = "full"
    PRECEDENCE = "precedence"
    TWICE = "twice"
    USES = "uses"
    MUST = "must"


@dataclass(frozen=True)
class Obstacle:
    """The first thing in an order that cannot be done.

    ``position`` is the place in the order (its length: the way to the end), ``block`` counts arc blocks and then the
    node's own (-1: the wait before the first), ``short`` is by how much a level or source falls short, or how many
    seconds the horizon is passed; ``take`` is the one missing for `MUST`.
    """

    failure: Failure
    position: int
    node: int
    block: int = -1
    reservoir: int = -1
    moment: int = 0
    short: float = 0.0
    take: int = -1


@dataclass(frozen=True, order=True)
class Objective:
    """Compared in this order, less is better: musts missing, minus prize, cost, end."""

    missing: int
    minus_prize: int
    cost: float
    end: int

    @property
    def prize(self) -> int:
        """Prize of the takes done."""
        return -self.minus_prize

    def better_than(self, other: Objective | None, slack: float = 1e-7) -> bool:
        """Whether this is better; costs within ``slack`` count as equal."""
        if other is None:
            return True
        mine, theirs = (self.missing, self.minus_prize), (other.missing, other.minus_prize)
        if mine != theirs:
            return mine < theirs
        if abs(self.cost - other.cost) > slack:
            return self.cost < other.cost
        return self.end < other.end


@dataclass(frozen=True)
class TraceBlock:
    """A block as it is done: ``arc`` or the node's own, its index there, times and levels (R,) before and after."""

    arc: bool
    index: int
    start: int
    seconds: int
    before: Floats
    after: Floats


@dataclass(frozen=True)
class TraceWait:
    """A wait: ``after_block`` counts arc blocks and then the node's own; -1 is the place that was left.

    ``place`` is the place whose rates hold, -1 if those of the block before it hold.
    """

    after_block: int
    place: int
    start: int
    seconds: int
    before: Floats
    after: Floats


@dataclass(frozen=True)
class TraceStep:
    """One node of the order with the arc to it, from place ``origin``. ``cost`` is its part of the objective."""

    node: int
    origin: int
    begin: int
    end: int
    poured: float
    cost: float
    blocks: tuple[TraceBlock, ...]
    waits: tuple[TraceWait, ...]


@dataclass(frozen=True)
class Evaluation:
    """An order read strictly: its objective and trace, or the obstacle. The last step of the trace is the end's."""

    order: tuple[int, ...]
    objective: Objective | None
    trace: tuple[TraceStep, ...]
    obstacle: Obstacle | None

    @property
    def feasible(self) -> bool:
        """Whether every rule is kept and every must done."""
        return self.obstacle is None


@dataclass(frozen=True)
class Progress:
    """State of a running solve; bounds may be those of the very first moment."""

    objective: Objective | None
    prize_bound: int
    cost_bound: float
    gap: float
    elapsed_s: float


class Stopped(StrEnum):
    """Why a solve ended."""

    PROVEN = "proven optimal"
    TIME = "time budget used"
    WORK = "work budget used"
    ASKED = "stopped on request"


@dataclass(frozen=True)
class Event:
    """A better order was found."""

    elapsed_s: float
    found_by: str
    objective: Objective


@dataclass(frozen=True)
class Result:
    """Outcome of a solve.

    ``feasible`` is False if the order misses a must (``missing_musts``) or if not even the end can be reached (then
    ``objective`` is None); ``proven_infeasible`` says that no order does all musts. ``prize_bound`` is at least the
    prize of every order that does all musts, ``cost_bound`` at most the cost of every such order that earns at least
    as much as this one.
    """

    order: tuple[int, ...]
    feasible: bool
    objective: Objective | None
    trace: tuple[TraceStep, ...]
    prize_bound: int
    cost_bound: float
    prize_proven: bool
    cost_proven: bool
    proven_infeasible: bool
    stopped: Stopped
    left_out: tuple[int, ...]
    missing_musts: tuple[int, ...]
    elapsed_s: float
    first_feasible_s: float | None = None
    events: tuple[Event, ...] = field(default_factory=tuple)

    @property
    def proven(self) -> bool:
        """Whether the order is proven optimal in prize and cost."""
        return self.prize_proven and self.cost_proven

    @property
    def gap(self) -> float:
        """See `gap_of`."""
        return gap_of(self.objective, self.prize_bound, self.cost_bound)


def gap_of(objective: Objective | None, prize_bound: int, cost_bound: float) -> float:
    """Share of the prize bound that is missing; once there is none, share of the cost above its bound."""
    if objective is None:
        return 1.0
    if prize_bound > objective.prize:
        return (prize_bound - objective.prize) / prize_bound
    return max(0.0, (objective.cost - cost_bound) / objective.cost) if objective.cost > 0 else 0.0
