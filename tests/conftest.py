"""Kernels are compiled once, before any worker of the tests asks for them."""

from __future__ import annotations

import pytest


def pytest_configure(config: pytest.Config) -> None:
    """Compile in the controller if the cache is cold; workers then find what they need."""
    if hasattr(config, "workerinput"):
        return
    from planner.optimise.compiled.warm import compile_all, is_warm

    if not is_warm():
        compile_all()
