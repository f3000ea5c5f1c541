"""The week's clock. Clock changes: Directive 2000/84/EC (last Sunday of March and of October, 01:00 UTC)."""

from __future__ import annotations

from datetime import UTC, datetime, time, timedelta, timezone
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.clock import Clock, iso_datetime, localise, zone

VIENNA = ZoneInfo("Europe/Vienna")


def vienna(month: int, day: int, hour: int = 0, minute: int = 0, fold: int = 0) -> datetime:
    return datetime(2031, month, day, hour, minute, tzinfo=VIENNA, fold=fold)


def naive(month: int, day: int, hour: int, minute: int = 0) -> datetime:
    return vienna(month, day, hour, minute).replace(tzinfo=None)


MONDAY = Clock(vienna(3, 3, 8, 30))


def test_seconds_of_an_ordinary_week() -> None:
    assert MONDAY.second(vienna(3, 3, 8, 30)) == 0
    assert MONDAY.second(vienna(3, 4, 20)) == 35 * 3600 + 1800
    assert MONDAY.second(vienna(3, 3, 8)) == -1800
    assert MONDAY.moment(35 * 3600 + 1800) == vienna(3, 4, 20)


@pytest.mark.parametrize(("month", "day", "hours"), [(3, 29, 23), (10, 25, 25), (3, 22, 24)])
def test_elapsed_time_is_true_time_across_a_clock_change(month: int, day: int, hours: int) -> None:
    clock = Clock(vienna(month, day, 12))
    noon = vienna(month, day + 1, 12)
    assert clock.second(noon) == hours * 3600
    assert clock.moment(hours * 3600).replace(tzinfo=None) == noon.replace(tzinfo=None)


@given(st.integers(0, 70 * 86400))
def test_moment_and_second_undo_each_other(second: int) -> None:
    clock = Clock(vienna(3, 1, 8))
    assert clock.second(clock.moment(second)) == second


def test_a_clock_needs_a_named_zone() -> None:
    with pytest.raises(ValueError, match="time zone"):
        Clock(naive(3, 3, 8))
    with pytest.raises(ValueError, match="time zone"):
        Clock(datetime(2031, 3, 3, 8, tzinfo=timezone(timedelta(hours=1))))


@pytest.mark.parametrize("name", ["Europe/Nowhere", "", "../../etc/passwd", "None", "\x00"])
def test_an_unknown_zone_is_a_value_error(name: str) -> None:
    with pytest.raises(ValueError, match="IANA time zone such as"):
        zone(name)


def test_wall_times_that_a_change_skips_or_repeats() -> None:
    with pytest.raises(ValueError, match="2031-03-30 02:30 does not exist in Europe/Vienna"):
        localise(naive(3, 30, 2, 30), VIENNA)
    with pytest.raises(ValueError, match="2031-10-26 02:30 happens twice in Europe/Vienna"):
        localise(naive(10, 26, 2, 30), VIENNA)
    with_offset = datetime(2031, 10, 26, 2, 30, tzinfo=timezone(timedelta(hours=1)))  # the second of the two
    assert localise(with_offset, VIENNA).astimezone(UTC) == datetime(2031, 10, 26, 1, 30, tzinfo=UTC)
    assert localise(naive(3, 30, 3, 0), VIENNA).astimezone(UTC) == datetime(2031, 3, 30, 1, 0, tzinfo=UTC)


@pytest.mark.parametrize("year", [1, 1969, 2200, 9999])
def test_years_no_plan_is_made_for(year: int) -> None:
    with pytest.raises(ValueError, match="year from 1970 to 2199"):
        localise(datetime(year, 1, 1, tzinfo=UTC), VIENNA)


def test_a_wall_time_on_the_day_of_a_change() -> None:
    clock = Clock(vienna(3, 29, 12))
    assert clock.wall(vienna(3, 30), time(2, 30)) == vienna(3, 30, 3, 30)  # skipped: moves past the gap
    assert clock.wall(vienna(10, 26), time(2, 30)).astimezone(UTC).hour == 0  # repeated: the first, still summer time


@pytest.mark.parametrize(
    ("written", "moment"),
    [
        ("Tue 20:00", vienna(3, 4, 20)),
        ("tuesday 20:00:30", vienna(3, 4, 20) + timedelta(seconds=30)),
        ("Mon 08:30", vienna(3, 3, 8, 30)),
        ("Mon 08:29", vienna(3, 10, 8, 29)),
        ("Sun 23:59", vienna(3, 9, 23, 59)),
        ("2031-03-04T20:00", vienna(3, 4, 20)),
        ("2031-03-04 20:00", vienna(3, 4, 20)),
        ("2031-03-04T19:00Z", vienna(3, 4, 20)),
        (naive(3, 4, 20), vienna(3, 4, 20)),
        (datetime(2031, 3, 4, 19, tzinfo=UTC), vienna(3, 4, 20)),
    ],
)
def test_times_as_files_write_them(written: datetime | str, moment: datetime) -> None:
    assert MONDAY.read(written) == moment


@pytest.mark.parametrize("written", ["", "Tue", "20:00", "Tue 24:00", "Tue 20:60", "2031-03-04", "2031-02-30T08:00"])
def test_what_is_no_time(written: str) -> None:
    with pytest.raises(ValueError, match=r"^expected a "):
        MONDAY.read(written)


def test_a_weekday_before_the_start_means_next_week_even_where_this_weeks_is_skipped() -> None:
    sunday = Clock(vienna(3, 30, 8))
    assert sunday.read("Sun 02:30") == vienna(4, 6, 2, 30)


def test_a_date_alone_spells_no_datetime() -> None:
    assert iso_datetime("2031-03-04") is None
    assert iso_datetime(" 2031-03-04T20:00 ") == naive(3, 4, 20)
