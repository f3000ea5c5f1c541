"""When a take may run at all: windows, people and slots, before anything is planned."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.asks import least_take_s
from planner.checks.spans import Spans, less, shared, united
from planner.checks.week_view import WeekView
from planner.files.targets import AnyTarget

STAFFED = "staffed hours with the people it needs"


def possible_times(view: WeekView, target: AnyTarget) -> Iterator[tuple[str, Spans]]:
    """When a take may run, narrowed from the whole week one reason after the other."""
    times: Spans = ((0, view.horizon_s),)
    yield "the week", times
    windows = view.windows(target)
    if windows is not None:
        times = shared(times, windows)
        yield "its windows", times
    count, training = view.staff_for(target)
    if count:
        times = shared(times, view.people_there(count, training))
        yield STAFFED, times
    user = view.week.user(view.user_of(target))
    if user.only_in_slots:
        times = shared(times, view.slots[user.name])
        yield f"the slots of {user.name}", times
    taken = united(slot for other in view.week.users if other is not user for slot in view.slots[other.name])
    if taken:
        yield "what the slots of others leave", less(times, taken)


def first_too_short(view: WeekView, target: AnyTarget) -> tuple[str, float, float] | None:
    """What leaves a take no room, the longest stretch it leaves and the take's least time; None where it fits."""
    needed = least_take_s(view.week, view.rig, target)
    for why, times in possible_times(view, target):
        longest = max((end - begin for begin, end in times), default=0)
        if longest < needed - 1e-6 or not times:
            return why, float(longest), needed
    return None
