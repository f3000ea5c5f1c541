"""What a page of the handbook is made of: one figure, how far it may be off, and where it is published."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import pytest

COMMON_PRACTICE = "common practice, no source"
FROM_MEMORY = "from memory"
SI_2019 = "SI of 2019: exact constants"


@dataclass(frozen=True)
class Check:
    """One line: a function of given arguments has a value, to a relative tolerance, by a source."""

    says: str
    function: Callable[..., Any]
    arguments: tuple[Any, ...]
    expected: Any
    tolerance: float
    source: str

    def __post_init__(self) -> None:
        if not self.source:
            raise ValueError(f"{self.says}: a figure without a source")

    def holds(self) -> None:
        found = np.asarray(self.function(*self.arguments), dtype=float)
        assert found == pytest.approx(np.asarray(self.expected, dtype=float), rel=self.tolerance, abs=0.0), self.source


def page(checks: Sequence[Check]) -> pytest.MarkDecorator:
    """Parametrise a test over a table of checks, named by what each says."""
    return pytest.mark.parametrize("check", checks, ids=[check.says for check in checks])
