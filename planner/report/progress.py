"""Live progress while a plan is being sought: best so far, proven bound, gap, seconds."""

from __future__ import annotations

import time
from collections.abc import Callable, Generator
from contextlib import contextmanager
from typing import Protocol

from rich.console import Console
from rich.live import Live
from rich.text import Text

QUIET_S = 10.0
"""Without a terminal: longest silence while nothing gets better."""

NEWS_S = 1.0
"""Without a terminal: shortest time between two lines."""


class Progress(Protocol):
    """What the search reports; None where a number is not known yet."""

    @property
    def best_points(self) -> int | None:
        """Points of the best plan so far."""

    @property
    def points_bound(self) -> int | None:
        """No plan does more points."""

    @property
    def best_cost_h(self) -> float | None:
        """Cost of the best plan so far, in hours."""

    @property
    def cost_bound_h(self) -> float | None:
        """No plan that does these points costs less, in hours."""

    @property
    def gap(self) -> float | None:
        """Relative gap of the cost, 0 where it is proven least."""

    @property
    def elapsed_s(self) -> float:
        """Seconds since the search began."""


def progress_line(progress: Progress, elapsed_s: float | None = None) -> str:
    """One line: "12 s · 96 of at most 104 points · cost 25.70 h, at least 23.90 h · gap 7.0 %"."""
    seconds = progress.elapsed_s if elapsed_s is None else elapsed_s
    parts = [f"{seconds:.0f} s"]
    if progress.best_points is None:
        parts.append("no plan yet")
        if progress.points_bound is not None:
            parts.append(f"at most {progress.points_bound} points")
    else:
        most = "" if progress.points_bound is None else f" of at most {progress.points_bound}"
        parts.append(f"{progress.best_points}{most} points")
    if progress.best_cost_h is not None:
        bound = "" if progress.cost_bound_h is None else f", at least {progress.cost_bound_h:.2f} h"
        parts.append(f"cost {progress.best_cost_h:.2f} h{bound}")
    if progress.gap is not None:
        parts.append(f"gap {100 * progress.gap:.1f} %")
    return " · ".join(parts)


@contextmanager
def watching(console: Console) -> Generator[Callable[[Progress], None], None, None]:
    """Show progress on a console while the block runs; yields the function that takes the reports.

    On a terminal one line is kept up to date and vanishes at the end. Elsewhere a line is printed when the best plan or
    the bound gets better, at most one in `NEWS_S` seconds, and one in `QUIET_S` seconds otherwise. Reports may come
    from any thread.
    """
    if console.is_terminal and not console.is_dumb_terminal:
        display = _Moving()
        with Live(display, console=console, transient=True, refresh_per_second=4):
            yield display.report
    else:
        lines = _Lines(console)
        try:
            yield lines.report
        finally:
            lines.end()


class _Moving:
    """The line on a terminal; between two reports its seconds go on."""

    def __init__(self) -> None:
        self._latest: tuple[Progress, float] | None = None
        self._began_s = time.monotonic()

    def report(self, progress: Progress) -> None:
        self._latest = (progress, time.monotonic())

    def __rich__(self) -> Text:
        now_s = time.monotonic()
        if self._latest is None:
            return Text(f"{now_s - self._began_s:.0f} s · looking for a first plan", no_wrap=True, overflow="ellipsis")
        progress, at_s = self._latest
        return Text(progress_line(progress, progress.elapsed_s + now_s - at_s), no_wrap=True, overflow="ellipsis")


class _Lines:
    """Plain lines, for logs and pipes."""

    def __init__(self, console: Console) -> None:
        self._console = console
        self._shown = ""
        self._shown_s = -NEWS_S
        self._held: Progress | None = None

    def report(self, progress: Progress) -> None:
        news = _without_seconds(progress)
        if progress.elapsed_s - self._shown_s < (QUIET_S if news == self._shown else NEWS_S):
            self._held = progress
            return
        self._print(progress)

    def end(self) -> None:
        """Print the last news if it came too soon after other news."""
        if self._held is not None and _without_seconds(self._held) != self._shown:
            self._print(self._held)

    def _print(self, progress: Progress) -> None:
        self._shown, self._shown_s, self._held = _without_seconds(progress), progress.elapsed_s, None
        self._console.print(Text(progress_line(progress)), soft_wrap=True)


def _without_seconds(progress: Progress) -> str:
    """All but the seconds, as rounded as people see it."""
    return progress_line(progress, 0.0)
