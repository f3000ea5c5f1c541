"""``check`` and ``schema``: what is wrong with a file, and what a file may hold."""

from __future__ import annotations

import sys
from pathlib import Path

import click

from planner.cli.output import console, print_json, status_of


@click.command()
@click.argument("path", metavar="WEEK|PLAN", type=click.Path(path_type=Path))
@click.option("--json", "as_json", is_flag=True, help="Print the findings as JSON.")
def check(path: Path, as_json: bool) -> None:
    """Check a week file before it is planned, or a plan (its .json): every reason at once."""
    from dataclasses import asdict

    from planner import desk
    from planner.report import findings_table

    if path.suffix.lower() == ".json":
        made, findings = desk.check_plan_file(path)
        clock = made.clock
    else:
        request, findings = desk.check_week_file(path)
        clock = request.week.clock
    if as_json:
        print_json([asdict(finding) for finding in findings])
    elif findings:
        findings_table(findings, clock, console())
    else:
        click.echo("No findings.")
    sys.exit(status_of(findings))


@click.command()
def schema() -> None:
    """Print the JSON Schema of week and rig files."""
    from planner import desk

    print_json(desk.schemas())
