"""Hand-made orders through the same decoder: takes in the order given, each in its cheapest alternative."""

from __future__ import annotations

from collections.abc import Sequence
from collections.abc import Set as AbstractSet

from planner.optimise.builder import Builder
from planner.optimise.compiled.fitting import LOW, OK
from planner.optimise.compiled.jit import Plain
from planner.optimise.problem import Problem
from planner.optimise.reading import evaluate
from planner.optimise.result import Evaluation
from planner.optimise.tables import build_tables


def follow(problem: Problem, preference: Sequence[int], *, only: AbstractSet[int] | None = None) -> Evaluation:
    """Do the takes of ``preference`` in that order, skipping what cannot be done where it stands.

    Each take is done by the node that covers nothing outside ``only`` and costs least at that point; a refill goes in
    before it if levels allow it no other way.

    Parameters
    ----------
    preference
        Takes in the wanted order; takes it does not name are not done.
    only
        Takes to which the order is restricted.
    """
    tables = build_tables(problem)
    builder = Builder(problem, tables, Plain())
    builder.careful = builder.can_finish()
    wanted = set(preference) if only is None else set(preference) & set(only)
    for take in preference:
        if take in wanted and take not in builder.done:
            _append(builder, take, wanted)
    builder.close()
    return evaluate(problem, builder.items, tables=tables)


def _append(builder: Builder, take: int, wanted: AbstractSet[int]) -> None:
    """Append the cheapest way of doing ``take``, if there is one."""
    covers = builder.problem.covers
    nodes = [node for node, takes in enumerate(covers) if take in takes and set(takes) <= wanted]
    plain = [[node] for node in nodes]
    refilled = [[service, node] for node in nodes for service in builder.services]
    for choices, needed in ((plain, True), (refilled, False)):
        best: tuple[float, int, list[int]] | None = None
        low = False
        for choice in choices:
            status = builder.push_all(choice)
            low = low or status == LOW
            if status == OK:
                value = (float(builder.states.cost[len(builder.items)]), builder.time, choice)
                builder.cut(len(builder.items) - len(choice))
                best = value if best is None or value[:2] < best[:2] else best
        if best is not None:
            builder.push_all(best[2])
            return
        if needed and not low:
            return
