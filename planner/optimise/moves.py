"""What the search draws its moves from, and static costs of arcs: computed once, with numpy only."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from planner.optimise.problem import Floats, Ints, Problem
from planner.optimise.tables import COUNT, ENTRY, EXIT, FIRST, MOVING, PRICE, REFILL, SECONDS, USE, Tables


@dataclass(frozen=True)
class Costs:
    """Static figures: seconds and priced use of arcs (P, P) and nodes (N,), waits left out.

    For a refill ``node_seconds`` is its fixed part. ``node_moving`` are the seconds that count as cost.
    """

    arc_seconds: Ints
    arc_use: Floats
    node_seconds: Ints
    node_use: Floats
    node_moving: Ints

    @property
    def between(self) -> Floats:
        """Seconds plus priced use of the arcs, shape (P, P)."""
        return np.ascontiguousarray(self.arc_seconds + self.arc_use, dtype=np.float64)

    def reach(self, tables: Tables) -> Floats:
        """Seconds plus priced use of the arc from each node (row) to each node (column), shape (N, N)."""
        exits, entries = tables.node[:, EXIT], tables.node[:, ENTRY]
        return np.asarray(self.between[np.ix_(exits, entries)])


def static_costs(tables: Tables) -> Costs:
    """Sum blocks over arcs and nodes."""
    seconds = np.concatenate([[0], np.cumsum(tables.block[:, SECONDS])])
    use = np.concatenate([[0.0], np.cumsum(tables.rule[:, USE] @ tables.reservoir[PRICE])])
    arc_first, arc_last = tables.arc[:, :, 0], tables.arc[:, :, 0] + tables.arc[:, :, 1]
    node_first, node_last = tables.node[:, FIRST], tables.node[:, FIRST] + tables.node[:, COUNT]
    node_seconds = (seconds[node_last] - seconds[node_first]).astype(np.int64)
    return Costs(
        arc_seconds=(seconds[arc_last] - seconds[arc_first]).astype(np.int64),
        arc_use=np.maximum(use[arc_last] - use[arc_first], 0.0),
        node_seconds=node_seconds,
        node_use=np.maximum(use[node_last] - use[node_first], 0.0),
        node_moving=np.where(tables.node[:, MOVING] == 1, node_seconds, 0),
    )


def near_nodes(problem: Problem, tables: Tables, costs: Costs, width: int = 10) -> Ints:
    """For each node the nodes from which it is cheapest to reach, best first, shape (N, width)."""
    reach = costs.reach(tables)
    np.fill_diagonal(reach, np.inf)
    reach[:, : Problem.END + 1] = np.inf
    reach[: Problem.END + 1, :] = np.inf
    covering = np.zeros((problem.nodes, max(problem.takes, 1)), dtype=np.float64)
    for node, takes in enumerate(problem.covers):
        covering[node, list(takes)] = 1.0
    reach[(covering @ covering.T) > 0] = np.inf
    width = min(width, max(problem.nodes - 3, 0))
    return np.ascontiguousarray(np.argsort(reach, axis=0, kind="stable")[:width].T, dtype=np.int64)


def partners(problem: Problem) -> Ints:
    """For each node the alternative with entry and exit exchanged, if there is one, else the node itself."""
    by_ends: dict[tuple[tuple[int, ...], int, int], int] = {}
    for node, takes in enumerate(problem.covers):
        if takes:
            by_ends.setdefault((takes, int(problem.entry[node]), int(problem.exit[node])), node)
    found = [
        by_ends.get((takes, int(problem.exit[node]), int(problem.entry[node])), node) if takes else node
        for node, takes in enumerate(problem.covers)
    ]
    return np.array(found, dtype=np.int64)


def services_of(problem: Problem) -> Ints:
    """Nodes that are services and may be used."""
    usable = [node for node, takes in enumerate(problem.covers) if not takes and problem.services.max_uses[node] > 0]
    return np.array([node for node in usable if node > Problem.END], dtype=np.int64)


def refills_of(tables: Tables) -> list[int]:
    """Nodes that refill a reservoir."""
    return [int(node) for node in np.flatnonzero(tables.node[:, REFILL] >= 0)]
