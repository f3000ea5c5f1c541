"""Annealing by the clock, in the caller's thread or beside it."""

from __future__ import annotations

import threading
import time
from collections.abc import Callable, Sequence
from typing import Any

from planner.optimise.cooling import cycles, temperature
from planner.optimise.incumbent import Incumbent
from planner.optimise.insertion import Insertion
from planner.optimise.search import Annealer

FILL_AFTER_S = 3.0  # a cooling that is shorter than this is not worth the time that putting in what fits takes
OFFER_S = 0.15  # between two offers of one chain: reading an order strictly takes a while


class Chain:
    """One annealing that takes the incumbent up at the beginning of each cooling and offers what it finds.

    Parameters
    ----------
    annealer
        A search that has not begun.
    kernels
        Asked before each piece of work.
    """

    def __init__(
        self, annealer: Annealer, insertion: Insertion, incumbent: Incumbent, kernels: Callable[[], Any]
    ) -> None:
        self._annealer, self._insertion, self._incumbent = annealer, insertion, incumbent
        self._kernels = kernels
        self._offered = 0.0
        self._filled: tuple[int, ...] | None = None

    def run(self, seconds: float, halt: Callable[[], bool], between: Callable[[], None] = lambda: None) -> None:
        """Cool again and again, longer each time; ``between`` is called between pieces of work of some 0.04 s."""
        began = time.perf_counter()
        for begin, end in cycles(seconds):
            best = self._incumbent.best
            self._annealer.restart(best.order if best is not None else ())
            fine = self._incumbent.prize_proven
            while not halt() and (now := time.perf_counter() - began) < end:
                warm = temperature(max(0.0, now - begin) / (end - begin), fine=fine)
                self._annealer.kernels = self._kernels()
                self._annealer.piece(warm, end - now)
                self._offer(late=False)
                between()
            self._offer(late=True)
            if end - begin >= FILL_AFTER_S:
                self.fill(halt)

    def _offer(self, *, late: bool) -> None:
        objective = self._annealer.objective
        if objective is None or not objective.better_than(self._incumbent.objective):
            return
        now = time.perf_counter()
        if late or now - self._offered >= OFFER_S:
            self._incumbent.offer(self._annealer.order, "annealing")
            self._offered = now

    def fill(self, halt: Callable[[], bool]) -> None:
        """Put what still fits into the incumbent."""
        best = self._incumbent.best
        if best is None or halt() or best.order == self._filled:
            return
        order = self._insertion.fill(best.order, self._kernels(), halt)
        if len(order) > len(best.order):
            self._incumbent.offer(order, "insertion")
        elif not halt():
            self._filled = best.order


class Beside:
    """Jobs that run one after the other in a thread of their own and are surely over after `close`.

    Parameters
    ----------
    jobs
        What to do; each is handed a callable that says whether to stop.
    cancel
        Called repeatedly by `close` until the job at work has ended.
    """

    def __init__(self, jobs: Sequence[Callable[[Callable[[], bool]], None]], cancel: Callable[[], None]) -> None:
        self._jobs, self._cancel = jobs, cancel
        self._closing = threading.Event()
        self.error: BaseException | None = None
        self._thread = threading.Thread(target=self._run, name="beside the search")
        self._thread.start()

    def _run(self) -> None:
        try:
            for job in self._jobs:
                if not self._closing.is_set():
                    job(self._closing.is_set)
        except BaseException as error:  # handed to the caller by `close`
            self.error = error

    def close(self) -> None:
        """Stop, wait for the thread, and raise what went wrong in it."""
        self._closing.set()
        while self._thread.is_alive():
            self._cancel()
            self._thread.join(0.01)
        if self.error is not None:
            raise self.error
