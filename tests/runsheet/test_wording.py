"""Numbers, times and other people's text. Expected strings are written out by hand; no outside source is needed."""

from __future__ import annotations

from datetime import datetime
from zoneinfo import ZoneInfo

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.clock import Clock
from planner.runsheet.wording import (
    WallTimes,
    ampere,
    clean,
    duration,
    elapsed,
    kelvin,
    per_minute,
    significant,
    tesla,
)


@pytest.mark.parametrize(
    ("field_T", "written"), [(8.14021, "+8.1402 T"), (-0.5, "−0.5000 T"), (0.0, "0.0000 T"), (-0.00001, "0.0000 T")]
)
def test_a_field_carries_its_sign(field_T: float, written: str) -> None:
    assert tesla(field_T) == written


def test_currents_and_rates() -> None:
    assert ampere(-85.3) == "−85.300 A"
    assert per_minute(0.28 / 60, "T") == "0.28 T/min"
    assert per_minute(110 / 60, "A") == "110 A/min"


@pytest.mark.parametrize(
    ("value", "written"),
    [(0.0217412, "0.02174"), (123456.0, "123456"), (0.0, "0"), (2.0, "2"), (-0.00123449, "−0.001234")],
)
def test_significant_digits_have_no_exponent(value: float, written: str) -> None:
    assert significant(value) == written


@given(st.floats(min_value=1e-9, max_value=1e9))
def test_significant_digits_read_back_within_half_a_digit(value: float) -> None:
    assert float(significant(value)) == pytest.approx(value, rel=5.01e-4)


@pytest.mark.parametrize(
    ("temperature_K", "written"), [(0.015, "15 mK"), (0.9, "900 mK"), (0.0123, "12.3 mK"), (1.0, "1 K"), (4.2, "4.2 K")]
)
def test_temperatures(temperature_K: float, written: str) -> None:
    assert kelvin(temperature_K) == written


@pytest.mark.parametrize(
    ("seconds", "written"),
    [
        (0, "0 s"),
        (45, "45 s"),
        (60, "1 min"),
        (200, "3 min 20 s"),
        (3180, "53 min"),
        (7500, "2 h 05 min"),
        (21600, "6 h"),
        (3599, "1 h"),
    ],
)
def test_durations(seconds: int, written: str) -> None:
    assert duration(seconds) == written


def test_time_since_the_start() -> None:
    assert elapsed(0) == "+00:00"
    assert elapsed(17 * 3600 + 42 * 60 + 59) == "+17:42"
    assert elapsed(2 * 86400 + 3 * 3600 + 300) == "+2 d 03:05"


@given(st.text())
def test_clean_text_is_one_line_without_controls(text: str) -> None:
    kept = clean(text)
    assert kept == clean(kept)
    assert kept.isprintable() or not any(ord(sign) < 32 or 127 <= ord(sign) < 160 for sign in kept)
    assert not set(kept) & set("\n\r\t\x00\x1b\u202e\u2066\u2028")
    kept.encode("utf-8")


def test_clean_keeps_words() -> None:
    assert clean("ν = 2/3,\n µ\t≤ 5 🧲") == "ν = 2/3, µ ≤ 5 🧲"
    assert clean("a\ud800b\u202ec") == "abc"


def test_wall_times_name_the_zone_only_in_a_week_with_a_clock_change() -> None:
    vienna = ZoneInfo("Europe/Vienna")
    plain = WallTimes.of(Clock(datetime(2031, 3, 3, 8, 30, tzinfo=vienna)), 86400)
    assert plain.time(3600) == "09:30"
    assert plain.later(86400, 0) == "Tue 08:30"
    # the clocks go back at 03:00 summer time on 26 October 2031 (last Sunday of October, directive 2000/84/EC)
    change = WallTimes.of(Clock(datetime(2031, 10, 26, 1, 30, tzinfo=vienna)), 86400)
    assert [change.time(s) for s in (0, 3600, 7200, 10800)] == ["01:30 CEST", "02:30 CEST", "02:30 CET", "03:30 CET"]
