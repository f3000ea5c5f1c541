"""The problem laid out flat for the decoder: blocks of all arcs and nodes in one table, calendars and arrivals in rows.

Everything here follows from `Problem` alone and is computed once for a solve.
"""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np

from planner.optimise.problem import Blocks, Floats, Ints, Problem

# columns of Tables.node
ENTRY, EXIT, MOVING, FIRST, COUNT, MAX_USES, REFILL, NEED_FULL, SOURCE, COVER_FIRST, COVER_LAST = range(11)
# columns of Tables.pour
REFILL_TO, SECONDS_PER_UNIT, MIN_POUR, SOURCE_PER_UNIT, SOURCE_FIXED = range(5)
# columns of Tables.block
SECONDS, CALENDAR, WAIT_OK = range(3)
# rows of Tables.rule
USE, START_MIN, END_MIN, WAIT_RATE, WAIT_MIN = range(5)
# rows of Tables.place
PLACE_RATE, PLACE_MIN = range(2)
# columns of Tables.take
PRIZE, MUST, BEFORE_FIRST, BEFORE_LAST, OPTION_FIRST, OPTION_LAST = range(6)
# rows of Tables.reservoir
LEVEL, PRICE = range(2)
# rows of Scratch.time and Scratch.level
ARC_START, SHIFTED, NODE_START, NODE_SECONDS = range(4)
BEFORE, AFTER = range(2)


class Tables(NamedTuple):
    """Flat arrays of one problem (R reservoirs, P places, N nodes, B blocks, T takes, C calendars); few, because
    every array costs compile time in every kernel it is handed to.

    ``node`` (N, 11), ``pour`` (N, 5), ``arc`` (P, P, 2) first block and count, ``block`` (B, 3), ``rule`` (B, 5, R),
    ``place`` (P, 2, R), ``latest`` (P,): the last second at which the arc to ``end`` may be begun, -1 if never.
    ``calendar`` (C, 2) rows of ``interval`` (I, 2); ``arrivals_of`` (R, 2) rows of ``arrival`` (A, 2) second, amount;
    ``take`` (T, 6) and ``node`` hold rows of ``member``: takes covered, takes that come before, nodes to choose from.
    """

    horizon: int
    node: Ints
    pour: Floats
    arc: Ints
    block: Ints
    rule: Floats
    place: Floats
    latest: Ints
    calendar: Ints
    interval: Ints
    reservoir: Floats
    arrivals_of: Ints
    arrival: Floats
    take: Ints
    member: Ints


class Scratch(NamedTuple):
    """Room in which one step is worked out; after a step it holds that step's times, levels and failure.

    ``time`` (4, K): starts of arc blocks, the same shifted, starts and seconds of node blocks; ``level`` (2, K, R):
    before and after each block of arc and node; ``now`` (R,) the level reached; ``failure`` (3,): block, reservoir,
    moment; ``amount`` (2,): poured, short by.
    """

    time: Ints
    level: Floats
    now: Floats
    failure: Ints
    amount: Floats


def build_tables(problem: Problem) -> Tables:
    """Lay ``problem`` out flat.

    Raises
    ------
    ValueError
        If a refill has not exactly one block, or a table's shape does not fit the problem.
    """
    nodes, arcs = problem.node_blocks, problem.arc_blocks
    refills = problem.services.refill_reservoir >= 0
    if np.any(nodes.count[refills] != 1):
        raise ValueError("a service that refills a reservoir must have exactly one block")
    if len(problem.entry) != problem.nodes or arcs.count.shape != (len(problem.place_wait_rate),) * 2:
        raise ValueError("the tables of nodes or places do not fit the number of nodes or places")
    arc_total = int(arcs.count.sum())
    arc_first = np.cumsum(arcs.count.ravel()) - arcs.count.ravel()
    node_first = arc_total + np.cumsum(nodes.count) - nodes.count
    block = np.concatenate([_block_columns(arcs), _block_columns(nodes)])
    rule = np.concatenate([_block_rules(arcs), _block_rules(nodes)])
    place = np.stack([problem.place_wait_rate, problem.place_wait_min], axis=1)
    calendars = problem.calendars
    take, node_rows, member = _members(problem)
    arrivals_of, arrival, level = _arrivals(problem)
    node = np.concatenate([_node_columns(problem, node_first), node_rows], axis=1)
    tables = Tables(
        horizon=int(problem.horizon),
        node=_ints(node),
        pour=_pour_columns(problem),
        arc=_ints(np.stack([arc_first.reshape(arcs.count.shape), arcs.count], axis=-1)),
        block=_ints(block),
        rule=_floats(rule),
        place=_floats(place),
        latest=np.full(len(place), -1, dtype=np.int64),
        calendar=_ints(np.stack([calendars.first[:-1], calendars.first[1:]], axis=1)),
        interval=_ints(np.stack([calendars.begin, calendars.finish], axis=1)),
        reservoir=_floats(np.stack([level, problem.reservoirs.price])),
        arrivals_of=arrivals_of,
        arrival=arrival,
        take=take,
        member=member,
    )
    tables.latest[:] = latest_to_end(tables)
    return tables


def build_scratch(tables: Tables) -> Scratch:
    """Room for one step of any node of ``tables``."""
    most = max(1, int(tables.arc[:, :, 1].max(initial=0) + tables.node[:, COUNT].max(initial=0)))
    reservoirs = tables.reservoir.shape[1]
    return Scratch(
        time=np.zeros((4, most), dtype=np.int64),
        level=np.zeros((2, most, reservoirs)),
        now=np.zeros(reservoirs),
        failure=np.zeros(3, dtype=np.int64),
        amount=np.zeros(2),
    )


def latest_to_end(tables: Tables) -> Ints:
    """Last second at which the arc to ``end`` can be begun in each place so that it ends by the horizon (-1: never).

    An arc begun later never ends earlier, so this says exactly whether ``end`` can be reached in time.
    """
    end_place = int(tables.node[Problem.END, ENTRY])
    latest = np.full(len(tables.place), -1, dtype=np.int64)
    for place in range(len(latest)):
        first, count = tables.arc[place, end_place]
        limit = tables.horizon
        for row in range(first + count - 1, first - 1, -1):
            limit = _latest_fit(tables, int(tables.block[row, CALENDAR]), limit, int(tables.block[row, SECONDS]))
            if limit < 0:
                break
        latest[place] = limit
    return latest


def _latest_fit(tables: Tables, calendar: int, limit: int, seconds: int) -> int:
    if calendar < 0:
        return max(limit - seconds, -1)
    rows = tables.interval[slice(*tables.calendar[calendar])]
    starts = np.minimum(rows[:, 1], limit) - seconds
    fits = starts >= rows[:, 0]
    return int(starts[fits].max()) if fits.any() else -1


def _node_columns(problem: Problem, first: Ints) -> Ints:
    services = problem.services
    columns = [problem.entry, problem.exit, problem.moving, first, problem.node_blocks.count]
    columns += [services.max_uses, services.refill_reservoir, services.need_full, services.source]
    return _ints(np.stack([np.asarray(column, dtype=np.int64) for column in columns], axis=1))


def _pour_columns(problem: Problem) -> Floats:
    services = problem.services
    columns = [services.refill_to, services.seconds_per_unit, services.min_pour]
    return _floats(np.stack([*columns, services.source_per_unit, services.source_fixed], axis=1))


def _members(problem: Problem) -> tuple[Ints, Ints, Ints]:
    """The table of takes, the nodes' columns of rows covered, and the list both point into."""
    before: list[list[int]] = [[] for _ in range(problem.takes)]
    for first, then in problem.before_after.tolist():
        before[then].append(first)
    options: list[list[int]] = [[] for _ in range(problem.takes)]
    for node, takes in enumerate(problem.covers):
        for one in takes:
            options[one].append(node)
    rows = [*(list(takes) for takes in problem.covers), *before, *options]
    bounds = np.cumsum([0, *(len(row) for row in rows)])
    pairs = np.stack([bounds[:-1], bounds[1:]], axis=1)
    nodes, takes_end = problem.nodes, problem.nodes + problem.takes
    prizes = np.stack([problem.prize, problem.must], axis=1).astype(np.int64).reshape(-1, 2)
    take = np.concatenate([prizes, pairs[nodes:takes_end], pairs[takes_end:]], axis=1)
    return _ints(take), _ints(pairs[:nodes]), _ints([value for row in rows for value in row])


def _arrivals(problem: Problem) -> tuple[Ints, Floats, Floats]:
    """Rows of arrivals per reservoir, the arrivals, and the levels at time 0 with what has arrived by then."""
    reservoirs = problem.reservoirs
    level = reservoirs.level.astype(np.float64).copy()
    early = reservoirs.arrival_second <= 0
    np.add.at(level, reservoirs.arrival_reservoir[early], reservoirs.arrival_amount[early])
    later = np.flatnonzero(~early)
    order = later[np.lexsort((reservoirs.arrival_second[later], reservoirs.arrival_reservoir[later]))]
    counts = np.bincount(reservoirs.arrival_reservoir[order], minlength=len(level))
    bounds = np.concatenate([[0], np.cumsum(counts)])
    arrival = np.stack([reservoirs.arrival_second[order], reservoirs.arrival_amount[order]], axis=1)
    return _ints(np.stack([bounds[:-1], bounds[1:]], axis=1)), _floats(arrival), level


def _block_columns(blocks: Blocks) -> Ints:
    mask = np.arange(blocks.seconds.shape[-1]) < blocks.count[..., None]
    columns = [blocks.seconds[mask], blocks.calendar[mask], blocks.wait_ok[mask].astype(np.int64)]
    return _ints(np.stack(columns, axis=1))


def _block_rules(blocks: Blocks) -> Floats:
    mask = np.arange(blocks.seconds.shape[-1]) < blocks.count[..., None]
    rules = [blocks.use, blocks.start_min, blocks.end_min, blocks.wait_rate, blocks.wait_min]
    return _floats(np.stack([rule[mask] for rule in rules], axis=1))


def _ints(values: Any) -> Ints:
    return np.ascontiguousarray(values, dtype=np.int64)


def _floats(values: Any) -> Floats:
    return np.ascontiguousarray(values, dtype=np.float64)
