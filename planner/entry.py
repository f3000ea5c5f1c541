"""The command ``fridgeweek``: where the command line and the terminal screens meet."""

from __future__ import annotations

import os
import sys
from pathlib import Path

import click

from planner.cli import main as commands

_GROUP: type[click.Group] = type(commands)


@click.group(
    cls=_GROUP,
    invoke_without_command=True,
    help=commands.help,
    epilog=commands.epilog,
    params=list(commands.params),
    context_settings=dict(commands.context_settings),
)
@click.pass_context
def main(ctx: click.Context) -> None:
    """The group itself: without a command it opens the screens, where there is a terminal."""
    if ctx.invoked_subcommand is not None:
        return
    if not (sys.stdin.isatty() and sys.stderr.isatty()):
        click.echo(ctx.get_help())
        return
    _open(None, 30.0, 0, reproducible=False)


for _name, _command in commands.commands.items():
    main.add_command(_command, _name)


@main.command("open")
@click.argument("week", type=click.Path(path_type=Path), required=False)
@click.option("--seconds", type=click.FloatRange(0.1, 86400), default=30.0, show_default=True, help="Time to search.")
@click.option("--seed", type=click.IntRange(0, 2**31 - 1), default=0, show_default=True, help="Start of the search.")
@click.option("--reproducible", is_flag=True, help="Stop on a count of work, not on the clock: same seed, same plan.")
def open_(week: Path | None, seconds: float, seed: int, reproducible: bool) -> None:
    """Open WEEK on the screen; the last one if none is given, the small demo week the first time."""
    if not (sys.stdin.isatty() and sys.stderr.isatty()):
        raise click.UsageError("the screens need a terminal; `fridgeweek plan WEEK` needs none")
    _open(week, seconds, seed, reproducible=reproducible)


def _open(week: Path | None, seconds: float, seed: int, *, reproducible: bool) -> None:
    from planner.desk.session import Session
    from planner.desk.solving import Effort

    session = Session.begin(week, effort=Effort(seconds, seed, reproducible))  # an unusable file is told before

    from planner.screens.app import FridgeweekApp

    app = FridgeweekApp(session)
    app.run()
    if app.session.solve is not None:
        # Left while solving: compiled code hears of it only now and then, and tidying up after it takes its time.
        app.session.leave(0.2)
        sys.stdout.flush()
        sys.stderr.flush()
        os._exit(app.return_code or 0)
    if app.return_code:
        sys.exit(app.return_code)


__all__ = ["main"]
