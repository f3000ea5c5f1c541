"""A sample's density from one trace: by the Hall slope, by the period of oscillations in 1/B, and both together.

Uncertainties are half-widths that cover the truth in 95 of 100 traces (two standard deviations), from the
scatter of the trace alone: a wrong current or gain is not in them.
"""

from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any, Literal

import numpy as np

from planner.desk.trace_file import Trace
from planner.errors import InputError, OutOfRangeError, Problem
from planner.physics.carriers import density_of_hall_slope_per_m2
from planner.physics.oscillation_fit import SHIFT_SIGMA_T, OscillationFit, fit_oscillations
from planner.physics.oscillations import density_of_oscillation_per_m2, oscillation_field_T
from planner.physics.ranges import FloatArray
from planner.physics.trace import HallFit, fit_hall

COVERAGE = 2.0
"""Standard deviations in an uncertainty: 95 % of a normal distribution."""

APART = 3.0
"""Standard deviations by which two densities must differ to be said to disagree."""

SMALLEST_APART = 0.01
"""Share by which they must differ besides: current and gain are seldom known better (common practice, no source)."""

MOST_POINTS = 4000
"""Longer traces are averaged down to this: more points would only cost time."""


@dataclass(frozen=True, slots=True)
class DensityValue:
    """A density, signed (electrons positive), with its uncertainty (95 %)."""

    density_per_m2: float
    uncertainty_per_m2: float

    @property
    def percent(self) -> float:
        """Uncertainty as a share of the density, in percent."""
        return 100.0 * self.uncertainty_per_m2 / abs(self.density_per_m2)


@dataclass(frozen=True, slots=True)
class DensityPage:
    """What a trace says of the density. ``best`` is the one to plan with, ``words`` what is to be known about it."""

    best: DensityValue
    hall: DensityValue | None
    oscillations: DensityValue | None
    agree: bool | None
    degeneracy: int
    hall_fit: HallFit | None
    oscillation_fit: OscillationFit | None
    words: tuple[str, ...]

    @property
    def carriers(self) -> Literal["electrons", "holes"]:
        """Which carriers the sign of the Hall slope means."""
        return "electrons" if self.best.density_per_m2 > 0 else "holes"

    def data(self) -> dict[str, Any]:
        """Everything as JSON-ready values, units in the keys."""
        return {**asdict(self), "carriers": self.carriers}


def density_of_trace(
    trace: Trace,
    *,
    low_field_T: float | None = None,
    oscillations_T: tuple[float, float] | None = None,
    degeneracy: int = 2,
    carriers: Literal["electrons", "holes"] | None = None,
    shift_sigma_T: float = SHIFT_SIGMA_T,
) -> DensityPage:
    """Find the density of a layer from a trace.

    Parameters
    ----------
    trace
        Field, R_xy and R_xx; one of the two may be missing.
    low_field_T
        Fit the Hall slope up to this field; without it, as far as the trace is straight.
    oscillations_T
        Range of |field| in which to look for oscillations; without it, where they are sinusoids.
    degeneracy
        States per orbital level: 2 for spin, 4 for monolayer graphene, 1 where spin is split.
    carriers
        What the sample is known to have; a trace of the other sign is said.
    shift_sigma_T
        Expected error of the recorded field (remanence), for the oscillations.

    Raises
    ------
    InputError
        If neither way gives a density; the message has the reason of both.
    """
    short = _averaged(trace)
    reasons: list[str] = []
    hall_fit = _hall(short, low_field_T, reasons)
    hall = _hall_value(hall_fit) if hall_fit else None
    expected = float(oscillation_field_T(hall.density_per_m2, degeneracy)) if hall else None
    wave = _wave(short, expected, oscillations_T, shift_sigma_T, reasons)
    sign = -1.0 if (hall.density_per_m2 < 0 if hall else carriers == "holes") else 1.0
    waves = _wave_value(wave, degeneracy, sign) if wave else None
    if hall is None and waves is None:
        raise InputError([Problem("trace", "", "", reason) for reason in reasons])
    agree = None if hall is None or waves is None else _agree(hall, waves)
    words = [*reasons, *_hall_words(hall_fit, carriers), *_wave_words(wave)]
    if hall is not None and waves is not None and not agree:
        words += _disagreement(hall, waves, degeneracy)
    best = _best(hall, waves, agree)
    return DensityPage(best, hall, waves, agree, degeneracy, hall_fit, wave, tuple(words))


def _averaged(trace: Trace) -> Trace:
    """The trace, neighbouring points averaged where it is very long."""
    group = -(-trace.field_T.size // MOST_POINTS)
    if group == 1:
        return trace

    def mean(values: FloatArray | None) -> FloatArray | None:
        if values is None:
            return None
        whole = values[: values.size // group * group]
        return np.asarray(whole.reshape(-1, group).mean(axis=1))

    field = mean(trace.field_T)
    assert field is not None
    return Trace(field, mean(trace.hall_ohm), mean(trace.longitudinal_ohm))


def _hall(trace: Trace, low_field_T: float | None, words: list[str]) -> HallFit | None:
    if trace.hall_ohm is None:
        return None
    try:
        return fit_hall(trace.field_T, trace.hall_ohm, low_field_T)
    except OutOfRangeError as error:
        words.append(f"No density from the Hall slope: {error}.")
        return None


def _wave(
    trace: Trace, expected_T: float | None, range_T: tuple[float, float] | None, shift_sigma_T: float, words: list[str]
) -> OscillationFit | None:
    if trace.longitudinal_ohm is None:
        return None
    low, high = range_T if range_T is not None else (0.0, np.inf)
    try:
        return fit_oscillations(
            trace.field_T,
            trace.longitudinal_ohm,
            expected_T=expected_T,
            low_T=low,
            high_T=high,
            shift_sigma_T=shift_sigma_T,
        )
    except OutOfRangeError as error:
        words.append(f"No density from oscillations: {error}.")
        return None


def _hall_value(fit: HallFit) -> DensityValue:
    density = float(density_of_hall_slope_per_m2(fit.slope_ohm_per_T))
    return DensityValue(density, COVERAGE * abs(density * fit.slope_sigma_ohm_per_T / fit.slope_ohm_per_T))


def _wave_value(fit: OscillationFit, degeneracy: int, sign: float) -> DensityValue:
    density = float(density_of_oscillation_per_m2(fit.frequency_T, degeneracy))
    return DensityValue(sign * density, COVERAGE * density * fit.sigma_T / fit.frequency_T)


def _agree(one: DensityValue, other: DensityValue) -> bool:
    apart = abs(one.density_per_m2 - other.density_per_m2)
    return _sigmas_apart(one, other) <= APART or apart <= SMALLEST_APART * abs(one.density_per_m2)


def _sigmas_apart(one: DensityValue, other: DensityValue) -> float:
    sigma = float(np.hypot(one.uncertainty_per_m2, other.uncertainty_per_m2)) / COVERAGE
    return abs(one.density_per_m2 - other.density_per_m2) / max(sigma, 1e-12 * abs(one.density_per_m2))


def _best(hall: DensityValue | None, waves: DensityValue | None, agree: bool | None) -> DensityValue:
    """Both, weighed by their uncertainty, where they agree; else the layer's own oscillations, unless miscounted."""
    if hall is None or waves is None:
        found = hall or waves
        assert found is not None
        return found
    if agree:
        weights = [
            1.0 / max(value.uncertainty_per_m2, 1e-12 * abs(value.density_per_m2)) ** 2 for value in (hall, waves)
        ]
        mean = (weights[0] * hall.density_per_m2 + weights[1] * waves.density_per_m2) / sum(weights)
        # Two that lie further apart than their scatter explains leave the mean so much less certain.
        wider = max(1.0, _sigmas_apart(hall, waves) / COVERAGE)
        return DensityValue(mean, wider / float(np.sqrt(sum(weights))))
    return hall if _miscounted(hall, waves) else waves


def _miscounted(hall: DensityValue, waves: DensityValue) -> float | None:
    """The factor between the two where it is one that counting levels wrongly gives."""
    ratio = waves.density_per_m2 / hall.density_per_m2
    return next((factor for factor in (2.0, 0.5, 4.0, 0.25) if abs(ratio / factor - 1.0) < 0.08), None)


def _hall_words(fit: HallFit | None, carriers: str | None) -> list[str]:
    if fit is None:
        return []
    words = []
    if not fit.straight:
        words.append(
            f"The Hall trace is bent even below {fit.largest_T:.3g} T: a second kind of carrier, a parallel channel, "
            "or too coarse a trace. The slope is that of its lowest part."
        )
    found = "electrons" if fit.slope_ohm_per_T > 0 else "holes"
    if carriers is not None and carriers != found:
        words.append(
            f"The Hall slope has the sign of {found}, not {carriers}: field, current or Hall leads are reversed."
        )
    elif found == "holes" and carriers is None:
        words.append("The Hall slope is negative: holes, or field, current or Hall leads are reversed.")
    if fit.lag_T is not None and abs(fit.lag_T) > 1e-3:
        words.append(
            f"Up and down lie {1e3 * abs(fit.lag_T):.3g} mT apart: lag of the reading, hysteresis of the coil. "
            "Each direction has its own line, one slope."
        )
    if abs(fit.zero_T) > 1e-3:
        words.append(
            f"The line crosses zero at {1e3 * fit.zero_T:+.3g} mT: remanent field, or an offset of the Hall leads. "
            "Neither touches the slope."
        )
    if not fit.both_signs:
        words.append(
            "Only one sign of field: R_xx that leaks into R_xy is not told from the slope; sweep through zero."
        )
    return words


def _wave_words(fit: OscillationFit | None) -> list[str]:
    if fit is None:
        return []
    return [f"Oscillations explain only {fit.explained:.0%} of what lies above the background: look at the trace."] * (
        fit.explained < 0.3
    )


def _disagreement(hall: DensityValue, waves: DensityValue, degeneracy: int) -> list[str]:
    ratio = waves.density_per_m2 / hall.density_per_m2
    words = [f"The two ways disagree: oscillations give {ratio:.3g} times the Hall density."]
    factor = _miscounted(hall, waves)
    if factor is not None:
        states = degeneracy / factor
        meaning = {1.0: "spin is split over the whole range", 4.0: "spin and valley both count twice"}.get(
            states, f"a level holds {states:g} states"
        )
        return [*words, f"With {states:g} states per level they would agree: {meaning}. The Hall density is taken."]
    if ratio < 1.0:
        words.append(
            "More carriers in the Hall slope than in the oscillations: a parallel channel or a second subband takes "
            "part, or the geometry shorts part of the Hall voltage (wide contacts, short bar)."
        )
    else:
        words.append(
            "Fewer carriers in the Hall slope than in the oscillations: the current or gain behind R_xy is off, or "
            "spin splitting begins within the range and the period is not one."
        )
    return [*words, "The density of the oscillations is taken: they belong to the layer whose fillings are wanted."]
