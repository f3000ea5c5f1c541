"""A stored plan of the shared week, so that no change of the solver changes a text or a picture of the screens.

``python -m tests.screens.stored_plan`` makes it anew, after a change of the plan's format or of the shared week.
"""

from __future__ import annotations

import gzip
from pathlib import Path

from planner.desk import open_week, plan_request
from planner.desk.remembered import Remembered
from planner.desk.session import Session
from planner.desk.solving import Effort
from planner.plan import Plan

PATH = Path(__file__).parent / "shared_week.plan.json.gz"
WEEK = Path(__file__).parents[2] / "example_plans" / "shared_week.toml"


def stored_plan() -> Plan:
    """The stored plan."""
    return Plan.from_json(gzip.decompress(PATH.read_bytes()))


def session_with_plan(folder: Path) -> Session:
    """A sitting at the files that the stored plan was made from, with the plan."""
    plan = stored_plan()
    for source in plan.sources:
        (folder / source.path).write_text(source.text, encoding="utf-8")
    week = folder / plan.source("week").path
    session = Session.begin(week, Remembered(folder / "state"), Effort(0.5, 0, reproducible=True))
    session.plan = plan
    return session


def main() -> None:
    """Make the stored plan."""
    plan = plan_request(open_week(WEEK), seconds=20.0, reproducible=True)
    PATH.write_bytes(gzip.compress(plan.to_json(), mtime=0))


if __name__ == "__main__":
    main()
