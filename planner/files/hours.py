"""Times in files: weekly hours such as Mon–Fri 08:30–18:00, and single spans such as Tue 20:00 to Wed 06:00."""

from __future__ import annotations

import re
from datetime import datetime, time
from typing import Annotated, Any

from pydantic import BeforeValidator, Field, PlainSerializer, WithJsonSchema

from planner.clock import WEEKDAYS, iso_datetime
from planner.files.model import Table

_TIME = re.compile(r"\s*([0-9]{1,2}):([0-9]{2})\s*")
_LONGEST = 120


def read_days(written: object) -> frozenset[int]:
    """Weekdays as "Mon-Fri", "Mon, Wed, Fri" or "daily"; 0 is Monday. Raises ValueError otherwise."""
    if isinstance(written, frozenset):
        return written
    expected = 'expected weekdays such as "Mon-Fri", "Mon, Wed" or "daily"'
    if not isinstance(written, str) or not written.strip() or len(written) > _LONGEST:
        raise ValueError(expected)
    if written.strip().lower() in ("daily", "every day"):
        return frozenset(range(7))
    names = [day.lower() for day in WEEKDAYS]
    found: set[int] = set()
    for part in re.split(r"[,\s]+", re.sub(r"\s*[-–]\s*", "-", written.strip())):
        ends = [piece[:3].lower() for piece in part.split("-")]
        if len(ends) > 2 or any(end not in names for end in ends):
            raise ValueError(expected)
        first, last = names.index(ends[0]), names.index(ends[-1])
        found.update((first + step) % 7 for step in range((last - first) % 7 + 1))
    return frozenset(found)


def write_days(days: frozenset[int]) -> str:
    """The weekdays as a list of names."""
    return ", ".join(WEEKDAYS[day] for day in sorted(days))


def read_time(written: object) -> time:
    """A time of day as "08:30"; "24:00" is the end of the day and reads as 00:00. Raises ValueError otherwise."""
    if isinstance(written, time):
        return written
    match = _TIME.fullmatch(written) if isinstance(written, str) else None
    hour, minute = (int(match[1]), int(match[2])) if match else (99, 0)
    if (hour, minute) == (24, 0):
        return time(0)
    if hour > 23 or minute > 59:
        raise ValueError('expected a time of day such as "08:30"')
    return time(hour, minute)


def read_datetime(written: object) -> datetime:
    """A date with a time of day, as TOML's own or as text that spells one. Raises ValueError otherwise."""
    found = iso_datetime(written) if isinstance(written, str) else written
    if not isinstance(found, datetime):
        raise ValueError("expected a date and time such as 2031-03-03T08:30:00")
    return found


def _read_moment(written: Any) -> datetime | str:
    if isinstance(written, (datetime, str)):
        return written
    raise ValueError('expected a date and time such as 2031-03-04T20:00 or "Tue 20:00"')


Days = Annotated[
    frozenset[int],
    BeforeValidator(read_days),
    PlainSerializer(write_days),
    WithJsonSchema({"type": "string", "examples": ["Mon-Fri", "Mon, Wed, Fri", "daily"]}),
]
TimeOfDay = Annotated[
    time,
    BeforeValidator(read_time),
    PlainSerializer(lambda at: f"{at:%H:%M}"),
    WithJsonSchema({"type": "string", "examples": ["08:30"]}),
]
DateAndTime = Annotated[datetime, BeforeValidator(read_datetime)]
Moment = Annotated[
    datetime | str,
    BeforeValidator(_read_moment),
    WithJsonSchema({"type": "string", "examples": ["Tue 20:00", "2031-03-04T20:00"]}),
]


class Hours(Table):
    """Hours that come back every week. ``to`` at or before ``from`` runs into the next day."""

    days: Days
    from_: TimeOfDay = Field(alias="from")
    to: TimeOfDay


class Span(Table):
    """One stretch of time in this week."""

    from_: Moment = Field(alias="from")
    to: Moment
