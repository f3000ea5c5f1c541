"""Copies of the first week in a folder of a test, and sittings at them."""

from __future__ import annotations

import shutil
from pathlib import Path

from planner.desk.document import Document
from planner.desk.remembered import Remembered
from planner.desk.session import Session
from planner.desk.solving import Effort

EXAMPLES = Path(__file__).parents[2] / "example_plans"


def week_in(folder: Path, name: str = "first_week.toml") -> Path:
    """A copy of an example week, with the wet rig."""
    for one in (name, "wet_dilution.rig.toml"):
        shutil.copy(EXAMPLES / one, folder / one)
    return folder / name


def document_in(folder: Path) -> Document:
    """The first week, opened."""
    return Document.open(week_in(folder))


def session_in(folder: Path) -> Session:
    """A sitting at the first week; a solve stops on a small count of work."""
    return Session.begin(week_in(folder), Remembered(folder / "state"), Effort(0.3, 0, reproducible=True))
