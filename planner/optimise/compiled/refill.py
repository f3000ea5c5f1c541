"""Refills: when calendar, source and length agree, and how much is poured then."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from planner.optimise.compiled.fitting import (
    HORIZON,
    NEVER,
    NO_INTERVAL,
    OK,
    SOURCE_LOW,
    TOLERANCE,
    TOO_FULL,
    arrived,
    fail,
    fit,
)
from planner.optimise.compiled.jit import kernel
from planner.optimise.tables import (
    ARC_START,
    CALENDAR,
    ENTRY,
    FIRST,
    MIN_POUR,
    NEED_FULL,
    NODE_SECONDS,
    NODE_START,
    PLACE_RATE,
    REFILL,
    REFILL_TO,
    SECONDS,
    SECONDS_PER_UNIT,
    SOURCE,
    SOURCE_FIXED,
    SOURCE_PER_UNIT,
    USE,
    WAIT_RATE,
)


@kernel
def level_after_arc(T: Any, W: Any, reservoir: int, place: int, node: int, moment: int, level: float) -> float:
    """Level of one reservoir at the end of the arc just set, rules not looked at."""
    target = T.node[node, ENTRY]
    first = T.arc[place, target, 0]
    at = moment
    for row in range(T.arc[place, target, 1]):
        rate = T.place[place, PLACE_RATE, reservoir] if row == 0 else T.rule[first + row - 1, WAIT_RATE, reservoir]
        start = W.time[ARC_START, row]
        end = start + T.block[first + row, SECONDS]
        level += arrived(T, reservoir, at, end) - rate * (start - at) - T.rule[first + row, USE, reservoir]
        at = end
    return level


@kernel
def pour_length(T: Any, node: int, poured: float) -> int:
    """Seconds of a refill that pours ``poured``."""
    fixed = T.block[T.node[node, FIRST], SECONDS]
    return int(np.ceil(fixed + T.pour[node, SECONDS_PER_UNIT] * max(poured, 0.0) - 1e-6))


@kernel
def source_has(T: Any, node: int, level: float) -> float:
    """How much a source at ``level`` can pour."""
    left = level - T.pour[node, SOURCE_FIXED]
    if T.pour[node, SOURCE_PER_UNIT] > 0.0:
        return float(left / T.pour[node, SOURCE_PER_UNIT])
    return math.inf if left >= -TOLERANCE else -math.inf


@kernel
def refill_start(T: Any, W: Any, node: int, place: int, moment: int, at: int, levels: Any, given: int) -> int:
    """Set the starts of a refill whose arc ends at ``at``; returns that start, or minus the failure."""
    reservoir = T.node[node, REFILL]
    source = T.node[node, SOURCE]
    target = T.node[node, ENTRY]
    calendar = T.block[T.node[node, FIRST], CALENDAR]
    waits_in = target if T.arc[place, target, 1] > 0 else place
    level_there = level_after_arc(T, W, reservoir, place, node, moment, levels[given, reservoir])
    source_there = 0.0
    if source >= 0:
        source_there = level_after_arc(T, W, source, place, node, moment, levels[given, source])
    start = at
    while start <= T.horizon:
        now = level_there + arrived(T, reservoir, at, start) - T.place[waits_in, PLACE_RATE, reservoir] * (start - at)
        room = T.pour[node, REFILL_TO] - now
        have = math.inf
        if source >= 0:
            burnt = T.place[waits_in, PLACE_RATE, source] * (start - at)
            have = source_has(T, node, source_there + arrived(T, source, at, start) - burnt)
        need = room if T.node[node, NEED_FULL] == 1 else T.pour[node, MIN_POUR]
        agrees = have >= need - TOLERANCE
        seconds = pour_length(T, node, min(room, have) if agrees else 0.0)
        if agrees and fit(T, calendar, start, seconds) == start:
            W.time[NODE_START, 0] = start
            return start
        after = NEVER
        for other in (reservoir, source):
            if other >= 0:
                for row in range(T.arrivals_of[other, 0], T.arrivals_of[other, 1]):
                    if T.arrival[row, 0] > start:
                        after = min(after, int(T.arrival[row, 0]))
                        break
        if calendar >= 0:
            for row in range(T.calendar[calendar, 0], T.calendar[calendar, 1]):
                if T.interval[row, 0] > start:
                    after = min(after, T.interval[row, 0])
                    break
        if after == NEVER:
            fail(W, T.arc[place, target, 1], source, start, 0.0 if agrees else need - have)
            return -NO_INTERVAL if agrees else -SOURCE_LOW
        start = after
    fail(W, T.arc[place, target, 1], -1, start, 0.0)
    return -HORIZON


@kernel
def pour(T: Any, W: Any, node: int, block: int, start: int, level: Any) -> int:
    """Draw from the source for the refill at ``start``; sets its amount and length."""
    reservoir = T.node[node, REFILL]
    source = T.node[node, SOURCE]
    room = T.pour[node, REFILL_TO] - level[reservoir]
    have = source_has(T, node, level[source]) if source >= 0 else math.inf
    least = max(T.pour[node, MIN_POUR], 0.0)
    if room < least - TOLERANCE:
        fail(W, block, reservoir, start, least - room)
        return TOO_FULL
    need = room if T.node[node, NEED_FULL] == 1 else least
    if have < need - TOLERANCE:
        fail(W, block, source, start, need - have)
        return SOURCE_LOW
    poured = max(min(room, have), 0.0)
    seconds = pour_length(T, node, poured)
    if fit(T, T.block[T.node[node, FIRST], CALENDAR], start, seconds) != start:
        fail(W, block, -1, start, 0.0)
        return NO_INTERVAL
    if source >= 0:
        level[source] -= T.pour[node, SOURCE_FIXED] + T.pour[node, SOURCE_PER_UNIT] * poured
    W.amount[0] = poured
    W.time[NODE_SECONDS, 0] = seconds
    return OK
