"""Targets as files state them, expanded on the builder's rig."""

from __future__ import annotations

from typing import Any

from planner.plan import Leg
from planner.takes import Alternative, Impossible, Take, context_of, expand
from tests.builders import REMOVED, Changes, request

H_OVER_E_T_M2 = 6.62607015e-34 / 1.602176634e-19
"""The flux quantum h/e, exact in the SI of 2019; 2e15 carriers per m² have filling 1 at 8.2713 T."""

FILLING_1_T = 2e15 * H_OVER_E_T_M2


def wish(kind: str, **keys: Any) -> Changes:
    """A target named T1; `from_` and the like are not needed here, so keys are those of the file."""
    return {"name": "T1", "kind": kind, **keys}


def expanded(
    *targets: Changes, week: Changes | None = None, rig: Changes | None = None
) -> tuple[list[Take], list[Impossible]]:
    """Takes and impossible targets; a rig without a bath gets no level."""
    dry = {"present.level": REMOVED} if rig and rig.get("bath") is REMOVED else {}
    return expand(context_of(request(list(targets), week_changes={**dry, **(week or {})}, rig_changes=rig)))


def takes_of(*targets: Changes, week: Changes | None = None, rig: Changes | None = None) -> list[Take]:
    """Takes of targets that are all possible."""
    takes, cannot = expanded(*targets, week=week, rig=rig)
    assert cannot == []
    return takes


def one_take(target: Changes, **changes: Any) -> Take:
    """The only take of a target."""
    (take,) = takes_of(target, **changes)
    return take


def refusal(target: Changes, **changes: Any) -> str:
    """Why a target cannot be done."""
    takes, (cannot,) = expanded(target, **changes)
    assert takes == []
    return cannot.reason


def seconds(take: Take) -> list[int]:
    """Length of the measurement of each alternative."""
    return [way.stretches[0].seconds for way in take.alternatives]


def field_T(way: Alternative) -> float:
    """The field in which an alternative begins."""
    return way.entry.coil.field_T[2]


def coil_legs(way: Alternative) -> list[Leg]:
    """Coil legs of the measurement."""
    return [leg for leg in way.stretches[0].legs if leg.channel == "coil"]
