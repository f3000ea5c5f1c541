"""Everything a sheet says about a plan, gathered once for all formats."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from planner.calendars import Calendar, tidy, weekly
from planner.files import Request, Rig, Week, request_of
from planner.plan import Plan
from planner.runsheet.rows import Day, days_of
from planner.runsheet.wording import WallTimes

REVIEW = "REVIEW COPY, NOT TO BE RUN"
RECOVERY = "RECOVERY PLAN: runs down, calls people, transfers helium"


@dataclass(frozen=True)
class Sheet:
    """A plan with the week and rig it carries; ``review`` marks a copy that is not to be run."""

    plan: Plan
    request: Request
    review: bool = False

    @staticmethod
    def of(plan: Plan, *, review: bool = False) -> Sheet:
        """Read the plan's own texts of week and rig; raises InputError if they cannot be read."""
        return Sheet(plan, request_of(plan.sources), review)

    @property
    def rig(self) -> Rig:
        """The rig the plan was made for."""
        return self.request.rig

    @property
    def week(self) -> Week:
        """The week the plan was made for."""
        return self.request.week

    @property
    def banner(self) -> str:
        """What every page is marked with, or nothing."""
        if self.review:
            return REVIEW
        return RECOVERY if self.plan.recovery else ""

    @cached_property
    def horizon_s(self) -> int:
        """Length of the week in seconds."""
        return self.plan.clock.second(self.plan.end)

    @cached_property
    def walls(self) -> WallTimes:
        """Writes seconds of the week as wall times."""
        return WallTimes.of(self.plan.clock, self.horizon_s)

    @cached_property
    def letters(self) -> dict[str, str]:
        """Letter of each user by name."""
        return {user.name: user.letter for user in self.week.users}

    @cached_property
    def staffed(self) -> Calendar:
        """Staffed hours in seconds of the week."""
        clock = self.plan.clock
        return tidy(
            span
            for hours in self.week.staffed
            for span in weekly(clock, self.horizon_s, hours.days, hours.from_, hours.to)
        )

    @cached_property
    def days(self) -> tuple[Day, ...]:
        """The days of the week with their rows."""
        return days_of(self.plan, self.rig, self.walls, self.letters, self.staffed, self.horizon_s)
