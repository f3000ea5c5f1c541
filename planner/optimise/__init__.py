"""The optimiser: which takes to do, in which order and alternative, with which services between them.

`problem` states the question as arrays; `solve` answers it, `evaluate` and `follow` read given orders, `explain` says
why a take was left out. Numba and OR-Tools are imported by the first call, not by importing this package.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from planner.optimise.problem import Blocks, Calendars, Problem, Reservoirs, Services
from planner.optimise.result import Evaluation, Failure, Objective, Obstacle, Progress, Result, Stopped

if TYPE_CHECKING:
    from planner.optimise.hand_order import follow
    from planner.optimise.misses import Miss, explain
    from planner.optimise.reading import evaluate
    from planner.optimise.solver import solve

__all__ = [
    "Blocks",
    "Calendars",
    "Evaluation",
    "Failure",
    "Miss",
    "Objective",
    "Obstacle",
    "Problem",
    "Progress",
    "Reservoirs",
    "Result",
    "Services",
    "Stopped",
    "evaluate",
    "explain",
    "follow",
    "solve",
]

_LATE = {"evaluate": "reading", "explain": "misses", "Miss": "misses", "follow": "hand_order", "solve": "solver"}


def __getattr__(name: str) -> Any:
    if name not in _LATE:
        raise AttributeError(name)
    from importlib import import_module

    return getattr(import_module(f"planner.optimise.{_LATE[name]}"), name)
