"""A solve in the background: start it, watch it, stop it with the best so far, leave it."""

from __future__ import annotations

import threading
import time
from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum

from planner.desk.desk import plan_request
from planner.files import Request
from planner.plan import Plan
from planner.planning import Progress


class SolveState(StrEnum):
    """Where a solve is."""

    RUNNING = "running"
    STOPPING = "stopping"
    DONE = "done"
    FAILED = "failed"


@dataclass(frozen=True, slots=True)
class Effort:
    """How long to search, and from which start; see `planner.desk.plan_request`."""

    seconds: float = 30.0
    seed: int = 0
    reproducible: bool = False


@dataclass(frozen=True, slots=True)
class Snapshot:
    """A solve at one instant. ``plan`` is there when it is done, ``error`` when it failed."""

    state: SolveState
    progress: Progress | None
    elapsed_s: float
    plan: Plan | None = None
    error: BaseException | None = None


class Solve:
    """One solve on a thread of its own, which does not keep the process alive.

    ``on_change`` is called from that thread with every report and at the end.
    """

    def __init__(self, request: Request, effort: Effort, on_change: Callable[[], None] | None = None) -> None:
        self.request = request
        self.effort = effort
        self._on_change = on_change
        self._stop = threading.Event()
        self._lock = threading.Lock()
        self._progress: Progress | None = None
        self._plan: Plan | None = None
        self._error: BaseException | None = None
        self._began_s = time.monotonic()
        self._ended_s: float | None = None
        self._thread = threading.Thread(target=self._run, name="solve", daemon=True)
        self._thread.start()

    @property
    def running(self) -> bool:
        """Whether its thread is still at work."""
        return self._thread.is_alive()

    def stop(self) -> None:
        """Ask for the best so far."""
        self._stop.set()

    def leave(self, patience_s: float = 0.5) -> bool:
        """Ask it to stop and wait a little; whether it has ended."""
        self._on_change = None
        self._stop.set()
        self._thread.join(patience_s)
        return not self.running

    def wait(self, seconds: float | None = None) -> Snapshot:
        """Wait for its end, at most so long."""
        self._thread.join(seconds)
        return self.snapshot()

    def snapshot(self) -> Snapshot:
        """How it stands."""
        with self._lock:
            end_s = time.monotonic() if self._ended_s is None else self._ended_s
            if self._error is not None:
                state = SolveState.FAILED
            elif self._plan is not None:
                state = SolveState.DONE
            else:
                state = SolveState.STOPPING if self._stop.is_set() else SolveState.RUNNING
            return Snapshot(state, self._progress, end_s - self._began_s, self._plan, self._error)

    def _run(self) -> None:
        plan, error = None, None
        try:
            plan = plan_request(
                self.request,
                seconds=self.effort.seconds,
                seed=self.effort.seed,
                reproducible=self.effort.reproducible,
                on_progress=self._report,
                stop=self._stop,
            )
        except BaseException as caught:  # handed over to whoever reads the snapshot
            error = caught
        with self._lock:
            self._plan, self._error, self._ended_s = plan, error, time.monotonic()
        self._changed()

    def _report(self, progress: Progress) -> None:
        with self._lock:
            self._progress = progress
        self._changed()

    def _changed(self) -> None:
        listener = self._on_change
        if listener is not None:
            listener()
