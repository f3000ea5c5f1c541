"""Oxygen in a room into which gas escapes."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import hour
from scipy.integrate import solve_ivp

from planner.errors import OutOfRangeError
from planner.physics import oxygen
from planner.physics.helium import expansion_ratio

from .handbook import Check, page

CODE = "29 CFR 1910.146(b)"
BALANCE = "mass balance of a mixed room, derived; forms of Fermilab FESHM 4240 from memory"
LEAK, SUPPLY, EXTRACT = oxygen.oxygen_during_leak, (100, 60, 300, "supply"), (100, 60, 300, "extract")


def litres_of_helium(room_m3: float, gas_m3_in) -> float:  # type: ignore[no-untyped-def]
    return float(gas_m3_in(room_m3)) / float(expansion_ratio(293.15)) * 1000


@page(
    [
        Check("deficient below", lambda: oxygen.HAZARD_OXYGEN, (), 0.195, 1e-12, CODE),
        Check("enriched above", lambda: oxygen.ENRICHED_OXYGEN, (), 0.235, 1e-12, CODE),
        Check(
            "30 m^3 into 100 and 200, air displaced",
            oxygen.oxygen_displaced,
            (30, [100, 200]),
            [0.14700, 0.1785],
            1e-5,
            BALANCE,
        ),
        Check(
            "30 m^3 into 100 and 200, mixed", oxygen.oxygen_mixed, (30, [100, 200]), [0.155572, 0.180749], 1e-5, BALANCE
        ),
        Check("share of a room to 19.5 %, displaced", oxygen.gas_to_displace_m3, (1.0,), 0.0714286, 1e-5, BALANCE),
        Check("share of a room to 19.5 %, mixed", oxygen.gas_to_mix_m3, (1.0,), 0.0741080, 1e-5, BALANCE),
        Check(
            "litres of helium for 100 m^3, displaced",
            litres_of_helium,
            (100, oxygen.gas_to_displace_m3),
            9.53,
            1e-3,
            BALANCE,
        ),
        Check(
            "litres of helium for 100 m^3, mixed", litres_of_helium, (100, oxygen.gas_to_mix_m3), 9.89, 1e-3, BALANCE
        ),
        Check(
            "supply fan, 0.1 and 0.25 h",
            LEAK,
            (np.array([0.1, 0.25]) * hour, *SUPPLY),
            [0.199419, 0.189230],
            1e-5,
            BALANCE,
        ),
        Check("supply fan, in the long run", oxygen.oxygen_in_the_long_run, (60, 300, "supply"), 0.175, 1e-9, BALANCE),
        Check(
            "extracting fan, 0.1 and 0.25 h",
            LEAK,
            (np.array([0.1, 0.25]) * hour, *EXTRACT),
            [0.199114, 0.187839],
            1e-5,
            BALANCE,
        ),
        Check(
            "extracting fan, in the long run", oxygen.oxygen_in_the_long_run, (60, 300, "extract"), 0.168, 1e-9, BALANCE
        ),
        Check("no fan, 300 m^3/h for 0.1 h", LEAK, (0.1 * hour, 100, 300, 0, "extract"), 0.155572, 1e-5, BALANCE),
        Check(
            "0.2 h after the leak", oxygen.oxygen_after_leak, (0.2 * hour, 100, 300, 0.187839), 0.197838, 1e-5, BALANCE
        ),
        Check("back at 19.5 % after", oxygen.airing_time_s, (100, 300, 0.187839), 0.130089 * hour, 1e-4, BALANCE),
        Check("largest leak, extracting", oxygen.largest_leak_m3_per_h, (300, "extract"), 21.43, 1e-3, BALANCE),
        Check("largest leak, supplying", oxygen.largest_leak_m3_per_h, (300, "supply"), 23.08, 1e-3, BALANCE),
    ]
)
def test_oxygen(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize(
    ("leak", "vent", "fan"),
    [(60, 300, "supply"), (60, 300, "extract"), (300, 60, "extract"), (300, 60, "supply"), (100, 0, "extract")],
)
def test_leak_and_recovery_against_the_differential_equation(leak: float, vent: float, fan: oxygen.Fan) -> None:
    """V·dC/dt = 0.21·(air drawn in) − C·(mixture going out), flow by flow."""
    air = vent if fan == "supply" else max(vent - leak, 0.0)
    solved = solve_ivp(lambda _t, C: (0.21 * air - C * (air + leak)) / 100, (0, 0.5), [0.21], rtol=1e-9, atol=1e-12)
    during = oxygen.oxygen_during_leak(0.5 * hour, 100, leak, vent, fan)
    assert during == pytest.approx(solved.y[0, -1], rel=1e-6)
    after = solve_ivp(lambda _t, C: (0.21 - C) * vent / 100, (0, 0.3), [during], rtol=1e-9, atol=1e-12)
    assert oxygen.oxygen_after_leak(0.3 * hour, 100, vent, during) == pytest.approx(after.y[0, -1], rel=1e-6)


ROOM, GAS, FLOW = st.floats(10, 1000), st.floats(0, 10), st.floats(1, 1000)
FAN = st.sampled_from(["supply", "extract"])


@given(GAS, ROOM)
def test_displacing_is_never_the_milder_model(gas_m3: float, room_m3: float) -> None:
    assert oxygen.oxygen_displaced(gas_m3, room_m3) <= oxygen.oxygen_mixed(gas_m3, room_m3) * (1 + 1e-12)


@given(FLOW, FLOW, FAN)
def test_the_largest_leak_settles_exactly_at_the_limit(vent: float, leak: float, fan: oxygen.Fan) -> None:
    largest = oxygen.largest_leak_m3_per_h(vent, fan)
    assert oxygen.oxygen_in_the_long_run(largest, vent, fan) == pytest.approx(0.195)
    assert (oxygen.oxygen_in_the_long_run(leak, vent, fan) < 0.195 - 1e-9) <= (leak > largest)


@given(ROOM, FLOW, st.floats(0.0, 0.19))
def test_airing_brings_the_limit_back(room_m3: float, vent: float, oxygen_at_end: float) -> None:
    told_s = oxygen.airing_time_s(room_m3, vent, oxygen_at_end)
    assert oxygen.oxygen_after_leak(told_s, room_m3, vent, oxygen_at_end) == pytest.approx(0.195)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (oxygen.oxygen_displaced, (110, 100)),
        (oxygen.oxygen_displaced, (-1, 100)),
        (oxygen.oxygen_mixed, (10, 0)),
        (oxygen.gas_to_displace_m3, (100, 0.22)),
        (oxygen.gas_to_mix_m3, (100, 0.0)),
        (LEAK, (-1, *SUPPLY)),
        (LEAK, (1, 100, 60, 300, "window")),
        (oxygen.oxygen_in_the_long_run, (0, 300, "supply")),
        (oxygen.largest_leak_m3_per_h, (300, "window")),
        (oxygen.largest_leak_m3_per_h, (300, "supply", 0.0)),
        (oxygen.oxygen_after_leak, (1, 100, 300, 0.3)),
        (oxygen.airing_time_s, (100, 0, 0.1)),
        (oxygen.airing_time_s, (100, 300, 0.1, 0.21)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
