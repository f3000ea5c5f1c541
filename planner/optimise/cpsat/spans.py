"""Time: everything done fits the horizon; what needs a calendar fits that calendar's intervals in sum."""

from __future__ import annotations

import numpy as np

from planner.optimise.cpsat.rows import total
from planner.optimise.cpsat.variables import Variables
from planner.optimise.problem import Floats
from planner.optimise.tables import CALENDAR, COUNT, FIRST, REFILL, SECONDS, SECONDS_PER_UNIT, Tables


def build(variables: Variables) -> None:
    """Add the row of the horizon and one row for each calendar that is shorter than it."""
    tables, problem = variables.tables, variables.problem
    refills = np.flatnonzero(tables.node[:, REFILL] >= 0).tolist()
    slope = {n: float(tables.pour[n, SECONDS_PER_UNIT]) for n in refills}
    seconds = variables.costs.arc_seconds.astype(float), variables.costs.node_seconds.astype(float)
    variables.model.add(total(variables, *seconds, slope, 1.0) <= problem.horizon)
    for calendar in range(len(tables.calendar)):
        length = calendar_length(tables, calendar)
        if length >= problem.horizon:
            continue
        within = [other for other in range(len(tables.calendar)) if is_within(tables, other, calendar)]
        counted = np.isin(tables.block[:, CALENDAR], within)
        needs = {n: slope[n] for n in refills if counted[tables.node[n, FIRST]]}
        row = total(variables, *_seconds_of(tables, counted), needs, 1.0)
        variables.model.add(row <= length)


def calendar_length(tables: Tables, calendar: int) -> int:
    """Seconds of a calendar inside the horizon."""
    rows = np.clip(tables.interval[slice(*tables.calendar[calendar])], 0, tables.horizon)
    return int((rows[:, 1] - rows[:, 0]).sum())


def is_within(tables: Tables, inner: int, outer: int) -> bool:
    """Whether each interval of ``inner`` lies inside the intervals of ``outer`` (that touch counting as one)."""
    merged: list[list[int]] = []
    for begin, finish in tables.interval[slice(*tables.calendar[outer])].tolist():
        if merged and merged[-1][1] == begin:
            merged[-1][1] = finish
        else:
            merged.append([begin, finish])
    rows = tables.interval[slice(*tables.calendar[inner])].tolist()
    return all(any(b <= begin and finish <= f for b, f in merged) for begin, finish in rows)


def _seconds_of(tables: Tables, counted: np.ndarray[tuple[int], np.dtype[np.bool_]]) -> tuple[Floats, Floats]:
    """Seconds of the counted blocks of each arc and node."""
    sums = np.concatenate([[0.0], np.cumsum(np.where(counted, tables.block[:, SECONDS], 0))])
    arc = sums[tables.arc.sum(axis=2)] - sums[tables.arc[:, :, 0]]
    node = sums[tables.node[:, FIRST] + tables.node[:, COUNT]] - sums[tables.node[:, FIRST]]
    return arc, node
