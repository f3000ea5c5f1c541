"""Bounds hold for the whole problem: against brute force, by hand, and family by family."""

from __future__ import annotations

import pytest
from ortools.sat.python import cp_model

from planner.optimise import solve
from planner.optimise.bounds import cost_bound, floors, prize_bound
from planner.optimise.compiled.jit import Plain
from planner.optimise.cpsat.model import Model, build_model
from planner.optimise.cpsat.run import Relaxation
from planner.optimise.incumbent import Incumbent
from planner.optimise.moves import static_costs
from planner.optimise.problem import Problem
from planner.optimise.tables import build_tables
from tests.optimise.brute import best_order
from tests.optimise.test_exact import small_problem


def model_of(problem: Problem, *, musts: bool = True) -> Model:
    tables = build_tables(problem)
    costs = static_costs(tables)
    return build_model(problem, tables, costs, floors(problem, tables, costs), musts=musts)


def relax(problem: Problem, order: tuple[int, ...]) -> Incumbent:
    """Bounds of both stages, the incumbent being ``order``."""
    tables = build_tables(problem)
    costs = static_costs(tables)
    incumbent = Incumbent(problem, tables, Plain(), None)
    incumbent.offer(order, "test")
    bound = floors(problem, tables, costs)
    Relaxation(problem, tables, costs, bound, incumbent, seconds=5.0, seed=0, deterministic=True).run()
    return incumbent


@pytest.mark.parametrize("seed", range(0, 80, 2))
def test_no_order_beats_the_bounds(seed: int) -> None:
    problem = small_problem(seed)
    best, order = best_order(problem)
    if best is None:
        return
    tables = build_tables(problem)
    bound = floors(problem, tables, static_costs(tables))
    assert prize_bound(problem, bound) >= -best[1]
    assert cost_bound(problem, bound, -best[1]) <= best[2] + 1e-6
    incumbent = relax(problem, tuple(order))
    if best[0] == 0:
        assert not incumbent.proven_infeasible
        assert incumbent.prize_bound >= -best[1]
        assert incumbent.cost_bound <= best[2] + 1e-6


@pytest.mark.parametrize("seed", range(1, 60, 2))
def test_the_best_order_satisfies_the_model(seed: int) -> None:
    problem = small_problem(seed)
    result = solve(problem, seconds=10.0)
    if result.objective is None:
        return
    model = model_of(problem, musts=result.feasible)
    model.variables.hint(result.order)
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    solver.parameters.fix_variables_to_their_hinted_value = True
    status = solver.solve(model.variables.model)
    assert solver.status_name(status) == "OPTIMAL", model.variables.model.validate()
    assert solver.value(model.prize) == result.objective.prize
    assert model.true_cost(solver.value(model.cost)) <= result.objective.cost + 1e-6


def test_the_bound_on_cost_is_not_idle() -> None:
    """The relaxation accounts for most of the cost on average, so a slack bound would be noticed."""
    shares = []
    for seed in range(0, 80, 4):
        problem = small_problem(seed)
        best, order = best_order(problem)
        if best is not None and best[0] == 0 and best[2] > 0:
            shares.append(relax(problem, tuple(order)).cost_bound / best[2])
    assert sum(shares) / len(shares) > 0.4
