"""The variables: which vertices are visited, which arcs between them are taken, how much each refill pours."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from ortools.sat.python import cp_model

from planner.optimise.bounds import most_poured
from planner.optimise.moves import Costs
from planner.optimise.problem import Problem
from planner.optimise.tables import MAX_USES, REFILL, SECONDS_PER_UNIT, Tables


class CancelledError(Exception):
    """Building was asked to stop."""


POUR_SCALE = 100  # poured amounts are counted in hundredths of a unit, rounded down
DEPOT = 0  # vertex that stands for start and end


@dataclass
class Variables:
    """Vertices are uses of nodes: ``vertex_node[v]`` is the node, vertex 0 stands for start and end.

    ``arcs`` are (from, to, literal), ``done[v]`` whether a vertex is visited, ``poured[v]`` its amount if it refills.
    A ``light`` model has no arcs: every visit is entered by whatever arc weighs least in each row.
    """

    problem: Problem
    tables: Tables
    costs: Costs
    model: cp_model.CpModel
    vertex_node: list[int] = field(default_factory=list)
    copy_of: list[int] = field(default_factory=list)
    done: list[cp_model.IntVar] = field(default_factory=list)
    poured: dict[int, cp_model.IntVar] = field(default_factory=dict)
    arcs: list[tuple[int, int, cp_model.IntVar]] = field(default_factory=list)
    nothing: cp_model.IntVar | None = None
    halt: Callable[[], bool] = lambda: False
    light: bool = False

    def breathe(self) -> None:
        """Called now and then while the model is built: raises `CancelledError` if that is to stop."""
        if self.halt():
            raise CancelledError

    def visits(self, take: int) -> list[cp_model.IntVar]:
        """Literals of the vertices that do ``take``."""
        covers = self.problem.covers
        return [done for v, done in enumerate(self.done) if v and take in covers[self.vertex_node[v]]]

    def places(self) -> tuple[list[int], list[int]]:
        """Places left and entered by each arc."""
        entry, exit_ = self.problem.entry, self.problem.exit
        leave = [int(exit_[self.vertex_node[a]]) if a else int(exit_[Problem.START]) for a, _, _ in self.arcs]
        enter = [int(entry[self.vertex_node[b]]) if b else int(entry[Problem.END]) for _, b, _ in self.arcs]
        return leave, enter

    def order(self, taken: Sequence[bool]) -> list[int]:
        """The nodes in the order of the arcs that are taken."""
        after = {a: b for (a, b, _), yes in zip(self.arcs, taken, strict=True) if yes}
        order, vertex = [], after.get(DEPOT, DEPOT)
        while vertex != DEPOT:
            order.append(self.vertex_node[vertex])
            vertex = after[vertex]
        return order

    def hint(self, order: Sequence[int]) -> None:
        """Hint every literal from an order; copies of a service are used in turn."""
        free: dict[int, list[int]] = {}
        for v in range(len(self.vertex_node) - 1, 0, -1):
            free.setdefault(self.vertex_node[v], []).append(v)
        path = [DEPOT, *(free[node].pop() for node in order), DEPOT]
        steps = set(itertools.pairwise(path))
        self.model.clear_hints()
        for row, (a, b, literal) in enumerate(self.arcs):
            if row % 5000 == 0:
                self.breathe()
            self.model.add_hint(literal, (a, b) in steps)
        for v, done in enumerate(self.done):
            if v:
                self.model.add_hint(done, v in path)


def build_variables(
    problem: Problem,
    tables: Tables,
    costs: Costs,
    model: cp_model.CpModel,
    halt: Callable[[], bool],
    *,
    light: bool = False,
) -> Variables:
    """Vertices, arcs that may be part of an order, pours."""
    variables = Variables(problem, tables, costs, model, [Problem.START], [0], [model.new_constant(1)])
    for node in range(2, problem.nodes):
        for copy in range(_uses(problem, tables, costs, node)):
            vertex = len(variables.vertex_node)
            variables.vertex_node.append(node)
            variables.copy_of.append(copy)
            variables.done.append(model.new_bool_var(f"done {node} {copy}"))
            if tables.node[node, REFILL] >= 0:
                top = int(min(max(_most(problem, tables, node), 0.0) * POUR_SCALE, 1e9)) + 1
                variables.poured[vertex] = model.new_int_var(0, top, f"poured {node} {copy}")
    variables.halt, variables.light = halt, light
    if light:
        return variables
    possible = _possible(variables)
    variables.arcs = [(a, b, model.new_bool_var("")) for a, b in np.argwhere(possible).tolist()]
    return variables


def _uses(problem: Problem, tables: Tables, costs: Costs, node: int) -> int:
    if problem.covers[node]:
        return int(costs.node_seconds[node] <= problem.horizon)
    seconds = max(1, int(costs.node_seconds[node]))
    return int(min(tables.node[node, MAX_USES], problem.horizon // seconds))


def _most(problem: Problem, tables: Tables, node: int) -> float:
    """Most that can be poured: by level (see `most_poured`) and by the time there is."""
    per_unit = tables.pour[node, SECONDS_PER_UNIT]
    by_time = (problem.horizon + 1) / per_unit if per_unit > 0 else np.inf
    return float(min(most_poured(tables, node), by_time))


def _possible(variables: Variables) -> np.ndarray[tuple[int, int], np.dtype[np.bool_]]:
    """Whether vertex b may follow a directly in an order whose service copies are numbered in turn, shape (V, V)."""
    problem, costs = variables.problem, variables.costs
    nodes = np.array(variables.vertex_node)
    copies = np.array(variables.copy_of)
    entries = np.where(nodes == Problem.START, problem.entry[Problem.END], problem.entry[nodes])
    possible = costs.arc_seconds[np.ix_(problem.exit[nodes], entries)] <= problem.horizon
    covering = np.zeros((len(nodes), problem.takes + 1), dtype=np.int64)
    for vertex, node in enumerate(nodes.tolist()):
        covering[vertex, list(problem.covers[node])] = 1
    possible &= covering @ covering.T == 0
    for first, then in problem.before_after.tolist():
        possible &= ~np.outer(covering[:, then] == 1, covering[:, first] == 1)
    same = nodes[:, None] == nodes[None, :]
    possible &= ~(same & (copies[None, :] != copies[:, None] + 1))
    possible[DEPOT, copies > 0] = False
    possible[DEPOT, DEPOT] = False
    return np.asarray(possible, dtype=np.bool_)
