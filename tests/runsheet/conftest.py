"""Plans that several tests share; plans do not change, so one of each is enough."""

from __future__ import annotations

from pathlib import Path

import pytest

from planner.plan import Plan
from planner.runsheet import write_sheets
from tests.runsheet import plans


@pytest.fixture(scope="session")
def small() -> Plan:
    return plans.small_plan()


@pytest.fixture(scope="session")
def large() -> Plan:
    return plans.large_plan()


@pytest.fixture(scope="session")
def hostile() -> Plan:
    return plans.hostile_plan()


@pytest.fixture(scope="session")
def small_files(small: Plan, tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, ...]:
    return write_sheets(small, tmp_path_factory.mktemp("small"))
