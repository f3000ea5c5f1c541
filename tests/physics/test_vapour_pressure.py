"""Vapour pressure of helium on ITS-90, both ways."""

from __future__ import annotations

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import atm

from planner.errors import OutOfRangeError
from planner.physics import vapour_pressure as vapour

from .handbook import Check, page

ITS_90 = "H. Preston-Thomas, Metrologia 27, 3 (1990), Table 3"
HELIUM3_FROM_MEMORY = ITS_90 + "; coefficients of 3He from memory"


@page(
    [
        Check(
            "1.25, 1.3, 1.4 K", vapour.helium4_pressure_Pa, ([1.25, 1.3, 1.4],), [114.73, 157.85, 281.91], 1e-4, ITS_90
        ),
        Check("1.5, 1.6, 1.8 K", vapour.helium4_pressure_Pa, ([1.5, 1.6, 1.8],), [471.54, 746.5, 1638.2], 1e-4, ITS_90),
        Check("2.0 K, lambda point", vapour.helium4_pressure_Pa, ([2.0, 2.1768],), [3129.7, 5041.8], 1e-4, ITS_90),
        Check("2.5, 3, 3.5 K", vapour.helium4_pressure_Pa, ([2.5, 3.0, 3.5],), [10227.8, 24046, 47045], 1e-4, ITS_90),
        Check("4, 4.2, 4.5 K", vapour.helium4_pressure_Pa, ([4.0, 4.2, 4.5],), [81616, 99233, 130260], 1e-4, ITS_90),
        Check("boiling point", vapour.helium4_temperature_K, (atm,), 4.22210, 1e-6, ITS_90),
        Check("200 Pa, 1 kPa", vapour.helium4_temperature_K, ([200, 1000],), [1.33932, 1.66974], 1e-4, ITS_90),
        Check(
            "10, 50, 100 kPa",
            vapour.helium4_temperature_K,
            ([10e3, 50e3, 100e3],),
            [2.48856, 3.55098, 4.20814],
            1e-4,
            ITS_90,
        ),
        Check(
            "3He at 0.65, 0.8, 1 K",
            vapour.helium3_pressure_Pa,
            ([0.65, 0.8, 1.0],),
            [115.9, 377.8, 1160.1],
            1e-4,
            HELIUM3_FROM_MEMORY,
        ),
        Check(
            "3He at 1.5, 2, 3 K",
            vapour.helium3_pressure_Pa,
            ([1.5, 2.0, 3.0],),
            [6709, 19999, 81826],
            1e-4,
            HELIUM3_FROM_MEMORY,
        ),
        Check("3He boiling point", vapour.helium3_temperature_K, (atm,), 3.19684, 1e-5, HELIUM3_FROM_MEMORY),
    ]
)
def test_vapour_pressure(check: Check) -> None:
    check.holds()


def test_the_two_ranges_of_helium4_meet_at_the_lambda_point() -> None:
    below, above = vapour.helium4_pressure_Pa([2.1768, np.nextafter(2.1768, 3.0)])
    assert above == pytest.approx(below, rel=1e-5)


@pytest.mark.parametrize("temperature_K", [2.2, 3.0, 4.0, 4.2, 4.6])
def test_scale_and_equation_of_state_differ_by_less_than_half_a_per_cent(temperature_K: float) -> None:
    """CoolProp lies 0.16 % low at 4.2 K, which is why the scale serves between T and p."""
    by_state = PropsSI("P", "T", temperature_K, "Q", 0, "Helium")
    assert vapour.helium4_pressure_Pa(temperature_K) == pytest.approx(by_state, rel=5e-3)


HELIUM4 = (vapour.helium4_pressure_Pa, vapour.helium4_temperature_K)
HELIUM3 = (vapour.helium3_pressure_Pa, vapour.helium3_temperature_K)


@given(st.floats(1.25, 5.0))
def test_helium4_inverts(temperature_K: float) -> None:
    # At the lambda point the scale's own two rows differ by 0.7 ppm of pressure.
    assert HELIUM4[1](HELIUM4[0](temperature_K)) == pytest.approx(temperature_K, rel=1e-6)


@given(st.floats(0.65, 3.2))
def test_helium3_inverts(temperature_K: float) -> None:
    assert HELIUM3[1](HELIUM3[0](temperature_K)) == pytest.approx(temperature_K, rel=1e-12)


@given(st.floats(1.25, 5.0), st.floats(1.25, 5.0))
def test_helium4_pressure_rises_with_temperature(one_K: float, other_K: float) -> None:
    cold, warm = vapour.helium4_pressure_Pa(sorted((one_K, other_K)))
    assert cold <= warm


@given(st.floats(0.65, 3.2), st.floats(0.65, 3.2))
def test_helium3_pressure_rises_with_temperature_and_exceeds_helium4(one_K: float, other_K: float) -> None:
    cold, warm = vapour.helium3_pressure_Pa(sorted((one_K, other_K)))
    assert cold <= warm
    if one_K >= 1.25:
        assert vapour.helium3_pressure_Pa(one_K) > vapour.helium4_pressure_Pa(one_K)


@pytest.mark.parametrize(
    ("function", "argument"),
    [
        (vapour.helium4_pressure_Pa, 1.2),
        (vapour.helium4_pressure_Pa, 5.1),
        (vapour.helium4_pressure_Pa, np.nan),
        (vapour.helium4_temperature_K, 100.0),
        (vapour.helium4_temperature_K, 2e5),
        (vapour.helium3_pressure_Pa, 0.6),
        (vapour.helium3_pressure_Pa, 3.3),
        (vapour.helium3_temperature_K, 100.0),
        (vapour.helium3_temperature_K, 1.1e5),
    ],
)
def test_outside_its_range_it_raises(function, argument: float) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(argument)
