"""Quantities as text. Conversion factors are those of the SI brochure (BIPM, 9th edition, 2019) unless a line says."""

from __future__ import annotations

import pickle

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.units import Amount, In, example, parse_amount, short


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("12 T", "T", 12.0),
        ("500 mT", "T", 0.5),
        ("-1 T", "T", -1.0),
        ("−1 T", "T", -1.0),
        ("+.5 T", "T", 0.5),
        ("0.3 T/min", "T/s", 0.3 / 60),
        ("0.12 T/A", "T/A", 0.12),
        ("120 A/min", "A/s", 2.0),
        ("20 mV/s", "V/s", 0.02),
        ("5 mohm", "ohm", 0.005),
        ("5 mΩ", "ohm", 0.005),
        ("42 mK", "K", 0.042),
        ("90 min", "s", 5400.0),
        ("1.5 h", "s", 5400.0),
        ("2 d", "s", 172800.0),
        ("300 ms", "s", 0.3),
        ("250 µs", "s", 250e-6),
        ("0.36 L/h", "L/s", 1e-4),
        ("0.0036 L/h/A", "L/s/A", 1e-6),
        ("0.0036 L/(h·A)", "L/s/A", 1e-6),
        ("60 l", "L", 60.0),
        ("1 m^3", "L", 1000.0),
        ("1.1e11 cm^-2", "1/m**2", 1.1e15),
        ("1.1E11 cm-2", "1/m**2", 1.1e15),
        ("1.1e11 cm⁻²", "1/m**2", 1.1e15),
        ("1.1e11/cm^2", "1/m**2", 1.1e15),
        ("0.7e11 cm^-2/V", "1/m**2/V", 0.7e15),
        ("0.25 h/L", "h/L", 0.25),
        ("85 %", "percent", 85.0),
        ("85%", "percent", 85.0),
        ("  12   T  ", "T", 12.0),
    ],
)
def test_text_becomes_a_number_in_the_fixed_unit(text: str, unit: str, value: float) -> None:
    amount = parse_amount(text, unit)
    assert amount == pytest.approx(value, rel=1e-12)
    assert amount.text == text.strip()


@pytest.mark.parametrize(
    ("written", "unit", "says"),
    [
        (12, "T", 'bare number has no unit; write it as text, for example "12 T"'),
        (0.3, "T/s", '"0.3 T/min"'),
        (True, "T", "in quotes"),
        (None, "T", "in quotes"),
        (["12 T"], "T", "in quotes"),
        ("12", "T", 'the unit is missing; for example "12 T"'),
        ("", "T", 'such as "12 T"'),
        ("T", "T", 'such as "12 T"'),
        ("twelve T", "T", 'such as "12 T"'),
        ("12 K", "T", '"K" is not a unit of this kind'),
        ("12 blob", "T", '"blob" is not a unit of this kind'),
        ("0.3 T", "T/s", '"T" is not a unit of this kind'),
        ("90 m", "s", "minutes are written min"),
        ("5 k", "K", "capital K"),
        ("5 degC", "K", "absolute temperature"),
        ("5 C", "K", "absolute temperature"),
        ("5 °C", "K", "absolute temperature"),
        ("12 t", "T", "capital T"),
        ("500 G", "T", "in tesla"),
        ("3 h 20 min", "s", 'write "200 min"'),
        ("1,5 T", "T", "decimal point"),
        ("1e400 T", "T", "too large"),
        ("nan T", "T", 'such as "12 T"'),
        ("inf T", "T", 'such as "12 T"'),
        ("1e9999 T", "T", "not a unit of this kind"),
        ("5 T/2", "T", "not a unit of this kind"),
        ("5 __import__('os')", "T", "not a unit of this kind"),
        ("1" * 5000 + " T", "T", 'such as "12 T"'),
    ],
)
def test_what_is_no_quantity_says_what_was_expected(written: object, unit: str, says: str) -> None:
    with pytest.raises(ValueError, match=r"^expected a quantity such as ") as caught:
        parse_amount(written, unit)
    assert says in str(caught.value)


UNITS = [
    "T", "T/s", "T/A", "A", "A/s", "V", "V/s", "H", "ohm", "K", "s", "L", "L/s", "L/s/A", "L/T", "1/m**2", "1/m**2/V",
    "h/L", "m**3", "percent",
]  # fmt: skip


@pytest.mark.parametrize("unit", UNITS)
def test_the_example_of_a_unit_can_be_read_in_it(unit: str) -> None:
    assert parse_amount(example(unit), unit) > 0
    assert example(unit).endswith(short(unit))


@given(st.floats(-1e6, 1e6, allow_nan=False))
def test_a_number_written_in_full_comes_back_exactly(value: float) -> None:
    assert float(parse_amount(f"{value!r} T", "T")) == value


@given(st.text(max_size=30))
def test_any_text_is_a_quantity_or_a_value_error(text: str) -> None:
    try:
        amount = parse_amount(text, "s")
    except ValueError as error:
        assert str(error).startswith("expected a quantity")  # noqa: PT017 - either outcome is right, nothing else is
    else:
        assert abs(float(amount)) < float("inf")


def test_an_amount_passes_unchanged_and_survives_pickling() -> None:
    amount = parse_amount("42 mK", "K")
    assert parse_amount(amount, "K") is amount
    again = pickle.loads(pickle.dumps(amount))
    assert isinstance(again, Amount)
    assert (float(again), again.text) == (0.042, "42 mK")


def test_bounds_name_the_limit_and_its_unit() -> None:
    rate, share = In("T/s", above=0), In("percent", least=0, most=100)
    assert rate.parse("0.06 T/min") == pytest.approx(0.001)
    assert share.parse("0 %") == 0
    assert share.parse("100 %") == 100
    with pytest.raises(ValueError, match=r"^must be more than 0 T/s$"):
        rate.parse("0 T/min")
    with pytest.raises(ValueError, match=r"^must be at least 0 percent$"):
        share.parse("-1 %")
    with pytest.raises(ValueError, match=r"^must be at most 100 percent$"):
        share.parse("101 %")


@pytest.mark.parametrize("unit", UNITS)
def test_a_default_is_written_as_text_that_reads_as_itself(unit: str) -> None:
    for value in (0.0, 0.25, 1 / 3, 1.1e15):
        assert float(parse_amount(In(unit).write(value), unit)) == pytest.approx(value, rel=1e-15)
    assert In("K", word="base").write("base") == "base"
    assert In("K").write(parse_amount("42 mK", "K")) == "42 mK"


def test_a_word_may_stand_for_a_quantity_where_the_field_says_so() -> None:
    kelvin = In("K", above=0, word="base")
    assert kelvin.parse("base") == "base"
    assert kelvin.parse("50 mK") == 0.05
    with pytest.raises(ValueError, match=r'^expected a quantity such as "42 mK"; or the word "base"$'):
        kelvin.parse("basement")
