"""A first order, quickly and in plain Python if need be: the candidate that wastes least for what it earns comes next.

Refills are put in where a level would otherwise stand in the way.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from planner.optimise.builder import Builder
from planner.optimise.compiled.fitting import LOW, OK, PRECEDENCE
from planner.optimise.moves import Costs
from planner.optimise.problem import Floats

CANDIDATES = 6  # nodes looked at exactly at each place of the order


def construct(builder: Builder, costs: Costs, halt: Callable[[], bool] = lambda: False) -> bool:
    """Fill ``builder`` greedily; whether the end can be reached.

    ``halt`` is asked between items: the order is then closed as it stands.
    """
    problem = builder.problem
    reach = costs.reach(builder.tables)
    worth = np.array([_worth(builder, takes) for takes in problem.covers])
    blocked: set[int] = set()
    builder.careful = builder.can_finish()
    while not halt():
        scores = _scores(builder, reach, costs, worth, blocked)
        ranked = [int(node) for node in np.argsort(scores, kind="stable") if np.isfinite(scores[node])]
        if not _append_best(builder, ranked, worth, costs, blocked):
            break
    return builder.close()


def _worth(builder: Builder, takes: tuple[int, ...]) -> float:
    """Prize of a node, a must counting as much as all prizes together."""
    problem = builder.problem
    total = float(problem.prize.sum()) + 1.0
    return float(sum(float(problem.prize[take]) + total * bool(problem.must[take]) for take in takes))


def _scores(builder: Builder, reach: Floats, costs: Costs, worth: Floats, blocked: set[int]) -> Floats:
    """Time and use spent per worth for every node that may come next, infinite for the others."""
    here = builder.items[-1] if builder.items else 0
    scores = (reach[here] + 0.2 * costs.node_seconds + 1.0) / np.maximum(worth, 0.5)
    done = builder.done
    for node, takes in enumerate(builder.problem.covers):
        if not takes or node in blocked or not done.isdisjoint(takes):
            scores[node] = np.inf
    return np.asarray(scores, dtype=np.float64)


def _append_best(builder: Builder, ranked: list[int], worth: Floats, costs: Costs, blocked: set[int]) -> bool:
    """Append the best of the first candidates that can be done, if need be with a refill before it."""
    best: tuple[float, list[int]] | None = None
    found = 0
    here, spent = builder.time, builder.states.cost[len(builder.items)]
    for node in ranked:
        nodes = _with_refill(builder, node)
        if nodes is None:
            status = builder.push(node)
            if status == OK:
                builder.pop()
            elif status not in (LOW, PRECEDENCE):
                blocked.add(node)  # what fails for time fails later too; levels and precedence may change
            continue
        waste = builder.time - here - int(costs.node_seconds[node])
        cost = float(builder.states.cost[len(builder.items)] - spent)
        value = (waste + cost + 1.0) / max(worth[node], 0.5)
        builder.cut(len(builder.items) - len(nodes))
        if best is None or value < best[0]:
            best = (value, nodes)
        found += 1
        if found >= CANDIDATES:
            break
    if best is None:
        return False
    return builder.push_all(best[1]) == OK


def _with_refill(builder: Builder, node: int) -> list[int] | None:
    """Append ``node``, with a refill before it if levels need one; what was appended, None if it cannot be done."""
    status = builder.push_all([node])
    if status == OK:
        return [node]
    if status == LOW:
        for service in builder.services:
            if builder.push_all([service, node]) == OK:
                return [service, node]
    return None
