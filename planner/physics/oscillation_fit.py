"""Density from the period of Shubnikov–de Haas oscillations in 1/B.

The longitudinal resistance is fitted by a smooth background and a damped sinusoid of 1/B with its second harmonic,

    R_xx = Σ c_k·B^k + e^(−a/B)·(C·cos 2πF/B + S·sin 2πF/B) + e^(−2a/B)·(…4πF/B),   B = |B_recorded − δ|,

with one shift δ for each direction of sweep (remanence, lag). F is the frequency B_F of
`planner.physics.oscillations`. The range of field is ν = 6 and above for two states per level (B ≤ F/3): below that
filling the oscillations are no sinusoid any more.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from planner.errors import OutOfRangeError
from planner.physics.ranges import FloatArray, finite
from planner.physics.trace import alike, directions

FEWEST_CYCLES = 3.0
"""Fewer cycles than this within the range give no period."""

SHIFT_SIGMA_T = 5e-3
"""How far a recorded field is expected to be off: remanence of a few mT (common practice, no source)."""

_HIGHEST, _LOWEST = 1.0 / 3.0, 1.0 / 30.0
"""Range of field that is fitted, as shares of F: fillings 6 to 60 for two states per level."""

_POINTS_PER_CYCLE = 4.0
_FREQUENCIES = 400
_COARSE_POINTS = 500
_BACKGROUND = 4


@dataclass(frozen=True, slots=True)
class OscillationFit:
    """Frequency of the oscillations in 1/B, with one standard deviation.

    ``shift_up_T`` and ``shift_down_T`` are the offsets of the recorded field by direction of sweep, None where a
    direction is missing. ``explained`` is the share of the oscillating part that the fit accounts for.
    """

    frequency_T: float
    sigma_T: float
    low_T: float
    high_T: float
    cycles: float
    points: int
    damping_T: float
    shift_up_T: float | None
    shift_down_T: float | None
    explained: float


@dataclass(frozen=True, slots=True)
class _Points:
    field: FloatArray
    ohm: FloatArray
    heading: NDArray[np.int8]

    def between(self, low_T: float, high_T: float) -> _Points:
        inside = (np.abs(self.field) >= low_T) & (np.abs(self.field) <= high_T)
        return _Points(self.field[inside], self.ohm[inside], self.heading[inside])

    def thinned(self, most: int) -> _Points:
        stride = max(1, self.field.size // most)
        return _Points(self.field[::stride], self.ohm[::stride], self.heading[::stride])


def fit_oscillations(
    field_T: FloatArray,
    longitudinal_ohm: FloatArray,
    *,
    expected_T: float | None = None,
    low_T: float = 0.0,
    high_T: float = np.inf,
    shift_sigma_T: float = SHIFT_SIGMA_T,
) -> OscillationFit:
    """Find the frequency of the oscillations of a trace in 1/B.

    Parameters
    ----------
    field_T, longitudinal_ohm
        Recorded field and R_xx, in the order taken.
    expected_T
        Where to look: from a sixth to four times this frequency. Without it, wherever the trace can show three cycles.
    low_T, high_T
        Use only |field| in this range.
    shift_sigma_T
        Expected size of the shift of the recorded field, positive.

    Raises
    ------
    OutOfRangeError
        If no oscillation of at least three cycles stands out of the scatter.

    Notes
    -----
    Damping and harmonics after I. M. Lifshitz, A. M. Kosevich, Sov. Phys. JETP 2, 636 (1956), with one exponential for
    temperature and disorder. Standard deviation from the curvature of the sum of squares, widened where
    neighbouring residuals are alike.
    """
    field = finite("field_T", field_T)
    whole = _Points(field, finite("longitudinal_ohm", longitudinal_ohm), directions(field))
    data = whole.between(max(low_T, 0.0), high_T)
    data = data.between(np.nextafter(0.0, 1.0), np.inf)
    if data.field.size < 30:
        raise OutOfRangeError("fewer than 30 points of the trace lie in the range of the oscillations")
    step = float(np.median(np.abs(np.diff(field))))
    start = _nearby(data, step, _coarse(data, step, expected_T), shift_sigma_T)
    return _refined(data, step, start, shift_sigma_T)


def _range_of(frequency_T: float, data: _Points, step_T: float) -> tuple[float, float, float]:
    """Lowest and highest field used for a frequency, and how many cycles lie between."""
    size = np.abs(data.field)
    low = max(float(size.min()), frequency_T * _LOWEST, float(np.sqrt(_POINTS_PER_CYCLE * step_T * frequency_T)))
    high = min(float(size.max()), frequency_T * _HIGHEST)
    return low, high, frequency_T * (1.0 / low - 1.0 / high) if high > low else 0.0


def _coarse(data: _Points, step_T: float, expected_T: float | None) -> float:
    """The frequency that explains most of what a smooth background leaves."""
    largest = float(np.abs(data.field).max())
    if expected_T is None:
        # Four cycles must fit below the largest field; and four points into each of them.
        ends = 0.5 * largest, min(largest**2 / (_POINTS_PER_CYCLE * step_T), 60.0 * largest)
    else:
        ends = expected_T / 6.0, expected_T * 4.0
    best, found = 0.0, 0.0
    for frequency in np.geomspace(*ends, _FREQUENCIES):
        low, high, cycles = _range_of(float(frequency), data, step_T)
        if cycles < FEWEST_CYCLES:
            continue
        part = data.between(low, high).thinned(_COARSE_POINTS)
        if part.field.size < 30:
            continue
        size = np.abs(part.field)
        smooth = _without(_background(size, high), part.ohm)
        for factor in (0.1, 0.4):
            # An error of the trial frequency must not cost phase: the grid is closer than a quarter of a cycle.
            waves = _waves(size, float(frequency), factor * float(frequency), harmonics=1)
            left = _without(np.column_stack([_background(size, high), waves]), part.ohm)
            total = float(smooth @ smooth)
            gained = 0.0 if total == 0.0 else (total - float(left @ left)) / total
            # What two columns explain of pure noise falls with the number of points.
            worth = gained * np.sqrt(part.field.size) if gained > 12.0 / part.field.size else 0.0
            if worth > best:
                best, found = worth, float(frequency)
    if best == 0.0:
        raise OutOfRangeError(f"no oscillation of at least {FEWEST_CYCLES:g} cycles in 1/B stands out of the scatter")
    return found


@dataclass(frozen=True, slots=True)
class _Start:
    frequency_T: float
    damping_T: float
    shift_T: float


def _nearby(data: _Points, step_T: float, frequency_T: float, shift_sigma_T: float) -> _Start:
    """Frequency, damping and shift near a first guess: over one range of field, so that no cycle is counted wrongly.

    A shifted field moves the phase where the cycles are densest; without it a neighbouring count can look better.
    """
    low, high, _ = _range_of(frequency_T, data, step_T)
    part = data.between(low, high).thinned(_COARSE_POINTS)
    best, found = np.inf, _Start(frequency_T, 0.2 * frequency_T, 0.0)
    for shift in shift_sigma_T * np.linspace(-2.0, 2.0, 7):
        size = np.maximum(np.abs(part.field - shift), 0.2 * low)
        background = _background(size, high)
        for factor in np.linspace(0.88, 1.12, 41):
            for damping in (0.15, 0.4):
                trial = _Start(float(factor) * frequency_T, damping * frequency_T, float(shift))
                waves = _waves(size, trial.frequency_T, trial.damping_T, harmonics=1)
                left = _without(np.column_stack([background, waves]), part.ohm)
                if float(left @ left) < best:
                    best, found = float(left @ left), trial
    return found


def _background(size: FloatArray, high_T: float) -> FloatArray:
    return np.asarray(np.vander(size / high_T, _BACKGROUND + 1))


def _waves(size: FloatArray, frequency_T: float, damping_T: float, harmonics: int) -> FloatArray:
    columns = []
    top = float(size.max())
    for order in range(1, harmonics + 1):
        fall = np.exp(-order * damping_T * (1.0 / size - 1.0 / top))
        phase = 2.0 * np.pi * order * frequency_T / size
        columns += [fall * np.cos(phase), fall * np.sin(phase)]
    return np.column_stack(columns)


def _without(columns: FloatArray, values: FloatArray) -> FloatArray:
    found, *_ = np.linalg.lstsq(columns, values, rcond=None)
    return np.asarray(values - columns @ found)


def _refined(data: _Points, step_T: float, start: _Start, shift_sigma_T: float) -> OscillationFit:
    from scipy.optimize import least_squares

    start_T, damping_T = start.frequency_T, start.damping_T
    low, high, _ = _range_of(start_T, data, step_T)
    part = data.between(low, high)
    ways = [sign for sign in (1, -1) if (part.heading == sign).any()]
    smooth = _without(_background(np.abs(part.field), high), part.ohm)
    weight = float(np.sqrt(smooth @ smooth / part.field.size)) or 1.0

    def shifted(shifts: FloatArray) -> FloatArray:
        moved = part.field.copy()
        for sign, shift in zip(ways, shifts, strict=True):
            moved[part.heading == sign] -= shift
        return np.asarray(np.abs(moved))

    def columns(unknown: FloatArray) -> FloatArray:
        size = np.maximum(shifted(unknown[2:] * shift_sigma_T), 0.2 * low)
        waves = _waves(size, start_T * unknown[0], damping_T * np.exp(unknown[1]), harmonics=2)
        return np.column_stack([_background(size, high), waves])

    def misfit(unknown: FloatArray, noise: float) -> FloatArray:
        left = _without(columns(unknown), part.ohm) / noise
        return np.concatenate([left, unknown[2:], [unknown[1] / 3.0]])

    unknown = np.array([1.0, 0.0, *(start.shift_T / shift_sigma_T for _ in ways)])
    noise = weight
    for _ in range(3):  # the first rounds find how large the scatter is, so that it weighs rightly against the shifts
        found = least_squares(misfit, unknown, x_scale=np.array([1e-3, 0.3, *(1.0 for _ in ways)]), args=(noise,))
        unknown = found.x
        left = _without(columns(unknown), part.ohm)
        freedom = max(1, part.field.size - len(unknown) - _BACKGROUND - 5)
        noise = max(float(np.sqrt(left @ left / freedom)), 1e-9 * weight)
    sigma = _sigma(columns, part, unknown, noise) * np.sqrt(alike(left)) * start_T
    total = float(smooth @ smooth)
    shifts = dict(zip(ways, unknown[2:] * shift_sigma_T, strict=True))
    frequency = float(start_T * unknown[0])
    return OscillationFit(
        frequency_T=frequency,
        sigma_T=float(sigma),
        low_T=low,
        high_T=high,
        cycles=frequency * (1.0 / low - 1.0 / high),
        points=int(part.field.size),
        damping_T=float(damping_T * np.exp(unknown[1])),
        shift_up_T=float(shifts[1]) if 1 in shifts else None,
        shift_down_T=float(shifts[-1]) if -1 in shifts else None,
        explained=1.0 - float(left @ left) / total if total else 1.0,
    )


def _sigma(columns: Callable[[FloatArray], FloatArray], part: _Points, unknown: FloatArray, noise: float) -> float:
    """Standard deviation of the first unknown, all others being fitted."""
    linear = columns(unknown)
    found, *_ = np.linalg.lstsq(linear, part.ohm, rcond=None)
    steps = [1e-7, *(1e-4 for _ in unknown[1:])]
    slopes = []
    for at, step in enumerate(steps):
        shift = np.zeros_like(unknown)
        shift[at] = step
        slopes.append((columns(unknown + shift) @ found - columns(unknown - shift) @ found) / (2.0 * step))
    whole = np.column_stack([*slopes, linear]) / noise
    # Rows of what is expected beforehand: shifts of the size given, damping within a factor of twenty.
    prior = np.zeros((len(unknown) - 1, whole.shape[1]))
    prior[0, 1] = 1.0 / 3.0
    for at in range(2, len(unknown)):
        prior[at - 1, at] = 1.0
    scale = np.linalg.norm(whole, axis=0)
    scale[scale == 0.0] = 1.0
    stacked = np.vstack([whole, prior]) / scale
    return float(np.sqrt(np.linalg.pinv(stacked.T @ stacked)[0, 0])) / float(scale[0])
