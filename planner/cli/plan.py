"""``plan``: from a week file to an ordered plan."""

from __future__ import annotations

import math
import signal
import sys
import tempfile
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from types import FrameType
from typing import Any

import click

from planner.cli.output import console, print_json, status_of
from planner.cli.sheet import write
from planner.errors import InputError, Problem


class _Seconds(click.FloatRange):
    """A length of time within bounds; not-a-number lies within none."""

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> float:
        """Read the text."""
        seconds = float(super().convert(value, param, ctx))
        if math.isnan(seconds):
            self.fail(f"{value} is not in the range {self.min}<=x<={self.max}.", param, ctx)
        return seconds


@click.command()
@click.argument("week", type=click.Path(path_type=Path))
@click.option(
    "-o", "--output", "folder", type=click.Path(path_type=Path, file_okay=False), help="Write the sheets here."
)
@click.option("--seconds", type=_Seconds(0.1, 86400), default=30.0, show_default=True, help="Time to search.")
@click.option("--seed", type=click.IntRange(0, 2**31 - 1), default=0, show_default=True, help="Start of the search.")
@click.option("--reproducible", is_flag=True, help="Stop on a count of work, not on the clock: same seed, same plan.")
@click.option("--json", "as_json", is_flag=True, help="Print the plan's numbers as JSON.")
def plan(week: Path, folder: Path | None, seconds: float, seed: int, reproducible: bool, as_json: bool) -> None:
    """Plan WEEK, print what is done when, and write its run sheet where -o says. Ctrl-C keeps the best plan so far."""
    from planner import desk
    from planner.report import as_data, summary, watching

    if folder is not None:
        _can_be_written(folder)
    request = desk.open_week(week)
    stop = threading.Event()
    with _stopping(stop), watching(console(stderr=True)) as on_progress:
        made = desk.plan_request(
            request, seconds=seconds, seed=seed, reproducible=reproducible, on_progress=on_progress, stop=stop
        )
    if as_json:
        print_json(as_data(made))
    else:
        summary(made, console())
    if folder is not None:
        write(made, folder, desk.sheet_formats(), review=False)
    sys.exit(status_of(made.findings))


def _can_be_written(folder: Path) -> None:
    """Raise InputError, before a search and not after it, where a folder cannot be made or written into."""
    try:
        there = next(path for path in (folder, *folder.absolute().parents) if path.exists())
        with tempfile.TemporaryFile(dir=there):
            return
    except (OSError, ValueError):
        wrong = Problem(str(folder)[:200], "", "", "expected a folder that can be written into")
    raise InputError([wrong])


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
