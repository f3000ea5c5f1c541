"""What a target may ask for: a filling, a temperature, a range. Text outside, numbers inside."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from fractions import Fraction
from typing import Annotated, Any

from pydantic import PlainSerializer, PlainValidator, WithJsonSchema

from planner.units import Amount, parse_amount, within_reach

_FRACTION = re.compile(r"\s*([+\-−]?\d{1,4})\s*/\s*(\d{1,4})\s*")
_RANGE = re.compile(r"(.+?)\s+to\s+(.+)")
_LONGEST = 120
_FILLING = 'expected a filling such as "1/3", 2 or 2.5'


def read_filling(written: object) -> Amount:
    """A filling factor as 2, 2.5 or "p/q"; not zero. Raises ValueError otherwise."""
    if isinstance(written, Amount):
        return written
    if isinstance(written, bool) or not isinstance(written, (int, float, str)):
        raise ValueError(_FILLING)
    if len(text := str(written).strip()) > _LONGEST:
        raise ValueError(_FILLING)
    if match := _FRACTION.fullmatch(text):
        top, bottom = int(match[1].replace("−", "-")), int(match[2])
        if bottom == 0:
            raise ValueError(f"{_FILLING}: the denominator is zero")
        value = top / bottom
    else:
        try:
            value = float(text.replace("−", "-"))
        except ValueError:
            raise ValueError(_FILLING) from None
    if not math.isfinite(value) or value == 0:
        raise ValueError(f"{_FILLING}: not zero, not infinite")
    if not 1e-4 <= abs(value) <= 1e5:
        raise ValueError(f"{_FILLING}: of a size from 0.0001 to 100000")
    return Amount(value, text)


def filling_name(value: float) -> str:
    """A filling as the trade writes it: "1/3" for a simple fraction, else a decimal."""
    if isinstance(value, Amount):
        return value.text
    simple = Fraction(value).limit_denominator(30)
    if abs(simple - value) < 1e-9:
        return str(simple)
    return f"{value:.4f}".rstrip("0")


def temperature_name(kelvin: float) -> str:
    """A temperature as the trade writes it: "42 mK" below 1 K, "1.5 K" from there on."""
    return f"{kelvin:.4g} K" if kelvin >= 1 else f"{kelvin * 1e3:.4g} mK"


@dataclass(frozen=True, slots=True)
class Range:
    """Two ends in the order written, and their text."""

    first: float
    last: float
    text: str


def _read_range(written: Any, one: Any, expected: str) -> Range:
    if isinstance(written, Range):
        return written
    short = isinstance(written, str) and len(written) <= _LONGEST
    match = _RANGE.fullmatch(written.strip()) if short else None
    if match is None:
        raise ValueError(expected)
    first, last = one(match[1]), one(match[2])
    if first == last:
        raise ValueError(f"{expected}: the two ends are the same")
    return Range(float(first), float(last), written.strip())


def _amount(written: object, unit: str) -> Amount:
    return within_reach(parse_amount(written, unit), unit)


def read_field_range(written: object) -> Range:
    """ "0 T to 12 T", in tesla. Raises ValueError otherwise."""
    return _read_range(written, lambda part: _amount(part, "T"), 'expected a range such as "0 T to 12 T"')


def read_volt_range(written: object) -> Range:
    """ "-0.5 V to 0.5 V", in volt. Raises ValueError otherwise."""
    return _read_range(written, lambda part: _amount(part, "V"), 'expected a range such as "-0.5 V to 0.5 V"')


def read_filling_range(written: object) -> Range:
    """ "2/5 to 1/3", both of one sign. Raises ValueError otherwise."""
    expected = 'expected a range of fillings such as "2/5 to 1/3"'
    found = _read_range(written, read_filling, expected)
    if found.first * found.last < 0:
        raise ValueError(f"{expected}: both ends need the same sign, filling 0 lies at no field")
    return found


@dataclass(frozen=True, slots=True)
class TemperatureAsk:
    """A temperature, an upper limit ("≤ 50 mK"), or base."""

    kelvin: float | None
    at_most: bool
    text: str


def read_temperature(written: object) -> TemperatureAsk:
    """ "50 mK", "≤ 50 mK" (also "<= 50 mK") or "base". Raises ValueError otherwise."""
    if isinstance(written, TemperatureAsk):
        return written
    if isinstance(written, str) and written.strip() == "base":
        return TemperatureAsk(None, at_most=False, text="base")
    at_most = isinstance(written, str) and written.lstrip().startswith(("≤", "<="))
    bare = re.sub(r"^\s*(≤|<=)", "", written) if isinstance(written, str) else written
    kelvin = _amount(bare, "K")
    if kelvin <= 0:
        raise ValueError("a temperature is above 0 K")
    return TemperatureAsk(float(kelvin), at_most, str(written).strip())


def read_filling_or_range(written: object) -> Amount | Range:
    """One filling, or a range of them. Raises ValueError otherwise."""
    if isinstance(written, Range) or (isinstance(written, str) and " to " in written):
        return read_filling_range(written)
    return read_filling(written)


def _text(value: Any) -> str:
    return str(value.text)


def _range_type(read: Any, example: str) -> Any:
    return (
        PlainValidator(read),
        PlainSerializer(_text),
        WithJsonSchema({"type": "string", "examples": [example]}),
    )


FieldRange = Annotated[Range, *_range_type(read_field_range, "0 T to 12 T")]
VoltRange = Annotated[Range, *_range_type(read_volt_range, "-0.5 V to 0.5 V")]
FillingRange = Annotated[Range, *_range_type(read_filling_range, "2/5 to 1/3")]
Temperature = Annotated[TemperatureAsk, *_range_type(read_temperature, "≤ 50 mK")]
Filling = Annotated[
    float,
    PlainValidator(read_filling),
    PlainSerializer(filling_name),
    WithJsonSchema({"type": ["string", "number"], "examples": ["1/3", 2, 2.5]}),
]
FillingOrRange = Annotated[
    float | Range,
    PlainValidator(read_filling_or_range),
    PlainSerializer(lambda value: value.text if isinstance(value, Range) else filling_name(value)),
    WithJsonSchema({"type": ["string", "number"], "examples": ["1/3", 2, "2/5 to 1/3"]}),
]
