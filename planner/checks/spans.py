"""Calendars of people and places as sorted spans of the week's seconds, worked out from the wall clock."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from datetime import datetime, timedelta

from planner.clock import Clock
from planner.files.hours import Hours

Span = tuple[int, int]
Spans = tuple[Span, ...]
DAY_S = 86_400


def united(spans: Iterable[Span]) -> Spans:
    """The union of spans; those that touch become one."""
    result: list[Span] = []
    for begin, end in sorted(spans):
        if end <= begin:
            continue
        if result and result[-1][1] >= begin:
            result[-1] = (result[-1][0], max(result[-1][1], end))
        else:
            result.append((begin, end))
    return tuple(result)


def shared(first: Spans, second: Spans) -> Spans:
    """The seconds that lie in both; spans of one that overlap stay apart."""
    parts = []
    for begin, end in first:
        for other_begin, other_end in second:
            low, high = max(begin, other_begin), min(end, other_end)
            if low < high:
                parts.append((low, high))
    return tuple(sorted(set(parts)))


def less(first: Spans, second: Spans) -> Spans:
    """The seconds of ``first`` that are not in ``second``."""
    result: list[Span] = []
    for begin, end in first:
        at = begin
        for other_begin, other_end in second:
            if other_end <= at or other_begin >= end:
                continue
            if other_begin > at:
                result.append((at, other_begin))
            at = max(at, other_end)
        if at < end:
            result.append((at, end))
    return united(result)


def same_all_through(count: int, calendars: Sequence[Spans]) -> Spans:
    """The longest stretches through which the same ``count`` of the calendars are there; they may overlap."""
    found = set()
    for begin in {begin for spans in calendars for begin, _ in spans}:
        ends = sorted((end for spans in calendars for start, end in spans if start <= begin < end), reverse=True)
        if len(ends) >= count:
            found.add((begin, ends[count - 1]))
    return tuple(sorted(found))


def lies_in(spans: Spans, begin: int, end: int) -> bool:
    """Whether the whole stretch lies inside one span; ending exactly at its end passes."""
    return any(span_begin <= begin and end <= span_end for span_begin, span_end in spans)


def touching(spans: Iterable[Span], begin: int, end: int) -> Span | None:
    """The first span that shares time with the stretch, or None."""
    return next((span for span in spans if span[0] < end and begin < span[1]), None)


def next_fit(spans: Spans, not_before: int, seconds: int) -> int | None:
    """The earliest second at which a stretch fits whole into one span, or None."""
    starts = (max(begin, not_before) for begin, end in spans if end - max(begin, not_before) >= seconds)
    return min(starts, default=None)


def weekly(clock: Clock, hours: Iterable[Hours], first_s: int, last_s: int) -> Spans:
    """Hours that come back every week, as spans that begin between a day before ``first_s`` and ``last_s``.

    The wall clock rules: across a clock change a span is an hour shorter or longer. ``to`` at or before ``from`` is
    on the next day.
    """
    first_day = clock.moment(first_s).date() - timedelta(days=1)
    days = (clock.moment(last_s).date() - first_day).days + 1
    spans = []
    for row in hours:
        runs_over = row.to <= row.from_
        for offset in range(days):
            day = datetime.combine(first_day + timedelta(days=offset), row.from_)
            if day.weekday() in row.days:
                last = day + timedelta(days=1) if runs_over else day
                spans.append((clock.second(clock.wall(day, row.from_)), clock.second(clock.wall(last, row.to))))
    return united(spans)
