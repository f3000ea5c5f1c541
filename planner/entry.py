"""The command ``fridgeweek``: where the command line and the terminal screens meet."""

from __future__ import annotations

from planner.cli import main

__all__ = ["main"]
