"""Each family of constraints alone: still feasible, forced infeasible, and what it forbids."""

from __future__ import annotations

import dataclasses

import numpy as np
from ortools.sat.python import cp_model

from planner.optimise.cpsat import clock, levels, routing, spans
from planner.optimise.cpsat.variables import Variables, build_variables
from planner.optimise.moves import static_costs
from planner.optimise.problem import Problem
from planner.optimise.tables import build_tables
from tests.optimise.problems import Shape, random_problem

PLAIN = Shape(takes=3, places=3, refills=0, calendars=False)


def routed(problem: Problem) -> Variables:
    tables = build_tables(problem)
    variables = build_variables(problem, tables, static_costs(tables), cp_model.CpModel(), lambda: False)
    routing.build(variables, musts=True)
    return variables


def status(variables: Variables, *literals: object) -> str:
    solver = cp_model.CpSolver()
    solver.parameters.num_workers = 1
    model = variables.model.clone()
    for literal in literals:
        model.add(literal == 1)  # type: ignore[arg-type]
    return str(solver.status_name(solver.solve(model)))


def one_each(variables: Variables) -> list[object]:
    return [variables.visits(take)[0] for take in range(variables.problem.takes)]


def test_routing_lets_every_take_be_done_once() -> None:
    variables = routed(random_problem(1, PLAIN))
    assert status(variables, *one_each(variables)) == "OPTIMAL"
    twice = next(v for v in (variables.visits(t) for t in range(3)) if len(v) > 1)
    assert status(variables, *twice) == "INFEASIBLE"


def test_routing_wants_what_comes_before() -> None:
    problem = dataclasses.replace(random_problem(1, PLAIN), before_after=np.array([[0, 1]]))
    variables = routed(problem)
    without = [~literal for literal in variables.visits(0)]
    assert status(variables, variables.visits(1)[0], *without) == "INFEASIBLE"
    assert status(variables, variables.visits(1)[0]) == "OPTIMAL"


def test_spans_forbid_more_than_the_horizon() -> None:
    problem = random_problem(1, PLAIN)
    whole = routed(problem)
    spans.build(whole)
    assert status(whole, *one_each(whole)) == "OPTIMAL"
    shortest = int(static_costs(build_tables(problem)).node_seconds[2:].min())
    short = routed(dataclasses.replace(problem, horizon=2 * shortest))
    spans.build(short)
    assert status(short) == "OPTIMAL"
    assert len(short.visits(0)) == 0 or status(short, *(v[0] for v in map(short.visits, range(3)) if v)) == "INFEASIBLE"


def test_levels_forbid_more_use_than_there_is() -> None:
    problem = random_problem(1, PLAIN)
    full = routed(problem)
    levels.build(full)
    assert status(full, *one_each(full)) == "OPTIMAL"
    empty = dataclasses.replace(problem.reservoirs, level=np.full_like(problem.reservoirs.level, 0.01))
    dry = routed(dataclasses.replace(problem, reservoirs=empty))
    levels.build(dry)
    assert status(dry) == "INFEASIBLE"


def test_clock_keeps_visits_inside_their_windows() -> None:
    problem = random_problem(1, PLAIN)
    free = routed(problem)
    clock.build(free)
    assert status(free, *one_each(free)) == "OPTIMAL"
    calendars = dataclasses.replace(
        problem.calendars,
        first=np.append(problem.calendars.first, problem.calendars.first[-1] + 1),
        begin=np.append(problem.calendars.begin, 0),
        finish=np.append(problem.calendars.finish, 1),
    )
    blocks = problem.node_blocks
    calendar = blocks.calendar.copy()
    calendar[2] = len(calendars.first) - 2
    shut = dataclasses.replace(problem, calendars=calendars, node_blocks=dataclasses.replace(blocks, calendar=calendar))
    closed = routed(shut)
    clock.build(closed)
    assert status(closed) == "OPTIMAL"
    assert status(closed, closed.done[1]) == "INFEASIBLE"
