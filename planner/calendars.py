"""Calendars as sorted, disjoint half-open intervals of whole seconds, and the few operations planning needs."""

from __future__ import annotations

from collections.abc import Iterable
from datetime import time, timedelta

from planner.clock import Clock

Interval = tuple[int, int]
Calendar = tuple[Interval, ...]


def tidy(intervals: Iterable[Interval]) -> Calendar:
    """Sorted union of any intervals; empty ones vanish, touching ones join."""
    merged: list[Interval] = []
    for begin, finish in sorted(interval for interval in intervals if interval[0] < interval[1]):
        if merged and begin <= merged[-1][1]:
            merged[-1] = (merged[-1][0], max(finish, merged[-1][1]))
        else:
            merged.append((begin, finish))
    return tuple(merged)


def both(first: Calendar, second: Calendar) -> Calendar:
    """Seconds that lie in both calendars; intervals that touch in either stay apart."""
    return tuple(sorted((max(a, c), min(b, d)) for a, b in first for c, d in second if max(a, c) < min(b, d)))


def without(first: Calendar, second: Calendar) -> Calendar:
    """Seconds of ``first`` that are not in ``second``; intervals of ``first`` that touch stay apart."""
    left = list(first)
    for begin, finish in second:
        pieces = (part for a, b in left for part in ((a, min(b, begin)), (max(a, finish), b)))
        left = [part for part in pieces if part[0] < part[1]]
    return tuple(sorted(left))


def same_all_through(calendars: list[Calendar], count: int) -> Calendar:
    """Stretches in which the same ``count`` calendars are open from begin to finish.

    Where stretches of different groups overlap, the longer one keeps the overlap: the intervals are disjoint, and
    touching ones stay apart, since nothing may run from one group's stretch into another's.
    """
    found: list[Interval] = []
    for begin in {interval[0] for calendar in calendars for interval in calendar}:
        ends = sorted((b for calendar in calendars for a, b in calendar if a <= begin < b), reverse=True)
        if len(ends) >= count:  # whoever stays longest from here on makes the longest stretch that begins here
            found.append((begin, ends[count - 1]))
    kept: list[Interval] = []
    for interval in sorted(set(found), key=lambda each: (each[0] - each[1], each)):
        kept += without((interval,), tuple(kept))
    return tuple(sorted(kept))


def weekly(clock: Clock, horizon_s: int, days: frozenset[int], opens: time, closes: time) -> Calendar:
    """The wall-clock hours ``opens``–``closes`` on weekdays ``days`` (0 = Monday), cut to ``[0, horizon_s)``.

    ``closes`` at or before ``opens`` runs into the next day; 00:00 as ``closes`` is the end of the day.
    """
    intervals = []
    day = clock.start - timedelta(days=1)
    while clock.second(day) <= horizon_s + 86400:
        if day.weekday() in days:
            last = day if closes > opens else day + timedelta(days=1)
            begin, finish = clock.second(clock.wall(day, opens)), clock.second(clock.wall(last, closes))
            intervals.append((max(0, begin), min(horizon_s, finish)))
        day += timedelta(days=1)
    return tidy(intervals)
