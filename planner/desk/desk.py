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
from planner.files.problems import shown
from planner.plan import PLAN_FORMAT, Finding, Plan
from planner.plan.sound import unsound
from planner.planning import Progress

LARGEST_PLAN = 20_000_000
MOST_FAULTS = 1000
MOST_VALUES = {b"{": 100_000, b"[": 250_000, b",": 750_000}
"""Signs in a plan's JSON, counted before it is read: reading takes up to 600 bytes for an object, and more to tell what
is wrong with it. A plan of the largest size holds nine tenths of these."""

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
        If the file is missing, is no plan of this version, or holds numbers that no plan can hold.
    """
    path = Path(path)
    text = _plan_text(path)
    try:
        plan = Plan.from_json(text)
    except ValidationError as error:
        raise InputError(_plan_problems(path.name, error)) from None
    if found := unsound(plan):
        raise InputError([Problem(path.name, where, "", expected) for where, expected in found])
    return plan


def _plan_text(path: Path) -> bytes:
    wrong = ""
    try:
        if path.stat().st_size > LARGEST_PLAN:
            wrong = f"expected at most {LARGEST_PLAN} bytes"
        elif not path.is_file():
            wrong = "expected a file"
        else:
            text = path.read_bytes()
            if all(text.count(sign) <= most for sign, most in MOST_VALUES.items()):
                return text
            wrong = "is no plan made by this program: it holds too many values"
    except FileNotFoundError:
        wrong = "there is no such file"
    except (OSError, ValueError) as error:
        wrong = f"cannot be read: {str(error)[:200]}"
    raise InputError([Problem(str(path)[:200], "", "", wrong)])


def _plan_problems(name: str, error: ValidationError) -> list[Problem]:
    """What is wrong with a file that should be a plan: not one at all, of another version, or damaged."""
    if error.error_count() > MOST_FAULTS:
        return [Problem(name, "", "", "is no plan made by this program")]
    details = error.errors(include_url=False)
    first = details[0]
    if first["type"] == "json_invalid":
        return [Problem(name, "", "", f"not valid JSON: {first['ctx']['error']}")]
    other = next((detail for detail in details if detail["loc"] == ("format",) and detail["type"] != "missing"), None)
    if other is not None:
        return [Problem(name, "format", shown(other["input"]), f"this program reads plan format {PLAN_FORMAT}")]
    if sum(detail["type"] == "missing" and len(detail["loc"]) == 1 for detail in details) > 3 or not first["loc"]:
        return [Problem(name, "", "", "is no plan made by this program")]
    places = [(".".join(str(part) for part in detail["loc"]), detail["msg"]) for detail in details[:5]]
    return [Problem(name, where, "", f"is damaged: {message}") for where, message in places]


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
