"""Compiled kernels and the same kernels as plain Python do the same."""

from __future__ import annotations

import subprocess
import sys

import numpy as np
import pytest

from planner.optimise import evaluate
from planner.optimise.compiled.jit import Plain
from planner.optimise.compiled.warm import Compiled
from planner.optimise.moves import static_costs
from planner.optimise.problem import Problem
from planner.optimise.search import Annealer
from planner.optimise.tables import build_scratch, build_tables
from tests.optimise.problems import random_problem
from tests.optimise.test_decoder import random_order


def anneal(problem: Problem, kernels: object) -> Annealer:
    tables = build_tables(problem)
    annealer = Annealer(problem, tables, static_costs(tables), 3, kernels)
    annealer.restart(())
    for piece in range(3):
        annealer.run(60, 0.5**piece, 0.5 ** (piece + 1))
    return annealer


@pytest.mark.parametrize("seed", range(12))
def test_annealing_goes_the_same_way(seed: int) -> None:
    problem = random_problem(seed, takes=5)
    compiled, plain = anneal(problem, Compiled), anneal(problem, Plain())
    assert compiled.order == plain.order
    np.testing.assert_array_equal(compiled.search.random, plain.search.random)
    np.testing.assert_allclose(compiled.search.value, plain.search.value)


@pytest.mark.parametrize("seed", range(12))
def test_strict_reading_agrees_with_the_trace(seed: int) -> None:
    from planner.optimise.compiled.decode import build_states

    problem = random_problem(seed, takes=5)
    tables = build_tables(problem)
    scratch = build_scratch(tables)
    rng = np.random.default_rng(seed)
    for _ in range(30):
        order = random_order(problem, rng)
        states = build_states(tables, len(order))
        items = np.array(order, dtype=np.int64)
        status, position, cost, end = Compiled.evaluate(tables, scratch, states, items, len(order), 0)
        read = evaluate(problem, order)
        assert (read.objective is None) == (status != 0)
        if read.objective is None:
            assert read.obstacle is not None
            assert read.obstacle.position == position
        else:
            assert (read.objective.cost, read.objective.end) == (pytest.approx(cost), end)


def test_importing_the_optimiser_is_light() -> None:
    code = "import sys, planner.optimise; sys.exit(any(m in sys.modules for m in ('numba', 'ortools', 'scipy')))"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
