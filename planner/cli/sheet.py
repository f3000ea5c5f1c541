"""``sheet``: the run sheet of a plan."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

import click

from planner.cli.output import CAUTION, say
from planner.errors import InputError, Problem

if TYPE_CHECKING:
    from planner.plan import Plan


@click.command()
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

    names = tuple(dict.fromkeys(name.strip() for name in formats.split(",") if name.strip()))
    if not names:
        expected = f"expected at least one of {', '.join(desk.sheet_formats())}"
        raise InputError([Problem("--as", "", f'"{formats[:40]}"', expected)])
    made = desk.open_plan(plan_path)
    for finding in desk.changed_files(made, plan_path.parent):
        say(f"{finding.kind}: {finding.text}")
    write(made, folder, names, review=review)


def write(made: Plan, folder: Path, formats: tuple[str, ...], *, review: bool) -> None:
    """Write sheets and say where they are."""
    from planner import desk

    for path in desk.write_sheets(made, folder, formats, review=review):
        say(f"wrote {path}")
    say(CAUTION)
