"""A take: one indivisible measurement, with the ways in which it may be done."""

from __future__ import annotations

from dataclasses import dataclass

from planner.files.rig import Rig
from planner.files.targets import Target
from planner.files.week import Sample, Week
from planner.moves import Lines, Setup, Stretch
from planner.plan import State


@dataclass(frozen=True, slots=True)
class Alternative:
    """One way to do a take: its direction, and whether the field is driven or persistent all the while.

    The first stretch is the measurement; a second one, if any, is the pause to look and decide, before which a wait may
    fall.
    """

    direction: str
    coil: str
    stretches: tuple[Stretch, ...]

    @property
    def entry(self) -> State:
        """The state in which it begins."""
        return self.stretches[0].before

    @property
    def exit(self) -> State:
        """The state in which it ends."""
        return self.stretches[-1].after


@dataclass(frozen=True, slots=True)
class Take:
    """One measurement of one target. ``name`` is unique in the week."""

    name: str
    ask: Target
    user: str
    label: str
    alternatives: tuple[Alternative, ...]
    details: tuple[tuple[str, str], ...] = ()
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Impossible:
    """A target that this rig cannot do at all, and why."""

    ask: Target
    user: str
    reason: str


@dataclass(frozen=True)
class Context:
    """What expanding a target needs to know."""

    rig: Rig
    week: Week
    setup: Setup
    lines: Lines
    start: State

    def sample(self, ask: Target) -> Sample:
        """The sample a target is measured on."""
        return self.week.sample(ask.sample)

    def user(self, ask: Target) -> str:
        """The user a target belongs to: its own, or the sample's."""
        return ask.user or self.sample(ask).user
