"""Rounding to whole seconds, and what moves know of the gates."""

from __future__ import annotations

import pytest

from planner.moves import setup_of, whole_seconds
from tests.builders import rig, week


@pytest.mark.parametrize(
    ("seconds", "whole"), [(0.0, 0), (1.0, 1), (1.0000001, 1), (1.00001, 2), (0.2, 1), (59.9999999, 60), (1e-9, 0)]
)
def test_seconds_are_rounded_up_but_for_a_floats_error(seconds: float, whole: int) -> None:
    assert whole_seconds(seconds) == whole


def test_a_sum_that_floats_get_wrong_is_no_second_more() -> None:
    assert 0.3 / 0.1 < 3 < (0.1 + 0.2) / 0.1  # both are three in decimal numbers
    assert whole_seconds((0.1 + 0.2) / 0.1) == 3


def test_every_gate_of_the_load_with_its_rate_and_rest() -> None:
    setup = setup_of(rig(), week({"samples.0.gates.0.rest": "-0.5 V"}))
    assert setup.gate_rates_V_per_s == {"S1/top": 0.01, "S1/back": 0.1}
    assert setup.resting == (("S1/back", 0.0), ("S1/top", -0.5))
