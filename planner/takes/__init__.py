"""Targets become takes: indivisible measurements with durations from rate table, lock-in, settling and dwell."""

from planner.takes.expand import context_of, expand, precedence
from planner.takes.take import Alternative, Context, Impossible, Take

__all__ = ["Alternative", "Context", "Impossible", "Take", "context_of", "expand", "precedence"]
