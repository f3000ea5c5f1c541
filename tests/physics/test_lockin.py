"""Lock-in amplifiers: settling, bandwidth, honest sweep rate, noise."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import milli, minute, nano
from scipy.integrate import quad, solve_ivp
from scipy.stats import gamma

from planner.errors import OutOfRangeError
from planner.physics import lockin

from .handbook import COMMON_PRACTICE, Check, page

STAGES = "step response of n equal RC stages is the gamma distribution; scipy.stats.gamma"
POLES = [1, 2, 3, 4]
BANDWIDTH = "integral of |1 + 2 pi i f tau|^(-2n); derived"
THERMAL = "J. B. Johnson, Phys. Rev. 32, 97 (1928); H. Nyquist, Phys. Rev. 32, 110 (1928)"
SMEAR = "mean and variance of the filter's impulse response; derived"

settle = lockin.settle_time_s


@page(
    [
        Check("99 % settled", settle, (1, POLES, 0.99), [4.60517, 6.63835, 8.40595, 10.04512], 1e-5, STAGES),
        Check("99.9 % settled", settle, (1, POLES, 0.999), [6.90776, 9.23341, 11.22887, 13.06224], 1e-5, STAGES),
        Check("90 % settled", settle, (1, POLES, 0.9), [2.30259, 3.88972, 5.32232, 6.68078], 1e-5, STAGES),
        Check("1 - 1/e settled", settle, (1, POLES, 1 - np.exp(-1)), [1, 2.14619, 3.25825, 4.35199], 1e-5, STAGES),
        Check("8 stages to 99 %", settle, (1, 8), 15.99996, 1e-5, STAGES),
        Check("4 stages, 300 ms", settle, (0.3, 4), 3.0135, 1e-4, STAGES),
        Check(
            "noise bandwidth", lockin.noise_bandwidth_Hz, (1, POLES), [1 / 4, 1 / 8, 3 / 32, 5 / 64], 1e-12, BANDWIDTH
        ),
        Check("-3 dB", lockin.half_power_Hz, (1 / (2 * np.pi), POLES), [1, 0.64359, 0.50982, 0.43498], 1e-5, BANDWIDTH),
        Check(
            "rate for 1 % widening",
            lockin.rate_for_widening_T_per_s,
            (1, 1, POLES),
            [0.06021, 0.04257, 0.03476, 0.03010],
            2e-4,
            SMEAR,
        ),
        Check("lag at 0.1 T/min, 4 stages, 300 ms", lockin.lag_T, (0.1 / minute, 0.3, 4), 2 * milli, 1e-9, SMEAR),
        Check(
            "20 mT, 1 s, one stage, ten points: 26.1 mT/min",
            lockin.honest_rate_T_per_s,
            (0.02, 1, 1),
            26.1 * milli / minute,
            2e-3,
            COMMON_PRACTICE,
        ),
        Check("201 points of 3.0135 s", lockin.sweep_time_s, (0.0, 1.0, 201, 3.0135), 605.7, 1e-4, "arithmetic"),
        Check("1 kohm, 300 K", lockin.johnson_V_per_rtHz, (1e3, 300), 4.07035 * nano, 1e-5, THERMAL),
        Check("1 kohm, 4.2 K", lockin.johnson_V_per_rtHz, (1e3, 4.2), 0.481611 * nano, 1e-5, THERMAL),
        Check("10 kohm, 50 mK", lockin.johnson_V_per_rtHz, (1e4, 0.05), 0.166172 * nano, 1e-5, THERMAL),
        Check("h/e^2, 1 K", lockin.johnson_V_per_rtHz, (25812.80746, 1.0), 1.193958 * nano, 1e-5, THERMAL),
        Check(
            "1 kohm, 300 K behind 4 stages of 1 s", lockin.johnson_V, (1e3, 300, 1, 4), 1.13770 * nano, 1e-5, THERMAL
        ),
    ]
)
def test_lockin(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize("poles", range(1, 9))
@pytest.mark.parametrize("settled", [0.1, 0.5, 0.9, 0.99, 0.9999])
def test_settling_is_the_quantile_of_the_gamma_distribution(poles: int, settled: float) -> None:
    assert settle(0.3, poles, settled) == pytest.approx(0.3 * gamma.ppf(settled, poles), rel=1e-9)


@pytest.mark.parametrize("poles", POLES)
def test_noise_bandwidth_by_quadrature(poles: int) -> None:
    tau = 0.3
    area, _ = quad(lambda f: (1 + (2 * np.pi * f * tau) ** 2) ** -poles, 0, np.inf)
    assert lockin.noise_bandwidth_Hz(tau, poles) == pytest.approx(area, rel=1e-7)


def filtered(signal, poles: int, times: np.ndarray) -> np.ndarray:  # type: ignore[no-untyped-def]
    """A chain of RC stages of 1 s, solved as differential equations."""

    def stages(t: float, y: np.ndarray) -> np.ndarray:
        return np.concatenate(([signal(t)], y[:-1])) - y

    solved = solve_ivp(stages, (times[0], times[-1]), np.zeros(poles), t_eval=times, rtol=1e-8, atol=1e-10, max_step=1)
    return np.asarray(solved.y[-1])


@pytest.mark.parametrize("poles", POLES)
def test_a_simulated_filter_has_settled_when_told(poles: int) -> None:
    told = float(settle(1.0, poles, 0.99))
    assert filtered(lambda _t: 1.0, poles, np.array([0.0, told]))[-1] == pytest.approx(0.99, abs=1e-5)


@pytest.mark.parametrize(("poles", "peak_lag", "width_grows"), [(1, 0.980, 1.0095), (4, 3.975, 1.0098)])
def test_a_simulated_sweep_at_the_rate_for_1_percent_widening(poles: int, peak_lag: float, width_grows: float) -> None:
    """A Gaussian of full width 1 swept through a simulated filter: how late and how wide it comes out."""
    rate = float(lockin.rate_for_widening_T_per_s(1.0, 1.0, poles, 0.01))
    sigma = 1.0 / np.sqrt(8 * np.log(2))
    times = np.arange(-3.0 / rate, 3.0 / rate, 0.005)
    out = filtered(lambda t: np.exp(-((rate * t) ** 2) / (2 * sigma**2)), poles, times)

    above = times[out >= out.max() / 2]
    assert rate * (above[-1] - above[0]) == pytest.approx(width_grows, rel=2e-3)
    assert times[out.argmax()] == pytest.approx(peak_lag, rel=0.02)
    centre = np.sum(times * out) / np.sum(out)
    assert rate * centre == pytest.approx(lockin.lag_T(rate, 1.0, poles), rel=1e-4)
    spread = np.sqrt(np.sum((times - centre) ** 2 * out) / np.sum(out)) * rate
    assert spread == pytest.approx(np.hypot(sigma, lockin.smear_sigma_T(rate, 1.0, poles)), rel=1e-4)


TAU = st.floats(1e-3, 30.0)
SHARE = st.floats(0.01, 0.9999)


@given(TAU, st.integers(1, 7), SHARE, SHARE)
def test_settling_grows_with_share_stages_and_time_constant(tau: float, poles: int, one: float, other: float) -> None:
    low, high = sorted((one, other))
    assert settle(tau, poles, low) <= settle(tau, poles, high)
    assert settle(tau, poles, low) < settle(tau, poles + 1, low)
    assert settle(2 * tau, poles, low) == pytest.approx(2 * settle(tau, poles, low))


@given(st.floats(1e-4, 1.0), TAU, st.integers(1, 8), st.integers(1, 100))
def test_an_honest_sweep_settles_at_every_point_of_a_feature(
    width_T: float, tau: float, poles: int, points: int
) -> None:
    rate = lockin.honest_rate_T_per_s(width_T, tau, poles, points)
    assert width_T / rate == pytest.approx(points * gamma.ppf(0.99, poles) * tau, rel=1e-9)


@given(st.floats(-1.0, 1.0), TAU, st.integers(1, 8))
def test_lag_reverses_with_the_sweep(rate: float, tau: float, poles: int) -> None:
    assert lockin.lag_T(-rate, tau, poles) == -lockin.lag_T(rate, tau, poles)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (settle, (0.0, 1)),
        (settle, (1.0, 0)),
        (settle, (1.0, 9)),
        (settle, (1.0, 1.5)),
        (settle, (1.0, 1, 1.0)),
        (settle, (1.0, 1, 0.0)),
        (lockin.honest_rate_T_per_s, (0.0, 1.0, 1)),
        (lockin.honest_rate_T_per_s, (0.1, 1.0, 1, 0)),
        (lockin.lag_T, (np.nan, 1.0, 1)),
        (lockin.smear_sigma_T, (0.1, -1.0, 1)),
        (lockin.rate_for_widening_T_per_s, (0.1, 1.0, 1, 0.5)),
        (lockin.noise_bandwidth_Hz, (0.0, 1)),
        (lockin.half_power_Hz, (1.0, 0)),
        (lockin.sweep_time_s, (1.0, 0.0, 10, 1.0)),
        (lockin.sweep_time_s, (1.0, 1.0, 0, 1.0)),
        (lockin.johnson_V_per_rtHz, (-1.0, 1.0)),
        (lockin.johnson_V_per_rtHz, (1.0, -1.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
