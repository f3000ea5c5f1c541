"""What an order means: the strict reading, which fails at the first thing that cannot be done, and the skipping one.

Both remember the state before every item, so that a changed order is read again only from the change on.
"""

from __future__ import annotations

import math
from typing import Any, NamedTuple

import numpy as np

from planner.optimise.compiled.fitting import HORIZON, OK, PRECEDENCE, TOO_OFTEN, TWICE
from planner.optimise.compiled.jit import entry, kernel
from planner.optimise.compiled.step import END_NODE, step
from planner.optimise.problem import Floats, Ints
from planner.optimise.tables import (
    BEFORE_FIRST,
    BEFORE_LAST,
    COVER_FIRST,
    COVER_LAST,
    EXIT,
    LEVEL,
    MAX_USES,
    MUST,
    PRIZE,
    Tables,
)

# columns of States.state
TIME, PLACE, EARNED, MUSTS, KEPT = range(5)


class States(NamedTuple):
    """The state before each item of an order of at most ``n`` items.

    ``state`` (n + 1, 5): time, place, prize, musts done, and whether the item there was done, not skipped;
    ``level`` (n + 1, R); ``cost`` (n + 1,); ``seen`` (takes + nodes,): how often each is done so far.
    """

    state: Ints
    level: Floats
    cost: Floats
    seen: Ints


def build_states(tables: Tables, length: int) -> States:
    """Room for the states of an order of at most ``length`` items, the first one set."""
    states = States(
        state=np.zeros((length + 1, 5), dtype=np.int64),
        level=np.zeros((length + 1, tables.reservoir.shape[1])),
        cost=np.zeros(length + 1),
        seen=np.zeros(len(tables.take) + len(tables.node), dtype=np.int64),
    )
    states.state[0, PLACE] = tables.node[0, EXIT]
    states.level[0] = tables.reservoir[LEVEL]
    return states


@kernel
def copy_state(source: Any, row: int, target: Any, target_row: int) -> None:
    """Copy the state before one item."""
    for column in range(KEPT):
        target.state[target_row, column] = source.state[row, column]
    target.cost[target_row] = source.cost[row]
    for reservoir in range(source.level.shape[1]):
        target.level[target_row, reservoir] = source.level[row, reservoir]


@kernel
def remember(T: Any, S: Any, items: Any, begin: int) -> None:
    """Set ``seen`` to what the kept items before position ``begin`` do."""
    for row in range(len(S.seen)):
        S.seen[row] = 0
    takes = len(T.take)
    for position in range(begin):
        if S.state[position, KEPT] == 1:
            node = items[position]
            S.seen[takes + node] += 1
            for row in range(T.node[node, COVER_FIRST], T.node[node, COVER_LAST]):
                S.seen[T.member[row]] = 1


@kernel
def admitted(T: Any, S: Any, node: int) -> int:
    """OK if ``node`` may come next for what is marked as done, else the failure."""
    first = T.node[node, COVER_FIRST]
    last = T.node[node, COVER_LAST]
    if first == last:
        return TOO_OFTEN if S.seen[len(T.take) + node] >= T.node[node, MAX_USES] else OK
    for row in range(first, last):
        take = T.member[row]
        if S.seen[take] > 0:
            return TWICE
        for before in range(T.take[take, BEFORE_FIRST], T.take[take, BEFORE_LAST]):
            if S.seen[T.member[before]] == 0:
                return PRECEDENCE
    return OK


@kernel
def retract(T: Any, S: Any, node: int) -> None:
    """Undo what `extend` marked."""
    S.seen[len(T.take) + node] -= 1
    for row in range(T.node[node, COVER_FIRST], T.node[node, COVER_LAST]):
        S.seen[T.member[row]] = 0


@kernel
def extend(T: Any, W: Any, S: Any, node: int, position: int, direct: bool) -> int:
    """Do ``node`` at ``position`` and write the state after it, or return the failure and write nothing.

    With ``direct`` the end must be within reach by its arc from there.
    """
    status = admitted(T, S, node)
    if status != OK:
        return int(status)
    status, end, cost = step(T, W, node, S.state[position, PLACE], S.state[position, TIME], S.level, position)
    if status != OK:
        return int(status)
    if direct and end > T.latest[T.node[node, EXIT]]:
        return HORIZON
    after = position + 1
    S.state[after, TIME] = end
    S.state[after, PLACE] = T.node[node, EXIT]
    S.cost[after] = S.cost[position] + cost
    S.state[after, EARNED] = S.state[position, EARNED]
    S.state[after, MUSTS] = S.state[position, MUSTS]
    for reservoir in range(len(W.now)):
        S.level[after, reservoir] = W.now[reservoir]
    S.seen[len(T.take) + node] += 1
    for row in range(T.node[node, COVER_FIRST], T.node[node, COVER_LAST]):
        take = T.member[row]
        S.seen[take] = 1
        S.state[after, EARNED] += T.take[take, PRIZE]
        S.state[after, MUSTS] += T.take[take, MUST]
    return OK


@entry
def evaluate(T: Any, W: Any, S: Any, items: Any, length: int, begin: int) -> Any:
    """Read an order strictly from position ``begin`` on: (status, position, cost, end).

    ``position`` is where it failed (``length``: on the way to the end). States before ``begin`` must stand.
    """
    remember(T, S, items, begin)
    for position in range(begin, length):
        status = extend(T, W, S, items[position], position, False)
        if status != OK:
            return status, position, 0.0, 0
        S.state[position, KEPT] = 1
    status, end, cost = step(T, W, END_NODE, S.state[length, PLACE], S.state[length, TIME], S.level, length)
    return status, length, S.cost[length] + cost, end


@kernel
def decode(T: Any, W: Any, S: Any, items: Any, length: int, begin: int) -> Any:
    """Read an order from position ``begin`` on, skipping what cannot be done: (used length, cost, end).

    Skipped is also what leaves too little time for the arc to the end. Items at and after the used length are dropped
    because the end could not be reached behind them; -1 if it cannot be reached at all. Prize and musts stand in the
    states at the used length.
    """
    remember(T, S, items, begin)
    for position in range(begin, length):
        status = extend(T, W, S, items[position], position, True)
        S.state[position, KEPT] = 1 if status == OK else 0
        if status != OK:
            copy_state(S, position, S, position + 1)
    used = length
    while True:
        status, end, cost = step(T, W, END_NODE, S.state[used, PLACE], S.state[used, TIME], S.level, used)
        if status == OK:
            return used, S.cost[used] + cost, end
        used -= 1
        while used >= 0 and S.state[used, KEPT] == 0:
            used -= 1
        if used < 0:
            return -1, math.inf, 0
