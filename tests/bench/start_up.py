"""How long ``fridgeweek --help`` and its neighbours take, from the start of the process to its end.

Run ``python tests/bench/start_up.py``. The aim for ``--help`` is 0.3 s.
"""

from __future__ import annotations

import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).parents[2]
TRIES = 7
LINES = (
    ("--help",),
    ("plan", "--help"),
    ("new", "rig", "--help"),
    ("schema",),
    ("check", "example_plans/first_week.toml"),
)


def wall_s(line: tuple[str, ...]) -> list[float]:
    """Sorted wall times of several runs."""
    found = []
    for _ in range(TRIES):
        began = time.perf_counter()
        subprocess.run([sys.executable, "-m", "planner", *line], cwd=ROOT, capture_output=True, check=False)
        found.append(time.perf_counter() - began)
    return sorted(found)


if __name__ == "__main__":
    for line in LINES:
        times = wall_s(line)
        print(f"{' '.join(line):40} best {times[0]:.2f} s, middle {times[TRIES // 2]:.2f} s of {TRIES}")
