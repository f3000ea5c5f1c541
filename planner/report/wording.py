"""How the terminal's summaries write numbers, times and other people's text."""

from __future__ import annotations

import math
import unicodedata

from rich.text import Text

HOUR_S = 3600

# Marks that reorder the text around them would let one user's words scramble a whole line.
_REORDERING = frozenset("\u061c\u200e\u200f\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069")


def plain(text: str, style: str = "") -> Text:
    """Text from a user for the terminal: no markup, no control characters or escape codes, one line."""
    kept = "".join(
        " " if unicodedata.category(sign) in ("Cc", "Zl", "Zp") else sign
        for sign in text
        if unicodedata.category(sign) != "Cs" and sign not in _REORDERING
    )
    return Text(" ".join(kept.split()), style=style)


def rounded(value: float, digits: int = 3) -> str:
    """A number to so many significant digits, without exponent and trailing zeros."""
    if value == 0 or not math.isfinite(value):
        return "0" if value == 0 else str(value)
    decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
    text = f"{value:.{decimals}f}"
    return (text.rstrip("0").rstrip(".") if "." in text else text).replace("-", "−")


def hours(seconds: float) -> str:
    """Hours to a tenth."""
    return f"{seconds / HOUR_S:.1f} h".replace("-", "−")


def tesla(field_T: float) -> str:
    """A field in tesla to 1 mT, with its sign."""
    return "0" if round(field_T, 3) == 0 else f"{field_T:+.3f}".replace("-", "−")


def kelvin(temperature_K: float) -> str:
    """A temperature, below 1 K in mK."""
    return f"{rounded(temperature_K * 1000)} mK" if temperature_K < 1 else f"{rounded(temperature_K)} K"
