"""A plan as its judges see it: legs in order with levels of their own reckoning, takes by target."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

from planner.checks.burn import leg_burn_L
from planner.checks.week_view import WeekView
from planner.files import Request
from planner.plan import Coil, CoilMode, Kind, Leg, Plan, Step, StepKind

TRANSFER = "helium transfer"
DECIDE = "look, then decide"
MOVES_FIELD = ("ramp", "sweep")


@dataclass(frozen=True, slots=True)
class Placed:
    """A coil leg in its step (the ``at``-th of the plan), with the litres before and after it as reckoned here."""

    at: int
    step: Step
    leg: Leg
    before: Coil
    after: Coil
    before_L: float
    after_L: float

    @property
    def first_T(self) -> float:
        """Field at its start."""
        return self.before.field_T[2]

    @property
    def last_T(self) -> float:
        """Field at its end."""
        return self.after.field_T[2]

    @property
    def moves(self) -> bool:
        """Whether the field changes in it."""
        return self.first_T != self.last_T

    @property
    def rises(self) -> bool:
        """Whether |B| grows in it, or the field changes sign."""
        return abs(self.last_T) > abs(self.first_T) or self.first_T * self.last_T < 0

    @property
    def runs_down(self) -> bool:
        """Whether |B| only falls in it."""
        return self.moves and not self.rises

    @property
    def at_field(self) -> bool:
        """Whether there is current in the coil during any of it."""
        return self.first_T != 0 or self.last_T != 0

    @property
    def persistent(self) -> bool:
        """Whether the coil carries its own current all through it."""
        return self.before.mode is CoilMode.PERSISTENT and self.leg.action != "heater on"


class PlanView(WeekView):
    """A plan with the request it answers."""

    def __init__(self, request: Request, plan: Plan) -> None:
        super().__init__(request)
        self.plan = plan
        self.steps = plan.steps

    def of_step(self, kind: StepKind) -> Iterator[Step]:
        """The steps of one kind that take time."""
        return (step for step in self.steps if step.kind is kind and step.seconds > 0)

    @cached_property
    def placed(self) -> tuple[Placed, ...]:
        """Every coil leg in order. Levels follow from the week's present level, own burn and the litres poured."""
        litres = self.start_L if self.bath is not None else 0.0
        result = []
        for at, step in enumerate(self.steps):
            here = step.before.coil
            for leg in coil_legs(step):
                before, after = leg.coil or (here, here)
                burn = 0.0
                if self.bath is not None:
                    burn = leg_burn_L(self.bath, leg, transferring=step.service == TRANSFER)
                result.append(Placed(at, step, leg, before, after, litres, litres - burn))
                litres -= burn
                here = after
            litres += step.poured_L
        return tuple(result)

    @cached_property
    def by_step(self) -> dict[int, tuple[Placed, ...]]:
        """The placed coil legs of each step, by its place in the plan."""
        result: dict[int, list[Placed]] = {at: [] for at in range(len(self.steps))}
        for item in self.placed:
            result[item.at].append(item)
        return {at: tuple(items) for at, items in result.items()}

    @cached_property
    def end_L(self) -> float:
        """Litres in the bath at the end of the plan."""
        burnt = sum(item.before_L - item.after_L for item in self.placed)
        return self.start_L - burnt + sum(step.poured_L for step in self.steps)

    @cached_property
    def takes(self) -> dict[str, tuple[Step, ...]]:
        """The takes of each target, looking and deciding apart, in time order."""
        result: dict[str, list[Step]] = {}
        for step in self.steps:
            if step.kind is StepKind.TAKE and not is_decision(step):
                result.setdefault(step.target, []).append(step)
        return {name: tuple(sorted(steps, key=lambda step: step.start_s)) for name, steps in result.items()}

    @cached_property
    def recovers(self) -> bool:
        """Whether this is a recovery plan from end to end: it only runs down, calls people and transfers."""
        return self.plan.recovery and next(self.not_recovery(), None) is None

    def not_recovery(self) -> Iterator[tuple[Step, str]]:
        """Steps that have no place in a recovery, in order, and why."""
        for at, step in enumerate(self.steps):
            if step.kind is StepKind.TAKE and step.seconds > 0:
                yield step, "measures"
            elif any(item.rises for item in self.by_step[at]):
                yield step, "raises the field"

    @cached_property
    def recovered_s(self) -> int:
        """When a recovery is over: its first transfer has ended, or its first other work begins; 0 in other plans."""
        if not self.plan.recovery:
            return 0
        other = next((step.start_s for step, _ in self.not_recovery()), self.horizon_s + 1)
        filled = next((step.end_s for step in self.steps if step.service == TRANSFER), self.horizon_s + 1)
        return min(other, filled)

    def in_recovery(self, kind: Kind, at_s: float) -> Kind:
        """A breach that a recovery cannot help is a warning while it lasts; everything else keeps its kind."""
        return Kind.WARN if at_s < self.recovered_s else kind


def coil_legs(step: Step) -> tuple[Leg, ...]:
    """The legs of a step on the channel "coil", in order."""
    return tuple(leg for leg in step.legs if leg.channel == "coil")


def heads(people: tuple[str, ...]) -> int:
    """How many people a step names; "2 × trained for transfer" stands for two where no roster names anyone."""
    counts = (re.match(r"(\d+) × ", name) for name in dict.fromkeys(people))
    return sum(int(found[1]) if found else 1 for found in counts)


def is_decision(step: Step) -> bool:
    """Whether a step is the pause in which people look at the data and decide."""
    return step.label.startswith(DECIDE)
