"""Small random weeks: the plan is the best of all orders, alternatives and services, and passes the checks."""

from __future__ import annotations

from pathlib import Path

import pytest

from planner.errors import NoPlanError
from planner.files import Request
from planner.plan import Kind, StepKind
from planner.planning import plan_week
from planner.planning.compile import compile_week
from planner.planning.services import Service
from tests.optimise.brute import best_order
from tests.planning.weeks import random_request

MOST_NODES = 8


def small_request(folder: Path, seed: int) -> Request:
    """At most five takes, fewer where alternatives would make brute force slow."""
    for takes in (2 + seed % 4, 3, 2, 1):
        request = random_request(folder, 1000 + seed, takes)
        nodes = compile_week(request).nodes
        if sum(node is not None for node in nodes) <= MOST_NODES:
            return request
    return request


@pytest.mark.parametrize("seed", range(60))
def test_plan_equals_brute_force_and_passes_the_checks(tmp_path: Path, seed: int) -> None:
    request = small_request(tmp_path, seed)
    compiled = compile_week(request)
    services = {node.name for node in compiled.nodes if isinstance(node, Service)}
    assert len(services) <= 2
    expected, _ = best_order(compiled.problem)
    if expected is None or expected[0] > 0:
        with pytest.raises(NoPlanError):
            plan_week(request, seconds=10)
        return
    plan = plan_week(request, seconds=10)
    assert plan.score.points == -expected[1]
    assert plan.score.cost_h * 3600 == pytest.approx(expected[2], abs=1e-4)
    assert plan.score.ends_s == expected[3]
    assert plan.score.proven
    assert [f.text for f in plan.findings if f.kind in (Kind.STOP, Kind.POLICY)] == []


def test_the_small_weeks_ask_for_everything(tmp_path: Path) -> None:
    """Among them some have no plan, some leave takes out, some transfer helium, some wait."""
    plans, none = [], 0
    for seed in range(60):
        try:
            plans.append(plan_week(small_request(tmp_path, seed), seconds=10))
        except NoPlanError:
            none += 1
    assert none >= 2
    assert sum(bool(plan.left_out) for plan in plans) >= 5
    assert sum(any(step.service == "helium transfer" for step in plan.steps) for plan in plans) >= 4
    assert sum(any(step.kind is StepKind.WAIT for step in plan.steps[:-1]) for plan in plans) >= 10
    assert sum(any(leg.action == "heater off" for step in plan.steps for leg in step.legs) for plan in plans) >= 1
