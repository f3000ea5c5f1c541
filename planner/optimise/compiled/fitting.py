"""When blocks fit their calendars, what has arrived by when, and where a failure is written down."""

from __future__ import annotations

from typing import Any

from planner.optimise.compiled.jit import kernel
from planner.optimise.tables import (
    CALENDAR,
    COUNT,
    FIRST,
    NODE_SECONDS,
    NODE_START,
    SECONDS,
    WAIT_OK,
)

TOLERANCE = 1e-9
OK, HORIZON, NO_INTERVAL, LOW, SOURCE_LOW, TOO_FULL, PRECEDENCE, TWICE, TOO_OFTEN = range(9)
NEVER = 1 << 60


@kernel
def fit(T: Any, calendar: int, moment: int, seconds: int) -> int:
    """Earliest start from ``moment`` on at which ``seconds`` lie inside one interval of ``calendar``; -1 if none."""
    if calendar < 0:
        return moment
    low = T.calendar[calendar, 0]
    last = T.calendar[calendar, 1]
    high = last
    while low < high:
        middle = (low + high) // 2
        if T.interval[middle, 1] < moment + seconds:
            low = middle + 1
        else:
            high = middle
    while low < last:
        start = max(moment, T.interval[low, 0])
        if start + seconds <= T.interval[low, 1]:
            return int(start)
        low += 1
    return -1


@kernel
def fit_latest(T: Any, calendar: int, limit: int, seconds: int, floor: int) -> int:
    """Latest start at or after ``floor`` (which fits) so that ``seconds`` end by ``limit`` inside one interval."""
    if calendar < 0:
        return limit - seconds
    row = T.calendar[calendar, 1] - 1
    while row >= T.calendar[calendar, 0]:
        start = min(limit, T.interval[row, 1]) - seconds
        if start <= floor:
            return floor
        if start >= T.interval[row, 0]:
            return int(start)
        row -= 1
    return floor


@kernel
def arrived(T: Any, reservoir: int, after: int, until: int) -> float:
    """What arrives in ``reservoir`` after second ``after`` and up to ``until``."""
    total = 0.0
    for row in range(T.arrivals_of[reservoir, 0], T.arrivals_of[reservoir, 1]):
        if after < T.arrival[row, 0] <= until:
            total += T.arrival[row, 1]
    return total


@kernel
def fail(W: Any, block: int, reservoir: int, moment: int, short: float) -> None:
    """Write down why a step failed."""
    W.failure[0] = block
    W.failure[1] = reservoir
    W.failure[2] = moment
    W.amount[1] = short


@kernel
def chain_starts(T: Any, W: Any, node: int, moment: int, arcs: int) -> int:
    """Set the starts of a node that pours nothing; returns its end, or minus the failure.

    ``arcs`` is how many blocks of the arc come before (for the failure).
    """
    first = T.node[node, FIRST]
    count = T.node[node, COUNT]
    at = moment
    link = 0
    while link < count:
        last = link
        while last < count - 1 and T.block[first + last, WAIT_OK] == 0:
            last += 1
        row = link
        start = at
        while row <= last:
            seconds = T.block[first + row, SECONDS]
            found = fit(T, T.block[first + row, CALENDAR], at, seconds)
            if found < 0 or found + seconds > T.horizon:
                fail(W, arcs + row, -1, at, float(max(0, found + seconds - T.horizon)) if found >= 0 else 0.0)
                return -NO_INTERVAL if found < 0 else -HORIZON
            if found > at and row > link:
                start += found - at
                at = start
                row = link
                continue
            if row == link:
                start = found
            W.time[NODE_START, row] = found
            W.time[NODE_SECONDS, row] = seconds
            at = found + seconds
            row += 1
        link = last + 1
    return at
