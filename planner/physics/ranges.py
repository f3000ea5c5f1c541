"""Validity ranges: a formula asked outside the range in which it holds raises, it never extrapolates."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

from planner.errors import OutOfRangeError

FloatArray: TypeAlias = NDArray[np.float64]
Values: TypeAlias = float | FloatArray
"""What a physics function takes and returns: one number, or an array broadcast against the others."""


def within(
    name: str,
    values: ArrayLike,
    low: float = -np.inf,
    high: float = np.inf,
    *,
    open_low: bool = False,
    open_high: bool = False,
    because: str = "",
) -> FloatArray:
    """Return ``values`` as floats if every one is finite and lies between ``low`` and ``high``.

    Parameters
    ----------
    name
        What the message calls the values, unit included (``"temperature_K"``).
    low, high
        Bounds in the unit of ``values``; included unless ``open_low`` or ``open_high``.
    because
        Why the range ends there, added to the message.

    Raises
    ------
    OutOfRangeError
        If any value is not finite or lies outside.
    """
    numbers = np.asarray(values, dtype=np.float64)
    good = np.isfinite(numbers)
    good &= numbers > low if open_low else numbers >= low
    good &= numbers < high if open_high else numbers <= high
    if not good.all():
        worst = float(numbers[~good].flat[0])
        left, right = "(" if open_low else "[", ")" if open_high else "]"
        reason = f": {because}" if because else ""
        raise OutOfRangeError(f"{name} = {worst:g} is outside {left}{low:g}, {high:g}{right}{reason}")
    return numbers


def positive(name: str, values: ArrayLike, *, because: str = "") -> FloatArray:
    """Return ``values`` as floats if every one is finite and above zero; raise `OutOfRangeError` if not."""
    return within(name, values, 0.0, open_low=True, because=because)


def not_negative(name: str, values: ArrayLike, *, because: str = "") -> FloatArray:
    """Return ``values`` as floats if every one is finite and at least zero, else raise `OutOfRangeError`."""
    return within(name, values, 0.0, because=because)


def finite(name: str, values: ArrayLike) -> FloatArray:
    """Return ``values`` as floats if every one is finite; raise `OutOfRangeError` if not."""
    return within(name, values)


def nonzero(name: str, values: ArrayLike, *, because: str = "") -> FloatArray:
    """Return ``values`` as floats if every one is finite and not zero; raise `OutOfRangeError` if not."""
    numbers = finite(name, values)
    if (numbers == 0.0).any():
        raise OutOfRangeError(f"{name} = 0{': ' + because if because else ''}")
    return numbers


def as_values(result: FloatArray) -> Values:
    """Return a plain float for a result without dimensions, else the array."""
    return float(result) if np.ndim(result) == 0 else result
