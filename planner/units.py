"""Quantities as people write them: text with a unit outside, a plain float in one fixed unit inside.

``Amount`` is a float that remembers its text, so that a file written back says "42 mK" where its author did.
``In("T")`` is the pydantic annotation that turns such text into an ``Amount`` and checks its dimension.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING, Annotated, Any

if TYPE_CHECKING:
    from pydantic import GetCoreSchemaHandler, GetJsonSchemaHandler
    from pydantic_core import CoreSchema

_NUMBER = re.compile(r"\s*([+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d{1,3})?)\s*(.*?)\s*", re.DOTALL)
_POWER = r"(?:\s*(?:\^|\*\*)\s*[+\-−]?\d|[-−]\d|⁻?[¹²³⁴])?"
_TERM = rf"[A-Za-zµμΩΩ°%]+{_POWER}"
_TERMS = rf"{_TERM}(?:(?:\s*[*·/]\s*|\s+){_TERM})*"
_FACTOR = rf"(?:{_TERM}|\(\s*{_TERMS}\s*\))"
_UNIT = re.compile(rf"(?:(?:1\s*)?/\s*)?{_FACTOR}(?:(?:\s*[*·/]\s*|\s+){_FACTOR})*")
"""Names with powers of one digit: what pint is handed holds no arithmetic that could grow."""
_LONGEST_UNIT = 40
_BARE_POWER = re.compile(r"(?<=[A-Za-z])(-\d)")  # "cm-2" means "cm^-2"
_COMMA = re.compile(r",\d")
_COMPOUND = re.compile(r"\s*(\d+)\s*h\s*(\d+)\s*min\s*")

_EXAMPLES = {
    "T": "12 T",
    "T/s": "0.3 T/min",
    "T/A": "0.12 T/A",
    "A": "85.3 A",
    "A/s": "120 A/min",
    "V": "0.25 V",
    "V/s": "20 mV/s",
    "H": "20 H",
    "ohm": "5 mohm",
    "K": "42 mK",
    "s": "90 min",
    "L": "60 L",
    "L/s": "0.55 L/h",
    "L/s/A": "0.003 L/h/A",
    "L/T": "0.1 L/T",
    "1/m**2": "1.1e11 cm^-2",
    "1/m**2/V": "0.7e11 cm^-2/V",
    "h/L": "0.25 h/L",
    "m": "240 mm",
    "m**2": "0.3 mm^2",
    "m**3": "90 m^3",
    "kg": "40 kg",
    "rad": "30 deg",
    "percent": "85 %",
}

_REACH = {
    "T": (1e-9, 1e3),
    "T/s": (1e-9, 10.0),
    "T/A": (1e-5, 100.0),
    "A": (1e-12, 1e5),
    "A/s": (1e-6, 1e5),
    "V": (1e-9, 1e5),
    "V/s": (1e-9, 1e5),
    "H": (1e-6, 1e5),
    "ohm": (1e-9, 1e6),
    "K": (1e-6, 1e4),
    "s": (1e-9, 1e8),
    "L": (1e-4, 1e7),
    "L/s": (1e-8, 1e3),
    "L/s/A": (1e-12, 1.0),
    "L/T": (1e-6, 1e4),
    "1/m**2": (1e8, 1e22),
    "1/m**2/V": (1e6, 1e24),
    "h/L": (1e-6, 1e4),
    "m": (1e-6, 1e4),
    "m**2": (1e-15, 1e4),
    "m**3": (1e-3, 1e7),
    "kg": (1e-9, 1e7),
    "rad": (1e-6, 10.0),
    "percent": (1e-4, 1e4),
}
"""Smallest (but zero) and largest size of a quantity that a laboratory can mean, in its fixed unit: generous powers of
ten, so that only slips and mischief lie outside, and no arithmetic on what is inside overflows."""

_PLAIN = {"1/m**2": "m^-2", "1/m**2/V": "m^-2/V", "m**2": "m^2", "m**3": "m^3", "percent": "%"}
"""Units that people write otherwise than pint's expressions."""

_HINTS = {
    ("s", "m"): "m is metres: minutes are written min",
    ("K", "k"): "kelvin is written with a capital K",
    ("K", "degC"): "give an absolute temperature in K",
    ("K", "C"): "give an absolute temperature in K",
    ("K", "°C"): "give an absolute temperature in K",
    ("T", "t"): "tesla is written with a capital T",
    ("T", "G"): "give the field in tesla, 1 T is 10 000 G",
    ("T", "kG"): "give the field in tesla, 1 T is 10 kG",
}


class Amount(float):
    """A float in its field's fixed unit that keeps the text it was read from."""

    __slots__ = ("text",)
    text: str

    def __new__(cls, value: float, text: str) -> Amount:
        amount = super().__new__(cls, value)
        amount.text = text
        return amount

    def __reduce__(self) -> tuple[type[Amount], tuple[float, str]]:
        return Amount, (float(self), self.text)


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry(cache_folder=None)


@cache
def _factor(written: str, unit: str) -> float | None:
    """How many ``unit`` one ``written`` is, or None where the dimensions differ or the unit is unknown."""
    import pint

    registry = _registry()
    try:
        whole = f"dimensionless{written}" if written.startswith("/") else written  # "1e11/cm^2"
        found = registry.parse_units(_BARE_POWER.sub(r"^\1", whole).replace("−", "-"))
        one, two = (float(registry.Quantity(count, found).m_as(unit)) for count in (1.0, 2.0))
        return one if abs(two - 2 * one) <= 1e-9 * abs(one) else None  # degC has an offset: no factor
    except (pint.errors.PintError, ArithmeticError, AttributeError, TypeError, ValueError, AssertionError):
        return None


def example(unit: str) -> str:
    """An example of a quantity in ``unit`` as a user would write it."""
    return _EXAMPLES.get(unit, f"1 {unit}")


def parse_amount(text: object, unit: str) -> Amount:
    """Read text such as "0.3 T/min" as a float in ``unit``.

    Parameters
    ----------
    text
        Number and unit. An ``Amount`` passes unchanged.
    unit
        A pint unit expression; "percent" gives percent numbers (85 % is 85.0).

    Raises
    ------
    ValueError
        If there is no unit, the unit is unknown or of another dimension, or the number is not finite. The message
        says what was expected, with an example and, for the usual slips, a hint.
    """
    if isinstance(text, Amount):
        return text
    expected = f'expected a quantity such as "{example(unit)}"'
    if isinstance(text, bool) or not isinstance(text, (str, int, float)):
        raise ValueError(f"{expected}, in quotes")
    if isinstance(text, (int, float)):
        raise ValueError(f'{expected}: a bare number has no unit; write it as text, for example "{text} {short(unit)}"')
    match = _NUMBER.fullmatch(text) if len(text) <= 80 else None
    if match is None:
        raise ValueError(expected)
    number, written = match.groups()
    if _COMMA.match(written):
        raise ValueError(f"{expected}: write a decimal point, not a comma")
    if not written:
        raise ValueError(f'{expected}: the unit is missing; for example "{number} {short(unit)}"')
    if compound := _COMPOUND.fullmatch(text):
        minutes = 60 * int(compound[1]) + int(compound[2])
        raise ValueError(f'{expected}: one number and one unit; write "{minutes} min"')
    known = len(written) <= _LONGEST_UNIT and _UNIT.fullmatch(written)
    factor = _factor(written, unit) if known else None
    if factor is None:
        hint = _HINTS.get((unit, written))
        raise ValueError(f"{expected}" + (f": {hint}" if hint else f': "{written}" is not a unit of this kind'))
    value = float(number.replace("−", "-")) * factor
    if value in (float("inf"), float("-inf")) or value != value:
        raise ValueError(f"{expected}: the number is too large")
    return Amount(value, text.strip())


def within_reach(amount: Amount, unit: str) -> Amount:
    """The amount itself; raises ValueError for a size that no laboratory can mean."""
    least, most = _REACH.get(unit, (0.0, float("inf")))
    if amount and not least <= abs(amount) <= most:
        raise ValueError(f"expected 0, or a size from {least:g} to {most:g} {_PLAIN.get(unit, unit)}")
    return amount


def short(unit: str) -> str:
    """The unit as it is written in examples ("T/min" where the inside uses T/s)."""
    return example(unit).split(" ", 1)[1]


@dataclass(frozen=True, slots=True)
class In:
    """Annotation of a float field: text with a unit in files, a float in ``unit`` inside.

    ``above`` excludes its own value, ``least`` and ``most`` include theirs; all are in ``unit``. ``word`` is text that
    may stand in place of a quantity, such as "base"; it passes unchanged.
    """

    unit: str
    above: float | None = None
    least: float | None = None
    most: float | None = None
    word: str = ""

    def parse(self, value: object) -> Amount | str:
        """Read and bound one value; raises ValueError as `parse_amount` does."""
        if self.word and value == self.word:
            return self.word
        try:
            amount = parse_amount(value, self.unit)
        except ValueError as error:
            raise ValueError(f'{error}; or the word "{self.word}"' if self.word else str(error)) from None
        if self.above is not None and not amount > self.above:
            raise ValueError(f"must be more than {self.above:g} {self.unit}")
        if self.least is not None and not amount >= self.least:
            raise ValueError(f"must be at least {self.least:g} {self.unit}")
        if self.most is not None and not amount <= self.most:
            raise ValueError(f"must be at most {self.most:g} {self.unit}")
        return within_reach(amount, self.unit)

    def write(self, value: float | str) -> str:
        """The text that reads as ``value``: as its author wrote it, or, for a default, in ``unit``."""
        if isinstance(value, str):
            return value
        return value.text if isinstance(value, Amount) else f"{float(value)!r} {_PLAIN.get(self.unit, self.unit)}"

    def __get_pydantic_core_schema__(self, source: Any, handler: GetCoreSchemaHandler) -> CoreSchema:
        from pydantic_core import core_schema

        return core_schema.no_info_plain_validator_function(
            self.parse,
            serialization=core_schema.plain_serializer_function_ser_schema(self.write),
        )

    def __get_pydantic_json_schema__(self, schema: CoreSchema, handler: GetJsonSchemaHandler) -> dict[str, Any]:
        examples = [example(self.unit), *([self.word] if self.word else [])]
        shown: dict[str, Any] = {"type": "string", "unit": short(self.unit), "examples": examples}
        bounds = {"exclusiveMinimum": self.above, "minimum": self.least, "maximum": self.most}
        limits = {key: f"{value:g} {self.unit}" for key, value in bounds.items() if value is not None}
        return {**shown, **({"limits": limits} if limits else {})}


Tesla = Annotated[float, In("T")]
PositiveTesla = Annotated[float, In("T", above=0)]
TeslaRate = Annotated[float, In("T/s", above=0)]
Ampere = Annotated[float, In("A")]
PositiveAmpere = Annotated[float, In("A", above=0)]
AmpereRate = Annotated[float, In("A/s", above=0)]
TeslaPerAmpere = Annotated[float, In("T/A", above=0)]
Volt = Annotated[float, In("V")]
PositiveVolt = Annotated[float, In("V", above=0)]
VoltRate = Annotated[float, In("V/s", above=0)]
Henry = Annotated[float, In("H", above=0)]
Ohm = Annotated[float, In("ohm", least=0)]
Kelvin = Annotated[float, In("K", above=0)]
Seconds = Annotated[float, In("s", least=0)]
PositiveSeconds = Annotated[float, In("s", above=0)]
Litres = Annotated[float, In("L", least=0)]
PositiveLitres = Annotated[float, In("L", above=0)]
LitreRate = Annotated[float, In("L/s", least=0)]
PositiveLitreRate = Annotated[float, In("L/s", above=0)]
LitreRatePerAmpere = Annotated[float, In("L/s/A", least=0)]
LitresPerTesla = Annotated[float, In("L/T", least=0)]
Percent = Annotated[float, In("percent", least=0, most=100)]
Density = Annotated[float, In("1/m**2", above=0)]
DensityPerVolt = Annotated[float, In("1/m**2/V")]
HoursPerLitre = Annotated[float, In("h/L", least=0)]
Metres = Annotated[float, In("m", above=0)]
SquareMetres = Annotated[float, In("m**2", above=0)]
CubicMetres = Annotated[float, In("m**3", above=0)]
Kilograms = Annotated[float, In("kg", least=0)]
