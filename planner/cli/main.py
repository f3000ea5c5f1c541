"""The command ``fridgeweek``: data on stdout, everything else on stderr.

Exit status: 0 fine; 1 a `stop` finding; 2 unusable input or usage; 3 no plan exists.
"""

from __future__ import annotations

import json
import signal
import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from types import FrameType
from typing import TYPE_CHECKING, Any

import click

from planner.errors import NoPlanError, PlannerError, RefusedError

if TYPE_CHECKING:
    from rich.console import Console

    from planner.plan import Finding, Plan

FINE, STOP, UNUSABLE, NO_PLAN = 0, 1, 2, 3

CAUTION = (
    "A planning aid: it protects neither magnet nor people. The maker's limits, the rig's interlocks, local rules and "
    "licensed people come first."
)


class _Command(click.Group):
    """Turns the program's own errors into messages and exit statuses, for every command alike."""

    def invoke(self, ctx: click.Context) -> Any:
        try:
            return super().invoke(ctx)
        except PlannerError as error:
            for line in str(error).splitlines():
                click.echo(line, err=True)
            sys.exit(_status(error))


def _status(error: PlannerError) -> int:
    if isinstance(error, NoPlanError):
        return NO_PLAN
    return STOP if isinstance(error, RefusedError) else UNUSABLE


@click.group(cls=_Command, epilog=CAUTION, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(package_name="fridgeweek")
def main() -> None:
    """Plan a week of cryostat and magnet time: order the sweeps, check every limit, write the run sheet."""


@main.command()
@click.argument("week", type=click.Path(path_type=Path))
@click.option(
    "-o", "--output", "folder", type=click.Path(path_type=Path, file_okay=False), help="Write the sheets here."
)
@click.option("--seconds", type=click.FloatRange(0.1, 86400), default=30.0, show_default=True, help="Time to search.")
@click.option("--seed", type=click.IntRange(0, 2**31 - 1), default=0, show_default=True, help="Start of the search.")
@click.option("--reproducible", is_flag=True, help="Stop on a count of work, not on the clock: same seed, same plan.")
@click.option("--json", "as_json", is_flag=True, help="Print the plan's numbers as JSON.")
def plan(week: Path, folder: Path | None, seconds: float, seed: int, reproducible: bool, as_json: bool) -> None:
    """Plan WEEK, print what is done when, and write its run sheet where -o says. Ctrl-C keeps the best plan so far."""
    from planner import desk
    from planner.report import summary, watching

    request = desk.open_week(week)
    out, err = _console(), _console(stderr=True)
    stop = threading.Event()
    with _stopping(stop), watching(err) as on_progress:
        made = desk.plan_request(
            request, seconds=seconds, seed=seed, reproducible=reproducible, on_progress=on_progress, stop=stop
        )
    if as_json:
        _print_json(_plan_data(made))
    else:
        summary(made, out)
    if folder is not None:
        _write(made, folder, desk.sheet_formats(), review=False)
    sys.exit(_worst(made.findings))


@main.command()
@click.argument("path", metavar="WEEK|PLAN", type=click.Path(path_type=Path))
@click.option("--json", "as_json", is_flag=True, help="Print the findings as JSON.")
def check(path: Path, as_json: bool) -> None:
    """Check a week file before it is planned, or a plan (its .json): every reason at once."""
    from planner import desk
    from planner.report import findings_table

    if path.suffix.lower() == ".json":
        made, findings = desk.check_plan_file(path)
        clock = made.clock
    else:
        request, findings = desk.check_week_file(path)
        clock = request.week.clock
    if as_json:
        _print_json([_finding_data(finding) for finding in findings])
    elif findings:
        findings_table(findings, clock, _console())
    else:
        click.echo("No findings.")
    sys.exit(_worst(findings))


@main.command()
@click.argument("plan_path", metavar="PLAN", type=click.Path(path_type=Path))
@click.option(
    "-o", "--output", "folder", type=click.Path(path_type=Path, file_okay=False), default=Path(), help="Folder."
)
@click.option("--as", "formats", default="html,csv,json", show_default=True, help="Formats, with commas between them.")
@click.option(
    "--review", is_flag=True, help="A copy to look at, marked as not to be run; written whatever the checks say."
)
def sheet(plan_path: Path, folder: Path, formats: str, review: bool) -> None:
    """Write the run sheet of PLAN (its .json). Refused where a limit is broken."""
    from planner import desk

    made = desk.open_plan(plan_path)
    for finding in desk.changed_files(made, plan_path.parent):
        click.echo(f"{finding.kind}: {finding.text}", err=True)
    _write(made, folder, tuple(name.strip() for name in formats.split(",") if name.strip()), review=review)


@main.command()
def schema() -> None:
    """Print the JSON Schema of week and rig files."""
    from planner import desk

    _print_json(desk.schemas())


def _write(made: Plan, folder: Path, formats: tuple[str, ...], *, review: bool) -> None:
    from planner import desk

    for path in desk.write_sheets(made, folder, formats, review=review):
        click.echo(f"wrote {path}", err=True)
    click.echo(CAUTION, err=True)


def _console(*, stderr: bool = False) -> Console:
    from rich.console import Console

    return Console(stderr=stderr, highlight=False)


def _worst(findings: tuple[Finding, ...]) -> int:
    from planner.plan import Kind, worst

    return STOP if worst(findings) is Kind.STOP else FINE


def _finding_data(finding: Finding) -> dict[str, Any]:
    from dataclasses import asdict

    return asdict(finding)


def _plan_data(made: Plan) -> dict[str, Any]:
    from planner.report import as_data

    return as_data(made)


def _print_json(data: Any) -> None:
    click.echo(json.dumps(data, indent=1, ensure_ascii=False, default=str))


@contextmanager
def _stopping(stop: threading.Event) -> Iterator[None]:
    """The first Ctrl-C asks the solve for its best so far; the second one ends the program."""

    def asked(_signal: int, _frame: FrameType | None) -> None:
        if stop.is_set():
            raise KeyboardInterrupt
        stop.set()

    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = signal.signal(signal.SIGINT, asked)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
