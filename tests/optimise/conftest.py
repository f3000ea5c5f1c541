"""Kernels are compiled once before the tests of the optimiser."""

from __future__ import annotations

import pytest

from planner.optimise.compiled.warm import compile_all


@pytest.fixture(scope="session", autouse=True)
def _compiled() -> None:
    compile_all()
