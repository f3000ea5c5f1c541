"""What every command prints, and with which status it ends: data on stdout, everything else on stderr.

Exit status: 0 fine; 1 a `stop` finding; 2 unusable input or usage; 3 no plan exists.
"""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import click

from planner.errors import NoPlanError, PlannerError, RefusedError, printable

if TYPE_CHECKING:
    from rich.console import Console

    from planner.plan import Finding

FINE, STOP, UNUSABLE, NO_PLAN = 0, 1, 2, 3

CAUTION = (
    "A planning aid: it protects neither magnet nor people. The maker's limits, the rig's interlocks, local rules and "
    "licensed people come first."
)


def say(text: str) -> None:
    """A line on stderr."""
    click.echo(printable(text), err=True)


def say_error(error: PlannerError) -> int:
    """Every line of an error on stderr; gives the exit status."""
    for line in str(error).splitlines():
        say(line)
    if isinstance(error, NoPlanError):
        return NO_PLAN
    return STOP if isinstance(error, RefusedError) else UNUSABLE


def print_json(data: Any) -> None:
    """Data as JSON on stdout."""
    click.echo(json.dumps(data, indent=1, ensure_ascii=False, default=str))


def console(*, stderr: bool = False) -> Console:
    """A console on stdout or stderr."""
    from rich.console import Console

    return Console(stderr=stderr, highlight=False)


def status_of(findings: tuple[Finding, ...]) -> int:
    """The exit status that findings call for."""
    from planner.plan import Kind, worst

    return STOP if worst(findings) is Kind.STOP else FINE
