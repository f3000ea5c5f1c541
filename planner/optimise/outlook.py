"""When every node could be done from here: one look at all calendars at once, levels left out."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from planner.optimise.problem import Blocks, Floats, Ints, Problem
from planner.optimise.tables import ENTRY, EXIT, Tables

NEVER = 1 << 40


@dataclass(frozen=True)
class _Fits:
    """Intervals of one block of many owners: earliest start and latest start in each, shape (owners, intervals)."""

    begin: Ints
    last: Ints
    seconds: Ints

    def after(self, moment: Ints) -> Ints:
        """Ends of the blocks, each started as early as it fits from ``moment`` on; `NEVER` or more if it never does."""
        start = np.maximum(moment[:, None], self.begin)
        fits = start <= self.last
        first = fits.argmax(axis=1)
        rows = np.arange(len(first))
        return np.asarray(np.where(fits[rows, first], start[rows, first], NEVER) + self.seconds, dtype=np.int64)


class Outlook:
    """Earliest ends of all nodes from a place and a moment.

    Blocks follow each other as early as each may; that a chain must not be interrupted, and every level, is left to the
    decoder. So the ends are never too late, and mostly right.
    """

    def __init__(self, problem: Problem, tables: Tables) -> None:
        self._problem = problem
        calendars = problem.calendars
        counts = np.diff(calendars.first)
        width = max(1, int(counts.max(initial=1)))
        # the last row stands for any time
        self._begin = np.full((len(counts) + 1, width), NEVER, dtype=np.int64)
        self._finish = np.full((len(counts) + 1, width), -1, dtype=np.int64)
        for calendar, count in enumerate(counts.tolist()):
            rows = slice(int(calendars.first[calendar]), int(calendars.first[calendar]) + count)
            self._begin[calendar, :count] = calendars.begin[rows]
            self._finish[calendar, :count] = calendars.finish[rows]
        self._begin[-1, 0], self._finish[-1, 0] = 0, NEVER
        self._entry = tables.node[:, ENTRY]
        self._latest = tables.latest[tables.node[:, EXIT]]
        self._own = self._fits(problem.node_blocks, slice(None))
        self._arcs: dict[int, list[_Fits]] = {}

    def ends(self, place: int, moment: int) -> Floats:
        """Second at which each node would end, infinite if it or the way to the end afterwards has no time, (N,)."""
        if place not in self._arcs:
            self._arcs[place] = self._fits(self._problem.arc_blocks, (place, self._entry))
        at = np.full(len(self._entry), moment, dtype=np.int64)
        for fits in (*self._arcs[place], *self._own):
            at = fits.after(at)
        return np.where(at <= self._latest, at, np.inf)

    def _fits(self, blocks: Blocks, owners: Any) -> list[_Fits]:
        count = blocks.count[owners]
        found = []
        for index in range(int(count.max(initial=0))):
            there = index < count
            calendar = np.where(there, blocks.calendar[..., index][owners], -1)
            seconds = np.where(there, blocks.seconds[..., index][owners], 0)
            last = self._finish[calendar] - seconds[:, None]
            found.append(_Fits(self._begin[calendar], last, seconds))
        return found
