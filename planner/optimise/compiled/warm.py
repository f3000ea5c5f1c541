"""Have the kernels compiled without standing still: a child process compiles into the cache while this one goes on.

Run as a module, this file is that child.
"""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import numpy as np

from planner.optimise.compiled.anneal import anneal
from planner.optimise.compiled.branch import branch, build_branch
from planner.optimise.compiled.changes import Moves, build_search
from planner.optimise.compiled.decode import build_states, evaluate
from planner.optimise.compiled.jit import Plain, cache_is_warm
from planner.optimise.problem import Blocks, Calendars, Problem, Reservoirs, Services
from planner.optimise.tables import build_scratch, build_tables


class Compiled:
    """The compiled kernels that are called from Python."""

    visits = 8_000  # of `branch` in a piece of about 0.05 s

    anneal = staticmethod(anneal)
    branch = staticmethod(branch)
    evaluate = staticmethod(evaluate)


def kernels_now() -> Any:
    """Compiled kernels if they can be had without a long wait, else plain ones."""
    return Compiled if _warm() else Plain()


def _warm() -> bool:
    return all(cache_is_warm(name) for name in ("anneal", "branch", "evaluate"))


class Warmer:
    """Kernels for now: plain ones until the compiled ones are there, then those.

    `close` ends the child process if it still runs.
    """

    def __init__(self) -> None:
        self.plain = Plain()
        self._ready = _warm()
        self._child: subprocess.Popen[bytes] | None = None
        if not self._ready:
            root = str(Path(__file__).parents[3])
            paths = os.pathsep.join(filter(None, [root, os.environ.get("PYTHONPATH", "")]))
            self._child = subprocess.Popen(
                [sys.executable, "-m", "planner.optimise.compiled.warm"],
                env={**os.environ, "PYTHONPATH": paths},
                stdin=subprocess.DEVNULL,
                stdout=subprocess.DEVNULL,
                stderr=subprocess.DEVNULL,
            )

    @property
    def ready(self) -> bool:
        """Whether compiled kernels can be called without a long wait."""
        if not self._ready and self._child is not None and self._child.poll() is not None:
            # without a folder for the cache plain kernels have to do: compiling here would break every time budget
            self._ready = self._child.returncode == 0 and _warm()
            self._child = None
        return self._ready

    @property
    def kernels(self) -> Any:
        """Compiled kernels if they are ready, else plain ones."""
        return Compiled if self.ready else self.plain

    def close(self) -> None:
        """End the child process, if any."""
        if self._child is not None:
            if self._child.poll() is None:
                self._child.terminate()
            self._child.wait()


def compile_all() -> None:
    """Call every kernel once on the smallest problem, which compiles it or loads it from the cache."""
    tables = build_tables(_nothing_to_do())
    none = np.zeros(0, dtype=np.int64)
    moves = Moves(none, np.zeros((2, 0), dtype=np.int64), np.arange(2))
    anneal(build_search(tables, moves, np.ones(2), 0), 0, 0, 1.0, 1.0)
    branch(build_branch(tables, 0, np.zeros(2), np.zeros((0, 2))), 1)
    evaluate(tables, build_scratch(tables), build_states(tables, 0), none, 0, 0)


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
    compile_all()
