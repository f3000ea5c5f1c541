"""The best order so far and what is proven about it; every order is read strictly here before it counts."""

from __future__ import annotations

import math
import threading
import time
from collections.abc import Callable, Sequence
from typing import Any

from planner.optimise.problem import Problem
from planner.optimise.reading import evaluate
from planner.optimise.result import Evaluation, Event, Objective, Progress, gap_of
from planner.optimise.tables import Tables

PROVEN_COST = 1e-6  # share of the cost within which bound and cost count as equal


class Incumbent:
    """Best order, bounds, events. Offers may come from any thread; `report` calls back in the caller's own."""

    def __init__(
        self, problem: Problem, tables: Tables, plain: Any, on_progress: Callable[[Progress], None] | None
    ) -> None:
        self.problem = problem
        self.began = time.perf_counter()
        self.best: Evaluation | None = None
        self.prize_bound = int(problem.prize.sum())
        self.cost_bound = -math.inf
        self.proven_infeasible = False
        self.exact = False
        self.events: list[Event] = []
        self.version = 0
        self._tables = tables
        self._plain = plain
        self._lock = threading.Lock()
        self._on_progress = on_progress
        self._reported = (-1, -math.inf)

    @property
    def elapsed_s(self) -> float:
        """Seconds since the solve began."""
        return time.perf_counter() - self.began

    @property
    def objective(self) -> Objective | None:
        """Objective of the best order."""
        return self.best.objective if self.best is not None else None

    def offer(self, order: Sequence[int], found_by: str) -> bool:
        """Take ``order`` if it is better than the best; whether it was."""
        evaluation = evaluate(self.problem, order, tables=self._tables, kernels=self._plain)
        objective = evaluation.objective
        if objective is None:
            return False
        with self._lock:
            if not objective.better_than(self.objective):
                return False
            self.best = evaluation
            self.version += 1
            self.events.append(Event(self.elapsed_s, found_by, objective))
        return True

    def bound(self, *, prize: int | None = None, cost: float | None = None) -> None:
        """Take in a valid bound."""
        with self._lock:
            if prize is not None:
                self.prize_bound = min(self.prize_bound, prize)
            if cost is not None:
                self.cost_bound = max(self.cost_bound, cost)

    @property
    def prize_proven(self) -> bool:
        """Whether no order does more musts, or as many and earns more."""
        objective = self.objective
        if objective is None:
            return False
        return self.exact or (objective.missing == 0 and objective.prize >= self.prize_bound)

    @property
    def cost_proven(self) -> bool:
        """Whether no order that does and earns as much costs less."""
        objective = self.objective
        if objective is None:
            return False
        near = self.cost_bound >= objective.cost - PROVEN_COST * max(1.0, abs(objective.cost))
        return self.exact or (self.prize_proven and near)

    def report(self, every_s: float = 0.25) -> None:
        """Call back if the best changed or ``every_s`` seconds passed."""
        version, when = self._reported
        if self._on_progress is None or (self.version == version and self.elapsed_s - when < every_s):
            return
        if self.best is None:
            return
        self._reported = (self.version, self.elapsed_s)
        gap = gap_of(self.objective, self.prize_bound, self.cost_bound)
        progress = Progress(self.objective, self.prize_bound, self.cost_bound, gap, self.elapsed_s)
        self._on_progress(progress)
