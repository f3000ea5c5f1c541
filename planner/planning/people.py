"""Calendars of one week: who is there, when a user may measure, when neighbours want quiet."""

from __future__ import annotations

from datetime import datetime
from functools import cached_property

from planner.calendars import Calendar, both, same_all_through, tidy, weekly, without
from planner.files import Week
from planner.files.hours import Hours, Span
from planner.files.targets import Target
from planner.files.week import Person
from planner.moves import Needs


class Availability:
    """Answers when something may be done, in the week's seconds."""

    def __init__(self, week: Week) -> None:
        self._week = week
        self._clock = week.clock
        self.horizon_s = week.horizon_s

    def moment(self, second: float) -> datetime:
        """The wall time of a second."""
        return self._clock.moment(second)

    @cached_property
    def always(self) -> Calendar:
        """The whole week."""
        return ((0, self.horizon_s),)

    def hours(self, rows: tuple[Hours, ...]) -> Calendar:
        """Weekly hours in this week."""
        parts = [weekly(self._clock, self.horizon_s, row.days, row.from_, row.to) for row in rows]
        return tidy(interval for part in parts for interval in part)

    def spans(self, rows: tuple[Span, ...]) -> Calendar:
        """Single stretches of time, cut to the week."""
        return both(tidy(self._week.seconds(row) for row in rows), self.always)

    @cached_property
    def staffed(self) -> Calendar:
        """Hours in which the lab is staffed."""
        return self.hours(self._week.staffed)

    def attended(self, people: int, training: str = "") -> Calendar:
        """When so many people with that training ("" means any) are there all through, in staffed hours.

        A week without a roster counts its staffed hours as having whoever is needed.
        """
        if people == 0:
            return self.always
        if not self._week.people:
            return self.staffed
        trained = [person for person in self._week.people if not training or training in person.trained]
        return both(self.staffed, same_all_through([self.there(person) for person in trained], people))

    def there(self, person: Person) -> Calendar:
        """When somebody on the roster is there: their own hours, or the staffed ones, less their absences."""
        return without(self.hours(person.hours) if person.hours else self.staffed, self.spans(person.away))

    def present(self, training: str, begin_s: int, finish_s: int) -> list[str]:
        """Names on the roster with that training who are there from ``begin_s`` to ``finish_s``."""
        return [
            person.name
            for person in self._week.people
            if (not training or training in person.trained)
            and any(begin <= begin_s and finish_s <= finish for begin, finish in self.there(person))
        ]

    @cached_property
    def no_ramps(self) -> Calendar:
        """When neighbours want no change of field."""
        rows = [row for row in self._week.quiet if row.forbids == "ramps"]
        return tidy(self._week.seconds(row) for row in rows)

    def meets(self, needs: Needs) -> Calendar:
        """When a stretch with these needs may run."""
        open_hours = self.attended(needs.people, needs.training)
        return without(open_hours, self.no_ramps) if needs.ramps else open_hours

    def windows(self, ask: Target, user: str) -> Calendar:
        """When a target of a user may be measured: its own windows, the user's slots, nobody else's."""
        allowed = self.always
        if ask.windows or ask.hours:
            allowed = tidy((*self.spans(ask.windows), *self.hours(ask.hours)))
        for other in self._week.users:
            slots = self.spans(other.slots)
            if other.name != user:
                allowed = without(allowed, slots)
            elif other.only_in_slots:
                allowed = both(allowed, slots)
        return allowed
