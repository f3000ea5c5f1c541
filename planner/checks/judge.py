"""Run every rule over a plan or a week: all reasons at once, the most serious first."""

from __future__ import annotations

from planner.checks import rules
from planner.checks.plan_view import PlanView
from planner.checks.registry import RULES, sorted_findings
from planner.checks.week_view import WeekView
from planner.files import Request
from planner.plan import Finding, Kind, Plan

FAMILIES = rules.__all__


def check_plan(request: Request, plan: Plan) -> tuple[Finding, ...]:
    """Judge a plan, ours or anybody's, against the week and rig it answers.

    Parameters
    ----------
    request
        Week and rig; `planner.files.request_of` gives those whose texts the plan carries.
    plan
        Its claimed states, legs, times and litres are judged; the findings it carries are not read.

    Returns
    -------
    tuple of Finding
        Every breach of every rule, by seriousness, then time. In a recovery plan the helium lines are warnings until
        its first transfer has ended or its first other work begins.
    """
    view = PlanView(request, plan)
    return sorted_findings([found for rule in RULES.values() for judge in rule.of_plan for found in judge(view)])


def check_week(request: Request) -> tuple[Finding, ...]:
    """Judge a week before planning: what cannot be done, what will not come out as asked, and why.

    Returns
    -------
    tuple of Finding
        By seriousness, then time.
    """
    view = WeekView(request)
    found = [finding for rule in RULES.values() for judge in rule.of_week for finding in judge(view)]
    for finding in sorted_findings(found):
        if finding.kind in (Kind.STOP, Kind.POLICY) and finding.subject in view.targets:
            view.impossible.setdefault(finding.subject, finding)
    found += [finding for rule in RULES.values() for judge in rule.of_week_last for finding in judge(view)]
    return sorted_findings(found)
