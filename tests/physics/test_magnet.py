"""Magnets: energy, ramps, voltages, persistent mode, the most a quench evaporates."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import hour, minute
from scipy.integrate import solve_ivp

from planner.errors import OutOfRangeError
from planner.physics import magnet
from planner.physics.helium import boil_off_L_per_h, gas_volume_m3

from .handbook import Check, page

INDUCTION = "induction law; derived"
TABLE = "arithmetic: field travelled over rate, split at the edges"
WILSON = "M. N. Wilson, Superconducting Magnets (Oxford 1983)"
BOUND = "stored energy over latent heat; an upper bound, derived"

EDGES_T = [9.0, 12.0, 14.0]
RATES = np.array([0.30, 0.15, 0.08]) / minute
L, K = 20.0, 0.14


def ramp(from_T: float, to_T: float) -> float:
    return float(magnet.ramp_time_s(from_T, to_T, EDGES_T, RATES))


def voltage_at(rate_T_per_min: float) -> float:
    return float(magnet.charging_voltage_V(L, rate_T_per_min / minute / K))


def quench_gas_m3(energy_J: float) -> float:
    return float(gas_volume_m3(magnet.quench_liquid_L(energy_J)))


@page(
    [
        Check("20 H, 100 A", magnet.stored_energy_J, (20, 100), 100.0e3, 1e-12, INDUCTION),
        Check("15 H, 110 A", magnet.stored_energy_J, (15, 110), 90.75e3, 1e-12, INDUCTION),
        Check("30 H, 85 A", magnet.stored_energy_J, (30, 85), 108.375e3, 1e-12, INDUCTION),
        Check("0 to 14 T", ramp, (0, 14), 75.000 * minute, 1e-9, TABLE),
        Check("0 to 10.5 T", ramp, (0, 10.5), 40.000 * minute, 1e-9, TABLE),
        Check("8 to 13 T", ramp, (8, 13), 35.8333 * minute, 1e-6, TABLE),
        Check("13 to 8 T", ramp, (13, 8), 35.8333 * minute, 1e-6, TABLE),
        Check("-14 to 14 T", ramp, (-14, 14), 150.0 * minute, 1e-9, TABLE),
        Check("current at 14 T", magnet.current_A, (14.0, K), 100.0, 1e-12, "arithmetic"),
        Check("0.30 T/min at 20 H, 0.14 T/A", voltage_at, (0.30,), 0.714286, 1e-6, INDUCTION),
        Check("0.15 T/min", voltage_at, (0.15,), 0.357143, 2e-6, INDUCTION),
        Check("0.08 T/min", voltage_at, (0.08,), 0.190476, 2e-6, INDUCTION),
        Check(
            "0.30 T/min with 5 mohm at 100 A",
            magnet.charging_voltage_V,
            (L, 0.30 / minute / K, 100, 0.005),
            1.214286,
            1e-6,
            INDUCTION,
        ),
        Check(
            "2 V, 20 mohm, 0 to 80 A", magnet.voltage_limited_time_s, (0, 80, 20, 0.02, 2), 1609.438, 1e-6, INDUCTION
        ),
        Check("2 V, no resistance", magnet.voltage_limited_time_s, (0, 80, 20, 0.0, 2), 800.0, 1e-12, INDUCTION),
        Check(
            "5 V, 5 mohm, 0 to 100 A", magnet.voltage_limited_time_s, (0, 100, 20, 0.005, 5), 421.442, 1e-6, INDUCTION
        ),
        Check("fastest rise at 80 A", magnet.voltage_limited_rate_A_per_s, (80, 20, 0.02, 2), 0.0200, 1e-9, INDUCTION),
        Check("joints for 1e-8 per hour", magnet.joint_resistance_ohm, (1e-8 / hour, 20), 5.556e-11, 1e-3, WILSON),
        Check("joints for 1 ppm per hour", magnet.joint_resistance_ohm, (1e-6 / hour, 20), 5.556e-9, 1e-3, WILSON),
        Check("1 V over an open switch of 30 ohm", magnet.open_switch_power_W, (1.0, 30.0), 33.3e-3, 2e-3, INDUCTION),
        Check("heater, 50 mA, 80 ohm", magnet.heater_power_W, (0.050, 80.0), 0.20, 1e-9, INDUCTION),
        Check(
            "the heater's helium", lambda: boil_off_L_per_h(magnet.heater_power_W(0.050, 80.0)), (), 0.281, 2e-3, BOUND
        ),
        Check(
            "quench of 100, 90.75, 108.375 kJ",
            magnet.quench_liquid_L,
            ([100e3, 90.75e3, 108.375e3],),
            [39.0, 35.4, 42.3],
            0.01,
            BOUND,
        ),
        Check("gas from 100 kJ", quench_gas_m3, (100e3,), 29.2, 0.01, BOUND),
        Check("gas from 90.75 kJ", quench_gas_m3, (90.75e3,), 26.5, 0.01, BOUND),
        Check("gas from 108.375 kJ", quench_gas_m3, (108.375e3,), 31.7, 0.01, BOUND),
        Check("never more than the bath holds", magnet.quench_liquid_L, (100e3, 20.0), 20.0, 1e-12, BOUND),
    ]
)
def test_magnet(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize(
    ("start_A", "end_A", "ohm", "volt"),
    [(0, 80, 0.02, 2.0), (30, 60, 0.005, 5.0), (80, 0, 0.02, -2.0), (80, 10, 0.02, 0.0), (60, 20, 0.001, -1.0)],
)
def test_voltage_limited_ramp_against_the_differential_equation(
    start_A: float, end_A: float, ohm: float, volt: float
) -> None:
    """L·dI/dt = V − I·R at a supply's limit, integrated until the current arrives."""

    def arrived(_t: float, I: np.ndarray) -> float:  # noqa: E741
        return float(I[0]) - end_A

    arrived.terminal = True  # type: ignore[attr-defined]
    solved = solve_ivp(
        lambda _t, I: (volt - I * ohm) / L,  # noqa: E741
        (0, 1e6), [start_A], events=arrived, rtol=1e-10, atol=1e-10, max_step=100.0,
    )  # fmt: skip
    limits = {"highest_V": volt} if end_A > start_A else {"highest_V": 5.0, "lowest_V": volt}
    found = magnet.voltage_limited_time_s(start_A, end_A, L, ohm, **limits)
    assert found == pytest.approx(float(solved.t_events[0][0]), rel=1e-6)


def test_persistent_decay_against_the_differential_equation() -> None:
    solved = solve_ivp(lambda _t, B: -5.556e-9 / L * B, (0, 30 * 24 * hour), [10.0], rtol=1e-12, atol=1e-14)
    left_T = magnet.persistent_field_T(10.0, 30 * 24 * hour, L, 5.556e-9)
    assert left_T == pytest.approx(solved.y[0, -1], rel=1e-9)
    assert 1 - left_T / 10.0 == pytest.approx(720e-6, rel=1e-3), "1 ppm per hour for 30 days"


FIELD = st.floats(-14.0, 14.0)


@given(FIELD, FIELD, st.floats(0.0, 1.0))
def test_ramp_time_is_additive_over_any_split(from_T: float, to_T: float, share: float) -> None:
    middle_T = from_T + share * (to_T - from_T)
    assert ramp(from_T, to_T) == pytest.approx(ramp(from_T, middle_T) + ramp(middle_T, to_T), abs=1e-7)


@given(FIELD, FIELD)
def test_ramp_time_is_the_same_back_and_mirrored(from_T: float, to_T: float) -> None:
    assert ramp(from_T, to_T) == pytest.approx(ramp(to_T, from_T), abs=1e-9)
    assert ramp(from_T, to_T) == pytest.approx(ramp(-from_T, -to_T), abs=1e-9)


@given(FIELD, FIELD, FIELD)
def test_a_longer_ramp_never_takes_less_time(a_T: float, b_T: float, c_T: float) -> None:
    low, middle, high = sorted((a_T, b_T, c_T))
    assert ramp(low, middle) <= ramp(low, high) + 1e-9
    assert ramp(middle, high) <= ramp(low, high) + 1e-9


@given(FIELD, FIELD)
def test_ramp_time_by_summing_small_steps(from_T: float, to_T: float) -> None:
    """The rate looked up at the middle of each of many steps, without the table's cumulative times."""
    fields = np.linspace(from_T, to_T, 5001)
    middle = np.abs(fields[:-1] + fields[1:]) / 2
    rates = RATES[np.searchsorted(EDGES_T, middle).clip(0, 2)]
    assert ramp(from_T, to_T) == pytest.approx(np.sum(np.abs(np.diff(fields)) / rates), abs=10.0)


@given(st.floats(-90, 90), st.floats(-90, 90), st.floats(0.0, 0.02))
def test_coming_down_is_never_slower_if_the_supply_goes_negative(one_A: float, other_A: float, ohm: float) -> None:
    low, high = sorted((abs(one_A), abs(other_A)))
    up = magnet.voltage_limited_time_s(low, high, L, ohm, 2.0, -2.0)
    down = magnet.voltage_limited_time_s(high, low, L, ohm, 2.0, -2.0)
    assert down <= up * (1 + 1e-12)
    assert magnet.voltage_limited_time_s(-low, -high, L, ohm, 2.0, -2.0) == up


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (magnet.stored_energy_J, (0.0, 1.0)),
        (magnet.current_A, (1.0, 0.0)),
        (magnet.charging_voltage_V, (20.0, 0.1, 1.0, -0.1)),
        (magnet.ramp_time_s, (0.0, 14.1, EDGES_T, RATES)),
        (magnet.ramp_time_s, (-14.1, 0.0, EDGES_T, RATES)),
        (magnet.ramp_time_s, (0.0, 1.0, [9.0, 8.0], [1.0, 1.0])),
        (magnet.ramp_time_s, (0.0, 1.0, [9.0], [1.0, 1.0])),
        (magnet.ramp_time_s, (0.0, 1.0, [9.0], [0.0])),
        (magnet.voltage_limited_time_s, (0, 100, 20, 0.02, 2.0)),
        (magnet.voltage_limited_time_s, (80, 0, 20, 0.02, 2.0)),
        (magnet.voltage_limited_time_s, (80, 40, 20, 0.0, 2.0)),
        (magnet.voltage_limited_time_s, (0, 10, 20, 0.0, 0.0)),
        (magnet.voltage_limited_time_s, (0, 10, 20, 0.0, 1.0, 1.0)),
        (magnet.voltage_limited_rate_A_per_s, (100, 20, 0.02, 2.0)),
        (magnet.persistent_field_T, (1.0, -1.0, 20.0, 0.0)),
        (magnet.joint_resistance_ohm, (-1.0, 20.0)),
        (magnet.open_switch_power_W, (1.0, 0.0)),
        (magnet.heater_power_W, (1.0, 0.0)),
        (magnet.quench_liquid_L, (-1.0,)),
        (magnet.quench_liquid_L, (1.0, -1.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
