"""One step of an order: the arc to a node and the node itself, on the calendars and against the levels.

`problem.py` states the meaning; `step` is its only implementation and serves construction, search, proof and trace.
"""

from __future__ import annotations

from typing import Any

from planner.optimise.compiled.fitting import (
    HORIZON,
    LOW,
    NO_INTERVAL,
    OK,
    TOLERANCE,
    arrived,
    chain_starts,
    fail,
    fit,
    fit_latest,
)
from planner.optimise.compiled.jit import kernel
from planner.optimise.compiled.refill import pour, refill_start
from planner.optimise.tables import (
    AFTER,
    ARC_START,
    BEFORE,
    CALENDAR,
    COUNT,
    END_MIN,
    ENTRY,
    EXIT,
    FIRST,
    MOVING,
    NODE_SECONDS,
    NODE_START,
    PLACE_MIN,
    PLACE_RATE,
    PRICE,
    REFILL,
    SECONDS,
    SHIFTED,
    SOURCE_FIXED,
    SOURCE_PER_UNIT,
    START_MIN,
    USE,
    WAIT_MIN,
    WAIT_RATE,
)

END_NODE = 1


@kernel
def priced(T: Any, table: Any, row: int, kind: int) -> float:
    """Priced burn a second of the rate in ``table[row, kind]``."""
    total = 0.0
    for reservoir in range(T.reservoir.shape[1]):
        total += T.reservoir[PRICE, reservoir] * table[row, kind, reservoir]
    return total


@kernel
def shift_waits(T: Any, W: Any, node: int, place: int, moment: int, keep: int) -> bool:
    """Push arc blocks later into row ``SHIFTED``; whether the waits then burn less (start of the node: ``keep``)."""
    target = T.node[node, ENTRY]
    first = T.arc[place, target, 0]
    count = T.arc[place, target, 1]
    limit = keep
    for row in range(count - 1, -1, -1):
        after = (
            priced(T, T.place, target, PLACE_RATE) if row == count - 1 else priced(T, T.rule, first + row, WAIT_RATE)
        )
        least = priced(T, T.place, place, PLACE_RATE)
        for earlier in range(row):
            least = min(least, priced(T, T.rule, first + earlier, WAIT_RATE))
        start = W.time[ARC_START, row]
        if least < after - TOLERANCE:
            seconds = T.block[first + row, SECONDS]
            start = fit_latest(T, T.block[first + row, CALENDAR], limit, seconds, start)
        W.time[SHIFTED, row] = start
        limit = start
    burn = 0.0
    burn_shifted = 0.0
    end = moment
    end_shifted = moment
    rate = priced(T, T.place, place, PLACE_RATE)
    for row in range(count):
        burn += rate * (W.time[ARC_START, row] - end)
        burn_shifted += rate * (W.time[SHIFTED, row] - end_shifted)
        end = W.time[ARC_START, row] + T.block[first + row, SECONDS]
        end_shifted = W.time[SHIFTED, row] + T.block[first + row, SECONDS]
        rate = priced(T, T.rule, first + row, WAIT_RATE)
    burn += priced(T, T.place, target, PLACE_RATE) * (keep - end)
    burn_shifted += priced(T, T.place, target, PLACE_RATE) * (keep - end_shifted)
    return bool(burn_shifted < burn - TOLERANCE)


@kernel
def below(T: Any, W: Any, table: Any, row: int, kind: int, block: int, moment: int) -> bool:
    """Whether a reservoir is below its minimum in ``table[row, kind]``; the first such is written down."""
    for reservoir in range(T.reservoir.shape[1]):
        if W.now[reservoir] < table[row, kind, reservoir] - TOLERANCE:
            fail(W, block, reservoir, moment, table[row, kind, reservoir] - W.now[reservoir])
            return True
    return False


@kernel
def burn_wait(T: Any, W: Any, table: Any, row: int, kind: int, begin: int, finish: int) -> float:
    """Take a wait at the rate in ``table[row, kind]`` from the level; returns its priced burn."""
    cost = 0.0
    for reservoir in range(T.reservoir.shape[1]):
        burnt = table[row, kind, reservoir] * (finish - begin)
        W.now[reservoir] += arrived(T, reservoir, begin, finish) - burnt
        cost += T.reservoir[PRICE, reservoir] * burnt
    return cost


@kernel
def walk(T: Any, W: Any, node: int, place: int, moment: int, starts: int, levels: Any, given: int) -> Any:
    """Levels along the arc at the times in row ``starts``, then the node: (status, end, priced use); sets ``now``."""
    target = T.node[node, ENTRY]
    arc_first = T.arc[place, target, 0]
    arc_count = T.arc[place, target, 1]
    level = W.now
    for reservoir in range(len(level)):
        level[reservoir] = levels[given, reservoir]
    W.amount[0] = 0.0
    cost = 0.0
    at = moment
    row = 0
    for index in range(arc_count + T.node[node, COUNT]):
        previous = row
        on_arc = index < arc_count
        row = arc_first + index if on_arc else T.node[node, FIRST] + index - arc_count
        start = W.time[starts, index] if on_arc else W.time[NODE_START, index - arc_count]
        if start > at:
            if index == 0 or index == arc_count:
                waits_in = place if index == 0 else target
                cost += burn_wait(T, W, T.place, waits_in, PLACE_RATE, at, start)
                broken = below(T, W, T.place, waits_in, PLACE_MIN, index - 1, start)
            else:
                cost += burn_wait(T, W, T.rule, previous, WAIT_RATE, at, start)
                broken = below(T, W, T.rule, previous, WAIT_MIN, index - 1, start)
            if broken:
                return LOW, 0, 0.0
        for reservoir in range(len(level)):
            W.level[BEFORE, index, reservoir] = level[reservoir]
        if below(T, W, T.rule, row, START_MIN, index, start):
            return LOW, 0, 0.0
        refills = not on_arc and T.node[node, REFILL] >= 0
        if refills:
            status = pour(T, W, node, index, start, level)
            if status != OK:
                return status, 0, 0.0
            lost = T.pour[node, SOURCE_FIXED] + (T.pour[node, SOURCE_PER_UNIT] - 1.0) * W.amount[0]
            cost += T.reservoir[PRICE, T.node[node, REFILL]] * lost
        end = start + (T.block[row, SECONDS] if on_arc else W.time[NODE_SECONDS, index - arc_count])
        for reservoir in range(len(level)):
            level[reservoir] += arrived(T, reservoir, start, end) - T.rule[row, USE, reservoir]
            cost += T.reservoir[PRICE, reservoir] * T.rule[row, USE, reservoir]
        if refills:
            level[T.node[node, REFILL]] += W.amount[0]
        for reservoir in range(len(level)):
            W.level[AFTER, index, reservoir] = level[reservoir]
        if below(T, W, T.rule, row, END_MIN, index, end):
            return LOW, 0, 0.0
        at = end
    if at > T.horizon:
        fail(W, arc_count + T.node[node, COUNT] - 1, -1, at, float(at - T.horizon))
        return HORIZON, 0, 0.0
    if node == END_NODE:
        last = T.node[node, EXIT]
        cost += burn_wait(T, W, T.place, last, PLACE_RATE, at, T.horizon)
        if below(T, W, T.place, last, PLACE_MIN, arc_count, T.horizon):
            return LOW, 0, 0.0
    return OK, at, cost


@kernel
def step(T: Any, W: Any, node: int, place: int, moment: int, levels: Any, given: int) -> Any:
    """Do ``node`` from ``place`` at ``moment`` with the levels in row ``given``: (status, end, cost).

    That row is left alone; the level after is ``W.level``, the times are in ``W.time``.
    """
    target = T.node[node, ENTRY]
    first = T.arc[place, target, 0]
    count = T.arc[place, target, 1]
    at = moment
    seconds_moving = 0
    for row in range(count):
        seconds = T.block[first + row, SECONDS]
        start = fit(T, T.block[first + row, CALENDAR], at, seconds)
        if start < 0 or start + seconds > T.horizon:
            fail(W, row, -1, at, 0.0 if start < 0 else float(start + seconds - T.horizon))
            return (NO_INTERVAL if start < 0 else HORIZON), 0, 0.0
        W.time[ARC_START, row] = start
        seconds_moving += seconds
        at = start + seconds
    keep = at
    if T.node[node, COUNT] > 0:
        if T.node[node, REFILL] >= 0:
            end = refill_start(T, W, node, place, moment, at, levels, given)
        else:
            end = chain_starts(T, W, node, at, count)
        if end < 0:
            return -end, 0, 0.0
        keep = W.time[NODE_START, 0]
    done = False
    end = 0
    cost = 0.0
    if count > 0 and keep - moment > seconds_moving and shift_waits(T, W, node, place, moment, keep):
        status, end, cost = walk(T, W, node, place, moment, SHIFTED, levels, given)
        done = status == OK
        if done:
            for row in range(count):
                W.time[ARC_START, row] = W.time[SHIFTED, row]
    if not done:
        status, end, cost = walk(T, W, node, place, moment, ARC_START, levels, given)
        if status != OK:
            return status, 0, 0.0
    cost += seconds_moving
    if T.node[node, MOVING] == 1:
        for row in range(T.node[node, COUNT]):
            cost += W.time[NODE_SECONDS, row]
    return OK, end, cost
