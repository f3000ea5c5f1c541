"""Write the README's picture of the shared week: ``python -m tests.pictures.make_glance``."""

from __future__ import annotations

from pathlib import Path

from planner.desk import open_week, plan_request
from planner.runsheet.glance import glance_svg
from planner.runsheet.sheet import Sheet

FOLDER = Path(__file__).parent
WEEK = FOLDER.parents[1] / "example_plans" / "shared_week.toml"


def main() -> None:
    """Plan the shared week and draw it at a glance."""
    plan = plan_request(open_week(WEEK), seconds=30)
    (FOLDER / "shared_week.svg").write_text(glance_svg(Sheet.of(plan)), encoding="utf-8")


if __name__ == "__main__":
    main()
