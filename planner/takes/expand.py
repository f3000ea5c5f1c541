"""From targets to takes, and what this rig cannot do at all."""

from __future__ import annotations

from planner.files import Request
from planner.files.start import start_state
from planner.files.targets import Target
from planner.moves import Lines, setup_of
from planner.takes.conditions import CannotError
from planner.takes.kinds import EXPANDERS, repeated
from planner.takes.take import Context, Impossible, Take


def context_of(request: Request, lines: Lines | None = None) -> Context:
    """What expanding the targets of a request needs to know."""
    rig, week = request.rig, request.week
    return Context(rig, week, setup_of(rig, week), lines or Lines(rig), start_state(week, rig))


def expand(context: Context) -> tuple[list[Take], list[Impossible]]:
    """Every take of every target that this rig can do; the rest with the reason.

    A target that must come after an impossible one is impossible too.
    """
    takes: list[Take] = []
    cannot: dict[str, Impossible] = {}
    for ask in context.week.targets:
        kind = str(ask.kind)
        try:
            takes += repeated(list(EXPANDERS[kind](context, ask)), ask.repeats)
        except CannotError as error:
            cannot[ask.name] = Impossible(ask, context.user(ask), str(error))
    asks = {ask.name: ask for ask in context.week.targets}
    followers: dict[str, list[Target]] = {name: [] for name in asks}
    for later, firsts in _firsts(context).items():
        for first in firsts:
            followers[first].append(asks[later])
    todo = list(cannot)
    for first in todo:  # grows while it is walked
        for follower in followers[first]:
            if follower.name not in cannot:
                reason = f'comes after "{first}", which cannot be done'
                cannot[follower.name] = Impossible(follower, context.user(follower), reason)
                todo.append(follower.name)
    return [take for take in takes if take.ask.name not in cannot], list(cannot.values())


def _firsts(context: Context) -> dict[str, list[str]]:
    """For the name of each target, the names of those that must be done before it."""
    found = {ask.name: list(ask.after) for ask in context.week.targets}
    for ask in context.week.targets:
        for later in ask.before:
            found[later].append(ask.name)
    return found


def precedence(context: Context, takes: list[Take]) -> list[tuple[int, int]]:
    """Pairs of takes by position (before, after): every take of the earlier target before every one of the later."""
    places: dict[str, list[int]] = {}
    for at, take in enumerate(takes):
        places.setdefault(take.ask.name, []).append(at)
    firsts = _firsts(context)
    return [
        (first, later)
        for name, mine in places.items()
        for other in dict.fromkeys(firsts[name])
        for first in places.get(other, [])
        for later in mine
    ]
