"""Numbers to offer: as few digits as say what is meant."""

from __future__ import annotations

import math

from planner.units import parse_amount


def number(written: object, unit: str) -> float:
    """The float in ``unit`` of a value as a file holds it; raises ValueError where it is none."""
    return float(parse_amount(written, unit))


def tidy(value: float, digits: int = 3) -> str:
    """A number to so many significant digits, without a power of ten."""
    if value == 0:
        return "0"
    places = digits - 1 - math.floor(math.log10(abs(value)))
    text = f"{round(value, places):.{max(0, places)}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text


def at_least(value: float, digits: int = 3) -> str:
    """The least number of so many digits that is not below ``value``."""
    if value <= 0:
        return "0"
    step = 10.0 ** (math.floor(math.log10(value)) - digits + 1)
    return tidy(math.ceil(value / step * (1 - 1e-12)) * step, digits + 1)


def between(low: float, high: float, parts: int, wanted: float | None = None) -> str:
    """A number between two, ``wanted`` or the first of ``parts`` equal steps; never either end.

    ``high`` must be above ``low``.
    """
    wanted = low + (high - low) / max(parts, 2) if wanted is None else wanted
    for digits in range(1, 17):
        text = tidy(wanted, digits)
        if low < float(text) < high and (digits > 1 or abs(float(text) - wanted) < 0.3 * (high - low)):
            return text
    return repr((low + high) / 2)
