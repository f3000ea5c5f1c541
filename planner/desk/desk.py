"""Open, plan, check, write: every command of either face is one call here."""

from __future__ import annotations

import hashlib
import threading
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from planner.errors import InputError, Problem
from planner.files import Request, Rig, Week, read_week
from planner.plan import PLAN_FORMAT, Finding, Plan
from planner.planning import Progress

LARGEST_PLAN = 200_000_000

open_week = read_week


def plan_request(
    request: Request,
    *,
    seconds: float = 30.0,
    seed: int = 0,
    reproducible: bool = False,
    on_progress: Callable[[Progress], None] | None = None,
    stop: threading.Event | None = None,
) -> Plan:
    """Plan a week; see `planner.planning.plan_week`, which raises NoPlanError where no plan exists."""
    from planner.planning import plan_week

    return plan_week(request, seconds=seconds, seed=seed, reproducible=reproducible, on_progress=on_progress, stop=stop)


def open_plan(path: Path | str) -> Plan:
    """Read a plan's JSON.

    Raises
    ------
    InputError
        If the file is missing or is no plan of this version.
    """
    path = Path(path)
    try:
        if path.stat().st_size > LARGEST_PLAN:
            raise InputError([Problem(path.name, "", "", f"expected at most {LARGEST_PLAN} bytes")])
        text = path.read_bytes()
    except OSError as error:
        raise InputError([Problem(str(path), "", "", f"cannot be read: {error.strerror}")]) from None
    try:
        plan = Plan.from_json(text)
    except ValidationError as error:
        problems = [
            Problem(path.name, ".".join(str(part) for part in detail["loc"]), "", detail["msg"])
            for detail in error.errors(include_url=False)[:20]
        ]
        raise InputError(problems) from None
    if plan.format != PLAN_FORMAT:
        expected = f"this program reads plan format {PLAN_FORMAT}"
        raise InputError([Problem(path.name, "format", str(plan.format), expected)])
    return plan


def check_week_file(path: Path | str) -> tuple[Request, tuple[Finding, ...]]:
    """A week and what the checks say of it before it is planned."""
    from planner.checks import check_week

    request = read_week(path)
    return request, check_week(request)


def check_plan_file(path: Path | str) -> tuple[Plan, tuple[Finding, ...]]:
    """A plan and what the checks say of it, by the week and rig it carries and the files as they stand now."""
    from planner.checks import check_plan
    from planner.files import request_of

    plan = open_plan(path)
    return plan, (*check_plan(request_of(plan.sources), plan), *changed_files(plan, Path(path).parent))


def changed_files(plan: Plan, folder: Path) -> list[Finding]:
    """A warning for each file the plan was made from that is now found beside the plan with other content."""
    from planner.plan import Kind

    findings = []
    for source in plan.sources:
        path = folder / source.path
        if not path.is_file():
            continue
        if hashlib.sha256(path.read_bytes()).hexdigest() != source.sha256:
            text = f"the {source.role} file {source.path} has changed since this plan was made"
            findings.append(Finding("changed file", Kind.WARN, text, subject=source.path, mend="plan again"))
    return findings


def sheet_formats() -> tuple[str, ...]:
    """Names of the sheet formats."""
    from planner.runsheet import FORMATS

    return tuple(FORMATS)


def write_sheets(plan: Plan, folder: Path, formats: Sequence[str], *, review: bool = False) -> tuple[Path, ...]:
    """Write the sheets of a plan; raises RefusedError where a limit is broken and it is not a review copy.

    The plan is checked anew: what stands in its file about itself is not believed.
    """
    from dataclasses import replace

    from planner.checks import check_plan
    from planner.files import request_of
    from planner.runsheet import write_sheets as write

    findings = check_plan(request_of(plan.sources), plan)
    return write(replace(plan, findings=findings), folder, formats, review=review)


def schemas() -> dict[str, Any]:
    """JSON Schema of week and rig files."""
    return {"week": Week.model_json_schema(), "rig": Rig.model_json_schema()}
