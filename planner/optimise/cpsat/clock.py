"""Start times, for problems small enough: each visit starts when its calendar allows and after what comes before it."""

from __future__ import annotations

from ortools.sat.python import cp_model

from planner.optimise.cpsat.variables import DEPOT, Variables
from planner.optimise.tables import CALENDAR, COUNT, FIRST, REFILL, SECONDS, WAIT_OK, Tables

MOST_VERTICES = 34  # with more the times cost more than they bring (measured)


def build(variables: Variables) -> None:
    """Add a start for each vertex, none if there are too many vertices."""
    if variables.light or len(variables.vertex_node) > MOST_VERTICES:
        return
    problem, costs, model = variables.problem, variables.costs, variables.model
    starts: list[cp_model.IntVar] = [model.new_constant(0)]
    for v in range(1, len(variables.vertex_node)):
        windows = start_windows(variables.tables, variables.vertex_node[v])
        if not windows:
            model.add(variables.done[v] == 0)
        domain = cp_model.Domain.from_intervals(windows or [[0, 0]])
        starts.append(model.new_int_var_from_domain(domain, f"start {v}"))
    leave, enter = variables.places()
    for (a, b, literal), p, q in zip(variables.arcs, leave, enter, strict=True):
        seconds = int(costs.arc_seconds[p, q]) + (int(costs.node_seconds[variables.vertex_node[a]]) if a else 0)
        after = starts[b] if b != DEPOT else problem.horizon
        model.add(after >= starts[a] + seconds).only_enforce_if(literal)
    for first, then in problem.before_after.tolist():
        for a in range(1, len(starts)):
            for b in range(1, len(starts)):
                one, two = problem.covers[variables.vertex_node[a]], problem.covers[variables.vertex_node[b]]
                if first in one and then in two and a != b:
                    both = [variables.done[a], variables.done[b]]
                    seconds = int(costs.node_seconds[variables.vertex_node[a]])
                    model.add(starts[b] >= starts[a] + seconds).only_enforce_if(both)


def start_windows(tables: Tables, node: int) -> list[list[int]]:
    """Intervals of starts at which the node's first chain of blocks fits its calendars and the horizon."""
    first, count = int(tables.node[node, FIRST]), int(tables.node[node, COUNT])
    windows = [[0, tables.horizon]]
    offset = 0
    for row in range(first, first + count):
        calendar, seconds = int(tables.block[row, CALENDAR]), int(tables.block[row, SECONDS])
        fits = [[-offset, tables.horizon - seconds - offset]]
        if calendar >= 0:
            rows = tables.interval[slice(*tables.calendar[calendar])].tolist()
            fits = [[begin - offset, min(finish, tables.horizon) - seconds - offset] for begin, finish in rows]
        windows = [[max(a, c), min(b, d)] for a, b in windows for c, d in fits if max(a, c) <= min(b, d)]
        offset += seconds
        if tables.node[node, REFILL] >= 0 or tables.block[row, WAIT_OK] == 1:
            break
    return windows
