"""Level against litres by the builder's table: 0.8 L a percent up to 50 % (40 L), then 1.2 L a percent."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.files.level import level_at, litres_at, litres_for_trusted
from tests.builders import rig

BATH = rig().bath
assert BATH is not None


@pytest.mark.parametrize(
    ("percent", "litres"),
    [(0, 0), (10, 8), (50, 40), (60, 52), (100, 100), (110, 112), (-5, -4)],  # the end segments are carried on
)
def test_straight_lines_between_points(percent: float, litres: float) -> None:
    assert BATH is not None
    assert litres_at(BATH, percent) == pytest.approx(litres)
    assert level_at(BATH, litres) == pytest.approx(percent)


def test_a_line_holds_for_the_trusted_level() -> None:
    assert BATH is not None
    # gauge error 2 %: to trust 45 % the gauge must read 47 %, 0.8 · 47 L; for 60 % it must read 62 %, 40 + 1.2 · 12 L
    assert litres_for_trusted(BATH, 45) == pytest.approx(37.6)
    assert litres_for_trusted(BATH, 60) == pytest.approx(54.4)
    assert litres_for_trusted(BATH, 49) == pytest.approx(40 + 1.2)  # across the table's edge


@given(st.floats(-20, 120))
def test_level_and_litres_undo_each_other(percent: float) -> None:
    assert BATH is not None
    assert level_at(BATH, litres_at(BATH, percent)) == pytest.approx(percent, abs=1e-9)
