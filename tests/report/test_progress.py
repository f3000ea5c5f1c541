"""Progress on a terminal and without one."""

from __future__ import annotations

import io
import threading
import time
from dataclasses import dataclass

import pytest
from rich.console import Console

from planner.report import progress_line, watching


@dataclass
class Report:
    best_points: int | None = None
    points_bound: int | None = None
    best_cost_h: float | None = None
    cost_bound_h: float | None = None
    gap: float | None = None
    elapsed_s: float = 0.0


def test_one_line_says_best_bound_gap_and_seconds() -> None:
    assert progress_line(Report()) == "0 s · no plan yet"
    assert progress_line(Report(points_bound=104, elapsed_s=1)) == "1 s · no plan yet · at most 104 points"
    assert progress_line(Report(96, 104, 25.7, 23.9, 0.07, 12.4)) == (
        "12 s · 96 of at most 104 points · cost 25.70 h, at least 23.90 h · gap 7.0 %"
    )
    assert progress_line(Report(96, None, 25.7, None, None, 3)) == "3 s · 96 points · cost 25.70 h"


def test_without_a_terminal_a_line_for_each_news_and_one_in_ten_seconds() -> None:
    out = io.StringIO()
    with watching(Console(file=out, width=20)) as on_progress:
        for second in range(25):
            on_progress(Report(90 if second < 3 else 96, 104, elapsed_s=second))
    assert out.getvalue().splitlines() == [
        "0 s · 90 of at most 104 points",
        "3 s · 96 of at most 104 points",
        "13 s · 96 of at most 104 points",
        "23 s · 96 of at most 104 points",
    ]


def test_news_too_small_to_be_seen_is_no_line() -> None:
    out = io.StringIO()
    with watching(Console(file=out)) as on_progress:
        for step in range(5):
            on_progress(Report(96, 104, 25.7 - 1e-6 * step, 23.9 + 1e-6 * step, 0.07, step / 10))
    assert len(out.getvalue().splitlines()) == 1


def test_a_flood_of_news_is_thinned_and_its_last_is_kept() -> None:
    out = io.StringIO()
    with watching(Console(file=out)) as on_progress:
        for step in range(26):
            on_progress(Report(step, 50, elapsed_s=step / 10))
    assert [line.split()[3] for line in out.getvalue().splitlines()] == ["0", "10", "20", "25"]


@pytest.mark.parametrize("no_color", [True, False])
def test_on_a_terminal_one_line_that_vanishes(no_color: bool) -> None:
    out = io.StringIO()
    console = Console(file=out, width=80, force_terminal=True, no_color=no_color, _environ={"TERM": "xterm"})
    with watching(console) as on_progress:
        on_progress(Report(96, 104, 25.7, 23.9, 0.07, 12.0))
        time.sleep(0.4)
    told = out.getvalue()
    assert "96 of at most 104 points" in told
    assert "looking for a first plan" in told
    assert told.endswith(("\x1b[2K", "\x1b[?25h", "\r\x1b[1A\x1b[2K"))


def test_a_dumb_terminal_gets_plain_lines() -> None:
    out = io.StringIO()
    console = Console(file=out, width=80, force_terminal=True, _environ={"TERM": "dumb"})
    with watching(console) as on_progress:
        on_progress(Report(1, 2, elapsed_s=5))
    assert out.getvalue() == "5 s · 1 of at most 2 points\n"


def test_reports_may_come_from_another_thread_and_an_error_ends_the_display() -> None:
    out = io.StringIO()
    console = Console(file=out, width=80, force_terminal=True, _environ={"TERM": "xterm"})

    def interrupted() -> None:
        with watching(console) as on_progress:
            worker = threading.Thread(target=lambda: [on_progress(Report(at, 50)) for at in range(50)])
            worker.start()
            worker.join()
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        interrupted()
    assert "\x1b[?25h" in out.getvalue()  # the cursor is back
