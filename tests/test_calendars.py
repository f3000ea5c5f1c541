"""Calendars, against sets of whole seconds and against hand-counted hours."""

from __future__ import annotations

from datetime import datetime, time
from itertools import pairwise
from zoneinfo import ZoneInfo

from hypothesis import given
from hypothesis import strategies as st

from planner.calendars import Calendar, both, same_all_through, tidy, weekly, without
from planner.clock import Clock

VIENNA = ZoneInfo("Europe/Vienna")
HOUR = 3600
DAY = 24 * HOUR

intervals = st.lists(st.tuples(st.integers(0, 40), st.integers(0, 40)), max_size=6)
calendars = intervals.map(tidy)


def seconds(calendar: Calendar) -> set[int]:
    return {second for begin, finish in calendar for second in range(begin, finish)}


def assert_disjoint(calendar: Calendar) -> None:
    assert all(begin < finish for begin, finish in calendar)
    assert all(one[1] <= other[0] for one, other in pairwise(calendar))


@given(intervals)
def test_tidy_keeps_every_second_once_and_joins_what_touches(raw: list[tuple[int, int]]) -> None:
    assert_disjoint(tidy(raw))
    assert all(one[1] < other[0] for one, other in pairwise(tidy(raw)))
    assert seconds(tidy(raw)) == {second for begin, finish in raw for second in range(begin, finish)}


@given(calendars, calendars)
def test_both_and_without_are_set_operations(first: Calendar, second: Calendar) -> None:
    assert_disjoint(both(first, second))
    assert_disjoint(without(first, second))
    assert seconds(both(first, second)) == seconds(first) & seconds(second)
    assert seconds(without(first, second)) == seconds(first) - seconds(second)


def test_shifts_that_touch_stay_apart() -> None:
    shifts = ((0, 10), (10, 20))
    assert both(shifts, ((5, 15),)) == ((5, 10), (10, 15))
    assert without(shifts, ((5, 6),)) == ((0, 5), (6, 10), (10, 20))


@given(st.lists(calendars, max_size=4), st.integers(1, 3))
def test_a_stretch_has_the_same_people_all_through(several: list[Calendar], count: int) -> None:
    found = same_all_through(several, count)
    everyone = [seconds(calendar) for calendar in several]
    assert_disjoint(found)
    assert seconds(found) == {second for second in range(41) if sum(second in one for one in everyone) >= count}
    for begin, finish in found:
        assert sum(set(range(begin, finish)) <= one for one in everyone) >= count


def test_the_longest_stretch_keeps_an_overlap() -> None:
    early, late, midday = ((0, 10),), ((8, 30),), ((5, 12),)
    # one of them: late has 22 s whole; early keeps 0-8; midday has nothing left but 8-12, which is late's
    assert same_all_through([early, late, midday], 1) == ((0, 8), (8, 30))
    # two of them: early and midday 5-10, late and midday 8-12, early and late 8-10
    assert same_all_through([early, late, midday], 2) == ((5, 10), (10, 12))
    assert same_all_through([early, late], 3) == ()


MONDAY = Clock(datetime(2031, 3, 3, 8, 30, tzinfo=VIENNA))
WORKDAYS = frozenset(range(5))


def test_office_hours_are_cut_at_start_and_end() -> None:
    hours = weekly(MONDAY, 2 * DAY, WORKDAYS, time(8), time(18))
    # from Monday 08:30: Monday 18:00 is 9.5 h, Tuesday 08:00 is 23.5 h and 18:00 33.5 h, Wednesday 08:00 is 47.5 h
    assert hours == ((0, 34200), (84600, 120600), (171000, 172800))


def test_a_night_runs_into_the_next_day_and_into_the_week() -> None:
    clock = Clock(datetime(2031, 3, 4, 2, tzinfo=VIENNA))  # Tuesday 02:00, within Monday's night
    nights = weekly(clock, 2 * DAY, frozenset({0, 1}), time(20), time(7))
    assert nights == ((0, 5 * HOUR), (18 * HOUR, 29 * HOUR))


def test_midnight_as_the_end_is_the_end_of_the_day() -> None:
    clock = Clock(datetime(2031, 3, 3, 0, tzinfo=VIENNA))
    assert weekly(clock, 3 * DAY, frozenset({1}), time(18), time(0)) == ((42 * HOUR, 48 * HOUR),)
    assert weekly(clock, 3 * DAY, frozenset({1}), time(0), time(0)) == ((24 * HOUR, 48 * HOUR),)
    assert weekly(clock, 3 * DAY, frozenset(range(7)), time(0), time(0)) == ((0, 72 * HOUR),)


def test_hours_follow_the_wall_clock_through_a_change() -> None:
    clock = Clock(datetime(2031, 3, 28, 8, tzinfo=VIENNA))  # Friday; the clocks go forward on Sunday at 02:00
    hours = weekly(clock, 4 * DAY, frozenset({4, 0}), time(8), time(18))
    # Monday 08:00 by the wall is 3 d less one hour of true time: 71 h
    assert hours == ((0, 10 * HOUR), (71 * HOUR, 81 * HOUR))
    nights = weekly(clock, 4 * DAY, frozenset({5}), time(22), time(6))  # Saturday 22:00, 38 h on; 7 h long
    assert nights == ((38 * HOUR, 45 * HOUR),)


def test_no_days_are_no_hours() -> None:
    assert weekly(MONDAY, DAY, frozenset(), time(8), time(18)) == ()
