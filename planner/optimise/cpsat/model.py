"""The model put together, and what is asked of it: most prize, or least cost at a given prize."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from ortools.sat.python import cp_model

from planner.optimise.bounds import Floors
from planner.optimise.cpsat import clock, levels, routing, spans
from planner.optimise.cpsat.rows import total
from planner.optimise.cpsat.variables import Variables, build_variables
from planner.optimise.moves import Costs
from planner.optimise.problem import Problem
from planner.optimise.tables import (
    PRICE,
    REFILL,
    SECONDS_PER_UNIT,
    SOURCE_FIXED,
    SOURCE_PER_UNIT,
    Tables,
)

COST_SCALE = 100  # costs are counted in hundredths of a second, rounded down


@dataclass
class Model:
    """A relaxation of the whole problem."""

    variables: Variables
    prize: cp_model.LinearExpr
    cost: cp_model.LinearExpr
    base: float

    def most_prize(self, order: Sequence[int] | None) -> cp_model.CpModel:
        """Ask for the most prize."""
        return self._ask(order, prize=True)

    def least_cost(self, order: Sequence[int], prize: int) -> cp_model.CpModel:
        """Ask for the least cost of anything that earns at least ``prize``."""
        self.variables.model.add(self.prize >= prize)
        return self._ask(order, prize=False)

    def _ask(self, order: Sequence[int] | None, *, prize: bool) -> cp_model.CpModel:
        model = self.variables.model
        model.clear_objective()
        if prize:
            model.maximize(self.prize)
        else:
            model.minimize(self.cost)
        if order is not None:
            self.variables.hint(order)
        return model

    def true_cost(self, counted: float) -> float:
        """Cost of the whole problem that a value of the cost sum stands for."""
        return counted / COST_SCALE + self.base


def build_model(
    problem: Problem,
    tables: Tables,
    costs: Costs,
    bound: Floors,
    *,
    musts: bool = True,
    light: bool = False,
    halt: Callable[[], bool] = lambda: False,
) -> Model:
    """Variables, constraint families and the two objectives; raises `CancelledError` soon after ``halt`` is true."""
    model = cp_model.CpModel()
    variables = build_variables(problem, tables, costs, model, halt, light=light)
    routing.build(variables, musts=musts)
    spans.build(variables)
    levels.build(variables)
    clock.build(variables)
    literals = [done for v, done in enumerate(variables.done) if v]
    worth = [sum(int(problem.prize[t]) for t in problem.covers[n]) for n in variables.vertex_node[1:]]
    prize = cp_model.LinearExpr.weighted_sum(literals, worth) if literals else cp_model.LinearExpr.weighted_sum([], [])
    arc, node, pour = reduced_costs(tables, costs, bound.rate_floor)
    cost = total(variables, arc, node, pour, COST_SCALE)
    return Model(variables, prize, cost, bound.rate_floor * tables.horizon)


def reduced_costs(tables: Tables, costs: Costs, rate: float) -> tuple[np.ndarray, np.ndarray, dict[int, float]]:
    """Costs of arcs, nodes and pours above what their seconds would burn at the floor rate (see `bounds`)."""
    arc = costs.arc_seconds + costs.arc_use - rate * costs.arc_seconds
    node = costs.node_moving + costs.node_use - rate * costs.node_seconds
    pour: dict[int, float] = {}
    for n in np.flatnonzero(tables.node[:, REFILL] >= 0).tolist():
        price = float(tables.reservoir[PRICE, tables.node[n, REFILL]])
        node[n] += price * float(tables.pour[n, SOURCE_FIXED]) - rate
        pour[n] = price * (float(tables.pour[n, SOURCE_PER_UNIT]) - 1.0) - rate * float(
            tables.pour[n, SECONDS_PER_UNIT]
        )
    return arc, node, pour
