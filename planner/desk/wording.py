"""How the desk writes numbers, times and other people's text for a screen."""

from __future__ import annotations

import math

from planner.clock import WEEKDAYS, Clock
from planner.runsheet.wording import clean, kelvin
from planner.runsheet.wording import duration as whole_duration

__all__ = ["clean", "day_time", "duration", "kelvin", "plain_amount", "rounded", "tesla"]


def rounded(value: float, digits: int = 4) -> str:
    """A number to so many significant digits, with a power of ten only where it is very large or small."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else str(value)
    size = math.floor(math.log10(abs(value)))
    if not -5 <= size < 7:
        head, _, power = f"{value:.{digits - 1}e}".partition("e")
        return f"{head.rstrip('0').rstrip('.')}e{int(power)}".replace("-", "−")
    text = f"{value:.{max(0, digits - 1 - size)}f}"
    return (text.rstrip("0").rstrip(".") if "." in text else text).replace("-", "−")


def plain_amount(value: float, unit: str) -> str:
    """A quantity in words, from the number in its inside unit; ``unit`` is how it is usually written."""
    if unit == "min":
        return duration(value)
    if unit == "mK":
        return kelvin(value)
    per_minute = {"T/min": "T/min", "A/min": "A/min"}
    if unit in per_minute:
        return f"{rounded(value * 60)} {unit}"
    if unit == "L/h":
        return f"{rounded(value * 3600)} L/h"
    if unit == "L/h/A":
        return f"{rounded(value * 3600)} L/h/A"
    if unit in ("mV/s", "mohm", "mm"):
        return f"{rounded(value * 1e3)} {unit}"
    if unit.startswith("cm^-2"):
        return f"{rounded(value * 1e-4)} {unit}"
    if unit == "mm^2":
        return f"{rounded(value * 1e6)} {unit}"
    return f"{rounded(value)} {unit}"


def tesla(field_T: float) -> str:
    """A field to 1 mT, with its sign."""
    return "0 T" if round(field_T, 3) == 0 else f"{field_T:+.3f} T".replace("-", "−")


def duration(seconds: float) -> str:
    """A length of time: "0.3 s", "45 s", "3 min 20 s", "2 h 05 min", "3 d 4 h"."""
    if 0 < seconds < 10 and seconds != round(seconds):
        return f"{rounded(seconds)} s"
    hours = round(seconds / 3600)
    return f"{hours // 24} d {hours % 24} h" if hours >= 48 else whole_duration(seconds)


def day_time(clock: Clock, second: float) -> str:
    """Short weekday and time; the zone's abbreviation where a clock change makes the time of day ambiguous."""
    moment = clock.moment(second)
    twice = moment.replace(fold=0).utcoffset() != moment.replace(fold=1).utcoffset()
    return f"{WEEKDAYS[moment.weekday()]} {moment:%H:%M}" + (f" {moment:%Z}" if twice else "")
