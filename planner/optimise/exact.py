"""Small problems: all orders by branch and bound, in pieces, until done or out of budget."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from planner.optimise.bounds import Floors
from planner.optimise.compiled.branch import build_branch
from planner.optimise.incumbent import Incumbent
from planner.optimise.problem import Problem
from planner.optimise.tables import MAX_USES, Tables

MOST_TAKES = 8
MOST_SERVICES = 6  # uses of services in one order that the exact search still takes on
VISITS = 400_000  # visits after which the search gives up, about two seconds' work


def is_small(problem: Problem, tables: Tables) -> bool:
    """Whether the exact search is worth a try."""
    return problem.takes <= MOST_TAKES and _uses(problem, tables) <= MOST_SERVICES


def _uses(problem: Problem, tables: Tables) -> int:
    services = [n for n in range(2, problem.nodes) if not problem.covers[n]]
    return int(np.minimum(tables.node[services, MAX_USES], MOST_SERVICES + 1).sum())


def solve_exactly(
    problem: Problem,
    tables: Tables,
    floors: Floors,
    incumbent: Incumbent,
    kernels: Callable[[], Any],
    halt: Callable[[], bool],
) -> bool:
    """Deal with all orders; True if that was done and the incumbent is therefore optimal.

    ``kernels`` is asked before each piece, so that compiled ones are used once they are there.
    """
    tail = floors.base - floors.rate_floor * tables.horizon - float(np.minimum(floors.take, 0.0).sum())
    take_floor = np.stack([floors.take, floors.take_seconds], axis=1).reshape(-1, 2)
    take_floor = np.where(np.isfinite(take_floor), take_floor, float(2 * tables.horizon))
    longest = problem.takes + _uses(problem, tables)
    state = build_branch(tables, longest, np.array([floors.rate_floor, tail]), take_floor)
    if incumbent.best is not None and incumbent.objective is not None:
        order, objective = incumbent.best.order, incumbent.objective
        state.order[1, : len(order)] = order
        state.length[1] = len(order)
        state.value[1] = [
            objective.missing - int(problem.must.sum()),
            objective.minus_prize,
            objective.cost,
            objective.end,
        ]
    done = False
    spent = 0
    while not done and spent < VISITS and not halt():
        chosen = kernels()
        piece = chosen.visits
        done = bool(chosen.branch(state, piece))
        spent += piece
        if state.value[1, 0] <= 0.0:
            incumbent.offer(state.order[1, : state.length[1]].tolist(), "exact search")
        incumbent.report()
    return done
