"""Annealing over orders, in pieces: every call does a number of trials and returns with all its state in arrays."""

from __future__ import annotations

import math
from typing import Any

from planner.optimise.compiled.changes import change, option
from planner.optimise.compiled.decode import EARNED, KEPT, MUSTS, TIME, copy_state, decode
from planner.optimise.compiled.draws import BEST, CURRENT, NO_END, TRIAL, USED, draw
from planner.optimise.compiled.jit import entry, kernel
from planner.optimise.tables import (
    COVER_FIRST,
    COVER_LAST,
)


@kernel
def copy_value(Q: Any, source: int, target: int) -> None:
    """Copy one row of ``value``."""
    for column in range(4):
        Q.value[target, column] = Q.value[source, column]


@kernel
def measure(Q: Any, states: Any, length: int, begin: int, row: int) -> int:
    """Read an order into ``value[row]``; returns its used length (0 also if the end cannot be reached at all)."""
    used, cost, end = decode(Q.tables, Q.scratch, states, Q.order[row], length, begin)
    if used < 0:
        # no end can be reached: the more is done, the sooner one may be
        Q.value[row, 0] = NO_END
        Q.value[row, 1] = -float(states.state[length, EARNED])
        Q.value[row, 2] = 0.0
        Q.value[row, 3] = -float(states.state[length, TIME])
        return length
    Q.value[row, 0] = -float(states.state[used, MUSTS])
    Q.value[row, 1] = -float(states.state[used, EARNED])
    Q.value[row, 2] = cost
    Q.value[row, 3] = float(end)
    return int(used)


@kernel
def better(value: Any, left: int, right: int) -> bool:
    """Whether row ``left`` is better than row ``right``: musts, then prize, then cost, then end."""
    for column in range(4):
        slack = 1e-7 if column == 2 else 0.0
        if value[left, column] < value[right, column] - slack:
            return True
        if value[left, column] > value[right, column] + slack:
            return False
    return False


@kernel
def energy(Q: Any, row: int) -> float:
    """The single number by which annealing compares."""
    weighted = Q.weight[0] * Q.value[row, 0] + Q.weight[1] * Q.value[row, 1]
    return float(weighted + Q.value[row, 2] + 1e-4 * Q.value[row, 3])


@kernel
def accept(Q: Any, length: int, begin: int, used: int) -> None:
    """Make the trial the current order."""
    for row in range(begin, length):
        Q.order[CURRENT, row] = Q.order[TRIAL, row]
        Q.states.state[row, KEPT] = Q.trial_states.state[row, KEPT]
        copy_state(Q.trial_states, row + 1, Q.states, row + 1)
    copy_value(Q, TRIAL, CURRENT)
    Q.length[CURRENT] = length
    Q.length[USED] = used


@kernel
def keep_best(Q: Any) -> bool:
    """Copy the current order to the best if it is better: what it skips is left out of the copy."""
    if Q.value[CURRENT, 0] >= NO_END or not better(Q.value, CURRENT, BEST):
        return False
    count = 0
    for row in range(Q.length[USED]):
        if Q.states.state[row, KEPT] == 1:
            Q.order[BEST, count] = Q.order[CURRENT, row]
            count += 1
    Q.length[BEST] = count
    copy_value(Q, CURRENT, BEST)
    return True


@kernel
def restart(Q: Any, length: int) -> bool:
    """Begin from the first ``length`` items of the current order, what they leave out being appended."""
    for take in range(len(Q.tables.take)):
        Q.trial_states.seen[take] = 0
    for row in range(length):
        node = Q.order[CURRENT, row]
        for cover in range(Q.tables.node[node, COVER_FIRST], Q.tables.node[node, COVER_LAST]):
            Q.trial_states.seen[Q.tables.member[cover]] = 1
    for take in range(len(Q.tables.take)):
        if Q.trial_states.seen[take] == 0 and length < Q.order.shape[1]:
            node = option(Q, take)
            if node >= 0:
                Q.order[CURRENT, length] = node
                length += 1
    Q.length[CURRENT] = length
    Q.length[USED] = measure(Q, Q.states, length, 0, CURRENT)
    return bool(keep_best(Q))


@entry
def anneal(Q: Any, fresh: int, trials: int, hot: float, cold: float) -> int:
    """Do ``trials`` trials while cooling from ``hot`` to ``cold``; returns how often the best became better.

    With ``fresh >= 0`` the first so many items of the current order have just been written from outside.
    """
    found = 0
    if fresh >= 0 and restart(Q, fresh):
        found += 1
    temperature = hot
    ratio = (cold / hot) ** (1.0 / max(1, trials))
    for _ in range(trials):
        temperature *= ratio
        length = Q.length[CURRENT]
        for row in range(length):
            Q.order[TRIAL, row] = Q.order[CURRENT, row]
        length, begin = change(Q, length)
        if begin >= length and length >= Q.length[CURRENT]:
            continue
        S = Q.trial_states
        for row in range(begin):
            S.state[row, KEPT] = Q.states.state[row, KEPT]
        copy_state(Q.states, begin, S, begin)
        used = measure(Q, S, length, begin, TRIAL)
        worse = energy(Q, TRIAL) - energy(Q, CURRENT)
        if worse > 0.0:
            chance = (1 + draw(Q.random, 1000000)) * 1e-6
            if worse > -temperature * math.log(chance):
                continue
        accept(Q, length, begin, used)
        if keep_best(Q):
            found += 1
    return found
