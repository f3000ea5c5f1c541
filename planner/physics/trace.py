"""Density from a low-field Hall trace: straight line, both directions of sweep, offset and remanence.

A trace is recorded field, R_xy and R_xx as arrays of one length, in the order they were taken. The recorded field may
be off by a constant: remanence of the coil and the lag of the lock-in shift it, each direction of sweep by its
own amount. A slope does not notice; the line of each direction has its own intercept and all share one slope.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from planner.errors import OutOfRangeError
from planner.physics.ranges import FloatArray, finite

FEWEST_POINTS = 12
"""Fewer points than this leave no room to judge the scatter."""

_WINDOWS = np.geomspace(1.0, 0.04, 24)
"""Shares of the largest field that are tried as the end of the straight part, largest first."""

_NO_BEND = 1e-6
"""A cubic term below this share of the slope is rounding."""

_TURN = 0.02
"""A reversal of the sweep counts when it goes back by this share of the range of field."""


@dataclass(frozen=True, slots=True)
class HallFit:
    """A straight line through a Hall trace.

    ``slope_sigma_ohm_per_T`` is one standard deviation. ``up_ohm`` and ``down_ohm`` are the intercepts at recorded
    field zero of the two directions of sweep, None where a direction is missing. ``largest_T`` is the field up to
    which the trace is straight within its scatter; ``straight`` is False where not even its lowest part is.
    """

    slope_ohm_per_T: float
    slope_sigma_ohm_per_T: float
    up_ohm: float | None
    down_ohm: float | None
    largest_T: float
    points: int
    scatter_ohm: float
    both_signs: bool
    straight: bool

    @property
    def lag_T(self) -> float | None:
        """How far the two directions lie apart on the field axis: lag of the reading and hysteresis of the coil."""
        if self.up_ohm is None or self.down_ohm is None:
            return None
        return (self.down_ohm - self.up_ohm) / self.slope_ohm_per_T

    @property
    def zero_T(self) -> float:
        """Recorded field at which the line crosses zero, mean of the directions: remanence, or a contact's offset."""
        present = [ohm for ohm in (self.up_ohm, self.down_ohm) if ohm is not None]
        return -float(np.mean(present)) / self.slope_ohm_per_T


def directions(field_T: FloatArray) -> NDArray[np.int8]:
    """Return +1 for each point recorded while the field rose and −1 while it fell.

    Turning points are those from which the field goes back by 2 % of its range, so that the jitter of a gauge makes
    no turns. Raises `OutOfRangeError` for fewer than two points, values that are not finite or a field that stands.
    """
    field = finite("field_T", field_T)
    if field.size < 2 or np.ptp(field) == 0.0:
        raise OutOfRangeError("the field of the trace does not change")
    back = _TURN * float(np.ptp(field))
    turns, heading, extreme = [0], 0, 0
    for at in range(1, field.size):
        step = field[at] - field[extreme]
        if heading == 0:
            if abs(step) >= back:
                heading, extreme = (1 if step > 0 else -1), at
        elif step * heading >= 0:
            extreme = at
        elif -step * heading >= back:
            turns.append(extreme)
            heading, extreme = -heading, at
    turns.append(field.size)
    signs = np.empty(field.size, dtype=np.int8)
    last = heading
    for number, (begin, end) in enumerate(pairwise(turns)):
        signs[begin:end] = last * (-1) ** (len(turns) - 2 - number)
    return signs


def scatter(values: FloatArray) -> float:
    """Return the standard deviation of the noise of a smooth trace, from its third differences.

    Up to a cubic over four neighbours nothing of the trace itself is counted. Derived: third differences of white
    noise have 20 times its variance. Raises `OutOfRangeError` for fewer than eight points.
    """
    numbers = finite("values", values)
    if numbers.size < 8:
        raise OutOfRangeError(f"{numbers.size} points are too few to judge their scatter")
    return float(np.sqrt(np.mean(np.diff(numbers, 3) ** 2) / 20.0))


def fit_hall(field_T: FloatArray, hall_ohm: FloatArray, largest_T: float | None = None) -> HallFit:
    """Fit the straight low-field part of a Hall trace.

    Parameters
    ----------
    field_T, hall_ohm
        Recorded field and R_xy, in the order taken; either sign, either direction or both.
    largest_T
        Fit |field| up to here. Without it, the largest range in which the trace is straight within its scatter
        is found: neither a cubic term nor the spread of the residuals may stand out.

    Returns
    -------
    HallFit
        Slope with its standard deviation. Where neighbouring residuals are alike, as behind a lock-in's filter, the
        deviation is widened for the points that are not independent.

    Raises
    ------
    OutOfRangeError
        For fewer than twelve points in the range, a field that stands, or a slope that is lost in the scatter.

    Notes
    -----
    Least squares; n = 1/(e·slope) for one kind of carrier is `planner.physics.carriers`. A R_xx that leaks into
    R_xy by misaligned contacts is even in field: with both signs of field it does not touch the slope.
    """
    field, hall = finite("field_T", field_T), finite("hall_ohm", hall_ohm)
    heading = directions(field)
    noise = scatter(hall)
    top = float(np.max(np.abs(field)))
    windows = [largest_T] if largest_T is not None else [share * top for share in _WINDOWS]
    lowest: HallFit | None = None
    for window in windows:
        inside = np.abs(field) <= window * (1 + 1e-12)
        if inside.sum() < FEWEST_POINTS or np.ptp(field[inside]) == 0.0:
            break
        fit, straight = _line(field[inside], hall[inside], heading[inside], noise, window)
        lowest = fit
        if straight:
            break
    if lowest is None:
        raise OutOfRangeError(f"fewer than {FEWEST_POINTS} points of the trace lie in its low-field part")
    if abs(lowest.slope_ohm_per_T) <= 3.0 * lowest.slope_sigma_ohm_per_T:
        raise OutOfRangeError("the Hall slope is lost in the scatter of the trace")
    return lowest


def _line(
    field: FloatArray, hall: FloatArray, heading: NDArray[np.int8], noise: float, window: float
) -> tuple[HallFit, bool]:
    """The line, and whether the points lie on it within their scatter."""
    ways = [sign for sign in (1, -1) if (heading == sign).any()]
    unit = field / window
    columns = [unit, *((heading == sign).astype(np.float64) for sign in ways)]
    found, errors, left = _least_squares(np.column_stack(columns), hall)
    freedom = max(1, field.size - len(columns))
    chi2 = float(left @ left) / freedom
    widened = max(1.0, alike(left))
    sigma = errors[0] * np.sqrt(chi2 * widened)
    cubic, cubic_errors, cubic_left = _least_squares(np.column_stack([*columns, unit**3]), hall)
    cubic_sigma = cubic_errors[-1] * np.sqrt(float(cubic_left @ cubic_left) / max(1, freedom - 1) * widened)
    bent = abs(cubic[-1]) > max(2.0 * cubic_sigma, _NO_BEND * abs(found[0]))
    rough = noise > 0.0 and chi2 > noise**2 * (1.0 + 4.0 * np.sqrt(2.0 / freedom)) * max(1.0, widened)
    intercepts = dict(zip(ways, found[1:], strict=True))
    line = HallFit(
        slope_ohm_per_T=float(found[0] / window),
        slope_sigma_ohm_per_T=float(sigma / window),
        up_ohm=float(intercepts[1]) if 1 in intercepts else None,
        down_ohm=float(intercepts[-1]) if -1 in intercepts else None,
        largest_T=float(window),
        points=int(field.size),
        scatter_ohm=float(np.sqrt(chi2)),
        both_signs=bool(field.min() < -0.2 * window and field.max() > 0.2 * window),
        straight=not (bent or rough),
    )
    return line, line.straight


def _least_squares(columns: FloatArray, values: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Coefficients, their standard deviations for unit noise, and residuals."""
    found, *_ = np.linalg.lstsq(columns, values, rcond=None)
    inverse = np.linalg.pinv(columns.T @ columns)
    deviations = np.asarray(np.sqrt(np.maximum(np.diag(inverse), 0.0)), dtype=np.float64)
    return np.asarray(found, dtype=np.float64), deviations, np.asarray(values - columns @ found, dtype=np.float64)


def alike(left: FloatArray) -> float:
    """Return how many neighbouring points count as one: (1 + ρ)/(1 − ρ) with the correlation ρ of neighbours.

    1 where the correlation of the residuals ``left`` is no more than chance. Common practice for a first-order
    autoregressive residual.
    """
    total = float(left @ left)
    if total == 0.0:
        return 1.0
    rho = float(left[1:] @ left[:-1]) / total
    if rho <= 2.0 / np.sqrt(left.size):
        return 1.0
    rho = min(rho, 0.98)
    return (1.0 + rho) / (1.0 - rho)
