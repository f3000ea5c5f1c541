"""The registry of rules: what each protects, where its limit stands, and the functions that judge by it."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from planner.plan import Finding, Kind

if TYPE_CHECKING:
    from planner.checks.plan_view import PlanView
    from planner.checks.week_view import WeekView

PlanJudge = Callable[["PlanView"], Iterator[Finding]]
WeekJudge = Callable[["WeekView"], Iterator[Finding]]


@dataclass(frozen=True, slots=True)
class Rule:
    """One rule, named in plain words.

    ``protects`` says what is lost where it is broken; ``source`` is the line of the rig or week file that holds the
    limit, or a published formula; ``kind`` is how serious a breach is unless its finding says otherwise.
    The judges of a rule are added with the decorators `plan`, `week` and `week_last`.
    """

    name: str
    family: str
    protects: str
    source: str
    kind: Kind
    of_plan: list[PlanJudge] = field(default_factory=list, repr=False, compare=False)
    of_week: list[WeekJudge] = field(default_factory=list, repr=False, compare=False)
    of_week_last: list[WeekJudge] = field(default_factory=list, repr=False, compare=False)

    def plan(self, judge: PlanJudge) -> PlanJudge:
        """Let ``judge`` judge plans by this rule."""
        self.of_plan.append(judge)
        return judge

    def week(self, judge: WeekJudge) -> WeekJudge:
        """Let ``judge`` judge weeks before planning by this rule."""
        self.of_week.append(judge)
        return judge

    def week_last(self, judge: WeekJudge) -> WeekJudge:
        """Let ``judge`` judge weeks once all others have: it may read what they found impossible."""
        self.of_week_last.append(judge)
        return judge

    def finding(
        self,
        text: str,
        *,
        kind: Kind | None = None,
        source: str | None = None,
        value: float | None = None,
        most: float | None = None,
        least: float | None = None,
        unit: str = "",
        at_s: float | None = None,
        step: int | None = None,
        subject: str = "",
        mend: str = "",
    ) -> Finding:
        """A finding of this rule. ``most`` or ``least`` is the limit; the margin, negative if broken, follows."""
        limit = most if most is not None else least
        margin = None
        if value is not None and limit is not None:
            margin = limit - value if most is not None else value - limit
        return Finding(
            rule=self.name,
            kind=self.kind if kind is None else kind,
            text=text,
            value=value,
            limit=limit,
            margin=margin,
            unit=unit,
            at_s=None if at_s is None else math.ceil(at_s - 1e-6),
            step=step,
            subject=subject,
            source=self.source if source is None else source,
            mend=mend,
        )


RULES: dict[str, Rule] = {}
"""Every rule by name, in the order of registration."""


def register(rule: Rule) -> Rule:
    """Add a rule to the registry; its name must be new."""
    if rule.name in RULES:
        raise ValueError(f'there is a rule "{rule.name}" already')
    RULES[rule.name] = rule
    return rule


def sorted_findings(findings: Iterator[Finding] | list[Finding]) -> tuple[Finding, ...]:
    """Findings by seriousness, then time (those without an instant last), then rule."""
    order = list(Kind)

    def key(finding: Finding) -> tuple[int, float, str, str]:
        at = math.inf if finding.at_s is None else finding.at_s
        return order.index(finding.kind), at, finding.rule, finding.subject

    return tuple(sorted(findings, key=key))
