"""Times: zone-aware datetimes outside, whole seconds of true elapsed time since the week's start inside."""

from __future__ import annotations

import re
from dataclasses import dataclass
from datetime import UTC, datetime, time, timedelta
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

WEEKDAYS = ("Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun")
_WEEKDAY_TIME = re.compile(
    r"\s*(Mon|Tue|Wed|Thu|Fri|Sat|Sun)[a-z]*\s+([0-9]{1,2}):([0-9]{2})(?::([0-9]{2}))?\s*",
    re.IGNORECASE,
)


def zone(name: str) -> ZoneInfo:
    """The time zone of an IANA name; raises ValueError with a hint where there is none."""
    try:
        return ZoneInfo(name)
    except (ZoneInfoNotFoundError, ValueError, OSError) as error:
        raise ValueError('expected an IANA time zone such as "Europe/Vienna"') from error


def iso_datetime(written: str) -> datetime | None:
    """The datetime that text such as "2031-03-04T20:00" spells; None where it spells none, or a date alone."""
    try:
        return datetime.fromisoformat(written.strip()) if ":" in written else None
    except ValueError:
        return None


def localise(moment: datetime, where: ZoneInfo) -> datetime:
    """``moment`` as an instant of ``where``.

    Raises
    ------
    ValueError
        For a wall time that a clock change skips or repeats, and for a year outside 1970–2199.
    """
    if not 1970 <= moment.year <= 2199:
        raise ValueError("expected a year from 1970 to 2199")
    if moment.tzinfo is not None:
        return moment.astimezone(where)
    early, late = (moment.replace(tzinfo=where, fold=fold) for fold in (0, 1))
    if early.utcoffset() == late.utcoffset():
        return early
    if early.astimezone(UTC).astimezone(where).replace(tzinfo=None) != moment:
        raise ValueError(f"{moment:%Y-%m-%d %H:%M} does not exist in {where.key}: the clocks go forward over it")
    raise ValueError(f"{moment:%Y-%m-%d %H:%M} happens twice in {where.key}: write it with its offset from UTC")


@dataclass(frozen=True, slots=True)
class Clock:
    """The week's clock: second 0 is ``start``."""

    start: datetime

    def __post_init__(self) -> None:
        if not isinstance(self.start.tzinfo, ZoneInfo):
            raise ValueError("the start of a clock needs a time zone")

    @property
    def where(self) -> ZoneInfo:
        """The time zone in which the wall clocks of this week run."""
        assert isinstance(self.start.tzinfo, ZoneInfo)
        return self.start.tzinfo

    def second(self, moment: datetime) -> int:
        """True elapsed seconds from the start to ``moment`` (zone-aware), also across a clock change."""
        return round((moment.astimezone(UTC) - self.start.astimezone(UTC)).total_seconds())

    def moment(self, second: float) -> datetime:
        """The wall time of a second."""
        return (self.start.astimezone(UTC) + timedelta(seconds=second)).astimezone(self.where)

    def wall(self, day: datetime, at: time) -> datetime:
        """The instant of wall time ``at`` on the date of ``day``.

        A time that a clock change skips moves past the gap; one that it repeats is the first of the two.
        """
        return datetime.combine(day.date(), at, tzinfo=self.where).astimezone(UTC).astimezone(self.where)

    def read(self, written: datetime | str) -> datetime:
        """A datetime as a file writes it: local, with an offset, or "Tue 20:00" (the first at or after the start).

        Text such as "2031-03-04T20:00" is read as the datetime it spells.

        Raises
        ------
        ValueError
            If the text is no such time, or the wall time does not exist or is ambiguous.
        """
        if isinstance(written, datetime):
            return localise(written, self.where)
        match = _WEEKDAY_TIME.fullmatch(written) if len(written) <= 60 else None
        if match is None:
            if (spelled := iso_datetime(written)) is not None:
                return localise(spelled, self.where)
            raise ValueError('expected a date and time such as 2031-03-04T20:00 or "Tue 20:00"')
        weekday = [day.lower() for day in WEEKDAYS].index(match[1][:3].lower())
        hour, minute, second = int(match[2]), int(match[3]), int(match[4] or 0)
        if hour > 23 or minute > 59 or second > 59:
            raise ValueError('expected a time of day between 00:00 and 23:59, such as "Tue 20:00"')
        days = (weekday - self.start.weekday()) % 7
        naive = datetime.combine(self.start.date() + timedelta(days=days), time(hour, minute, second))
        if naive < self.start.replace(tzinfo=None):
            naive += timedelta(days=7)
        return localise(naive, self.where)
