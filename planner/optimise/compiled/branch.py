"""Depth-first branch and bound over all orders: every prefix is also read as a whole order, so nothing is left out.

Two prefixes with the same takes done are never compared: levels and waits make the later one possibly the better.
"""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from planner.optimise.compiled.decode import EARNED, MUSTS, PLACE, TIME, States, build_states, extend, retract
from planner.optimise.compiled.fitting import OK
from planner.optimise.compiled.jit import entry, kernel
from planner.optimise.compiled.step import END_NODE, step
from planner.optimise.problem import Floats, Ints
from planner.optimise.tables import MUST, PRIZE, Scratch, Tables, build_scratch

NONE = 1e300
# entries of Branch.floor
RATE, TAIL = range(2)


class Branch(NamedTuple):
    """The state of one search; a call leaves off and the next goes on.

    ``order`` (2, n): the prefix and the best order, ``length`` (2,); ``choice`` (n + 1,): the next node to try at each
    depth, 0 on arrival. ``value`` (2, 4) as in annealing: here and best. ``floor`` (2,): least priced burn a second,
    and the reduced cost of the way to the end less what services can save. ``take_floor`` (T, 2): least reduced cost
    and seconds of each take.
    """

    tables: Tables
    scratch: Scratch
    states: States
    order: Ints
    length: Ints
    choice: Ints
    value: Floats
    floor: Floats
    take_floor: Floats


def build_branch(tables: Tables, longest: int, floor: Floats, take_floor: Floats) -> Branch:
    """A search that has not begun."""
    return Branch(
        tables=tables,
        scratch=build_scratch(tables),
        states=build_states(tables, longest + 1),
        order=np.zeros((2, longest + 1), dtype=np.int64),
        length=np.zeros(2, dtype=np.int64),
        choice=np.zeros(longest + 2, dtype=np.int64),
        value=np.full((2, 4), NONE),
        floor=np.ascontiguousarray(floor, dtype=np.float64),
        take_floor=np.ascontiguousarray(take_floor, dtype=np.float64),
    )


@kernel
def record(B: Any, depth: int) -> None:
    """Read the prefix as a whole order and keep it if it is the best."""
    S = B.states
    status, end, cost = step(B.tables, B.scratch, END_NODE, S.state[depth, PLACE], S.state[depth, TIME], S.level, depth)
    if status != OK:
        return
    B.value[0, 0] = -float(S.state[depth, MUSTS])
    B.value[0, 1] = -float(S.state[depth, EARNED])
    B.value[0, 2] = S.cost[depth] + cost
    B.value[0, 3] = float(end)
    for column in range(4):
        slack = 1e-9 if column == 2 else 0.0
        if B.value[0, column] > B.value[1, column] + slack:
            return
        if B.value[0, column] < B.value[1, column] - slack:
            break
        if column == 3:
            return
    for column in range(4):
        B.value[1, column] = B.value[0, column]
    for row in range(depth):
        B.order[1, row] = B.order[0, row]
    B.length[1] = depth


@kernel
def hopeless(B: Any, depth: int) -> bool:
    """Whether nothing that begins with the prefix can be better than the best: by musts, by prize, by cost."""
    T = B.tables
    S = B.states
    now = S.state[depth, TIME]
    musts = float(S.state[depth, MUSTS])
    prize = float(S.state[depth, EARNED])
    cost = S.cost[depth] + B.floor[RATE] * (T.horizon - now) + B.floor[TAIL]
    for take in range(len(T.take)):
        if S.seen[take] == 0 and now + B.take_floor[take, 1] <= T.horizon:
            musts += T.take[take, MUST]
            prize += T.take[take, PRIZE]
            cost += B.take_floor[take, 0]
    if -musts != B.value[1, 0]:
        return bool(-musts > B.value[1, 0])
    if -prize != B.value[1, 1]:
        return bool(-prize > B.value[1, 1])
    # now everything that earns is needed; only what earns nothing may stay undone
    for take in range(len(T.take)):
        spare = T.take[take, PRIZE] == 0 and T.take[take, MUST] == 0
        if spare and S.seen[take] == 0 and now + B.take_floor[take, 1] <= T.horizon:
            cost -= max(0.0, B.take_floor[take, 0])
    return bool(cost > B.value[1, 2] + 1e-7)


@entry
def branch(B: Any, budget: int) -> bool:
    """Go on for at most ``budget`` visits; whether all orders have been dealt with."""
    T = B.tables
    depth = B.length[0]
    nodes = len(T.node)
    while budget > 0:
        if B.choice[depth] == 0:
            budget -= 1
            record(B, depth)
            B.choice[depth] = 2
            if hopeless(B, depth):
                B.choice[depth] = nodes
        node = B.choice[depth]
        while node < nodes and extend(T, B.scratch, B.states, node, depth, False) != OK:
            node += 1
        if node < nodes:
            B.choice[depth] = node + 1
            B.order[0, depth] = node
            depth += 1
            B.choice[depth] = 0
        elif depth == 0:
            return True
        else:
            depth -= 1
            retract(T, B.states, B.order[0, depth])
        B.length[0] = depth
    return False
