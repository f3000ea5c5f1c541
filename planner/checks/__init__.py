"""Judge plans and weeks by rules of their own: what is planned is never asked how it was planned."""

from planner.checks.judge import check_plan, check_week
from planner.checks.registry import RULES, Rule

__all__ = ["RULES", "Rule", "check_plan", "check_week"]
