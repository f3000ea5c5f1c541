"""From targets to takes, and what this rig cannot do at all."""

from __future__ import annotations

from planner.files import Request
from planner.files.start import start_state
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
    while True:
        stuck = [
            (take.ask, first)
            for take in takes
            for first in _firsts(context, take.ask.name)
            if first in cannot and take.ask.name not in cannot
        ]
        if not stuck:
            break
        later, first = stuck[0]
        cannot[later.name] = Impossible(later, context.user(later), f'comes after "{first}", which cannot be done')
    return [take for take in takes if take.ask.name not in cannot], list(cannot.values())


def _firsts(context: Context, name: str) -> list[str]:
    """Targets that must be done before the named one."""
    asks = {ask.name: ask for ask in context.week.targets}
    return [*asks[name].after, *(other.name for other in asks.values() if name in other.before)]


def precedence(context: Context, takes: list[Take]) -> list[tuple[int, int]]:
    """Pairs of takes by position (before, after): every take of the earlier target before every one of the later."""
    places: dict[str, list[int]] = {}
    for at, take in enumerate(takes):
        places.setdefault(take.ask.name, []).append(at)
    return [
        (first, later)
        for name, mine in places.items()
        for other in dict.fromkeys(_firsts(context, name))
        for first in places.get(other, [])
        for later in mine
    ]
