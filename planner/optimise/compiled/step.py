"""One step of an order: the arc to a node and the node itself, on the calendars and against the levels.

`problem.py` states the meaning; `step` is its only implementation and serves construction, search, proof and trace.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from planner.optimise.compiled.jit import kernel
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
    MIN_POUR,
    MOVING,
    NEED_FULL,
    NODE_SECONDS,
    NODE_START,
    PLACE_MIN,
    PLACE_RATE,
    PRICE,
    REFILL,
    REFILL_TO,
    SECONDS,
    SECONDS_PER_UNIT,
    SHIFTED,
    SOURCE,
    SOURCE_FIXED,
    SOURCE_PER_UNIT,
    START_MIN,
    USE,
    WAIT_MIN,
    WAIT_OK,
    WAIT_RATE,
)

TOLERANCE = 1e-9
OK, HORIZON, NO_INTERVAL, LOW, SOURCE_LOW, TOO_FULL, PRECEDENCE, TWICE, TOO_OFTEN = range(9)
END_NODE = 1
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
def chain_starts(T: Any, W: Any, node: int, moment: int) -> int:
    """Set the starts of a node that pours nothing; returns its end, or minus the failure."""
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
                fail(W, row, -1, at, 0.0)
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
            end = chain_starts(T, W, node, at)
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
