"""What a check has to say."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum


class Kind(StrEnum):
    """How serious a finding is."""

    STOP = "stop"  # physical or maker's limit: never waived, no sheet to be run
    POLICY = "policy"  # site rule: a named role may waive it with a reason
    WARN = "warn"
    NOTE = "note"


@dataclass(frozen=True, slots=True)
class Finding:
    """One judgement, with its numbers.

    ``value``, ``limit`` and ``margin`` are in ``unit`` (margin is negative where the limit is broken); ``at_s`` is the
    first instant it fails, in seconds from the week's start; ``subject`` names the target, take or service concerned.
    """

    rule: str
    kind: Kind
    text: str
    value: float | None = None
    limit: float | None = None
    margin: float | None = None
    unit: str = ""
    at_s: int | None = None
    step: int | None = None
    subject: str = ""
    source: str = ""
    mend: str = ""


def worst(findings: list[Finding] | tuple[Finding, ...]) -> Kind | None:
    """The most serious kind among the findings, or None."""
    order = list(Kind)
    return min((finding.kind for finding in findings), key=order.index, default=None)
