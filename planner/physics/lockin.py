"""Lock-in amplifiers: settling, noise bandwidth, lag, widening, the largest honest sweep rate, noise.

The output filter is n equal RC stages of time constant τ. Its step response is the regularised gamma
function P(n, t/τ), its impulse response has mean n·τ and variance n·τ².
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import k

from planner.errors import OutOfRangeError
from planner.physics.ranges import FloatArray, Values, as_values, finite, not_negative, positive, within

MOST_POLES = 8
"""Filters steeper than eight stages are not made; the formulas themselves have no such end."""

_FWHM_PER_SIGMA = 2.0 * np.sqrt(2.0 * np.log(2.0))


def _poles(poles: ArrayLike) -> FloatArray:
    number = within("poles", poles, 1, MOST_POLES)
    if (number != np.round(number)).any():
        raise OutOfRangeError(f"poles = {number}: a filter has a whole number of stages")
    return number


def settle_time_s(time_constant_s: ArrayLike, poles: ArrayLike, settled: ArrayLike = 0.99) -> Values:
    """Return the time after a step until the output has covered a share of it.

    Parameters
    ----------
    time_constant_s
        Time constant τ of one stage, positive.
    poles
        Number n of equal stages, 1 to 8.
    settled
        Share of the step, above 0 and below 1.

    Returns
    -------
    float or ndarray
        Time t with P(n, t/τ) = settled, in s: 4.605 τ for one stage to 99 %, 10.045 τ for four.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    P is the regularised lower incomplete gamma function, the step response of n equal RC stages.
    """
    from scipy.special import gammaincinv

    tau = positive("time_constant_s", time_constant_s)
    share = within("settled", settled, 0.0, 1.0, open_low=True, open_high=True)
    return as_values(tau * np.asarray(gammaincinv(_poles(poles), share), dtype=np.float64))


def honest_rate_T_per_s(
    feature_width_T: ArrayLike,
    time_constant_s: ArrayLike,
    poles: ArrayLike,
    points: ArrayLike = 10,
    settled: ArrayLike = 0.99,
) -> Values:
    """Return the fastest sweep that still gives a feature its points, each with a settled output.

    Parameters
    ----------
    feature_width_T
        Width of the narrowest feature that matters, positive.
    time_constant_s, poles
        Time constant of one stage and number of stages (1 to 8).
    points
        Independent points wanted across the feature, at least 1.
    settled
        Share to which the filter settles at each point.

    Returns
    -------
    float or ndarray
        Largest rate w/(N·t_settle) in T/s, positive.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    Common practice: ten points and 99 % settling; 20 mT, τ = 1 s, one stage give 26.1 mT/min. What a
    faster sweep costs in width is told by `rate_for_widening_T_per_s`, in position by `lag_T`.
    """
    width = positive("feature_width_T", feature_width_T)
    number = within("points", points, 1.0)
    return as_values(width / (number * settle_time_s(time_constant_s, poles, settled)))


def lag_T(rate_T_per_s: ArrayLike, time_constant_s: ArrayLike, poles: ArrayLike) -> Values:
    """Return how far a trace lies behind the field, n·τ·Ḃ, with the sign of the rate.

    Up and down traces of the same feature differ by twice the lag.

    Raises
    ------
    OutOfRangeError
        If τ is not positive, the number of stages not 1 to 8, or a value not finite.

    Notes
    -----
    The mean of the filter's impulse response; exact for a linear trace, and for the centre of mass of
    any feature. A maximum is displaced slightly less (0.98 τ instead of τ at one stage, 1 % widening).
    """
    return as_values(
        finite("rate_T_per_s", rate_T_per_s) * positive("time_constant_s", time_constant_s) * _poles(poles)
    )


def smear_sigma_T(rate_T_per_s: ArrayLike, time_constant_s: ArrayLike, poles: ArrayLike) -> Values:
    """Return the standard deviation √n·τ·|Ḃ| by which the filter broadens a trace, in T.

    Raises `OutOfRangeError` as `lag_T` does. The square root of the impulse response's variance.
    """
    rate = np.abs(finite("rate_T_per_s", rate_T_per_s))
    return as_values(rate * positive("time_constant_s", time_constant_s) * np.sqrt(_poles(poles)))


def rate_for_widening_T_per_s(
    feature_width_T: ArrayLike, time_constant_s: ArrayLike, poles: ArrayLike, widening: ArrayLike = 0.01
) -> Values:
    """Return the sweep rate at which a Gaussian feature comes out wider by a share.

    Parameters
    ----------
    feature_width_T
        Full width at half maximum w of the feature, positive.
    time_constant_s, poles
        Time constant of one stage and number of stages (1 to 8).
    widening
        Relative growth of the full width, above 0 and at most 0.1.

    Returns
    -------
    float or ndarray
        Rate in T/s: 0.0602·w/(√n·τ) for 1 %.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges: beyond 10 % the shape of the filter matters, not only its variance.

    Notes
    -----
    Variances add: (1 + x)² = 1 + (σ_filter/σ_feature)². Derived; agrees with a simulated filter to 2 %
    in the rate at 1 % widening.
    """
    sigma = positive("feature_width_T", feature_width_T) / _FWHM_PER_SIGMA
    growth = within("widening", widening, 0.0, 0.1, open_low=True)
    tau = positive("time_constant_s", time_constant_s)
    return as_values(sigma * np.sqrt((1.0 + growth) ** 2 - 1.0) / (np.sqrt(_poles(poles)) * tau))


def noise_bandwidth_Hz(time_constant_s: ArrayLike, poles: ArrayLike) -> Values:
    """Return the equivalent noise bandwidth C(2n−2, n−1)/2^(2n−2)/(4τ): 1/4, 1/8, 3/32, 5/64 of 1/τ.

    Raises `OutOfRangeError` if τ is not positive or the number of stages not 1 to 8.
    Derived: ∫|1 + 2πifτ|^(−2n) df over positive f.
    """
    from scipy.special import comb

    n = _poles(poles)
    tau = positive("time_constant_s", time_constant_s)
    return as_values(np.asarray(comb(2 * n - 2, n - 1)) / 4.0 ** (n - 1) / (4.0 * tau))


def half_power_Hz(time_constant_s: ArrayLike, poles: ArrayLike) -> Values:
    """Return the frequency √(2^(1/n) − 1)/(2πτ) at which the filter passes half the power (−3 dB).

    Raises `OutOfRangeError` if τ is not positive or the number of stages not 1 to 8.
    """
    n = _poles(poles)
    return as_values(np.sqrt(2.0 ** (1.0 / n) - 1.0) / (2.0 * np.pi * positive("tau", time_constant_s)))


def sweep_time_s(
    span_T: ArrayLike,
    rate_T_per_s: ArrayLike,
    points: ArrayLike,
    settle_s: ArrayLike,
    average_s: ArrayLike = 0.0,
) -> Values:
    """Return the time of a stepped sweep: the travel, and at each point its settling and averaging.

    Parameters
    ----------
    span_T, rate_T_per_s
        Field between first and last point (either sign) and rate of the steps (positive).
    points
        Number of points, at least 1.
    settle_s, average_s
        Settling and averaging time of each point, not negative.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    travel = np.abs(finite("span_T", span_T)) / positive("rate_T_per_s", rate_T_per_s)
    each = not_negative("settle_s", settle_s) + not_negative("average_s", average_s)
    return as_values(travel + within("points", points, 1.0) * each)


def johnson_V_per_rtHz(resistance_ohm: ArrayLike, temperature_K: ArrayLike) -> Values:
    """Return the thermal noise √(4·k_B·T·R) of a resistor per square root of bandwidth.

    Raises `OutOfRangeError` for a negative resistance or temperature. Valid for h·f ≪ k_B·T.
    Source: J. B. Johnson, Phys. Rev. 32, 97 (1928); H. Nyquist, Phys. Rev. 32, 110 (1928).
    """
    power = not_negative("temperature_K", temperature_K) * not_negative("resistance_ohm", resistance_ohm)
    return as_values(np.sqrt(4.0 * k * power))


def johnson_V(
    resistance_ohm: ArrayLike, temperature_K: ArrayLike, time_constant_s: ArrayLike, poles: ArrayLike
) -> Values:
    """Return the thermal noise voltage (rms) of a resistor behind the output filter, in V.

    Raises `OutOfRangeError` as `johnson_V_per_rtHz` and `noise_bandwidth_Hz` do.
    """
    density = johnson_V_per_rtHz(resistance_ohm, temperature_K)
    return as_values(np.asarray(density * np.sqrt(noise_bandwidth_Hz(time_constant_s, poles))))
