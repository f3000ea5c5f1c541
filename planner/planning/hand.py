"""The two orders people use by hand, put through the same moves and services on the same takes."""

from __future__ import annotations

import threading
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from planner.optimise.problem import Problem
from planner.optimise.result import Result, TraceBlock, TraceStep, TraceWait
from planner.plan import HandOrder
from planner.planning.compile import HELIUM, Compiled

COMPARE_S = 2.0


def hand_orders(
    compiled: Compiled,
    result: Result,
    *,
    seed: int = 0,
    reproducible: bool = False,
    stop: threading.Event | None = None,
) -> tuple[HandOrder, ...]:
    """How the plan compares with "as listed" and "sorted by field".

    A hand order that cannot fit everything is compared with the best order found for just what it does fit: this plan's
    own less the rest, or that of a short solve.
    """
    from planner.optimise import follow

    problem = compiled.problem
    mine = _takes(problem, result.order)
    if not mine:
        return ()
    by_field = sorted(mine, key=lambda take: (_field_T(compiled, take), take))
    found = []
    for name, wanted in (("as listed", sorted(mine)), ("sorted by field", by_field)):
        theirs = follow(problem, wanted, only=set(mine))
        if theirs.objective is None:
            continue
        shared = set(_takes(problem, theirs.order))
        ours = _restricted(problem, result, shared, seed, reproducible, stop)
        if ours is None:
            continue
        moving_s, litres = _spent(compiled, theirs.trace)
        our_moving_s, our_litres = _spent(compiled, ours)
        points = sum(int(problem.prize[take]) for take in shared)
        takes = sum(take < len(compiled.takes) for take in shared)
        found.append(HandOrder(name, takes, points, moving_s, litres, takes, points, our_moving_s, our_litres))
    return tuple(found)


def _restricted(
    problem: Problem,
    result: Result,
    shared: set[int],
    seed: int,
    reproducible: bool,
    stop: threading.Event | None,
) -> tuple[TraceStep, ...] | None:
    """The trace of the best order known for the shared takes alone."""
    from planner.optimise import solve

    if shared == set(_takes(problem, result.order)):
        return result.trace
    only = np.isin(np.arange(problem.takes), list(shared))
    alone = replace(problem, prize=np.where(only, problem.prize, 0), must=only)
    anew = solve(alone, seconds=COMPARE_S, seed=seed, reproducible=reproducible, stop=stop)
    less = _less(problem, result, shared)
    found = [anew.trace] if anew.feasible and set(_takes(problem, anew.order)) == shared else []
    found += [less] if less is not None else []
    return min(found, key=lambda trace: sum(step.cost for step in trace), default=None)


def _less(problem: Problem, result: Result, shared: set[int]) -> tuple[TraceStep, ...] | None:
    """This plan's order with only the shared takes, services that then pour too little left out too."""
    from planner.optimise import evaluate

    order = [node for node in result.order if set(problem.covers[node]) <= shared]
    while True:
        read = evaluate(problem, order)
        if read.objective is not None:
            return read.trace
        stuck = read.obstacle
        if stuck is None or stuck.position >= len(order) or problem.covers[order[stuck.position]]:
            return None
        del order[stuck.position]


def _takes(problem: Problem, order: Sequence[int]) -> list[int]:
    return [take for node in order for take in problem.covers[node]]


def _field_T(compiled: Compiled, take: int) -> float:
    if take >= len(compiled.takes):
        return 0.0
    return abs(compiled.takes[take].alternatives[0].entry.coil.field_T[2])


def _spent(compiled: Compiled, trace: Sequence[TraceStep]) -> tuple[int, float]:
    """Moving seconds and litres of an order: bath losses and what transfers lose on the way."""
    problem = compiled.problem
    moving_s = sum(block.seconds for step in trace for block in step.blocks if block.arc or problem.moving[step.node])
    if not len(problem.reservoirs.level):
        return moving_s, 0.0
    services = problem.services
    parts: list[TraceBlock | TraceWait] = []
    for step in trace:
        parts += (*step.blocks, *step.waits)
    begin = float(problem.reservoirs.level[HELIUM])
    end = float(max(parts, key=lambda part: (part.start + part.seconds, part.start)).after[HELIUM]) if parts else begin
    fills = [(step.node, step.poured) for step in trace if step.poured > 0]
    drawn = sum(float(services.source_fixed[node] + services.source_per_unit[node] * poured) for node, poured in fills)
    return moving_s, begin - end + drawn
