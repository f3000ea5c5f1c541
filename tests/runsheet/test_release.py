"""A plan with a `stop` or an unwaived `policy` finding is not exported to be run (the project's safety stance)."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest

from planner.errors import RefusedError
from planner.plan import Kind, Plan, StepKind, magnitude
from planner.runsheet import write_sheets
from tests.runsheet.plans import with_finding


def test_a_stop_is_refused_with_its_numbers_and_nothing_is_written(small: Plan, tmp_path: Path) -> None:
    with pytest.raises(RefusedError) as refused:
        write_sheets(with_finding(small, Kind.STOP), tmp_path / "out")
    told = str(refused.value)
    assert "stop, ramp rate (step 2): the ramp is faster than the table" in told
    assert "value 0.3 T/min, limit 0.28 T/min, margin −0.02 T/min" in told
    assert "To mend: ramp at 0.28 T/min" in told
    assert "nobody may waive" in told
    assert not (tmp_path / "out").exists()


def test_a_policy_is_refused_and_the_role_named(small: Plan, tmp_path: Path) -> None:
    with pytest.raises(RefusedError) as refused:
        write_sheets(with_finding(small, Kind.POLICY), tmp_path)
    told = str(refused.value)
    assert "policy, ramp rate" in told
    assert "Only the role “Rig responsible” (see the door) could waive a site rule" in told
    assert "no waiver is recorded" in told


@pytest.mark.parametrize("kind", [Kind.WARN, Kind.NOTE])
def test_other_findings_do_not_refuse(small: Plan, tmp_path: Path, kind: Kind) -> None:
    assert len(write_sheets(with_finding(small, kind), tmp_path, ("csv",))) == 1


def only_recovering(plan: Plan) -> Plan:
    """A plan of its waits, its transfers and its ways down."""
    kept = [
        step
        for step in plan.steps
        if step.kind is not StepKind.TAKE
        and all(magnitude(leg.coil[1].field_T) <= magnitude(leg.coil[0].field_T) for leg in step.legs if leg.coil)
    ]
    return replace(plan, steps=tuple(kept), recovery=True)


@pytest.mark.parametrize("kind", [Kind.STOP, Kind.POLICY])
def test_a_recovery_plan_is_always_written_and_says_so(small: Plan, tmp_path: Path, kind: Kind) -> None:
    plan = only_recovering(with_finding(small, kind))
    pages = [path.read_text(encoding="utf-8") for path in write_sheets(plan, tmp_path, ("html", "csv"))]
    assert all("RECOVERY PLAN" in page for page in pages)
    assert "REVIEW COPY" not in pages[0]


@pytest.mark.parametrize("kind", [Kind.STOP, Kind.POLICY])
def test_a_plan_that_measures_after_its_recovery_is_as_any_other(small: Plan, tmp_path: Path, kind: Kind) -> None:
    with pytest.raises(RefusedError):
        write_sheets(replace(with_finding(small, kind), recovery=True), tmp_path)


@pytest.mark.parametrize("kind", [Kind.STOP, Kind.POLICY])
def test_a_review_copy_is_marked_in_name_and_on_every_page(small: Plan, tmp_path: Path, kind: Kind) -> None:
    paths = write_sheets(with_finding(small, kind), tmp_path, review=True)
    assert all("REVIEW_COPY" in path.name for path in paths)
    page = paths[0].read_text(encoding="utf-8")
    # the fixed heading and the running foot are what a browser repeats on each printed page
    assert '<div class="banner top">REVIEW COPY, NOT TO BE RUN</div>' in page
    assert "REVIEW COPY, NOT TO BE RUN · plan" in page.split('<footer class="running">')[1]
    rows = paths[1].read_text(encoding="utf-8-sig").splitlines()[1:]
    assert rows
    assert all('"REVIEW COPY, NOT TO BE RUN"' in row for row in rows)
