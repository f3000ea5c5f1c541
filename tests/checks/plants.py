"""The register of planted faults: for every rule at least one plan or week that breaks it, with the right numbers."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

from planner.files import Request
from planner.plan import Plan

Judged = tuple[Request, Plan | None]


@dataclass(frozen=True)
class Plant:
    """A fault: what is judged, the rule that must name it, others that cannot but fail with it, numbers expected."""

    rule: str
    make: Callable[[], Judged]
    also: frozenset[str]
    expected: dict[str, float | str] = field(default_factory=dict)


PLANTS: list[Plant] = []
SOUND: list[tuple[str, Callable[[], Judged]]] = []


def plant(rule: str, also: tuple[str, ...] = (), **expected: float | str) -> Callable[..., Callable[[], Judged]]:
    """Register a fault; ``expected`` gives fields of its finding."""

    def register(make: Callable[[], Judged]) -> Callable[[], Judged]:
        PLANTS.append(Plant(rule, make, frozenset(also), expected))
        return make

    return register


def sound(rule: str) -> Callable[..., Callable[[], Judged]]:
    """Register a plan or week that just keeps a rule, exactly at its limit where it has one."""

    def register(make: Callable[[], Judged]) -> Callable[[], Judged]:
        SOUND.append((rule, make))
        return make

    return register
