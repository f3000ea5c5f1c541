"""Books of each reservoir over the whole horizon: what is used cannot exceed what was there, arrives and is poured."""

from __future__ import annotations

import numpy as np

from planner.optimise.bounds import most_poured, rate_floor
from planner.optimise.cpsat.rows import total
from planner.optimise.cpsat.variables import Variables
from planner.optimise.problem import Floats, Problem
from planner.optimise.tables import (
    COUNT,
    EXIT,
    FIRST,
    LEVEL,
    PLACE_MIN,
    REFILL,
    SECONDS_PER_UNIT,
    SOURCE,
    SOURCE_FIXED,
    SOURCE_PER_UNIT,
    USE,
    Tables,
)

SCALE = 1000.0


def build(variables: Variables) -> None:
    """Add one row a reservoir; every second that is no block burns at least the least rate of a wait."""
    tables = variables.tables
    refills = np.flatnonzero(tables.node[:, REFILL] >= 0).tolist()
    last = tables.node[Problem.END, EXIT]
    for reservoir in range(tables.reservoir.shape[1]):
        if any(not np.isfinite(most_poured(tables, n)) for n in refills if tables.node[n, REFILL] == reservoir):
            continue
        least = float(tables.place[last, PLACE_MIN, reservoir])
        if not np.isfinite(least):
            continue
        weights = np.zeros(tables.reservoir.shape[1])
        weights[reservoir] = 1.0
        rate = rate_floor(tables, weights)
        arc, node = _use_of(tables, reservoir)
        arc -= rate * variables.costs.arc_seconds
        node -= rate * variables.costs.node_seconds
        pour: dict[int, float] = {}
        for n in refills:
            node[n] -= rate  # its seconds are rounded up
            pour[n] = -rate * float(tables.pour[n, SECONDS_PER_UNIT])
            if tables.node[n, REFILL] == reservoir:
                pour[n] -= 1.0
            if tables.node[n, SOURCE] == reservoir:
                pour[n] += float(tables.pour[n, SOURCE_PER_UNIT])
                node[n] += float(tables.pour[n, SOURCE_FIXED])
        arrivals = tables.arrival[slice(*tables.arrivals_of[reservoir])]
        there = float(tables.reservoir[LEVEL, reservoir] + arrivals[arrivals[:, 0] <= tables.horizon, 1].sum())
        room = there - least - rate * tables.horizon
        variables.model.add(total(variables, arc, node, pour, SCALE) <= int(np.ceil(room * SCALE + 1e-3)))


def _use_of(tables: Tables, reservoir: int) -> tuple[Floats, Floats]:
    """Use of one reservoir by each arc and node."""
    sums = np.concatenate([[0.0], np.cumsum(tables.rule[:, USE, reservoir])])
    arc = sums[tables.arc.sum(axis=2)] - sums[tables.arc[:, :, 0]]
    node = sums[tables.node[:, FIRST] + tables.node[:, COUNT]] - sums[tables.node[:, FIRST]]
    return arc, node
