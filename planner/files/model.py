"""Base of every table in a week or rig file.

Attribute names end in their unit (``rated_field_T``); the key in the file does not (``rated_field``), since there the
unit stands with the number.
"""

from __future__ import annotations

import re

from pydantic import BaseModel, ConfigDict

_UNIT_SUFFIX = re.compile(
    r"_(?:T_per_s|T_per_A|A_per_s|V_per_s|L_per_s_A|L_per_s|L_per_T|per_m2_V|per_m2|h_per_L|m3|m2|kg|percent|ohm|T|A|V|H|K|s|m|L)$"
)


def key_of(attribute: str) -> str:
    """The key in a file for an attribute of a model."""
    return _UNIT_SUFFIX.sub("", attribute).removesuffix("_")


LINE = r"^[^\x00-\x1f\x7f-\x9f\u2028\u2029\u202a-\u202e\u2066-\u2069]*$"
"""Text of one line that cannot steer a terminal or turn the direction of writing."""
LINES = r"^[^\x00-\x08\x0b-\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069]*$"
"""The same, over several lines."""


class Table(BaseModel):
    """A TOML table: unknown keys are errors, values do not change after reading."""

    model_config = ConfigDict(extra="forbid", frozen=True, alias_generator=key_of)
