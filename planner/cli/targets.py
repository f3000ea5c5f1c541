"""``targets``: a spreadsheet becomes targets of a week."""

from __future__ import annotations

from pathlib import Path

import click

from planner.cli.output import say


@click.command()
@click.argument("sheet", type=click.Path(path_type=Path))
@click.option("--into", "week", type=click.Path(path_type=Path), help="Append to this week file; its comments stay.")
@click.option("--sheet", "name", help="Name of the sheet in a workbook; left out, its first one.")
@click.option("--kind", help="Kind of target of the rows that do not say.")
@click.option("--keep-good", is_flag=True, help="Leave bad rows out, and say so, instead of refusing them all.")
def targets(sheet: Path, week: Path | None, name: str | None, kind: str | None, keep_good: bool) -> None:
    """Read targets from SHEET (.csv or .xlsx) and print them as TOML, or put them into a week file.

    The first row holds the headings: name, kind, sample, field (T), filling, temperature (mK), duration (h) and so on.
    Units stand in the heading or in the cell. Formulas are never evaluated.
    """
    from planner import desk

    found = desk.read_targets(sheet, into=week, name=name, kind=kind, keep_good=keep_good)
    for problem in found.problems:
        say(f"left out: {problem}")
    if week is None:
        click.echo(found.text(), nl=False)
        return
    desk.append_targets(week, found)
    count = len(found.tables)
    say(f"put {count} target{'s' if count > 1 else ''} into {week}")
