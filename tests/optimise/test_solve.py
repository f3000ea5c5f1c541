"""Problems of middling size: every rule kept, bounds on the right side, nothing left running."""

from __future__ import annotations

import dataclasses
import itertools
import threading

import pytest

from planner.optimise import Progress, follow, solve
from planner.optimise.problem import Problem
from planner.optimise.result import Stopped
from tests.optimise.problems import Shape, random_problem
from tests.optimise.validator import judge

WEEK = Shape(takes=30, places=15, refills=1, source=True, second_reservoir=True, week=True)


def week(seed: int, takes: int = 30, **changes: object) -> Problem:
    return random_problem(seed, dataclasses.replace(WEEK, takes=takes, **changes))  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("seed", "changes"),
    [
        (2, {"takes": 20}),
        (3, {"takes": 40, "park": True}),
        (4, {"takes": 30, "merged": True, "precedences": 4}),
        (6, {"takes": 30, "need_full": True, "musts": 3}),
        (8, {"takes": 36, "chains": False, "musts": 2, "precedences": 3}),
    ],
)
def test_results_are_what_they_say(seed: int, changes: dict[str, object]) -> None:
    problem = week(seed, **changes)  # type: ignore[arg-type]
    result = solve(problem, seconds=2.0, seed=seed)
    judge(problem, result)
    hand = follow(problem, list(range(problem.takes)))
    if hand.objective is not None and hand.objective.missing == 0:
        assert result.objective is not None
        assert not hand.objective.better_than(result.objective)


def test_progress_begins_with_a_plan_and_only_gets_better() -> None:
    seen: list[Progress] = []
    result = solve(week(2), seconds=2.0, on_progress=seen.append)
    assert seen[0].objective is not None
    assert seen[-1].objective is not None
    assert result.objective is not None
    assert not seen[-1].objective.better_than(result.objective)
    for before, after in itertools.pairwise(seen):
        assert before.objective is not None
        assert not before.objective.better_than(after.objective)
        assert after.prize_bound <= before.prize_bound


def test_the_time_budget_ends_the_solve_and_no_thread_stays() -> None:
    threads = set(threading.enumerate())
    result = solve(week(3, takes=60), seconds=1.5)
    assert result.stopped is Stopped.TIME
    assert set(threading.enumerate()) == threads


def test_a_stop_ends_the_solve_with_the_best_so_far() -> None:
    threads = set(threading.enumerate())
    stop = threading.Event()

    def listen(progress: Progress) -> None:
        if progress.objective is not None:
            stop.set()

    result = solve(week(3, takes=60), seconds=600.0, stop=stop, on_progress=listen)
    assert result.stopped is Stopped.ASKED
    assert result.objective is not None
    assert set(threading.enumerate()) == threads


def test_the_same_seed_gives_the_same_result_if_that_is_asked_for() -> None:
    problem = week(2, takes=20)
    first, second = (solve(problem, seconds=1.0, seed=7, reproducible=True) for _ in range(2))
    assert (first.order, first.objective) == (second.order, second.objective)
    assert (first.prize_bound, first.cost_bound) == (second.prize_bound, second.cost_bound)
    assert first.stopped in (Stopped.WORK, Stopped.PROVEN)
    judge(problem, first)


def test_a_must_without_a_way_is_reported() -> None:
    problem = week(2, takes=20)
    last = problem.takes
    impossible = dataclasses.replace(
        problem,
        prize=_append(problem.prize, 1),
        must=_append(problem.must, True),
    )
    result = solve(impossible, seconds=1.5)
    assert not result.feasible
    assert result.missing_musts == (last,)
    assert result.proven_infeasible
    assert result.objective is not None
    assert result.objective.prize > 0


def _append(array, value):  # type: ignore[no-untyped-def]
    import numpy as np

    return np.concatenate([array, np.array([value], dtype=array.dtype)])


def test_nothing_to_do_is_a_result_too() -> None:
    problem = random_problem(4, Shape(takes=0, refills=0, calendars=False))
    result = solve(problem, seconds=1.0)
    assert result.objective is not None
    assert result.order == ()
    assert result.proven
    judge(problem, result)


def test_hand_orders_keep_to_the_order_given() -> None:
    problem = week(2, takes=20)
    wanted = list(reversed(range(20)))
    got = follow(problem, wanted)
    takes = [take for node in got.order for take in problem.covers[node]]
    assert takes == [take for take in wanted if take in takes]
    only = set(takes[::2])
    some = follow(problem, wanted, only=only)
    assert {take for node in some.order for take in problem.covers[node]} <= only
