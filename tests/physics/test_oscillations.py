"""Oscillations of the resistance: onset, period, damping."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import e, hbar, k, m_e, pico
from scipy.special import expit

from planner.errors import OutOfRangeError
from planner.physics import oscillations as osc

from .handbook import Check, page

SHOENBERG = "D. Shoenberg, Magnetic Oscillations in Metals (Cambridge 1984)"
ONSAGER = "L. Onsager, Phil. Mag. 43, 1006 (1952)"
LIFSHITZ = "I. M. Lifshitz, A. M. Kosevich, Sov. Phys. JETP 2, 636 (1956)"


def period_per_T(density: float) -> float:
    return 1.0 / float(osc.oscillation_field_T(density))


@page(
    [
        Check("onset at 1, 10, 100 m^2/Vs", osc.onset_T, ([1, 10, 100],), [1.0, 0.1, 0.01], 1e-12, SHOENBERG),
        Check("transport time at 100 m^2/Vs", osc.transport_time_s, (100, 0.067), 38.094 * pico, 1e-4, SHOENBERG),
        Check("period at 1e15 m^-2", period_per_T, (1e15,), 0.483598, 1e-5, ONSAGER),
        Check("period at 3e15 m^-2", period_per_T, (3e15,), 0.161199, 1e-5, ONSAGER),
        Check("frequency at 1e15 m^-2", osc.oscillation_field_T, (1e15,), 2.067834, 1e-6, ONSAGER),
        Check("frequency at 3e15 m^-2", osc.oscillation_field_T, (3e15,), 6.203502, 1e-6, ONSAGER),
        Check("graphene has twice the states", osc.oscillation_field_T, (3e15, 4), 6.203502 / 2, 1e-6, ONSAGER),
        Check("density back from frequency", osc.density_of_oscillation_per_m2, (6.203502,), 3e15, 1e-6, ONSAGER),
        Check("next extremum above 1 T", osc.next_extremum_T, (1.0, 3e15), 1.192178, 1e-6, ONSAGER),
        Check("half a period near 1 T", osc.half_period_T, (1.0, 3e15), 0.16120 / 2, 1e-4, ONSAGER),
        Check("2 pi^2 k m_e/(hbar e)", lambda: osc.THERMAL_T_per_K, (), 14.69317, 1e-6, LIFSHITZ),
        Check(
            "X at 0.3, 1.4, 4.2 K, 1 T",
            osc.thermal_argument,
            ([0.3, 1.4, 4.2], 1, 0.067),
            [0.295333, 1.378219, 4.134658],
            1e-5,
            LIFSHITZ,
        ),
        Check(
            "damping at 0.3, 1.4, 4.2 K, 1 T",
            osc.thermal_damping,
            ([0.3, 1.4, 4.2], 1, 0.067),
            [0.985610, 0.741815, 0.132410],
            1e-5,
            LIFSHITZ,
        ),
        Check("damping at 1.4 K, 0.5 T", osc.thermal_damping, (1.4, 0.5, 0.067), 0.351583, 1e-5, LIFSHITZ),
        Check("no damping at 0 K", osc.thermal_damping, (0.0, 1.0, 0.067), 1.0, 1e-12, LIFSHITZ),
        Check("disorder of 1 K at 1 T", osc.disorder_damping, (1.0, 1.0, 0.067), 0.373648, 1e-5, LIFSHITZ),
    ]
)
def test_oscillations(check: Check) -> None:
    check.holds()


def test_thermal_damping_is_a_sinusoid_averaged_over_the_fermi_edge() -> None:
    """The factor X/sinh X, integrated numerically instead: -df/dE smears the phase 2 pi E/(hbar omega_c)."""
    temperature_K, field_T, mass = 1.4, 1.0, 0.067
    energy = np.linspace(-60, 60, 200_001)  # in k_B·T
    edge = expit(energy) * expit(-energy)
    phase = 2 * np.pi * energy * k * temperature_K / (hbar * e * field_T / (mass * m_e))
    smeared = np.trapezoid(edge * np.cos(phase), energy)
    assert osc.thermal_damping(temperature_K, field_T, mass) == pytest.approx(smeared, rel=1e-6)


@given(st.floats(0.0, 20.0), st.floats(0.0, 20.0), st.floats(0.05, 20.0))
def test_hotter_never_gives_larger_oscillations(one_K: float, other_K: float, field_T: float) -> None:
    cold, warm = osc.thermal_damping(sorted((one_K, other_K)), field_T, 0.067)
    assert 0.0 <= warm <= np.nextafter(cold, 2.0)  # the last digit is rounding
    assert cold <= 1.0


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (osc.onset_T, (0.0,)),
        (osc.transport_time_s, (1.0, 0.0)),
        (osc.oscillation_field_T, (0.0,)),
        (osc.oscillation_field_T, (1e15, 0.5)),
        (osc.density_of_oscillation_per_m2, (0.0,)),
        (osc.next_extremum_T, (6.3, 3e15)),
        (osc.half_period_T, (0.0, 3e15)),
        (osc.thermal_damping, (-0.1, 1.0, 0.067)),
        (osc.thermal_damping, (0.1, 0.0, 0.067)),
        (osc.disorder_damping, (1.0, 1.0, 0.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
