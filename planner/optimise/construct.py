"""First orders, quickly and in plain Python: several dispatch rules, then the best order with its end built anew."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from planner.optimise.builder import Builder
from planner.optimise.dispatch import Dispatcher, Rule
from planner.optimise.moves import Costs

# the first is quick and careful about musts, the others earn more on some weeks (measured)
FIRST = (
    Rule(heirs=0.02, patience=0.05),
    Rule(heirs=0.1, patience=0.05),
    Rule(heirs=0.3, patience=0.05, ahead=True),
    Rule(heirs=0.3, patience=0.2),
)


class Constructor:
    """Makes orders one by one, each where the one before left off learning."""

    def __init__(self, builder: Builder, costs: Costs, seed: int, halt: Callable[[], bool]) -> None:
        self.builder = builder
        self._dispatcher = Dispatcher(builder.problem, builder, costs, halt)
        self._rng = np.random.default_rng(seed)
        self._made = 0

    @property
    def first_done(self) -> bool:
        """Whether the fixed rules have all had their turn."""
        return self._made >= len(FIRST)

    def another(self, best: tuple[int, ...]) -> tuple[int, ...] | None:
        """An order by the next fixed rule, or ``best`` with its end built anew by a rule drawn; None if none ends."""
        if self._made < len(FIRST):
            rule, start = FIRST[self._made], best[:0]
        else:
            rule, start = self._drawn(), best[: int(self._rng.integers(0, len(best) + 1))]
        self._made += 1
        done = self._dispatcher.build(rule, self._rng, start)
        return tuple(self.builder.items) if done else None

    def _drawn(self) -> Rule:
        rng = self._rng
        return Rule(
            heirs=float(rng.choice([0.02, 0.05, 0.1, 0.3])),
            must=float(rng.choice([1.0, 2.0, 5.0])),
            patience=float(rng.choice([0.02, 0.05, 0.1, 0.2])),
            ahead=bool(rng.random() < 0.5),
            thirst=float(rng.choice([0.8, 1.0, 1.2])),
            noise=float(rng.choice([0.0, 0.2, 0.4])),
        )
