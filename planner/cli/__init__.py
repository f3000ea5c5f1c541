"""The command line."""

from planner.cli.main import main

__all__ = ["main"]
