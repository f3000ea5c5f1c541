"""Why a take was left out, found by trying: each way of doing it at each place of the order, also with a refill before.

The nearest miss is reported: the try that failed last and by least.
"""

from __future__ import annotations

import itertools
import time
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from enum import StrEnum
from typing import Any

import numpy as np

from planner.optimise.compiled.decode import TIME, build_states
from planner.optimise.compiled.fitting import HORIZON, LOW, NO_INTERVAL, OK, SOURCE_LOW, TOO_FULL
from planner.optimise.compiled.warm import kernels_now
from planner.optimise.problem import Ints, Problem
from planner.optimise.tables import MAX_USES, Tables, build_scratch, build_tables


class Reason(StrEnum):
    """Kinds of misses."""

    NO_WAY = "no node does it"
    PRECEDENCE = "another take would have to come first"
    ROOM = "no room"
    WINDOW = "no interval of a calendar fits"
    LEVEL = "a level would be broken"
    SOURCE = "nothing to refill from"
    FITS = "it fits as it is"
    NOT_TRIED = "no time to try"


@dataclass(frozen=True)
class Miss:
    """The nearest miss of one take.

    ``needed_s`` are the seconds the take needs with its moves at the best place, ``gap_s`` the longest stretch of
    waiting there is in the order (the rest after its end included), ``late_s`` by how much the horizon would be passed.
    For `LEVEL` and `SOURCE` the ``reservoir`` is ``short`` by that much at ``moment``; for `PRECEDENCE` ``before`` is
    the take missing. ``alone`` says that the take could be done if no other were: then it is beaten by what is done
    instead. ``node`` and ``position`` say where it was tried, ``service`` the one tried before it (-1: none).
    """

    take: int
    reason: Reason
    node: int = -1
    position: int = -1
    service: int = -1
    needed_s: int = 0
    gap_s: int = 0
    late_s: int = 0
    reservoir: int = -1
    short: float = 0.0
    moment: int = 0
    before: int = -1
    alone: bool = False


# nearer reasons are larger: what failed for time had passed every level rule up to there
_NEARNESS = {NO_INTERVAL: 1, SOURCE_LOW: 2, TOO_FULL: 2, LOW: 3, HORIZON: 4}
_REASONS = {
    NO_INTERVAL: Reason.WINDOW,
    SOURCE_LOW: Reason.SOURCE,
    TOO_FULL: Reason.LEVEL,
    LOW: Reason.LEVEL,
    HORIZON: Reason.ROOM,
}


def explain(problem: Problem, order: Sequence[int], *, seconds: float = 1.0) -> list[Miss]:
    """For each take that ``order`` leaves out, the nearest miss.

    Parameters
    ----------
    order
        A feasible order.
    seconds
        Time in all; takes share it, and what could not be tried in time says so.
    """
    kernels = kernels_now()
    tables = build_tables(problem)
    done = {take for node in order for take in problem.covers[node]}
    left = [take for take in range(problem.takes) if take not in done]
    deadline = time.perf_counter() + seconds
    misses = []
    for row, take in enumerate(left):
        share = max(0.0, deadline - time.perf_counter()) / (len(left) - row)
        misses.append(_Trial(problem, tables, kernels, tuple(order), take).nearest(time.perf_counter() + share))
    return misses


class _Trial:
    """All ways of putting one take into the order."""

    def __init__(self, problem: Problem, tables: Tables, kernels: Any, order: tuple[int, ...], take: int) -> None:
        self.problem, self.tables, self.kernels = problem, tables, kernels
        self.order, self.take = order, take
        self.scratch = build_scratch(tables)
        self.states = build_states(tables, len(order) + 3)
        self.items: Ints = np.zeros(len(order) + 3, dtype=np.int64)

    def nearest(self, until: float) -> Miss:
        """The nearest miss found before ``until``."""
        nodes = [n for n, takes in enumerate(self.problem.covers) if self.take in takes]
        nodes = [n for n in nodes if not self._done().intersection(self.problem.covers[n])]
        if not nodes:
            return Miss(self.take, Reason.NO_WAY)
        missing = [a for a, b in self.problem.before_after.tolist() if b == self.take and a not in self._done()]
        if missing:
            return Miss(self.take, Reason.PRECEDENCE, before=missing[0], alone=self._alone(nodes))
        best: tuple[tuple[float, ...], Miss] | None = None
        for node, service, position in self._ways(nodes):
            if time.perf_counter() > until:
                break
            found = self._attempt(node, service, position)
            if found is not None and (best is None or found[0] > best[0]):
                best = found
                if found[1].reason is Reason.FITS:
                    break
        if best is None:
            return Miss(self.take, Reason.NOT_TRIED, gap_s=self._longest_gap())
        miss = replace(best[1], gap_s=self._longest_gap(), alone=self._alone(nodes))
        return replace(miss, late_s=self._late(miss)) if miss.reason is Reason.ROOM else miss

    def _late(self, miss: Miss) -> int:
        """Seconds by which the whole order with the take in it would pass the horizon."""
        put = [miss.node] if miss.service < 0 else [miss.service, miss.node]
        length = self._read_with(put, miss.position)
        longer = self.tables._replace(horizon=2 * self.problem.horizon + miss.needed_s)
        status, _, _, end = self.kernels.evaluate(longer, self.scratch, self.states, self.items, length, 0)
        # beyond the horizon there may be no people, and nothing to keep the level up: then what was seen must do
        return int(end) - self.problem.horizon if status == OK else miss.late_s

    def _done(self) -> set[int]:
        return {take for node in self.order for take in self.problem.covers[node]}

    def _ways(self, nodes: list[int]) -> Iterator[tuple[int, int, int]]:
        services = [n for n, takes in enumerate(self.problem.covers) if not takes and self.tables.node[n, MAX_USES] > 0]
        for service in [-1, *(n for n in services if n > Problem.END)]:
            for node in nodes:
                for position in range(len(self.order) + 1):
                    yield node, service, position

    def _attempt(self, node: int, service: int, position: int) -> tuple[tuple[float, ...], Miss] | None:
        """How near one way comes: sortable nearness and the miss; None if it is not allowed at all."""
        put = [node] if service < 0 else [service, node]
        length = self._read_with(put, position)
        status, where, _, _ = self.kernels.evaluate(self.tables, self.scratch, self.states, self.items, length, 0)
        status, where = int(status), int(where)
        needed = self._needed(put, position)
        if status == OK:
            return (9.0,), Miss(self.take, Reason.FITS, node, position, service, needed_s=needed)
        if status not in _REASONS:
            return None
        short = float(self.scratch.amount[1])
        _, reservoir, moment = self.scratch.failure.tolist()
        late = round(short) if status == HORIZON else 0
        passed = where - position >= len(put)
        nearness = (float(passed), _NEARNESS[status], -short, -needed)
        levels = status in (LOW, SOURCE_LOW, TOO_FULL)
        miss = Miss(
            self.take,
            _REASONS[status] if status != NO_INTERVAL or not passed else Reason.ROOM,
            node,
            position,
            service,
            needed_s=needed,
            late_s=late,
            reservoir=reservoir if levels else -1,
            short=short if levels else 0.0,
            moment=moment,
        )
        return nearness, miss

    def _read_with(self, put: list[int], position: int) -> int:
        items = [*self.order[:position], *put, *self.order[position:]]
        self.items[: len(items)] = items
        return len(items)

    def _needed(self, put: list[int], position: int) -> int:
        """Seconds the inserted items take here with their moves, less the move they replace; waits left out."""
        before = self.order[position - 1] if position else Problem.START
        after = self.order[position] if position < len(self.order) else Problem.END
        path = [before, *put, after]
        moves = sum(self._arc_seconds(a, b) for a, b in itertools.pairwise(path))
        own = sum(int(s) for n in put for s in self._own_seconds(n))
        return moves + own - self._arc_seconds(before, after)

    def _arc_seconds(self, a: int, b: int) -> int:
        blocks = self.problem.arc_blocks
        pair = int(self.problem.exit[a]), int(self.problem.entry[b])
        return int(blocks.seconds[pair][: blocks.count[pair]].sum())

    def _own_seconds(self, node: int) -> list[int]:
        blocks = self.problem.node_blocks
        return [int(second) for second in blocks.seconds[node][: blocks.count[node]]]

    def _longest_gap(self) -> int:
        """Longest stretch of the order that is neither a move nor a node: a wait, or the rest after the end."""
        length = self._read_with([], 0)
        status, _, _, end = self.kernels.evaluate(self.tables, self.scratch, self.states, self.items, length, 0)
        if status != OK:
            return 0
        longest = self.problem.horizon - int(end)
        for position, node in enumerate(self.order):
            before = self.order[position - 1] if position else Problem.START
            spent = self._arc_seconds(before, node) + sum(self._own_seconds(node))
            took = int(self.states.state[position + 1, TIME] - self.states.state[position, TIME])
            longest = max(longest, took - spent)
        return longest

    def _alone(self, nodes: list[int]) -> bool:
        """Whether the take could be done with nothing else but one service at most."""
        services = [n for n, takes in enumerate(self.problem.covers) if not takes and self.tables.node[n, MAX_USES] > 0]
        for node in nodes:
            for way in ([node], *([s, node] for s in services), *([node, s] for s in services)):
                self.items[: len(way)] = way
                if self.kernels.evaluate(self.tables, self.scratch, self.states, self.items, len(way), 0)[0] == OK:
                    return True
        return False
