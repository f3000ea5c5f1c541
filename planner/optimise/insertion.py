"""What still fits: left-out takes put into an order as it stands, until none fits any more."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from planner.optimise.compiled.decode import build_states
from planner.optimise.compiled.fitting import OK
from planner.optimise.moves import services_of
from planner.optimise.problem import Problem
from planner.optimise.tables import Tables, build_scratch


class Insertion:
    """Tries left-out takes at every place of an order, each way of doing them, also with a service before."""

    def __init__(self, problem: Problem, tables: Tables) -> None:
        self._problem, self._tables = problem, tables
        self._services: list[int] = services_of(problem).tolist()
        self._scratch = build_scratch(tables)

    def fill(self, order: Sequence[int], kernels: Any, halt: Callable[[], bool]) -> tuple[int, ...]:
        """``order`` with what fits put in where it costs least, most prize first; as far as ``halt`` lets it get.

        ``order`` must be feasible but for musts that are missing.
        """
        items = list(order)
        prize = self._problem.prize + self._problem.must * (1 + int(self._problem.prize.sum()))
        grown = True
        while grown and not halt():
            done = {take for node in items for take in self._problem.covers[node]}
            left = [take for take in np.argsort(-prize, kind="stable").tolist() if take not in done]
            grown = False
            for take in left:
                found = None if halt() else self._cheapest(items, take, done, kernels, halt)
                if found is not None:
                    position, put = found
                    items[position:position] = put
                    done.update(self._problem.covers[put[-1]])
                    grown = True
        return tuple(items)

    def _cheapest(
        self, items: list[int], take: int, done: set[int], kernels: Any, halt: Callable[[], bool]
    ) -> tuple[int, list[int]] | None:
        """Where and how ``take`` adds least cost; a service goes in before it only if it fits no other way."""
        nodes = [n for n, takes in enumerate(self._problem.covers) if take in takes and done.isdisjoint(takes)]
        for ways in ([[n] for n in nodes], [[service, n] for n in nodes for service in self._services]):
            best: tuple[float, int, list[int]] | None = None
            for put in ways:
                for cost, position in self._costs(items, put, kernels, halt):
                    if best is None or cost < best[0]:
                        best = cost, position, put
            if best is not None:
                return best[1], best[2]
        return None

    def _costs(
        self, items: list[int], put: list[int], kernels: Any, halt: Callable[[], bool]
    ) -> list[tuple[float, int]]:
        """Cost of the order with ``put`` at each position at which that can be done."""
        length = len(items)
        states = build_states(self._tables, length + len(put))
        whole = np.zeros(length + len(put), dtype=np.int64)
        whole[:length] = items
        kernels.evaluate(self._tables, self._scratch, states, whole, length, 0)
        found = []
        # from the end: the states before the position are then still those of the order itself
        for position in range(length, -1, -1):
            if halt():
                break
            if position < length:
                whole[position + len(put)] = items[position]
            whole[position : position + len(put)] = put
            status, _, cost, _ = kernels.evaluate(self._tables, self._scratch, states, whole, len(whole), position)
            if status == OK:
                found.append((float(cost), position))
        return found
