"""Solving the model in stages, beside the search or in its turn: bounds go to the incumbent, orders to a list."""

from __future__ import annotations

import contextlib
import threading
import time
from collections.abc import Callable

from ortools.sat.python import cp_model

from planner.optimise.bounds import Floors
from planner.optimise.cpsat.model import Model, build_model
from planner.optimise.cpsat.variables import CancelledError, Variables
from planner.optimise.incumbent import Incumbent
from planner.optimise.moves import Costs
from planner.optimise.problem import Problem
from planner.optimise.tables import Tables

LIGHT_SHARE = 0.1  # of the time that the light model may take
MOST_NODES = 150  # beyond, a second annealing brings more in the time (measured)


class BrokenModelError(AssertionError):
    """CP-SAT refuses the model: a bug, never an answer."""


class _Listener(cp_model.CpSolverSolutionCallback):  # type: ignore[misc]  # OR-Tools comes without types
    def __init__(self, variables: Variables, found: Callable[[list[int]], None]) -> None:
        super().__init__()
        self._variables = variables
        self._found = found

    def on_solution_callback(self) -> None:
        if self._variables.light:
            return
        taken = [bool(self.boolean_value(literal)) for _, _, literal in self._variables.arcs]
        self._found(self._variables.order(taken))


class Relaxation:
    """The staged solve of the model.

    Parameters
    ----------
    seconds
        For both stages together by the clock; with ``deterministic`` the same number of deterministic units instead.
    """

    def __init__(
        self,
        problem: Problem,
        tables: Tables,
        costs: Costs,
        floors: Floors,
        incumbent: Incumbent,
        *,
        seconds: float,
        seed: int,
        deterministic: bool,
    ) -> None:
        self._problem, self._tables, self._costs, self._floors = problem, tables, costs, floors
        self._incumbent = incumbent
        self._seconds = seconds
        self._seed = seed
        self._deterministic = deterministic
        self._began = time.perf_counter()
        self._solver: cp_model.CpSolver | None = None
        self._cancelled = threading.Event()
        self._lock = threading.Lock()
        self._orders: list[list[int]] = []

    def cancel(self) -> None:
        """Stop as soon as may be; to be repeated until `run` has returned (a stop before the start is lost)."""
        self._cancelled.set()
        solver = self._solver
        if solver is not None:
            solver.stop_search()

    def proposals(self) -> list[list[int]]:
        """Orders found since the last call; they satisfy the relaxation only."""
        with self._lock:
            orders, self._orders = self._orders, []
        return orders

    def run(self) -> None:
        """Bound the prize, then the cost at the prize reached; each first in a light model, there in a moment."""
        with contextlib.suppress(CancelledError):
            self._stages(self._build(light=True), LIGHT_SHARE)
            if self._problem.nodes <= MOST_NODES:
                self._stages(self._build(light=False), 1.0)

    def _build(self, *, light: bool) -> Model:
        cancelled = self._cancelled.is_set
        return build_model(self._problem, self._tables, self._costs, self._floors, halt=cancelled, light=light)

    def _stages(self, model: Model, share: float) -> None:
        if not self._incumbent.prize_proven:
            self._most_prize(model, share * 0.5)
        while not self._cancelled.is_set() and not self._incumbent.proven_infeasible:
            objective = self._incumbent.objective
            if objective is None or objective.missing:
                return
            prize = objective.prize
            self._least_cost(model, prize, share * (0.5 if self._deterministic or share < 1.0 else 1.0))
            objective = self._incumbent.objective
            if share < 1.0 or objective is None or objective.prize == prize or self._left() <= 0.2:
                return

    def _left(self) -> float:
        return self._seconds - (time.perf_counter() - self._began)

    def _most_prize(self, model: Model, share: float) -> None:
        def bounded(value: float) -> None:
            self._incumbent.bound(prize=int(value + 1e-6))

        best = self._incumbent.best
        status = self._solve(model, model.most_prize(best.order if best is not None else None), share, bounded)
        if status == cp_model.INFEASIBLE:
            self._incumbent.proven_infeasible = True

    def _least_cost(self, model: Model, prize: int, share: float) -> None:
        def bounded(value: float) -> None:
            self._incumbent.bound(cost=model.true_cost(value))

        best = self._incumbent.best
        assert best is not None
        self._solve(model, model.least_cost(best.order, prize), share, bounded)

    def _solve(
        self, model: Model, asked: cp_model.CpModel, share: float, bounded: Callable[[float], None]
    ) -> cp_model.CpSolverStatus:
        solver = cp_model.CpSolver()
        solver.parameters.num_workers = 1
        solver.parameters.random_seed = self._seed
        solver.parameters.linearization_level = 2
        if self._deterministic:
            solver.parameters.max_deterministic_time = max(share * self._seconds, 1e-3)
        else:
            solver.parameters.max_time_in_seconds = max(share * self._left(), 1e-3)
            solver.best_bound_callback = bounded
        if self._cancelled.is_set():
            return cp_model.UNKNOWN
        self._solver = solver
        status = solver.solve(asked, _Listener(model.variables, self._propose))
        self._solver = None
        if status == cp_model.MODEL_INVALID:
            raise BrokenModelError(asked.validate())
        if status in (cp_model.OPTIMAL, cp_model.FEASIBLE):
            bounded(solver.best_objective_bound)
        return status

    def _propose(self, order: list[int]) -> None:
        with self._lock:
            self._orders.append(order)
