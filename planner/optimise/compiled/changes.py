"""The random changes that the annealing makes to an order."""

from __future__ import annotations

from typing import Any

from planner.optimise.compiled.decode import KEPT
from planner.optimise.compiled.draws import TRIAL, USED, draw, find
from planner.optimise.compiled.jit import kernel
from planner.optimise.compiled.ruin import ruin
from planner.optimise.tables import (
    COVER_FIRST,
    COVER_LAST,
    OPTION_FIRST,
    OPTION_LAST,
)

RUINS = 25  # of a hundred changes
LONGEST = 12  # items of the longest stretch that is moved


@kernel
def relocate(Q: Any, source: int, count: int, target: int) -> None:
    """Take ``count`` items at ``source`` out and put them back so that they begin at ``target``."""
    room = Q.room
    for row in range(count):
        room[row] = Q.order[TRIAL, source + row]
    if target > source:
        for row in range(source, target):
            Q.order[TRIAL, row] = Q.order[TRIAL, row + count]
    else:
        for row in range(source - 1, target - 1, -1):
            Q.order[TRIAL, row + count] = Q.order[TRIAL, row]
    for row in range(count):
        Q.order[TRIAL, target + row] = room[row]


@kernel
def insert(Q: Any, position: int, length: int, node: int) -> None:
    """Put ``node`` at ``position``."""
    for row in range(length, position, -1):
        Q.order[TRIAL, row] = Q.order[TRIAL, row - 1]
    Q.order[TRIAL, position] = node


@kernel
def remove(Q: Any, position: int, length: int) -> None:
    """Take the item at ``position`` out."""
    for row in range(position, length - 1):
        Q.order[TRIAL, row] = Q.order[TRIAL, row + 1]


@kernel
def near_target(Q: Any, node: int, length: int) -> int:
    """A position at which ``node`` would be reached cheaply; -1 if the drawn neighbour is not in the order."""
    width = Q.moves.near.shape[1]
    if width == 0:
        return -1
    first = draw(Q.random, width)
    second = draw(Q.random, width)
    position = find(Q, length, Q.moves.near[node, min(first, second)])
    return position + 1 if position >= 0 else -1


@kernel
def option(Q: Any, take: int) -> int:
    """One of the nodes that cover ``take``, -1 if there is none."""
    first = Q.tables.take[take, OPTION_FIRST]
    count = Q.tables.take[take, OPTION_LAST] - first
    return Q.tables.member[first + draw(Q.random, count)] if count > 0 else -1


@kernel
def other_option(Q: Any, node: int) -> int:
    """Another node for a take that ``node`` covers (itself if there is none)."""
    T = Q.tables
    first = T.node[node, COVER_FIRST]
    count = T.node[node, COVER_LAST] - first
    if count == 0:
        return node
    return int(option(Q, T.member[first + draw(Q.random, count)]))


@kernel
def move_block(Q: Any, length: int) -> int:
    """Move a short stretch, now and then reversed; returns the first changed position."""
    count = 1
    while count < LONGEST and count < length and draw(Q.random, 3) == 0:
        count += 1
    source = draw(Q.random, length - count + 1)
    target = -1
    if draw(Q.random, 4) > 0:
        target = near_target(Q, Q.order[TRIAL, source], length)
        if source < target < source + count:
            target = -1
        elif target > source:
            target -= count
    if target < 0:
        target = draw(Q.random, length - count + 1)
    relocate(Q, source, count, target)
    if count > 1 and draw(Q.random, 3) == 0:
        reverse(Q, target, count)
    return int(min(source, target))


@kernel
def reverse(Q: Any, begin: int, count: int) -> None:
    """Turn a stretch round, every item for its partner."""
    for row in range(count // 2):
        left = Q.order[TRIAL, begin + row]
        Q.order[TRIAL, begin + row] = Q.order[TRIAL, begin + count - 1 - row]
        Q.order[TRIAL, begin + count - 1 - row] = left
    for row in range(begin, begin + count):
        Q.order[TRIAL, row] = Q.moves.partner[Q.order[TRIAL, row]]


@kernel
def next_service(Q: Any, position: int, length: int) -> int:
    """The first position from ``position`` on, going round, that holds a service; ``length`` if none does."""
    for row in range(length):
        here = (position + row) % length
        node = Q.order[TRIAL, here]
        if Q.tables.node[node, COVER_LAST] == Q.tables.node[node, COVER_FIRST]:
            return here
    return length


@kernel
def held(Q: Any, take: int, length: int) -> bool:
    """Whether an item of the trial covers ``take``."""
    for position in range(length):
        node = Q.order[TRIAL, position]
        for row in range(Q.tables.node[node, COVER_FIRST], Q.tables.node[node, COVER_LAST]):
            if Q.tables.member[row] == take:
                return True
    return False


@kernel
def change(Q: Any, length: int) -> Any:
    """Make one random change to ``Q.trial``: (new length, first changed position)."""
    if draw(Q.random, 100) < RUINS:
        return ruin(Q, length)
    kind = draw(Q.random, 100)
    used = min(Q.length[USED], length)
    services = len(Q.moves.services)
    room = Q.order.shape[1] - length
    if length == 0 or (kind < 4 and services > 0 and room > 0):
        if services == 0 or room == 0:
            return length, length
        position = draw(Q.random, used + 1)
        insert(Q, position, length, Q.moves.services[draw(Q.random, services)])
        return length + 1, position
    position = draw(Q.random, length)
    if kind < 12 and services > 0:
        position = next_service(Q, position, length)
        if kind < 9 and position < length:
            remove(Q, position, length)
            return length - 1, position
        if position < length:
            target = draw(Q.random, used) if used > 0 else 0
            relocate(Q, position, 1, target)
            return length, min(position, target)
        position = draw(Q.random, length)
    node = Q.order[TRIAL, position]
    covers = Q.tables.node[node, COVER_LAST] > Q.tables.node[node, COVER_FIRST]
    if kind < 36:
        Q.order[TRIAL, position] = other_option(Q, node)
        if kind < 26:
            return length, position
        target = near_target(Q, Q.order[TRIAL, position], length)
        if target < 0:
            return length, position
        target = target - 1 if target > position else target
        relocate(Q, position, 1, target)
        return length, min(position, target)
    if kind < 46:
        other = draw(Q.random, length)
        Q.order[TRIAL, position] = Q.order[TRIAL, other]
        Q.order[TRIAL, other] = node
        return length, min(position, other)
    if kind < 54:
        count = 2 + draw(Q.random, min(12, length))
        begin = draw(Q.random, max(1, length - count + 1))
        reverse(Q, begin, min(count, length - begin))
        return length, begin
    if kind < 66 and covers and (position >= used or Q.states.state[position, KEPT] == 0):
        # a left-out take moves to the front of a place where it might fit, or takes the place of another
        target = draw(Q.random, max(1, used))
        if kind < 60:
            Q.order[TRIAL, position] = Q.order[TRIAL, target]
            Q.order[TRIAL, target] = node
        else:
            relocate(Q, position, 1, target)
        return length, min(position, target)
    if kind == 99 and room > 0 and len(Q.tables.take) > 0:
        take = draw(Q.random, len(Q.tables.take))
        node = option(Q, take)
        if node >= 0 and not held(Q, take, length):
            insert(Q, position, length, node)
            return length + 1, position
    return length, move_block(Q, length)
