"""Small problems: the solve equals brute force over all orders, alternatives and service uses."""

from __future__ import annotations

import pytest

from planner.optimise import evaluate, solve
from planner.optimise.problem import Problem
from tests.optimise.brute import best_order, read
from tests.optimise.problems import Shape, random_problem


def small_problem(seed: int) -> Problem:
    """Up to five takes and two service uses, kept to what brute force does in a moment."""
    for takes in (3 + seed % 3, 3, 2):
        problem = random_problem(seed, takes=takes)
        uses = int(problem.services.max_uses.sum())
        if problem.nodes - 2 + uses <= 8 + (takes < 4) and uses <= 2:
            return problem
    return random_problem(seed, Shape(takes=2))


@pytest.mark.parametrize("seed", range(80))
def test_solve_equals_brute_force(seed: int) -> None:
    problem = small_problem(seed)
    expected, _ = best_order(problem)
    result = solve(problem, seconds=20.0, seed=seed)
    if expected is None:
        assert result.objective is None
        assert result.proven_infeasible
        assert not result.feasible
        return
    assert result.objective is not None
    assert (result.objective.missing, result.objective.minus_prize) == expected[:2]
    assert result.objective.cost == pytest.approx(expected[2], abs=1e-6)
    assert result.objective.end == pytest.approx(expected[3], abs=1e-6)
    assert result.proven
    assert result.feasible == (expected[0] == 0)
    assert result.proven_infeasible == (expected[0] > 0)
    cost, end, _ = read(problem, list(result.order))
    assert (result.objective.cost, result.objective.end) == (pytest.approx(cost, abs=1e-6), end)


def test_the_small_problems_ask_for_everything() -> None:
    """Among those problems some need a refill, some leave takes out, some miss musts, some have no end."""
    results = {seed: solve(small_problem(seed), seconds=20.0) for seed in range(80)}
    refilled = [
        seed
        for seed, result in results.items()
        if any(small_problem(seed).services.refill_reservoir[node] >= 0 for node in result.order)
    ]
    assert len(refilled) >= 8
    assert sum(bool(result.left_out) for result in results.values()) >= 8
    assert sum(bool(result.missing_musts) for result in results.values() if result.objective) >= 3
    assert any(result.objective is None for result in results.values())


def test_a_take_that_must_be_done_and_cannot_is_named() -> None:
    for seed in range(40):
        result = solve(small_problem(seed), seconds=20.0)
        if result.objective is not None and result.objective.missing:
            obstacle = evaluate(small_problem(seed), result.order).obstacle
            assert obstacle is not None
            assert obstacle.failure == "must"
            assert obstacle.take in result.missing_musts
            return
    pytest.fail("no problem with a must that cannot be done")
