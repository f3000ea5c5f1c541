"""What a target may ask for: fillings, ranges, temperatures."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.files.asks import (
    TemperatureAsk,
    filling_name,
    read_field_range,
    read_filling,
    read_filling_or_range,
    read_filling_range,
    read_temperature,
    read_volt_range,
)
from planner.units import Amount


@pytest.mark.parametrize(
    ("written", "value"),
    [("1/3", 1 / 3), (2, 2.0), (2.5, 2.5), ("2.5", 2.5), ("-2/5", -0.4), ("−2", -2.0), (" 12 / 5 ", 2.4), ("5/2", 2.5)],
)
def test_fillings(written: object, value: float) -> None:
    assert read_filling(written) == value
    assert read_filling(written).text == str(written).strip()


@pytest.mark.parametrize(
    "written", [0, "0", "0/3", "1/0", "nan", "inf", True, None, [1], "a third", "", "1/3/5", "1e999"]
)
def test_what_is_no_filling(written: object) -> None:
    with pytest.raises(ValueError, match=r'^expected a filling such as "1/3", 2 or 2\.5'):
        read_filling(written)


@given(st.integers(-30, 30).filter(bool), st.integers(1, 30))
def test_a_fraction_keeps_its_name(top: int, bottom: int) -> None:
    value = read_filling(f"{top}/{bottom}")
    assert float(value) == top / bottom
    assert filling_name(value) == f"{top}/{bottom}"
    assert read_filling(filling_name(top / bottom)) == pytest.approx(top / bottom, abs=1e-12)


def test_a_filling_without_a_simple_fraction_is_a_decimal() -> None:
    assert filling_name(0.3333) == "0.3333"
    assert filling_name(2.0) == "2"


def test_ranges_keep_their_order_and_text() -> None:
    field, volt = read_field_range("12 T to -500 mT"), read_volt_range("-0.5 V to 0.5 V")
    assert (field.first, field.last, field.text) == (12.0, -0.5, "12 T to -500 mT")
    assert (volt.first, volt.last) == (-0.5, 0.5)
    filling = read_filling_range("2/5 to 1/3")
    assert (filling.first, filling.last) == (0.4, 1 / 3)
    assert read_filling_range("-2 to -1").last == -1


@pytest.mark.parametrize("written", ["1 T", "1 T - 2 T", "1 T to 1 T", "1 T to 2 K", "to 2 T", 3, None])
def test_what_is_no_field_range(written: object) -> None:
    with pytest.raises(ValueError, match=r"^expected a "):
        read_field_range(written)


def test_a_range_of_fillings_stays_on_one_side_of_zero() -> None:
    with pytest.raises(ValueError, match="both ends need the same sign"):
        read_filling_range("-1 to 1")


def test_one_filling_or_a_range() -> None:
    one, several = read_filling_or_range("2/3"), read_filling_or_range("2 to 1")
    assert isinstance(one, Amount)
    assert not isinstance(several, Amount)
    assert (several.first, several.last) == (2.0, 1.0)


def test_temperatures() -> None:
    assert read_temperature("50 mK") == TemperatureAsk(0.05, at_most=False, text="50 mK")
    assert read_temperature("≤ 50 mK") == TemperatureAsk(0.05, at_most=True, text="≤ 50 mK")
    assert read_temperature("<=50 mK") == TemperatureAsk(0.05, at_most=True, text="<=50 mK")
    assert read_temperature("base").kelvin is None
    for written in ("0 K", "-1 K", "50", 0.05, "≥ 50 mK", None):
        with pytest.raises(ValueError, match=r"quantity such as|above 0 K"):
            read_temperature(written)
