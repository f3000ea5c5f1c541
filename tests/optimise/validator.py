"""Judges a result by its trace and the problem statement: rules at every block and wait, books, bounds."""

from __future__ import annotations

import pytest

from planner.optimise.problem import Problem
from planner.optimise.result import Result
from tests.optimise.brute import may_follow, read


def judge(problem: Problem, result: Result) -> None:
    """Raise an AssertionError if ``result`` is not what it says."""
    assert result.objective is not None
    order = list(result.order)
    for position, node in enumerate(order):
        assert may_follow(problem, order[:position], node)
    cost, end, now = read(problem, order)
    assert result.objective.cost == pytest.approx(cost, abs=1e-5)
    assert result.objective.end == end
    done = {take for node in order for take in problem.covers[node]}
    assert result.objective.prize == sum(int(problem.prize[take]) for take in done)
    assert set(result.left_out) == set(range(problem.takes)) - done
    musts = {take for take in range(problem.takes) if problem.must[take]}
    assert set(result.missing_musts) == musts - done
    assert result.feasible == (musts <= done)
    assert [block.start for step in result.trace for block in step.blocks] == now.starts
    _judge_trace(problem, result)
    if result.feasible:
        assert result.prize_bound >= result.objective.prize
        assert result.cost_bound <= result.objective.cost + 1e-6


def _judge_trace(problem: Problem, result: Result) -> None:
    """Time and levels are continuous through blocks and waits, and end at the horizon."""
    clock, level = 0, None
    for step in result.trace:
        pieces = sorted([*step.blocks, *step.waits], key=lambda piece: (piece.start, piece.seconds > 0))
        for piece in pieces:
            assert piece.start == clock
            if level is not None:
                assert piece.before == pytest.approx(level, abs=1e-9)
            clock, level = piece.start + piece.seconds, piece.after
    assert clock == problem.horizon
