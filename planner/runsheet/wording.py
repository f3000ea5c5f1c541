"""How the sheets write numbers, times and other people's text."""

from __future__ import annotations

import math
import unicodedata
from dataclasses import dataclass
from datetime import datetime

from planner.clock import Clock

MINUTE_S = 60
HOUR_S = 3600
DAY_S = 86400

# Marks that reorder the text around them; text that needs a direction is isolated by the page instead.
_REORDERING = frozenset("\u061c\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")


_WEEKDAYS = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")
_MONTHS = (
    *("January", "February", "March", "April", "May", "June"),
    *("July", "August", "September", "October", "November", "December"),
)


def clean(text: str) -> str:
    """Text from a user on one line, without control characters, lone surrogates or marks that reorder other text."""
    kept = (
        " " if unicodedata.category(sign) in ("Cc", "Zl", "Zp") else sign
        for sign in text
        if unicodedata.category(sign) != "Cs" and sign not in _REORDERING
    )
    return " ".join("".join(kept).split())


def fixed(value: float, decimals: int) -> str:
    """A number with so many decimals, a true minus sign, and no sign on zero."""
    text = f"{value:.{decimals}f}"
    if float(text) == 0:
        return text.lstrip("-")
    return text.replace("-", "−")


def signed(value: float, decimals: int) -> str:
    """As `fixed`, with a plus sign on what is positive: a set-point's polarity is never left to guess."""
    text = fixed(value, decimals)
    return text if text.startswith("−") or float(text) == 0 else f"+{text}"


def significant(value: float, digits: int = 4) -> str:
    """A number to so many significant digits, without exponent and trailing zeros."""
    if value == 0 or not math.isfinite(value):
        return fixed(value, 0) if math.isfinite(value) else str(value)
    decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
    text = fixed(value, decimals)
    return text.rstrip("0").rstrip(".") if "." in text else text


def tesla(field_T: float) -> str:
    """A field set-point, to 0.1 mT."""
    return f"{signed(field_T, 4)} T"


def ampere(current_A: float) -> str:
    """A current set-point, to 1 mA."""
    return f"{signed(current_A, 3)} A"


def kelvin(temperature_K: float) -> str:
    """A temperature, below 1 K in mK."""
    if temperature_K < 1:
        return f"{significant(temperature_K * 1000)} mK"
    return f"{significant(temperature_K)} K"


def per_minute(rate_per_s: float, unit: str) -> str:
    """A rate given per second, written per minute."""
    return f"{significant(rate_per_s * MINUTE_S)} {unit}/min"


def duration(seconds: float) -> str:
    """A length of time: "45 s", "3 min 20 s", "53 min", "2 h 05 min", "6 h"."""
    whole = round(seconds)
    if whole < 10 * MINUTE_S:
        minutes, rest = divmod(whole, MINUTE_S)
        parts = [f"{minutes} min"] if minutes else []
        return " ".join(parts + ([f"{rest} s"] if rest or not minutes else []))
    minutes = round(whole / MINUTE_S)
    hours, minutes = divmod(minutes, 60)
    if not hours:
        return f"{minutes} min"
    return f"{hours} h {minutes:02d} min" if minutes else f"{hours} h"


def elapsed(seconds: int) -> str:
    """Time since the week's start: "+17:42", "+2 d 03:05"."""
    days, rest = divmod(seconds, DAY_S)
    hours, rest = divmod(rest, HOUR_S)
    text = f"{hours:02d}:{rest // MINUTE_S:02d}"
    return f"+{days} d {text}" if days else f"+{text}"


def day_name(moment: datetime) -> str:
    """A date in words, the same in every locale."""
    return f"{_WEEKDAYS[moment.weekday()]} {moment.day} {_MONTHS[moment.month - 1]} {moment.year}"


@dataclass(frozen=True, slots=True)
class WallTimes:
    """Writes seconds of a week as wall times; names the zone's state where the week has a clock change."""

    clock: Clock
    clock_changes: bool

    @staticmethod
    def of(clock: Clock, horizon_s: int) -> WallTimes:
        """For a week of that length."""
        first, last = clock.moment(0), clock.moment(horizon_s)
        return WallTimes(clock, first.utcoffset() != last.utcoffset())

    def time(self, second: int) -> str:
        """Hours and minutes; seconds are dropped, so nobody is told a later time than is meant."""
        moment = self.clock.moment(second)
        return f"{moment:%H:%M} {moment:%Z}" if self.clock_changes else f"{moment:%H:%M}"

    def weekday(self, second: int) -> str:
        """Short weekday."""
        return day_name(self.clock.moment(second))[:3]

    def day_time(self, second: int) -> str:
        """Short weekday and time."""
        return f"{self.weekday(second)} {self.time(second)}"

    def later(self, second: int, than: int) -> str:
        """Time alone on the same day, with the weekday otherwise."""
        same = self.clock.moment(second).date() == self.clock.moment(than).date()
        return self.time(second) if same else self.day_time(second)
