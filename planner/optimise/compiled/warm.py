"""Have the kernels compiled without standing still: another process compiles into the cache while this one goes on.

Run as a module, this file is that process.
"""

from __future__ import annotations

import os
import subprocess
import sys
import threading
import time
from pathlib import Path
from typing import Any

import numpy as np

from planner.optimise.compiled.anneal import anneal
from planner.optimise.compiled.branch import branch, build_branch
from planner.optimise.compiled.decode import build_states, evaluate
from planner.optimise.compiled.draws import Moves, build_search
from planner.optimise.compiled.jit import Plain, cache_folder, cache_is_warm
from planner.optimise.problem import Blocks, Calendars, Problem, Reservoirs, Services
from planner.optimise.tables import build_scratch, build_tables

ENTRIES = ("anneal", "evaluate", "branch")  # the first is missed most while it is not there
LONGEST_S = 300.0  # after which a compilation gives up, and its lock counts for nothing
LOOK_S = 0.25  # how often to look whether a kernel is there

# a child that is nobody's child: whoever started it need not wait for it
_LEAVE = """
import os, sys
if not hasattr(os, "fork") or os.fork() == 0:
    if hasattr(os, "setsid"):
        os.setsid()
    import runpy
    runpy.run_module("planner.optimise.compiled.warm", run_name="__main__")
"""


class Compiled:
    """The compiled kernels that are called from Python."""

    visits = 8_000  # of `branch` in a piece of about 0.05 s

    anneal = staticmethod(anneal)
    branch = staticmethod(branch)
    evaluate = staticmethod(evaluate)


class _Mixed:
    """Each kernel compiled if it is there, else as plain Python."""

    def __init__(self, plain: Plain, ready: frozenset[str]) -> None:
        self.anneal: Any = anneal if "anneal" in ready else plain.anneal
        self.branch: Any = branch if "branch" in ready else plain.branch
        self.evaluate: Any = evaluate if "evaluate" in ready else plain.evaluate
        self.visits = Compiled.visits if "branch" in ready else plain.visits


def kernels_now() -> Any:
    """Each kernel compiled if it can be had without a long wait, else plain."""
    return Compiled if is_warm() else _Mixed(Plain(), _warm())


def is_warm() -> bool:
    """Whether every kernel can be had without a long wait."""
    return len(_warm()) == len(ENTRIES)


def _warm() -> frozenset[str]:
    return frozenset(name for name in ENTRIES if cache_is_warm(name))


class Warmer:
    """Kernels for now: plain ones until the compiled ones are there, then those, one by one.

    They are compiled by a process of its own, which goes on if this one ends first: the next will find them.

    Parameters
    ----------
    start
        Whether to start that process if it is needed.
    """

    def __init__(self, *, start: bool = True) -> None:
        self.plain = Plain()
        self._ready = _warm()
        self._looked = time.monotonic()
        self._mixed: Any = _Mixed(self.plain, self._ready)
        if start and len(self._ready) < len(ENTRIES) and cache_folder() is not None and not _somebody_compiles():
            self._start()

    def _start(self) -> None:
        root = str(Path(__file__).parents[3])
        paths = os.pathsep.join(filter(None, [root, os.environ.get("PYTHONPATH", "")]))
        nothing = subprocess.DEVNULL
        child = subprocess.Popen(
            [sys.executable, "-c", _LEAVE],
            env={**os.environ, "PYTHONPATH": paths},
            stdin=nothing,
            stdout=nothing,
            stderr=nothing,
        )
        if hasattr(os, "fork"):
            child.wait()  # it leaves the work to a child of its own and is gone in a moment

    def _look(self) -> None:
        if len(self._ready) < len(ENTRIES) and time.monotonic() - self._looked >= LOOK_S:
            self._looked = time.monotonic()
            self._ready = _warm()
            self._mixed = _Mixed(self.plain, self._ready)

    def ready(self, name: str) -> bool:
        """Whether the compiled kernel ``name`` can be called without a long wait."""
        self._look()
        return name in self._ready

    @property
    def kernels(self) -> Any:
        """Each kernel compiled if it is ready, else plain."""
        self._look()
        return self._mixed


def _lock() -> Path | None:
    folder = cache_folder()
    return folder / "compiling.lock" if folder is not None else None


def _somebody_compiles() -> bool:
    """Whether another process holds the lock, and not since so long that it must have died."""
    lock = _lock()
    try:
        return lock is not None and time.time() - lock.stat().st_mtime < LONGEST_S
    except FileNotFoundError:
        return False


def compile_alone() -> None:
    """Compile unless another process is at it, and give up after `LONGEST_S`."""
    lock = _lock()
    if lock is None or _somebody_compiles():
        return
    lock.parent.mkdir(parents=True, exist_ok=True)
    lock.unlink(missing_ok=True)
    try:
        with lock.open("x", encoding="ascii") as file:
            file.write(str(os.getpid()))
    except FileExistsError:  # another was quicker
        return
    watch = threading.Timer(LONGEST_S, os._exit, (1,))
    watch.daemon = True
    watch.start()
    try:
        compile_all()
    finally:
        watch.cancel()
        lock.unlink(missing_ok=True)


def compile_all() -> None:
    """Call every kernel once on the smallest problem, which compiles it or loads it from the cache."""
    tables = build_tables(_nothing_to_do())
    none = np.zeros(0, dtype=np.int64)
    moves = Moves(none, np.zeros((2, 0), dtype=np.int64), np.arange(2), np.zeros((1, 1)))
    anneal(build_search(tables, moves, np.ones(2), 0), 0, 0, 1.0, 1.0)
    evaluate(tables, build_scratch(tables), build_states(tables, 0), none, 0, 0)
    branch(build_branch(tables, 0, np.zeros(2), np.zeros((0, 2))), 1)


def _nothing_to_do() -> Problem:
    def blocks(owners: tuple[int, ...]) -> Blocks:
        whole = np.zeros((*owners, 1), dtype=np.int64)
        parts = np.zeros((*owners, 1, 1))
        return Blocks(np.zeros(owners, dtype=np.int64), whole, whole, parts, parts, parts, whole == 0, parts, parts)

    none, two, zeros = np.zeros(0, dtype=np.int64), np.zeros(2, dtype=np.int64), np.zeros(2)
    return Problem(
        horizon=1,
        entry=two,
        exit=two,
        moving=two == 1,
        covers=((), ()),
        node_blocks=blocks((2,)),
        arc_blocks=blocks((1, 1)),
        place_wait_rate=np.zeros((1, 1)),
        place_wait_min=np.zeros((1, 1)),
        calendars=Calendars(np.zeros(1, dtype=np.int64), none, none),
        reservoirs=Reservoirs(np.zeros(1), np.ones(1), np.ones(1), none, none, np.zeros(0)),
        services=Services(two, two - 1, zeros, zeros, zeros, two == 1, two - 1, zeros, zeros),
        prize=none,
        must=none == 1,
    )


if __name__ == "__main__":
    compile_alone()
