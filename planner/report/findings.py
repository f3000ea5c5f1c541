"""Findings for the terminal: the kind is a word, never a colour alone."""

from __future__ import annotations

from collections.abc import Sequence

from rich.console import Console
from rich.table import Table
from rich.text import Text

from planner.clock import WEEKDAYS, Clock
from planner.plan import Finding, Kind
from planner.report.wording import plain, rounded

STYLES = {Kind.STOP: "bold reverse", Kind.POLICY: "bold", Kind.WARN: "bold", Kind.NOTE: ""}
WORDS = {Kind.STOP: "STOP", Kind.POLICY: "POLICY", Kind.WARN: "warn", Kind.NOTE: "note"}


def findings_table(findings: Sequence[Finding], clock: Clock, console: Console) -> None:
    """Print findings, most serious first; one line says so where there are none."""
    if not findings:
        console.print(Text("No findings."))
        return
    table = Table(box=None, padding=(0, 2, 0, 0), show_edge=False, header_style="bold")
    for name in ("kind", "when", "step"):
        table.add_column(name, no_wrap=True)
    table.add_column("what", overflow="fold")
    order = list(Kind)
    for finding in sorted(findings, key=lambda finding: order.index(finding.kind)):
        when = ""
        if finding.at_s is not None:
            moment = clock.moment(finding.at_s)
            when = f"{WEEKDAYS[moment.weekday()]} {moment:%H:%M}"
        step = "" if finding.step is None else str(finding.step)
        table.add_row(Text(WORDS[finding.kind], STYLES[finding.kind]), when, step, _told(finding))
    console.print(table)


def _told(finding: Finding) -> Text:
    told = plain(finding.rule, "bold")
    told.append(": ")
    if finding.subject:
        told.append_text(plain(finding.subject)).append(": ")
    told.append_text(plain(finding.text))
    unit = f" {finding.unit}" if finding.unit else ""
    named = (("value", finding.value), ("limit", finding.limit), ("margin", finding.margin))
    numbers = [f"{name} {rounded(number, 4)}{unit}" for name, number in named if number is not None]
    if numbers:
        told.append(" ").append_text(plain(f"({', '.join(numbers)})"))
    if finding.mend:
        told.append(" Mend: ", "bold").append_text(plain(finding.mend))
    return told
