"""The two orders people use by hand, put through the same moves and services on the same takes."""

from __future__ import annotations

from collections.abc import Sequence

from planner.optimise.problem import Problem
from planner.optimise.result import Result, TraceBlock, TraceStep, TraceWait
from planner.plan import HandOrder
from planner.planning.compile import HELIUM, Compiled


def hand_orders(compiled: Compiled, result: Result) -> tuple[HandOrder, ...]:
    """How the plan compares with "as listed" and "sorted by field".

    A hand order that cannot fit everything is compared with this plan's own order less what the other leaves out.
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
        ours = _restricted(problem, result, shared)
        if ours is None:
            continue
        moving_s, litres = _spent(compiled, theirs.trace)
        our_moving_s, our_litres = _spent(compiled, ours)
        points = sum(int(problem.prize[take]) for take in shared)
        takes = sum(take < len(compiled.takes) for take in shared)
        found.append(HandOrder(name, takes, points, moving_s, litres, takes, points, our_moving_s, our_litres))
    return tuple(found)


def _restricted(problem: Problem, result: Result, shared: set[int]) -> tuple[TraceStep, ...] | None:
    """The trace of this plan's order with only the shared takes, services that then pour too little left out too."""
    from planner.optimise import evaluate

    if shared == set(_takes(problem, result.order)):
        return result.trace
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
