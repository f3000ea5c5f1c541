"""Hand-made orders through the same decoder: takes in the order preferred, each in its cheapest alternative."""

from __future__ import annotations

from collections.abc import Sequence
from collections.abc import Set as AbstractSet
from typing import NamedTuple

from planner.optimise.builder import Builder
from planner.optimise.compiled.fitting import LOW, OK
from planner.optimise.compiled.jit import Plain
from planner.optimise.problem import Problem
from planner.optimise.reading import evaluate
from planner.optimise.result import Evaluation
from planner.optimise.tables import COUNT, ENTRY, EXIT, SECONDS, build_tables


class _Choice(NamedTuple):
    """Nodes that do one take from where the order stands, compared by cost and then by time."""

    cost: float
    time: int
    nodes: list[int]
    idle_s: int


def follow(
    problem: Problem, preference: Sequence[int], *, only: AbstractSet[int] | None = None, patience_s: int = 3600
) -> Evaluation:
    """Do the takes of ``preference`` as people do who work down a list.

    The first take on what is left of the list that can be done without idle waiting of more than ``patience_s`` is done
    next; if there is none, the one that waits least. Each is done by the node that covers nothing outside ``only`` and
    costs least at that point; a refill goes in before it if levels allow it no other way. What cannot be done any more
    is left out.

    Parameters
    ----------
    preference
        Takes in the wanted order; takes it does not name are not done.
    only
        Takes to which the order is restricted.
    patience_s
        How long to stand idle for the next take of the list rather than to pass it over for now.
    """
    tables = build_tables(problem)
    builder = Builder(problem, tables, Plain())
    builder.careful = builder.can_finish()
    wanted = set(preference) if only is None else set(preference) & set(only)
    left = [take for take in dict.fromkeys(preference) if take in wanted]
    while left:
        best: _Choice | None = None
        for take in left:
            choice = _cheapest(builder, take, wanted)
            if choice is not None and (best is None or choice.idle_s < best.idle_s):
                best = choice
            if best is not None and best.idle_s <= patience_s:
                break
        if best is None:
            break
        builder.push_all(best.nodes)
        left = [take for take in left if take not in builder.done]
    builder.close()
    return evaluate(problem, builder.items, tables=tables)


def _cheapest(builder: Builder, take: int, wanted: AbstractSet[int]) -> _Choice | None:
    """The cheapest way of doing ``take`` next, if there is one; with a refill before it only if levels ask for it."""
    covers = builder.problem.covers
    nodes = [node for node, takes in enumerate(covers) if take in takes and set(takes) <= wanted]
    best, low = _best(builder, [[node] for node in nodes])
    if best is None and low:
        best, _ = _best(builder, [[service, node] for node in nodes for service in builder.services])
    return best


def _best(builder: Builder, choices: list[list[int]]) -> tuple[_Choice | None, bool]:
    """The cheapest of some ways to go on, and whether a level forbade one of them."""
    best: _Choice | None = None
    low = False
    for nodes in choices:
        before, place = builder.time, _place(builder)
        status = builder.push_all(nodes)
        low = low or status == LOW
        if status != OK:
            continue
        cost, time = float(builder.states.cost[len(builder.items)]), builder.time
        builder.cut(len(builder.items) - len(nodes))
        found = _Choice(cost, time, nodes, time - before - _work_s(builder, place, nodes))
        best = found if best is None or found[:2] < best[:2] else best
    return best, low


def _place(builder: Builder) -> int:
    return int(builder.tables.node[builder.items[-1] if builder.items else Problem.START, EXIT])


def _work_s(builder: Builder, place: int, nodes: list[int]) -> int:
    """Seconds of the blocks that lead to these nodes from ``place`` and of their own; what a refill pours apart."""
    tables, seconds = builder.tables, 0
    for node in nodes:
        first, arcs = tables.arc[place, int(tables.node[node, ENTRY])]
        own = int(tables.node[node, COUNT])
        begin = int(builder.problem.node_blocks.count[node])
        seconds += int(tables.block[first : first + arcs, SECONDS].sum())
        seconds += int(builder.problem.node_blocks.seconds[node, : min(own, begin)].sum())
        place = int(tables.node[node, EXIT])
    return seconds
