"""The decoder says of every order what an independent simulator says of it, compiled or not."""

from __future__ import annotations

import numpy as np
import pytest

from planner.optimise import evaluate
from planner.optimise.problem import Problem
from tests.optimise.brute import CannotError, Now, read
from tests.optimise.problems import random_problem


def random_order(problem: Problem, rng: np.random.Generator) -> list[int]:
    """One node for each of some takes, services between them; now and then any nodes at all."""
    if rng.random() < 0.2:
        nodes = np.arange(2, problem.nodes)
        order = rng.permutation(nodes)[: rng.integers(0, len(nodes) + 1)].tolist()
        return order + order[:1]
    takes = rng.permutation(problem.takes).tolist()
    before = [(a, b) for a, b in problem.before_after.tolist()]
    takes.sort(key=lambda take: sum(b == take for _, b in before))
    order = []
    for take in takes[: rng.integers(0, problem.takes + 1)]:
        if all(take not in problem.covers[node] for node in order):
            order.append(int(rng.choice([n for n in range(problem.nodes) if take in problem.covers[n]])))
    for node in range(2, problem.nodes):
        if not problem.covers[node] and rng.random() < 0.6:
            order.insert(int(rng.integers(0, len(order) + 1)), node)
    return order


def simulate(problem: Problem, order: list[int]) -> tuple[float, int, Now] | None:
    try:
        return read(problem, order)
    except CannotError:
        return None


@pytest.mark.parametrize("seed", range(60))
def test_every_random_order_reads_as_the_simulator_reads_it(seed: int) -> None:
    problem = random_problem(seed, takes=4)
    rng = np.random.default_rng(1000 + seed)
    for _ in range(25):
        order = random_order(problem, rng)
        # shorten until it can be done, so that many feasible ones are compared too
        while True:
            expected = simulate(problem, order)
            got = evaluate(problem, order)
            assert (got.objective is not None) == (expected is not None), (seed, order, got.obstacle)
            if expected is not None or not order:
                break
            order = order[:-1]
        if expected is None:
            continue
        cost, end, now = expected
        assert got.objective is not None
        assert got.objective.cost == pytest.approx(cost, abs=1e-6)
        assert got.objective.end == end
        blocks = [block for step in got.trace for block in step.blocks]
        assert [block.start for block in blocks] == now.starts
        for block, level in zip(blocks, now.levels, strict=True):
            np.testing.assert_allclose(block.before, level, atol=1e-7)
        pours = [step.poured for step in got.trace if problem.services.refill_reservoir[step.node] >= 0]
        np.testing.assert_allclose(pours, now.poured, atol=1e-7)
