"""How large a file may be in any direction: what no request needs and no machine should be asked to chew."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from itertools import islice
from typing import Any

from planner.errors import Problem

LARGEST_FILE = 1_000_000
"""Bytes of a week or rig file."""
MOST_TARGETS = 2000
MOST_TAKES = 2000
MOST_ROWS = 5000
"""Entries of any list or table."""
MOST_PROBLEMS = 100
"""Problems told of one file in one go; the next ones show when these are mended."""
LONGEST_TEXT = 5000
DEEPEST = 12

_WHOLE_NUMBERS = 2**63  # TOML promises 64 bits
_DOTTED = re.compile(rf"(?<![\w\"'-])(?:[\w\"'-]++\s*+\.\s*+){{{DEEPEST + 1}}}")


def too_deep(text: str) -> bool:
    """Whether a key in TOML text has more parts than any table here is deep; a parser would grow with their square."""
    return _DOTTED.search(text) is not None


def size_problems(data: dict[str, Any], file: str) -> list[Problem]:
    """What in a file is too large to be meant: whole numbers, texts, lists, depth; and numbers that are none."""
    return [Problem(file, *found) for found in islice(_oversize(data, "", 0), MOST_PROBLEMS)]


def _oversize(value: Any, where: str, depth: int) -> Iterator[tuple[str, str, str]]:
    """Place, value and what was expected of everything too large in a value."""
    if isinstance(value, (dict, list)):
        if depth > DEEPEST:
            yield where[:200], "", f"expected tables and lists at most {DEEPEST} deep"
        elif len(value) > MOST_ROWS:
            yield where[:200], f"{len(value)} rows", f"expected at most {MOST_ROWS}"
        elif isinstance(value, dict):
            for key, inner in value.items():
                yield from _oversize(inner, f"{where}.{key[:60]}" if where else key[:60], depth + 1)
        else:
            for at, inner in enumerate(value):
                yield from _oversize(inner, f"{where}[{at}]", depth + 1)
    elif isinstance(value, str) and len(value) > LONGEST_TEXT:
        yield where, f"{len(value)} characters", f"expected at most {LONGEST_TEXT}"
    elif isinstance(value, int) and not -_WHOLE_NUMBERS <= value < _WHOLE_NUMBERS:
        yield where, "", "expected a whole number of at most 64 bits"
    elif isinstance(value, float) and not math.isfinite(value):
        yield where, str(value), "expected a finite number"
