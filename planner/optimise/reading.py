"""Read one order strictly and trace it: every start, wait, level and poured amount, as the search itself sees them."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from planner.optimise.problem import Problem
from planner.optimise.result import Evaluation, Failure, Objective, Obstacle, TraceBlock, TraceStep, TraceWait
from planner.optimise.tables import (
    AFTER,
    ARC_START,
    BEFORE,
    COUNT,
    ENTRY,
    EXIT,
    LEVEL,
    NODE_SECONDS,
    NODE_START,
    SECONDS,
    Scratch,
    Tables,
    build_scratch,
    build_tables,
)

_FAILURES = dict(enumerate([None, *list(Failure)[:8]]))


def evaluate(
    problem: Problem, order: Sequence[int], *, tables: Tables | None = None, kernels: Any = None
) -> Evaluation:
    """Read ``order`` (node ids without start and end) exactly as `problem` states.

    Parameters
    ----------
    tables, kernels
        The flat form of ``problem`` and the kernels to use; by default laid out anew and run as plain Python.
    """
    from planner.optimise.compiled.jit import Plain

    tables = build_tables(problem) if tables is None else tables
    kernels = Plain() if kernels is None else kernels
    scratch = build_scratch(tables)
    place, moment, level = int(tables.node[Problem.START, EXIT]), 0, tables.reservoir[LEVEL : LEVEL + 1].copy()
    steps: list[TraceStep] = []
    done: set[int] = set()
    uses: dict[int, int] = {}
    before = problem.before_after.tolist()
    for position, node in enumerate([*order, Problem.END]):
        refused = _refused(problem, node, done, uses, before)
        if refused is not None:
            obstacle = Obstacle(refused, position, node, moment=moment)
            return Evaluation(tuple(order), None, tuple(steps), obstacle)
        status, end, cost = kernels.step(tables, scratch, node, place, moment, level, 0)
        if status:
            failure = _FAILURES[int(status)]
            assert failure is not None
            block, reservoir, second = scratch.failure.tolist()
            short = float(scratch.amount[1])
            obstacle = Obstacle(failure, position, node, block, reservoir, second, short)
            return Evaluation(tuple(order), None, tuple(steps), obstacle)
        steps.append(_trace(tables, scratch, node, place, moment, int(end), float(cost), level[0]))
        done.update(problem.covers[node])
        uses[node] = uses.get(node, 0) + 1
        place, moment = int(tables.node[node, EXIT]), int(end)
        level[0] = scratch.now
    return _conclude(problem, tuple(order), tuple(steps), done)


def _conclude(problem: Problem, order: tuple[int, ...], steps: tuple[TraceStep, ...], done: set[int]) -> Evaluation:
    missing = [take for take in range(problem.takes) if problem.must[take] and take not in done]
    prize = sum(int(problem.prize[take]) for take in done)
    objective = Objective(len(missing), -prize, sum(step.cost for step in steps), steps[-1].end)
    obstacle = Obstacle(Failure.MUST, len(order), Problem.END, take=missing[0]) if missing else None
    return Evaluation(order, objective, steps, obstacle)


def _refused(
    problem: Problem, node: int, done: set[int], uses: dict[int, int], before: list[list[int]]
) -> Failure | None:
    if node == Problem.END:
        return None
    takes = problem.covers[node]
    if not takes:
        return Failure.USES if uses.get(node, 0) >= problem.services.max_uses[node] else None
    if not done.isdisjoint(takes):
        return Failure.TWICE
    if any(then in takes and first not in done for first, then in before):
        return Failure.PRECEDENCE
    return None


def _trace(
    tables: Tables, scratch: Scratch, node: int, origin: int, begin: int, end: int, cost: float, level: Any
) -> TraceStep:
    """Copy the step just done out of ``scratch``, the waits being what lies between its blocks."""
    target = int(tables.node[node, ENTRY])
    first, arcs = (int(value) for value in tables.arc[origin, target])
    blocks: list[TraceBlock] = []
    waits: list[TraceWait] = []
    at, levels = begin, np.array(level)
    for index in range(arcs + int(tables.node[node, COUNT])):
        own = index - arcs
        start = int(scratch.time[ARC_START, index] if own < 0 else scratch.time[NODE_START, own])
        seconds = int(tables.block[first + index, SECONDS] if own < 0 else scratch.time[NODE_SECONDS, own])
        before, after = scratch.level[BEFORE, index].copy(), scratch.level[AFTER, index].copy()
        if start > at:
            place = origin if index == 0 else target if own == 0 else -1
            waits.append(TraceWait(index - 1, place, at, start - at, levels, before))
        blocks.append(TraceBlock(own < 0, index if own < 0 else own, start, seconds, before, after))
        at, levels = start + seconds, after
    if node == Problem.END and tables.horizon > at:
        place = int(tables.node[node, EXIT])
        waits.append(TraceWait(arcs - 1, place, at, tables.horizon - at, levels, scratch.now.copy()))
    return TraceStep(node, origin, begin, end, float(scratch.amount[0]), cost, tuple(blocks), tuple(waits))
