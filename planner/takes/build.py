"""Put takes together: legs, people, the pause to decide, what the sheet shows beside them."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from planner.files.targets import LockIn, Target
from planner.moves import Stretch, held, stretch, whole_seconds
from planner.physics.lockin import settle_time_s
from planner.plan import Leg, State
from planner.takes.take import Alternative, Context


@dataclass(frozen=True, slots=True)
class Way:
    """One way to do a take before people and pauses are added."""

    direction: str
    before: State
    after: State
    legs: tuple[Leg, ...]
    pace: str


def alternative(
    context: Context, ask: Target, label: str, way: Way, people: int = 0, training: str = ""
) -> Alternative:
    """A way with its staff and, where the target wants it, the pause to look and decide."""
    present = max(people, 1 if ask.attended else 0)
    measuring = stretch(
        context.lines, label, way.before, way.after, way.legs, people=present, training=training, pace=way.pace
    )
    stretches: tuple[Stretch, ...] = (measuring,)
    if pause := whole_seconds(ask.decide_s):
        legs = held((), way.after.coil, pause, "look, then decide")
        decide = "look, then decide"
        stretches += (stretch(context.lines, decide, way.after, way.after, legs, people=1, pace=decide),)
    return Alternative(way.direction, str(way.after.coil.mode), stretches)


def lockin_of(context: Context, ask: Target) -> LockIn | None:
    """The lock-in settings of a target, or of its sample."""
    return ask.lockin or context.sample(ask).lockin


def dwell_s(context: Context, ask: Target, given_s: float | None) -> tuple[float, str]:
    """Seconds a point, and what sets them: the time given, or the lock-in's settling after a step."""
    if given_s is not None:
        return float(given_s), "dwell asked"
    lockin = lockin_of(context, ask)
    if lockin is None:
        raise ValueError("a point needs a dwell or a lock-in (checked on reading)")
    settled = float(settle_time_s(lockin.time_constant_s, lockin.poles, lockin.settled_percent / 100))
    return settled, "lock-in settling"


def details_of(context: Context, ask: Target) -> tuple[tuple[str, str], ...]:
    """What the sheet prints beside a take: excitation, contacts, lock-in, file name."""
    lockin = lockin_of(context, ask)
    filter_text = f"{lockin.time_constant_s:g} s, {lockin.poles}-pole" if lockin else ""
    rows: Iterable[tuple[str, str]] = (
        ("excitation", ask.excitation),
        ("contacts", ask.contacts or context.sample(ask).contacts),
        ("lock-in", filter_text),
        ("file", ask.file),
    )
    return tuple((label, text) for label, text in rows if text)
