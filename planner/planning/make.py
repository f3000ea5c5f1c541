"""From a request to a plan: compile, solve, decode, compare with hand orders, check."""

from __future__ import annotations

import threading
from collections.abc import Callable, Sequence
from dataclasses import replace
from importlib.metadata import PackageNotFoundError, version

from planner.errors import NoPlanError
from planner.files import Request
from planner.optimise.result import Progress as SolveProgress
from planner.optimise.result import Result, TraceStep
from planner.plan import Plan, Score, Step
from planner.planning.compile import Compiled, TakeNode, compile_week
from planner.planning.decode import Timing, steps_of
from planner.planning.hand import hand_orders
from planner.planning.left_out import left_out, why_no_plan
from planner.planning.progress import Progress

Listener = Callable[[Progress], None]

EXPLAIN_S = 4.0
PATIENT_S = 60.0  # enough for every try, so that the clock decides nothing


def plan_week(
    request: Request,
    *,
    seconds: float = 30.0,
    seed: int = 0,
    reproducible: bool = False,
    on_progress: Listener | None = None,
    stop: threading.Event | None = None,
) -> Plan:
    """The best plan of a week that the time allows, with its bounds, findings and hand-made comparisons.

    Parameters
    ----------
    seconds
        Time for the search; with ``reproducible`` the count of work that this stands for.
    seed
        Start of the search.
    on_progress
        Called with the state of the search, from the thread that called.
    stop
        Set it to get the best plan so far.

    Raises
    ------
    NoPlanError
        If no order of work does everything that must be done; the message says what stands in the way.
    """
    from planner.optimise import solve

    if request.week.present.persistent_current_A == "unknown":
        raise NoPlanError(
            "The persistent current is not known: no switch step may be made, so nothing can be planned. Staff first "
            "determine the field, then give present.persistent_current."
        )
    compiled = compile_week(request)

    def report(progress: SolveProgress) -> None:
        if on_progress is not None:
            on_progress(_progress(progress))

    result = solve(
        compiled.problem, seconds=seconds, seed=seed, reproducible=reproducible, on_progress=report, stop=stop
    )
    if not result.feasible:
        raise NoPlanError(why_no_plan(compiled, result))
    return assemble(compiled, result, seed=seed, reproducible=reproducible, stop=stop)


def assemble(
    compiled: Compiled,
    result: Result,
    *,
    seed: int = 0,
    reproducible: bool = False,
    stop: threading.Event | None = None,
) -> Plan:
    """The plan that a solve's answer stands for, explained, compared and checked."""
    from planner.checks import check_plan

    request = compiled.request
    week = request.week
    steps = steps_of(compiled, timings_of(result.trace))
    if compiled.recovering:
        steps = _with_call(compiled, steps)
    plan = Plan(
        title=week.title,
        rig=request.rig.name,
        zone=week.zone,
        start=week.clock.start,
        end=week.clock.moment(week.horizon_s),
        sources=request.sources,
        steps=steps,
        left_out=left_out(compiled, result, seconds=PATIENT_S if reproducible else EXPLAIN_S),
        score=_score(compiled, result, steps),
        compared=hand_orders(compiled, result, seed=seed, reproducible=reproducible, stop=stop),
        recovery=compiled.recovering,
        made_by=f"fridgeweek {_version()}",
    )
    return replace(plan, findings=check_plan(request, plan))


def timings_of(trace: Sequence[TraceStep]) -> list[Timing]:
    """When each node is done, from the optimiser's trace."""
    return [
        Timing(
            step.node,
            tuple(block.start for block in step.blocks if block.arc),
            tuple(block.start for block in step.blocks if not block.arc),
            step.poured,
        )
        for step in trace
    ]


def _score(compiled: Compiled, result: Result, steps: Sequence[Step]) -> Score:
    objective = result.objective
    assert objective is not None
    helium_L = sum((step.helium_before_L or 0.0) - (step.helium_after_L or 0.0) + step.drawn_L for step in steps)
    hours_per_litre = float(compiled.request.week.objective.hours_per_litre)
    moving_s = round(objective.cost - 3600 * hours_per_litre * helium_L)
    return Score(
        points=objective.prize,
        points_bound=result.prize_bound,
        moving_s=moving_s,
        litres=helium_L,
        cost_h=objective.cost / 3600,
        cost_bound_h=min(result.cost_bound, objective.cost) / 3600,
        ends_s=objective.end,
        hours_per_litre=hours_per_litre,
        proven=result.proven,
        stopped=str(result.stopped),
    )


def _with_call(compiled: Compiled, steps: tuple[Step, ...]) -> tuple[Step, ...]:
    contacts = compiled.request.rig.room.contacts
    whom = f"{contacts[0].role} ({contacts[0].reach})" if contacts else "the responsible person"
    note = f"The week begins below a helium line: call {whom} now. Nothing before helium is transferred."
    return (replace(steps[0], notes=(note, *steps[0].notes)), *steps[1:])


def _progress(progress: SolveProgress) -> Progress:
    objective = progress.objective
    feasible = objective is not None and objective.missing == 0
    return Progress(
        best_points=objective.prize if objective is not None and feasible else None,
        points_bound=progress.prize_bound,
        best_cost_h=objective.cost / 3600 if objective is not None and feasible else None,
        cost_bound_h=progress.cost_bound / 3600,
        gap=progress.gap if feasible else None,
        elapsed_s=progress.elapsed_s,
    )


def takes_done(compiled: Compiled, order: Sequence[int]) -> list[int]:
    """Takes in the order in which nodes do them."""
    return [node.take for node in (compiled.nodes[at] for at in order) if isinstance(node, TakeNode)]


def _version() -> str:
    try:
        return version("fridgeweek")
    except PackageNotFoundError:
        return "(not installed)"
