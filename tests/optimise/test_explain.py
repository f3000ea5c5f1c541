"""Reasons for what was left out are found by trying, and their numbers are those of the problem."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest

from planner.optimise import evaluate, explain, solve
from planner.optimise.misses import Reason
from planner.optimise.problem import Blocks, Calendars, Problem, Reservoirs, Services
from tests.optimise.problems import Shape, random_problem
from tests.optimise.test_exact import small_problem

HOUR = 3600


def two_takes(
    *,
    horizon: int = 10 * HOUR,
    seconds: tuple[int, int] = (6 * HOUR, 6 * HOUR),
    use: tuple[float, float] = (0.0, 0.0),
    window: tuple[int, int] | None = None,
) -> Problem:
    """Two takes in one place, nothing between them; the second may have a window of its own."""
    none = np.zeros(0, dtype=np.int64)
    four = np.zeros(4, dtype=np.int64)
    zeros = np.zeros((4, 1, 1))
    node = Blocks(
        count=np.array([0, 0, 1, 1]),
        seconds=np.array([[0], [0], [seconds[0]], [seconds[1]]]),
        calendar=np.array([[-1], [-1], [-1], [0 if window else -1]]),
        use=np.array([0.0, 0.0, *use]).reshape(4, 1, 1),
        start_min=zeros,
        end_min=zeros,
        wait_ok=np.ones((4, 1), dtype=np.bool_),
        wait_rate=zeros,
        wait_min=zeros,
    )
    one = np.zeros((1, 1, 1, 1))
    flat = np.zeros((1, 1, 1), dtype=np.int64)
    arc = Blocks(np.zeros((1, 1), dtype=np.int64), flat, flat, one, one, one, flat == 0, one, one)
    rows = [window] if window else []
    return Problem(
        horizon=horizon,
        entry=four,
        exit=four,
        moving=four == 1,
        covers=((), (), (0,), (1,)),
        node_blocks=node,
        arc_blocks=arc,
        place_wait_rate=np.zeros((1, 1)),
        place_wait_min=np.zeros((1, 1)),
        calendars=Calendars(
            np.array([0, len(rows)]),
            np.array([r[0] for r in rows], dtype=int),
            np.array([r[1] for r in rows], dtype=int),
        ),
        reservoirs=Reservoirs(np.array([10.0]), np.array([10.0]), np.array([1.0]), none, none, np.zeros(0)),
        services=Services(
            four, four - 1, np.zeros(4), np.zeros(4), np.zeros(4), four == 1, four - 1, np.zeros(4), np.zeros(4)
        ),
        prize=np.array([2, 1]),
        must=np.zeros(2, dtype=np.bool_),
    )


def test_no_room_is_told_with_what_is_needed_and_what_there_is() -> None:
    (miss,) = explain(two_takes(), [2])
    assert (miss.take, miss.reason) == (1, Reason.ROOM)
    assert miss.needed_s == 6 * HOUR
    assert miss.gap_s == 4 * HOUR
    assert miss.late_s == 2 * HOUR
    assert miss.alone


def test_a_level_is_told_with_what_is_short() -> None:
    (miss,) = explain(two_takes(horizon=20 * HOUR, use=(7.0, 5.0)), [2])
    assert (miss.reason, miss.reservoir) == (Reason.LEVEL, 0)
    assert miss.short == pytest.approx(2.0)
    assert miss.moment == 12 * HOUR


def test_a_window_is_told() -> None:
    (miss,) = explain(two_takes(horizon=20 * HOUR, window=(0, 5 * HOUR)), [2])
    assert miss.reason is Reason.WINDOW
    assert not miss.alone


def test_a_take_that_waits_for_another_names_it() -> None:
    problem = dataclasses.replace(two_takes(seconds=(11 * HOUR, HOUR)), before_after=np.array([[0, 1]]))
    misses = {miss.take: miss for miss in explain(problem, [])}
    assert misses[0].reason is Reason.ROOM
    assert (misses[1].reason, misses[1].before) == (Reason.PRECEDENCE, 0)


def test_a_take_without_a_node_has_no_way() -> None:
    problem = dataclasses.replace(two_takes(), covers=((), (), (0,), (0,)))
    misses = explain(problem, [2])
    assert [(miss.take, miss.reason) for miss in misses] == [(1, Reason.NO_WAY)]


@pytest.mark.parametrize("seed", range(0, 60, 3))
def test_what_is_left_out_of_an_optimum_never_fits_as_it_is(seed: int) -> None:
    """Prizes are positive, so a take that fitted would have been done."""
    problem = small_problem(seed)
    result = solve(problem, seconds=10.0)
    if result.objective is None:
        return
    misses = explain(problem, result.order)
    assert [miss.take for miss in misses] == list(result.left_out)
    for miss in misses:
        assert miss.reason not in (Reason.FITS, Reason.NOT_TRIED)
        if miss.node >= 0:
            put = [miss.node] if miss.service < 0 else [miss.service, miss.node]
            order = [*result.order[: miss.position], *put, *result.order[miss.position :]]
            assert evaluate(problem, order).objective is None


def test_a_long_list_is_explained_in_little_time_and_whole() -> None:
    problem = random_problem(3, Shape(takes=60, places=20, week=True))
    result = solve(problem, seconds=1.0)
    misses = explain(problem, result.order, seconds=0.5)
    assert len(misses) == len(result.left_out)
