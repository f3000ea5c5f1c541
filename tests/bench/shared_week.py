"""How the shared week's points grow with time: best at 1, 2, 5, 10, 20 and 30 s, with bounds, seed by seed.

Run as ``python -m tests.bench.shared_week [--seconds N] [--seeds 0 1 2] [--cold]``. With ``--cold`` each solve runs in
a process of its own with an empty cache of compiled kernels, as the first solve on a fresh machine does.
"""

from __future__ import annotations

import argparse
import os
import subprocess
import sys
import tempfile
from pathlib import Path

from planner.files import read_week
from planner.optimise import solve
from planner.optimise.result import Result
from planner.planning.compile import compile_week

WEEK = Path(__file__).parents[2] / "example_plans" / "shared_week.toml"
MOMENTS_S = (1, 2, 5, 10, 20, 30, 60, 120)


def row(seed: int, result: Result, seconds: float) -> str:
    """One line of the table."""
    assert result.objective is not None
    best = [
        max((e.objective.prize for e in result.events if e.elapsed_s <= moment and not e.objective.missing), default=0)
        for moment in MOMENTS_S
        if moment <= seconds
    ]
    points = " ".join(f"{value:6d}" for value in best)
    cost_h, bound_h = result.objective.cost / 3600, result.cost_bound / 3600
    return (
        f"{seed:4d} {result.first_feasible_s or float('nan'):6.2f} {points} {result.objective.prize:6d} / "
        f"{result.prize_bound:6d}  {cost_h:6.1f} / {bound_h:6.1f}  {result.elapsed_s:6.2f}"
    )


def solve_cold(seed: int, seconds: float) -> None:
    """Print the line of a solve that finds no compiled kernels."""
    with tempfile.TemporaryDirectory() as folder:
        command = [sys.executable, "-m", "tests.bench.shared_week", "--bare", "--seeds", str(seed)]
        command += ["--seconds", str(seconds)]
        subprocess.run(command, env={**os.environ, "NUMBA_CACHE_DIR": folder}, check=True)


def main() -> None:
    """Print the table."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--seconds", type=float, default=30.0)
    parser.add_argument("--seeds", nargs="*", type=int, default=[0, 1, 2])
    parser.add_argument("--cold", action="store_true")
    parser.add_argument("--bare", action="store_true", help="no heading, and the cache as it is")
    options = parser.parse_args()
    if not options.bare:
        moments = " ".join(f"{f'{moment} s':>6s}" for moment in MOMENTS_S if moment <= options.seconds)
        print(f"seed  first {moments}  prize /  bound  cost h /  bound       s", flush=True)
    if options.cold:
        for seed in options.seeds:
            solve_cold(seed, options.seconds)
        return
    from planner.optimise.compiled.warm import compile_all, kernels_now

    if not options.bare:
        compile_all()
        assert kernels_now().__name__ == "Compiled", "the kernels' cache cannot be written"
    problem = compile_week(read_week(WEEK)).problem
    for seed in options.seeds:
        result = solve(problem, seconds=options.seconds, seed=seed)
        print(row(seed, result, options.seconds), flush=True)


if __name__ == "__main__":
    main()
