"""The large change of the annealing: some items are taken out and put back one by one where they seem to fit best.

Ruin and recreate with strings and blinks (Schrimpf et al. 2000, J. Comput. Phys. 159, 139; Christiaens and Vanden
Berghe 2020, Transp. Sci. 54, 417). How well a place fits is judged by static arcs and the times before the change.
"""

from __future__ import annotations

from typing import Any

from planner.optimise.compiled.decode import TIME
from planner.optimise.compiled.draws import TRIAL, USED, draw, find
from planner.optimise.compiled.fitting import fit
from planner.optimise.compiled.jit import kernel
from planner.optimise.tables import (
    BEFORE_FIRST,
    BEFORE_LAST,
    CALENDAR,
    COUNT,
    COVER_FIRST,
    COVER_LAST,
    ENTRY,
    EXIT,
    FIRST,
    OPTION_FIRST,
    OPTION_LAST,
    SECONDS,
)

MOST_OUT = 8  # items taken out at most
MOST_EXTRA = 3  # left-out items that are tried beside them at most
BLINK = 12  # one in so many places is overlooked
FAR = 1e300


@kernel
def pull(Q: Any, position: int, length: int, held: int) -> Any:
    """Take the item at ``position`` out of the trial, into the room if it covers takes: (length, items in the room)."""
    node = Q.order[TRIAL, position]
    for row in range(position, length - 1):
        Q.order[TRIAL, row] = Q.order[TRIAL, row + 1]
        Q.when[row] = Q.when[row + 1]
    if Q.tables.node[node, COVER_LAST] > Q.tables.node[node, COVER_FIRST]:
        Q.room[held] = node
        held += 1
    return length - 1, held


@kernel
def after_what_comes_before(Q: Any, take: int, length: int) -> int:
    """First position at which everything that must come before ``take`` has had its turn."""
    T = Q.tables
    lowest = 0
    for row in range(T.take[take, BEFORE_FIRST], T.take[take, BEFORE_LAST]):
        before = T.member[row]
        for option in range(T.take[before, OPTION_FIRST], T.take[before, OPTION_LAST]):
            lowest = max(lowest, find(Q, length, T.member[option]) + 1)
    return lowest


@kernel
def detour(Q: Any, node: int, position: int, used: int, patience: float) -> float:
    """Static cost of ``node`` at ``position`` with the wait for its window there."""
    T = Q.tables
    previous = T.node[Q.order[TRIAL, position - 1] if position > 0 else 0, EXIT]
    following = T.node[Q.order[TRIAL, position] if position < used else 1, ENTRY]
    entry = T.node[node, ENTRY]
    there = Q.moves.reach[previous, entry]
    cost = there + Q.moves.reach[T.node[node, EXIT], following] - Q.moves.reach[previous, following]
    if T.node[node, COUNT] > 0:
        first = T.node[node, FIRST]
        calendar = T.block[first, CALENDAR]
        if calendar >= 0:
            arrival = Q.when[position] + int(there)
            start = fit(T, calendar, arrival, T.block[first, SECONDS])
            if start < 0:
                return FAR
            cost += patience * (start - arrival)
    return float(cost)


@kernel
def put_back(Q: Any, node: int, length: int, used: int, patience: float) -> int:
    """Insert the best way of doing what ``node`` does where it seems to fit best; returns the position."""
    T = Q.tables
    take = T.member[T.node[node, COVER_FIRST]]
    lowest = min(after_what_comes_before(Q, take, length), used)
    best = FAR
    where = used
    chosen = node
    for row in range(T.take[take, OPTION_FIRST], T.take[take, OPTION_LAST]):
        option = T.member[row]
        if T.node[option, COVER_LAST] - T.node[option, COVER_FIRST] != 1 and option != node:
            continue
        for position in range(lowest, used + 1):
            if draw(Q.random, BLINK) == 0:
                continue
            cost = detour(Q, option, position, used, patience)
            if cost < best:
                best = cost
                where = position
                chosen = option
    for row in range(length, where, -1):
        Q.order[TRIAL, row] = Q.order[TRIAL, row - 1]
        Q.when[row] = Q.when[row - 1]
    Q.order[TRIAL, where] = chosen
    return int(where)


@kernel
def ruin(Q: Any, length: int) -> Any:
    """Take some items out of the trial and put them back: (new length, first changed position)."""
    used = min(Q.length[USED], length)
    if used < 2:
        return length, length
    for row in range(length):
        Q.when[row] = Q.states.state[min(row, used), TIME]
    held = 0
    count = 1 + draw(Q.random, min(MOST_OUT, used))
    begin = draw(Q.random, used - count + 1)
    first = begin
    tail = length
    if draw(Q.random, 2) == 0:
        # a stretch, services in it now and then too
        for row in range(begin + count - 1, begin - 1, -1):
            node = Q.order[TRIAL, row]
            service = Q.tables.node[node, COVER_LAST] == Q.tables.node[node, COVER_FIRST]
            if not service or draw(Q.random, 3) == 0:
                length, held = pull(Q, row, length, held)
    else:
        # an item and some that are near to it, wherever they stand
        node = Q.order[TRIAL, begin]
        width = Q.moves.near.shape[1]
        length, held = pull(Q, begin, length, held)
        for _ in range(count - 1):
            position = find(Q, length, Q.moves.near[node, draw(Q.random, width)]) if width > 0 else -1
            if 0 <= position < used:
                length, held = pull(Q, position, length, held)
                first = min(first, position)
    used -= tail - length
    # left-out items may have a try too
    for _ in range(draw(Q.random, MOST_EXTRA + 1)):
        if length > used:
            length, held = pull(Q, used + draw(Q.random, length - used), length, held)
    for row in range(held - 1, 0, -1):
        other = draw(Q.random, row + 1)
        node = Q.room[row]
        Q.room[row] = Q.room[other]
        Q.room[other] = node
    patience = 0.5 * draw(Q.random, 4)
    for row in range(held):
        position = put_back(Q, Q.room[row], length, used, patience)
        length += 1
        used += 1
        first = min(first, position)
    return length, first
