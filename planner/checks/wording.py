"""Numbers and times as findings say them."""

from __future__ import annotations

from planner.clock import WEEKDAYS, Clock


def wall(clock: Clock, second: float, horizon_s: int = 0) -> str:
    """A second of the week as a wall time, "Fri 14:00"; with its date where the week has more than seven days."""
    moment = clock.moment(round(second))
    date = f" {moment:%d.%m.}" if horizon_s > 7 * 86_400 else ""
    seconds = f":{moment:%S}" if moment.second else ""
    return f"{WEEKDAYS[moment.weekday()]}{date} {moment:%H:%M}{seconds}"


def length(seconds: float) -> str:
    """A length of time: "45 s", "59.2 min", "7.7 h"."""
    if seconds < 120:
        return f"{seconds:.4g} s"
    if seconds < 4 * 3600:
        return f"{seconds / 60:.1f} min"
    return f"{seconds / 3600:.1f} h"


def number(value: float, digits: int = 4) -> str:
    """A number without trailing zeros and never in powers of ten where it is of ordinary size."""
    return f"{value:.{digits}g}".replace("-", "−") if abs(value) < 10**digits else f"{value:.0f}".replace("-", "−")


def tesla(value: float) -> str:
    """A field."""
    return f"{number(value, 5)} T"


def rate(value_T_per_s: float) -> str:
    """A field rate in T/min, or mT/min where that reads better."""
    per_minute = value_T_per_s * 60
    return f"{number(per_minute * 1e3, 3)} mT/min" if per_minute < 0.1 else f"{number(per_minute)} T/min"


def kelvin(value: float) -> str:
    """A temperature."""
    return f"{number(value * 1e3)} mK" if value < 1 else f"{number(value)} K"


def percent(value: float) -> str:
    """A helium level."""
    return f"{value:.1f} %"


def litres(value: float) -> str:
    """An amount of helium."""
    return f"{value:.1f} L"
