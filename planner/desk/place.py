"""Where a value stands: in the week or the rig file, and under which keys."""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Any, Literal

Role = Literal["week", "rig"]
Part = str | int

_PART = re.compile(r"\[(\d+)\]|([^.\[\]]+)")


@dataclass(frozen=True, slots=True)
class Place:
    """A role and the keys and row numbers that lead to a value; no parts stand for the whole file."""

    role: Role
    parts: tuple[Part, ...] = ()

    @staticmethod
    def of(role: Role, where: str = "") -> Place:
        """The place that a problem names: "targets[3].rate"."""
        return Place(role, tuple(int(number) if number else key for number, key in _PART.findall(where)))

    def __truediv__(self, part: Part) -> Place:
        return Place(self.role, (*self.parts, part))

    @property
    def where(self) -> str:
        """The place as a problem names it."""
        written = (f"[{part}]" if isinstance(part, int) else f".{part}" for part in self.parts)
        return "".join(written).lstrip(".")

    @property
    def above(self) -> Place:
        """The table or list that holds this place."""
        return Place(self.role, self.parts[:-1])

    @property
    def last(self) -> Part:
        """The key or row number at the end."""
        return self.parts[-1]

    def within(self, other: Place) -> bool:
        """Whether this place is ``other`` or lies inside it."""
        return self.role == other.role and self.parts[: len(other.parts)] == other.parts


def value_at(data: Any, parts: tuple[Part, ...]) -> Any:
    """The value under these parts of plain data, or None where there is none."""
    for part in parts:
        if isinstance(part, int):
            if not isinstance(data, list) or part >= len(data):
                return None
            data = data[part]
        else:
            if not isinstance(data, dict) or part not in data:
                return None
            data = data[part]
    return data
