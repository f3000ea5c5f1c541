"""Times of the stage, by the builder's tables and by the exponential model."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.moves.temperature import after_ramp_seconds, stage_seconds
from tests.builders import DRY, rig

TABLE = rig().stage
MODEL = rig(DRY).stage


@pytest.mark.parametrize(
    ("from_K", "to_K", "seconds"),
    [
        (0.02, 0.02, 0),
        (0.02, 0.04, 240),
        (0.02, 0.16, 600),
        (0.02, 1.0, 1200),
        (0.04, 0.16, 360),  # 600 − 240
        (0.02, 0.08, 420),  # 80 mK is half of the way from 40 to 160 mK in ln T: (240 + 600) / 2
        (0.04, 0.08, 180),
        (1.0, 0.02, 3600),
        (0.16, 0.02, 1800),
        (0.08, 0.02, 1200),  # (600 + 1800) / 2
        (1.0, 0.16, 1800),
        (0.16, 0.08, 600),
        (0.02, 0.03, 141),  # 240 · ln 1.5 / ln 2 = 140.39
    ],
)
def test_by_table(from_K: float, to_K: float, seconds: int) -> None:
    assert stage_seconds(TABLE, from_K, to_K) == seconds


@pytest.mark.parametrize(
    ("from_K", "to_K", "seconds"),
    [
        (1.5, 10.0, 889),  # 200 s · ln(8.5 K / 0.1 K) = 200 · 4.44265
        (10.0, 1.5, 3170),  # 500 s · ln(8.5 K / 15 mK) = 500 · 6.33977
        (10.0, 10.15, 79),  # 200 s · ln(0.15 K / 101.5 mK) = 200 · 0.39058
        (10.0, 10.05, 0),  # within 1 % already
        (10.0, 9.95, 0),
        (4.0, 4.0, 0),
    ],
)
def test_by_model(from_K: float, to_K: float, seconds: int) -> None:
    """Exponential approach to within 1 %: t = τ ln(|T₁ − T₂| / (0.01 T₂)), 200 s warming and 500 s cooling."""
    assert stage_seconds(MODEL, from_K, to_K) == seconds


@given(st.floats(0.02, 1.0), st.floats(0.02, 1.0), st.floats(0.02, 1.0))
def test_a_detour_saves_nothing(a: float, b: float, c: float) -> None:
    direct, detour = stage_seconds(TABLE, a, c), stage_seconds(TABLE, a, b) + stage_seconds(TABLE, b, c)
    assert direct <= detour + 1  # a second for rounding


@given(st.floats(0.02, 1.0), st.floats(0.02, 1.0))
def test_warming_is_quicker_than_cooling_here(a: float, b: float) -> None:
    low, high = sorted((a, b))
    assert 0 <= stage_seconds(TABLE, low, high) <= stage_seconds(TABLE, high, low) <= 3600


def test_the_stage_comes_back_after_a_ramp_where_it_must_be_cold() -> None:
    assert after_ramp_seconds(TABLE, 0.02) == 900
    assert after_ramp_seconds(TABLE, 0.0499) == 900
    assert after_ramp_seconds(TABLE, 0.05) == 0  # below means below
    assert after_ramp_seconds(MODEL, 1.5) == 0
    rows = [{"below": "50 mK", "time": "15 min"}, {"below": "100 mK", "time": "5 min"}]
    both = rig({"stage.after_ramp": rows}).stage
    assert [after_ramp_seconds(both, kelvin) for kelvin in (0.02, 0.06, 0.2)] == [900, 300, 0]
