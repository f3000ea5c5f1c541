"""Annealing in short pieces, so that whoever calls can report, listen and stop between them."""

from __future__ import annotations

import time
from collections.abc import Sequence
from typing import Any

import numpy as np

from planner.optimise.compiled.draws import BEST, CURRENT, Moves, Search, build_search
from planner.optimise.moves import Costs, near_nodes, partners, services_of
from planner.optimise.problem import Problem
from planner.optimise.result import Objective
from planner.optimise.tables import Tables

PIECE_S = 0.04
# weight of a take of average prize, in typical arc costs: a quarter loses takes, three times gains none (measured)
TAKE = 40.0


class Annealer:
    """One annealing run over orders.

    Parameters
    ----------
    kernels
        Anything with ``anneal`` of `planner.optimise.compiled.anneal`; may be exchanged between pieces.
    """

    def __init__(self, problem: Problem, tables: Tables, costs: Costs, seed: int, kernels: Any) -> None:
        self.problem = problem
        self.kernels = kernels
        near = near_nodes(problem, tables, costs)
        self.scale = self._typical(problem, costs.reach(tables), near)
        worth = problem.prize[problem.prize > 0]
        self.worth = TAKE * self.scale
        point = self.worth / (float(worth.mean()) if worth.size else 1.0)
        weight = np.array([point * (1.0 + float(problem.prize.sum())), point])
        moves = Moves(services_of(problem), near, partners(problem), costs.between)
        self.search: Search = build_search(tables, moves, weight, seed)
        self.trials_per_s = 50.0
        self._fresh = -1

    @staticmethod
    def _typical(problem: Problem, reach: Any, near: Any) -> float:
        """A typical cost of an arc between neighbours."""
        if near.size == 0:
            return 1.0
        rows = np.arange(2, problem.nodes)
        values = reach[near[2:, : min(4, near.shape[1])].T, rows]
        finite = values[np.isfinite(values)]
        nearby = float(finite.mean()) if finite.size else 0.0
        every = reach[2:, 2:]
        return max(1.0, nearby, 0.2 * float(every.mean()) if every.size else 0.0)

    def restart(self, order: Sequence[int]) -> None:
        """Go on from ``order`` with the next piece."""
        self.search.order[CURRENT, : len(order)] = order
        self._fresh = len(order)

    def run(self, trials: int, warm: float, warm_end: float) -> bool:
        """Do ``trials`` trials between two temperatures, in takes of average worth; whether the best got better."""
        fresh, self._fresh = self._fresh, -1
        return bool(self.kernels.anneal(self.search, fresh, trials, self.worth * warm, self.worth * warm_end))

    def piece(self, warm: float, longest_s: float = PIECE_S) -> bool:
        """As `run`, with as many trials as fill a piece of time."""
        began = time.perf_counter()
        trials = max(1, int(self.trials_per_s * min(longest_s, PIECE_S)))
        better = self.run(trials, warm, warm)
        took = max(time.perf_counter() - began, 1e-6)
        self.trials_per_s = min(max(trials / took, 20.0), 4.0 * self.trials_per_s)
        return better

    @property
    def order(self) -> tuple[int, ...]:
        """The best order."""
        return tuple(self.search.order[BEST, : self.search.length[BEST]].tolist())

    @property
    def objective(self) -> Objective | None:
        """Its objective, None before any order reached the end."""
        value = self.search.value[BEST]
        if value[0] > 0:
            return None
        return Objective(int(self.problem.must.sum() + value[0]), int(value[1]), float(value[2]), int(value[3]))
