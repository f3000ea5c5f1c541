"""An order that grows and shrinks at its end, with the state before each item; for construction and hand orders."""

from __future__ import annotations

from typing import Any

import numpy as np

from planner.optimise.compiled.decode import EARNED, KEPT, MUSTS, PLACE, TIME, build_states
from planner.optimise.compiled.fitting import LOW, OK, TOO_FULL
from planner.optimise.problem import Problem
from planner.optimise.tables import (
    MAX_USES,
    REFILL,
    Scratch,
    Tables,
    build_scratch,
)


class Builder:
    """An order under construction.

    Parameters
    ----------
    problem, tables
        The problem and its flat form.
    kernels
        Compiled or plain kernels: anything with ``extend`` and ``step`` of `planner.optimise.compiled`.
    """

    def __init__(self, problem: Problem, tables: Tables, kernels: Any) -> None:
        self.problem = problem
        self.tables = tables
        self.kernels = kernels
        self.scratch: Scratch = build_scratch(tables)
        services = [n for n, takes in enumerate(problem.covers) if not takes and n > Problem.END]
        self.services = [n for n in services if tables.node[n, MAX_USES] > 0]
        room = 2 * problem.takes + int(tables.node[self.services, MAX_USES].clip(0, 10_000).sum()) + 2
        self.states = build_states(tables, room)
        self.items: list[int] = []
        self.careful = True  # `push_all` looks ahead to the end

    @property
    def time(self) -> int:
        """Second at which the order so far ends."""
        return int(self.states.state[len(self.items), TIME])

    @property
    def done(self) -> set[int]:
        """Takes done so far."""
        return {take for node in self.items for take in self.problem.covers[node]}

    @property
    def earned(self) -> tuple[int, int]:
        """Musts done and prize so far."""
        row = self.states.state[len(self.items)]
        return int(row[MUSTS]), int(row[EARNED])

    def push(self, node: int) -> int:
        """Append ``node`` if it can be done; the failure, or OK."""
        status = int(self.kernels.extend(self.tables, self.scratch, self.states, node, len(self.items), True))
        if status == OK:
            self.states.state[len(self.items), KEPT] = 1
            self.items.append(node)
        return status

    def pop(self) -> int:
        """Take the last node off again."""
        node = self.items.pop()
        self.kernels.retract(self.tables, self.states, node)
        return node

    def finish(self) -> tuple[int, float, int]:
        """Failure (or OK), cost and second of going to the end from here."""
        here = len(self.items)
        row = self.states.state[here]
        status, end, cost = self.kernels.step(
            self.tables, self.scratch, Problem.END, row[PLACE], row[TIME], self.states.level, here
        )
        return int(status), float(self.states.cost[here] + cost), int(end)

    def can_finish(self) -> bool:
        """Whether the end can be reached from here, or the level that forbids it can still be refilled from here."""
        status, _, _ = self.finish()
        if status != LOW:
            return status == OK
        for service in self.refills(int(self.scratch.failure[1])):
            status = self.push(service)
            if status == OK:
                self.pop()
            if status in (OK, TOO_FULL):
                return True
        return False

    def refills(self, reservoir: int) -> list[int]:
        """Services that refill ``reservoir``."""
        return [n for n in self.services if self.tables.node[n, REFILL] == reservoir]

    def push_all(self, nodes: list[int]) -> int:
        """Append all of ``nodes`` if they can be done and the end be reached behind them, else none of them."""
        before = len(self.items)
        status = OK
        for node in nodes:
            status = self.push(node)
            if status != OK:
                break
        if status == OK and self.careful and not self.can_finish():
            status = LOW
        if status != OK:
            self.cut(before)
        return status

    def cut(self, length: int) -> None:
        """Shorten the order to ``length`` items."""
        while len(self.items) > length:
            self.pop()

    def close(self) -> bool:
        """Make the end reachable: by a refill, else by dropping items from the end; whether that succeeded."""
        while True:
            status, _, _ = self.finish()
            if status == OK:
                return True
            if status == LOW:
                for service in self.refills(int(self.scratch.failure[1])):
                    if self.push(service) == OK:
                        if self.finish()[0] == OK:
                            return True
                        self.pop()
            if not self.items:
                return self._rescue()
            self.pop()

    def _rescue(self) -> bool:
        """From the start: one service alone that makes the end reachable."""
        for service in self.services:
            if self.push(service) == OK:
                if self.finish()[0] == OK:
                    return True
                self.pop()
        return False

    def order(self) -> np.ndarray[Any, np.dtype[np.int64]]:
        """The order so far."""
        return np.array(self.items, dtype=np.int64)
