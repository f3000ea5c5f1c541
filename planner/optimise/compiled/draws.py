"""The state of the annealing, and drawing and finding in it."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from planner.optimise.compiled.decode import States, build_states
from planner.optimise.compiled.jit import kernel
from planner.optimise.problem import Floats, Ints
from planner.optimise.tables import MAX_USES, Scratch, Tables, build_scratch

FAILED = 1e300
NO_END = 1e6  # stands for musts missing where even the end cannot be reached
CURRENT, TRIAL, BEST, USED = range(4)
ROOM = 16  # items that may be out of the order at a time


class Moves(NamedTuple):
    """What the moves draw from: all services, near predecessors, reversed partners.

    ``near`` (N, K): nodes after which the node is cheaply reached; ``partner`` (N,): the alternative for a reversed
    stretch (itself if none); ``reach`` (P, P): static cost of the arcs, seconds and priced use.
    """

    services: Ints
    near: Ints
    partner: Ints
    reach: Floats


class Search(NamedTuple):
    """The state of one annealing run; scalars live in arrays so that a call can leave them changed.

    Rows of ``order`` are the current, the trial and the best; ``length`` and rows of ``value`` (3, 4) belong to them:
    minus musts done, minus prize, cost, end. ``length[3]`` is how much of the current order is used. ``room``
    and ``when`` hold what is out of the order, and roughly when each item of the trial begins. ``random`` (2,):
    the states of two generators; ``weight`` (2,): of a must and of a point.
    """

    tables: Tables
    scratch: Scratch
    moves: Moves
    states: States
    trial_states: States
    order: Ints
    room: Ints
    when: Ints
    length: Ints
    value: Floats
    random: Ints
    weight: Floats


def build_search(tables: Tables, moves: Moves, weight: Floats, seed: int) -> Search:
    """A search that has yet to be given an order (`restart`)."""
    takes = len(tables.take)
    most = 2 * takes + int(np.minimum(tables.node[moves.services, MAX_USES], 40).sum()) + 8
    state = (seed * 2654435761 + 97) % 2147483562 + 1
    return Search(
        tables=tables,
        scratch=build_scratch(tables),
        moves=moves,
        states=build_states(tables, most),
        trial_states=build_states(tables, most),
        order=np.zeros((3, most), dtype=np.int64),
        room=np.zeros(ROOM, dtype=np.int64),
        when=np.zeros(most + 1, dtype=np.int64),
        length=np.zeros(4, dtype=np.int64),
        value=np.full((3, 4), FAILED),
        random=np.array([state, (seed * 40503 + 12345) % 2147483398 + 1], dtype=np.int64),
        weight=weight,
    )


@kernel
def draw(random: Any, below: int) -> int:
    """A number from 0 to ``below - 1`` (L'Ecuyer 1988, Commun. ACM 31, 742: two combined congruential generators)."""
    random[0] = random[0] * 40014 % 2147483563
    random[1] = random[1] * 40692 % 2147483399
    return int((random[0] - random[1]) % 2147483562 % below)


@kernel
def find(Q: Any, length: int, node: int) -> int:
    """Position of ``node`` in the trial, -1 if it is not there."""
    for position in range(length):
        if Q.order[TRIAL, position] == node:
            return position
    return -1
