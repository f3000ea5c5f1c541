"""How the optimiser scales: random weeks of 10 to 150 takes, first plan, best against bounds.

Run as ``python -m tests.bench.optimise_scaling [--seconds N] [--seed N] [TAKES ...]``.
"""

from __future__ import annotations

import argparse

from planner.optimise import solve
from planner.optimise.problem import Problem
from planner.optimise.result import Result
from tests.optimise.problems import Shape, random_problem


def week_with_an_end(takes: int, seed: int) -> Problem:
    """The first random week from ``seed`` on whose end can be reached at all."""
    while True:
        shape = Shape(takes, max(4, takes // 2), refills=1, source=True, second_reservoir=True, week=True)
        problem = random_problem(seed, shape)
        if solve(problem, seconds=0.5).objective is not None:
            return problem
        seed += 1


def row(takes: int, result: Result) -> str:
    """One line of the table."""
    assert result.objective is not None
    best = result.objective
    gap, took = 100 * result.gap, result.elapsed_s
    return (
        f"{takes:6d} {result.first_feasible_s or float('nan'):8.2f} {best.prize:6d} / {result.prize_bound:<6d}"
        f" {best.cost:10.0f} / {result.cost_bound:<10.0f} {gap:6.1f} {took:7.2f}  {result.stopped}"
    )


def main() -> None:
    """Print the table."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("takes", nargs="*", type=int, default=[10, 20, 40, 80, 150])
    parser.add_argument("--seconds", type=float, default=20.0)
    parser.add_argument("--seed", type=int, default=0)
    options = parser.parse_args()
    print(" takes  first s  prize / bound        cost / bound       gap %       s  stopped")
    for takes in options.takes:
        problem = week_with_an_end(takes, options.seed)
        print(row(takes, solve(problem, seconds=options.seconds, seed=options.seed)), flush=True)


if __name__ == "__main__":
    main()
