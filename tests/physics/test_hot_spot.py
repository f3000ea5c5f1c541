"""Hot spot of a quench in copper."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad

from planner.errors import OutOfRangeError
from planner.physics import hot_spot

from .handbook import COMMON_PRACTICE, FROM_MEMORY, Check, page

MADDOCK = "B. J. Maddock, G. B. James, Proc. IEE 115, 543 (1968); NIST heat capacity, Bloch-Grueneisen resistance"

copper = hot_spot.copper_quench_A2s_per_m4


@page(
    [
        Check("to 300 K, RRR 100", copper, (300, 100), 1.516e17, 0.10, MADDOCK),
        Check("to 300 K, RRR 30", copper, (300, 30), 1.186e17, 0.10, MADDOCK),
        Check("to 300 K, RRR 100, 8 T", copper, (300, 100, 8.0), 1.175e17, 0.10, MADDOCK),
        Check("to 100 K, RRR 100", copper, (100, 100), 8.44e16, 0.10, MADDOCK),
        Check("1 mm^2 to 300 K", hot_spot.quench_integral_A2s, (1e-6, 300, 100), 0.1516e6, 0.10, MADDOCK),
        Check("copper at 273 K", hot_spot.copper_resistivity_ohm_m, (273.15, 100), 1.55e-8, 0.01, COMMON_PRACTICE),
        Check("copper at 293 K", hot_spot.copper_resistivity_ohm_m, (293.0, 100), 1.68e-8, 0.02, COMMON_PRACTICE),
        Check("copper at 77 K", hot_spot.copper_resistivity_ohm_m, (77.0, 100), 2.1e-9, 0.10, FROM_MEMORY),
        Check(
            "copper at 4.2 K, RRR 100", hot_spot.copper_resistivity_ohm_m, (4.2, 100), 1.55e-10, 0.01, COMMON_PRACTICE
        ),
    ]
)
def test_hot_spot(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize("temperature_K", [5.0, 20.0, 77.0, 200.0])
def test_lattice_resistance_against_adaptive_quadrature(temperature_K: float) -> None:
    """(T/Θ)⁵·∫₀^{Θ/T} x⁵/((eˣ − 1)(1 − e⁻ˣ)) dx, scaled to 273.15 K."""

    def lattice(T: float) -> float:
        area, _ = quad(lambda x: x**5 / (np.expm1(x) * -np.expm1(-x)), 0, 343.0 / T, limit=200)
        return (T / 343.0) ** 5 * area

    expected = 1.55e-10 + 1.55e-8 * 0.99 * lattice(temperature_K) / lattice(273.15)
    assert hot_spot.copper_resistivity_ohm_m(temperature_K, 100) == pytest.approx(expected, rel=1e-4)


def test_a_purer_wire_bears_more_and_a_field_takes_some_back() -> None:
    assert copper(300, 30) < copper(300, 100) < copper(300, 300)
    assert copper(300, 100, 8.0) < copper(300, 100)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (copper, (301, 100)),
        (copper, (3.0, 100)),
        (copper, (300, 1.0)),
        (copper, (300, 100, 40.0)),
        (hot_spot.copper_resistivity_ohm_m, (310.0, 100)),
        (hot_spot.quench_integral_A2s, (0.0, 300, 100)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
