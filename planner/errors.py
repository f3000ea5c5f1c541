"""Every error the program raises on purpose.

::

    PlannerError
    ├── InputError (ValueError)       a file or value cannot be used; carries all its problems at once
    ├── NoPlanError (RuntimeError)    no order of work does everything that must be done
    ├── RefusedError (RuntimeError)   what was asked would break a limit: a sheet with a `stop` finding
    └── OutOfRangeError (ValueError)  a formula was asked outside the range in which it holds
"""

from __future__ import annotations

from dataclasses import dataclass


class PlannerError(Exception):
    """Base of everything raised on purpose; anything else is a bug."""


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing wrong with an input.

    ``where`` is the table path in the file (``magnet.ramp_table[2].rate``), ``value`` what stood there.
    """

    file: str
    where: str
    value: str
    expected: str
    hint: str = ""

    def __str__(self) -> str:
        place = f"{self.file}: {self.where}" if self.where else self.file
        found = f" is {self.value}" if self.value else ""
        hint = f" ({self.hint})" if self.hint else ""
        return printable(f"{place}{found}: {self.expected}{hint}")


def printable(text: str) -> str:
    """The text on one line, with whatever could steer a terminal written as an escape."""
    return "".join(sign if sign.isprintable() else sign.encode("unicode_escape").decode() for sign in text)


class InputError(PlannerError, ValueError):
    """A file or value cannot be used. ``problems`` holds every reason, not only the first."""

    def __init__(self, problems: list[Problem]) -> None:
        self.problems = problems
        super().__init__("\n".join(str(problem) for problem in problems))


class NoPlanError(PlannerError, RuntimeError):
    """No order of work does everything that must be done; the message says what stands in the way."""


class RefusedError(PlannerError, RuntimeError):
    """What was asked would break a limit and is therefore not done."""


class OutOfRangeError(PlannerError, ValueError):
    """A formula was asked outside the range in which it holds."""
