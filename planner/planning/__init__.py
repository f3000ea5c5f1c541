"""Compile a week into the optimiser's problem, and its answer into a plan."""

from planner.planning.make import plan_week
from planner.planning.progress import Progress

__all__ = ["Progress", "plan_week"]
