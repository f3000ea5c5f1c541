"""Density from the period of Shubnikov–de Haas oscillations in 1/B.

The longitudinal resistance is fitted by a smooth background and a damped sinusoid of 1/B with its second harmonic,

    R_xx = Σ c_k·B^k + e^(−a/B)·(C·cos 2πF/B + S·sin 2πF/B) + e^(−2a/B)·(…4πF/B),   B = |B_recorded − δ|,

with one shift δ for each direction of sweep (remanence, lag). F is the frequency B_F of
`planner.physics.oscillations`. The range of field is ν = 6 and above for two states per level (B ≤ F/3): below that
filling the oscillations are no sinusoid any more.
"""

from __future__ import annotations

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
_DAMPINGS = np.array([0.12, 0.4])  # shares of F, for a first look
_STARTS = 4
_ROUNDING = 1e-9
_STANDS_OUT = 30.0
"""Gain in twice the logarithm of the likelihood by which two columns stand out of noise: by chance, in one trace of
some thousands (chi-squared of two degrees of freedom, 800 trials)."""

_DAMPING_WEIGHT = 1.0 / 3.0  # a factor of twenty either way: only keeps a damping that nothing shows from running off


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
    guess = _coarse(data, step, expected_T)
    low, high, _ = _range_of(guess, data, step)
    part = data.between(low, high)
    fits = [_refined(part, start, shift_sigma_T) for start in _nearby(data, step, guess, shift_sigma_T)]
    return min(fits, key=lambda fit: fit[0])[1]


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
        # Below, the trace ends before its third cycle; above, a cycle at the largest field has fewer than four points.
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
        total, gains = _gains(np.abs(part.field), part.ohm, high, np.full(2, frequency), frequency * _DAMPINGS)
        if total <= (_ROUNDING * float(np.abs(part.ohm).max())) ** 2 * part.ohm.size:
            continue
        gained = float(np.max(gains)) / total
        stands_out = -part.field.size * np.log1p(-min(gained, 1.0 - 1e-12)) > _STANDS_OUT
        worth = gained * np.sqrt(part.field.size) if stands_out else 0.0
        if worth > best:
            best, found = float(worth), float(frequency)
    if best == 0.0:
        raise OutOfRangeError(f"no oscillation of at least {FEWEST_CYCLES:g} cycles in 1/B stands out of the scatter")
    return found


@dataclass(frozen=True, slots=True)
class _Start:
    frequency_T: float
    damping_T: float
    shift_T: float


def _nearby(data: _Points, step_T: float, frequency_T: float, shift_sigma_T: float) -> list[_Start]:
    """Starts near a first guess, best first: over one range of field, so that no cycle is counted wrongly.

    A shifted field moves the phase where the cycles are densest; without it a neighbouring count can look better.
    """
    low, high, _ = _range_of(frequency_T, data, step_T)
    part = data.between(low, high).thinned(_COARSE_POINTS)
    frequencies = np.repeat(frequency_T * np.linspace(0.88, 1.12, 41), 2)
    dampings = frequency_T * np.tile(_DAMPINGS, 41)
    trials: list[list[tuple[float, _Start]]] = [[] for _ in range(41)]
    for shift in shift_sigma_T * np.linspace(-2.4, 2.4, 9):
        size = np.maximum(np.abs(part.field - shift), 0.2 * low)
        total, gains = _gains(size, part.ohm, high, frequencies, dampings)
        costs = _cost(np.maximum(total - gains, 1e-12 * total), size.size, np.array([shift / shift_sigma_T]))
        for at, cost in enumerate(costs):
            trials[at // 2].append((float(cost), _Start(float(frequencies[at]), float(dampings[at]), float(shift))))
    best = [min(each, key=lambda trial: trial[0]) for each in trials]
    dips = [each for at, each in enumerate(best) if each[0] <= min(other[0] for other in best[max(0, at - 1) : at + 2])]
    return [start for _, start in sorted(dips, key=lambda each: each[0])[:_STARTS]]


def _cost(left_squared: FloatArray, points: int, shifts_sigma: FloatArray) -> FloatArray:
    """Minus twice the logarithm of the likelihood, but for a constant: scatter unknown, shifts normally distributed."""
    return np.asarray(points * np.log(np.maximum(left_squared, 1e-300) / points) + float(shifts_sigma @ shifts_sigma))


def _gains(
    size: FloatArray, ohm: FloatArray, high_T: float, frequencies_T: FloatArray, dampings_T: FloatArray
) -> tuple[float, FloatArray]:
    """Sum of squares that the background leaves, and how much of it a damped wave of each frequency takes away."""
    basis, _ = np.linalg.qr(_background(size, high_T))
    rest = ohm - basis @ (basis.T @ ohm)
    fall = np.exp(-np.outer(1.0 / size - 1.0 / float(size.max()), dampings_T))
    phase = np.outer(2.0 * np.pi / size, frequencies_T)
    even, odd = fall * np.cos(phase), fall * np.sin(phase)
    even -= basis @ (basis.T @ even)
    odd -= basis @ (basis.T @ odd)
    ee, oo, eo = (even * even).sum(axis=0), (odd * odd).sum(axis=0), (even * odd).sum(axis=0)
    er, or_ = even.T @ rest, odd.T @ rest
    determinant = ee * oo - eo**2
    regular = determinant > 1e-9 * ee * oo
    safe = np.where(regular, determinant, 1.0)
    gains = np.where(regular, (er**2 * oo - 2.0 * er * or_ * eo + or_**2 * ee) / safe, 0.0)
    return float(rest @ rest), np.asarray(gains)


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


@dataclass(frozen=True, slots=True)
class _Model:
    """The trace as a function of what is not linear in it: F as a share of its start, ln of damping, shifts in σ."""

    part: _Points
    start: _Start
    shift_sigma_T: float
    ways: tuple[int, ...]
    low_T: float
    high_T: float

    @classmethod
    def of(cls, part: _Points, start: _Start, shift_sigma_T: float) -> _Model:
        ways = tuple(sign for sign in (1, -1) if (part.heading == sign).any())
        size = np.abs(part.field)
        return cls(part, start, shift_sigma_T, ways, float(size.min()), float(size.max()))

    def columns(self, unknown: FloatArray) -> FloatArray:
        """What the trace is a linear sum of."""
        moved = self.part.field.copy()
        for sign, shift in zip(self.ways, unknown[2:] * self.shift_sigma_T, strict=True):
            moved[self.part.heading == sign] -= shift
        size = np.maximum(np.abs(moved), 0.2 * self.low_T)
        damping = self.start.damping_T * float(np.exp(unknown[1]))
        waves = _waves(size, self.start.frequency_T * float(unknown[0]), damping, harmonics=2)
        return np.column_stack([_background(size, self.high_T), waves])

    def left(self, unknown: FloatArray) -> FloatArray:
        """What the best sum leaves of the trace."""
        return _without(self.columns(unknown), self.part.ohm)

    def misfit(self, unknown: FloatArray, noise: float) -> FloatArray:
        """Residuals in units of the scatter, and the unknowns against what is expected of them beforehand."""
        return np.concatenate([self.left(unknown) / noise, unknown[2:], [unknown[1] * _DAMPING_WEIGHT]])


def _refined(part: _Points, start: _Start, shift_sigma_T: float) -> tuple[float, OscillationFit]:
    """The fit from one start, with its cost."""
    from scipy.optimize import least_squares

    model = _Model.of(part, start, shift_sigma_T)
    smooth = _without(_background(np.abs(part.field), model.high_T), part.ohm)
    total = float(smooth @ smooth)
    weight = float(np.sqrt(total / part.field.size)) or 1.0
    unknown = np.array([1.0, 0.0, *(start.shift_T / shift_sigma_T for _ in model.ways)])
    scale = np.array([1e-3, 0.3, *(1.0 for _ in model.ways)])
    noise = weight
    for _ in range(3):  # the first rounds find how large the scatter is, so that it weighs rightly against the shifts
        unknown = least_squares(model.misfit, unknown, x_scale=scale, args=(noise,)).x
        left = model.left(unknown)
        freedom = max(1, part.field.size - len(unknown) - _BACKGROUND - 5)
        noise = max(float(np.sqrt(left @ left / freedom)), 1e-9 * weight)
    shifts = dict(zip(model.ways, unknown[2:] * shift_sigma_T, strict=True))
    frequency = float(start.frequency_T * unknown[0])
    fit = OscillationFit(
        frequency_T=frequency,
        sigma_T=_sigma(model, unknown, noise) * float(np.sqrt(alike(left))) * start.frequency_T,
        low_T=model.low_T,
        high_T=model.high_T,
        cycles=frequency * (1.0 / model.low_T - 1.0 / model.high_T),
        points=int(part.field.size),
        damping_T=float(start.damping_T * np.exp(unknown[1])),
        shift_up_T=float(shifts[1]) if 1 in shifts else None,
        shift_down_T=float(shifts[-1]) if -1 in shifts else None,
        explained=1.0 - float(left @ left) / total if total else 1.0,
    )
    return float(_cost(np.asarray(left @ left), left.size, unknown[2:])), fit


def _sigma(model: _Model, unknown: FloatArray, noise: float) -> float:
    """Standard deviation of the first unknown, all others being fitted."""
    linear = model.columns(unknown)
    found, *_ = np.linalg.lstsq(linear, model.part.ohm, rcond=None)
    slopes = []
    for at, step in enumerate([1e-7, *(1e-4 for _ in unknown[1:])]):
        shift = np.zeros_like(unknown)
        shift[at] = step
        slopes.append((model.columns(unknown + shift) @ found - model.columns(unknown - shift) @ found) / (2.0 * step))
    whole = np.column_stack([*slopes, linear]) / noise
    prior = np.zeros((len(unknown) - 1, whole.shape[1]))
    prior[0, 1] = _DAMPING_WEIGHT
    for at in range(2, len(unknown)):
        prior[at - 1, at] = 1.0
    scale = np.linalg.norm(whole, axis=0)
    scale[scale == 0.0] = 1.0
    stacked = np.vstack([whole, prior]) / scale
    return float(np.sqrt(np.linalg.pinv(stacked.T @ stacked)[0, 0])) / float(scale[0])
