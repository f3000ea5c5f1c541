"""Valid bounds from static figures alone: there in no time, and the shares the exact search and CP-SAT build on.

Every second of the horizon lies in a wait or in a block, and a wait burns at least ``rate_floor`` (priced). So

    cost >= rate_floor * horizon + sum over blocks done of (moving seconds + priced use - rate_floor * seconds)

whatever the order: the summands are the *reduced* costs below.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from planner.optimise.moves import Costs
from planner.optimise.problem import Floats, Problem
from planner.optimise.tables import (
    COUNT,
    ENTRY,
    EXIT,
    FIRST,
    MAX_USES,
    PLACE_RATE,
    PRICE,
    REFILL,
    REFILL_TO,
    SECONDS_PER_UNIT,
    SOURCE_FIXED,
    SOURCE_PER_UNIT,
    START_MIN,
    WAIT_OK,
    WAIT_RATE,
    Tables,
)


@dataclass(frozen=True)
class Floors:
    """Reduced costs of arcs (P, P) and nodes (N,), and the least a take (T,) adds in cost and in seconds.

    ``base`` is what every order costs; ``end`` the reduced cost of the cheapest arc to the end.
    """

    rate_floor: float
    base: float
    arc: Floats
    node: Floats
    take: Floats
    take_seconds: Floats
    end: float
    end_seconds: float


def floors(problem: Problem, tables: Tables, costs: Costs) -> Floors:
    """Work the reduced costs out."""
    rate = rate_floor(tables, tables.reservoir[PRICE])
    arc = costs.arc_seconds + costs.arc_use - rate * costs.arc_seconds
    node = costs.node_moving + costs.node_use - rate * costs.node_seconds
    for refill in np.flatnonzero(tables.node[:, REFILL] >= 0):
        node[refill] += _refill_floor(tables, int(refill), rate)
    uses = np.minimum(tables.node[:, MAX_USES], most_uses(problem, tables, costs))
    services = [n for n in range(2, problem.nodes) if not problem.covers[n]]
    into = arc[:, tables.node[:, ENTRY]]
    exits = np.unique(tables.node[:, EXIT])
    entering = into[exits].min(axis=0)
    entering_seconds = costs.arc_seconds[:, tables.node[:, ENTRY]][exits].min(axis=0)
    take = np.full(problem.takes, math.inf)
    seconds = np.full(problem.takes, math.inf)
    for n, takes in enumerate(problem.covers):
        for one in takes:
            take[one] = min(take[one], (node[n] + entering[n]) / len(takes))
            seconds[one] = min(seconds[one], (costs.node_seconds[n] + entering_seconds[n]) / len(takes))
    relief = sum(min(0.0, float(node[n] + entering[n])) * int(uses[n]) for n in services)
    end = float(entering[Problem.END])
    return Floors(
        rate_floor=rate,
        base=rate * tables.horizon + relief + float(np.minimum(take, 0.0).sum()) + end,
        arc=arc,
        node=node,
        take=take,
        take_seconds=seconds,
        end=end,
        end_seconds=float(entering_seconds[Problem.END]),
    )


def rate_floor(tables: Tables, weights: Floats) -> float:
    """Least burn a second of any wait, reservoirs weighted by ``weights``."""
    used = np.unique(np.concatenate([tables.node[:, ENTRY], tables.node[:, EXIT]]))
    rates = [tables.place[used, PLACE_RATE] @ weights]
    inner = _inner_blocks(tables)
    rates.append(tables.rule[inner, WAIT_RATE] @ weights)
    return float(np.concatenate(rates).min())


def _inner_blocks(tables: Tables) -> np.ndarray[tuple[int], np.dtype[np.bool_]]:
    """Blocks that a wait of their own may follow: not the last of an arc or node, and not tied to the next."""
    inner = np.ones(len(tables.block), dtype=np.bool_)
    arcs = tables.arc.reshape(-1, 2)
    arcs = arcs[arcs[:, 1] > 0]
    inner[arcs.sum(axis=1) - 1] = False
    nodes = tables.node[tables.node[:, COUNT] > 0]
    first_own = len(tables.block) - int(tables.node[:, COUNT].sum())
    inner[first_own:] &= tables.block[first_own:, WAIT_OK] == 1
    inner[nodes[:, FIRST] + nodes[:, COUNT] - 1] = False
    return inner


def most_poured(tables: Tables, node: int) -> float:
    """The most one refill can pour: from the lowest level at which it may start up to its line."""
    reservoir = tables.node[node, REFILL]
    return float(tables.pour[node, REFILL_TO] - tables.rule[tables.node[node, FIRST], START_MIN, reservoir])


def _refill_floor(tables: Tables, node: int, rate: float) -> float:
    """Least reduced cost that pouring adds to a refill: what is lost, less the floor burn of the added seconds."""
    price = tables.reservoir[PRICE, tables.node[node, REFILL]]
    fixed = price * tables.pour[node, SOURCE_FIXED] - rate
    slope = price * (tables.pour[node, SOURCE_PER_UNIT] - 1.0) - rate * tables.pour[node, SECONDS_PER_UNIT]
    poured = most_poured(tables, node)
    return float(fixed + min(0.0, slope * poured if slope < 0.0 else 0.0))


def most_uses(problem: Problem, tables: Tables, costs: Costs) -> int:
    """No service can be done more often than its seconds fit the horizon; the most for the shortest service."""
    services = [n for n in range(2, problem.nodes) if not problem.covers[n]]
    shortest = min((int(costs.node_seconds[n]) for n in services), default=0)
    return tables.horizon // max(shortest, 1)


def prize_bound(problem: Problem, bound: Floors) -> int:
    """Most prize for which the takes' least seconds fit the horizon (fractional knapsack; Dantzig 1957)."""
    room = problem.horizon - bound.end_seconds
    prize = problem.prize.astype(np.float64)
    possible = np.flatnonzero(np.isfinite(bound.take_seconds) & (prize > 0))
    order = possible[np.argsort(bound.take_seconds[possible] / prize[possible], kind="stable")]
    total = 0.0
    for take in order.tolist():
        share = min(1.0, room / bound.take_seconds[take]) if bound.take_seconds[take] > 0 else 1.0
        if share <= 0.0:
            break
        total += share * prize[take]
        room -= share * bound.take_seconds[take]
    return math.floor(total + 1e-6)


def cost_bound(problem: Problem, bound: Floors, prize: int) -> float:
    """Least cost of any order that earns at least ``prize``: the cheapest takes that add up to it, in fractions."""
    cost = np.maximum(bound.take, 0.0)
    worth = problem.prize.astype(np.float64)
    possible = np.flatnonzero(np.isfinite(cost) & (worth > 0))
    order = possible[np.argsort(cost[possible] / worth[possible], kind="stable")]
    total, wanted = bound.base, float(prize)
    for take in order.tolist():
        if wanted <= 0.0:
            break
        share = min(1.0, wanted / worth[take])
        total += share * float(cost[take])
        wanted -= share * worth[take]
    return total
