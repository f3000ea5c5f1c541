"""Weekdays and times of day as files write them."""

from __future__ import annotations

from datetime import UTC, date, datetime, time

import pytest

from planner.files.hours import read_datetime, read_days, read_time, write_days


@pytest.mark.parametrize(
    ("written", "days"),
    [
        ("Mon-Fri", {0, 1, 2, 3, 4}),
        ("mon – fri", {0, 1, 2, 3, 4}),
        ("Monday-Friday", {0, 1, 2, 3, 4}),
        ("Mon, Wed, Fri", {0, 2, 4}),
        ("Sat Sun", {5, 6}),
        ("Fri-Mon", {4, 5, 6, 0}),
        ("Mon-Tue, Sat", {0, 1, 5}),
        ("Wed", {2}),
        ("Mon,,Tue", {0, 1}),
        ("daily", set(range(7))),
        ("every day", set(range(7))),
    ],
)
def test_weekdays(written: str, days: set[int]) -> None:
    assert read_days(written) == days
    assert read_days(write_days(read_days(written))) == days


@pytest.mark.parametrize("written", ["", "Mo-Fr", "Mon-Fri-Sun", "1-5", 3, None, "Mon-"])
def test_what_are_no_weekdays(written: object) -> None:
    with pytest.raises(ValueError, match="expected weekdays such as"):
        read_days(written)


@pytest.mark.parametrize(
    ("written", "at"), [("08:30", time(8, 30)), ("8:30", time(8, 30)), ("24:00", time(0)), ("00:00", time(0))]
)
def test_times_of_day(written: str, at: time) -> None:
    assert read_time(written) == at


@pytest.mark.parametrize("written", ["24:01", "12:60", "8", "8.30", "", 8, None])
def test_what_is_no_time_of_day(written: object) -> None:
    with pytest.raises(ValueError, match='such as "08:30"'):
        read_time(written)


def test_a_date_and_time_needs_both() -> None:
    moment = datetime(2031, 3, 3, 8, 30, tzinfo=UTC)
    assert read_datetime(moment) is moment
    assert read_datetime("2031-03-03T08:30+00:00") == moment
    for written in (date(2031, 3, 3), "2031-03-03", "Mon 08:30", 5, None):
        with pytest.raises(ValueError, match="expected a date and time such as"):
            read_datetime(written)
