"""Gates, and density and mobility from a Hall trace."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import e, milli

from planner.errors import OutOfRangeError
from planner.physics import carriers, gating

from .handbook import COMMON_PRACTICE, Check, page

PLATE = "parallel plates; permittivities common practice, no source"
DRUDE = "classical Hall effect, one kind of carrier; SI of 2019"
PER_CM2 = 1e4


def slope(permittivity_ratio: float, thickness_m: float) -> float:
    return float(gating.gate_slope_per_m2_V(gating.parallel_plate_F_per_m2(permittivity_ratio, thickness_m)))


@page(
    [
        Check("SiO2, 300 nm", slope, (3.9, 300e-9), 7.18425e10 * PER_CM2, 1e-5, PLATE),
        Check("SiO2, 285 nm", slope, (3.9, 285e-9), 7.56237e10 * PER_CM2, 1e-5, PLATE),
        Check("SiO2, 90 nm", slope, (3.9, 90e-9), 2.39475e11 * PER_CM2, 1e-5, PLATE),
        Check("hBN, 30 nm", slope, (3.0, 30e-9), 5.52635e11 * PER_CM2, 1e-5, PLATE),
        Check("GaAs, 100 nm", slope, (12.9, 100e-9), 7.12899e11 * PER_CM2, 1e-5, PLATE),
        Check(
            "SiO2, 300 nm, nF/cm^2", gating.parallel_plate_F_per_m2, (3.9, 300e-9), 11.5104e-9 * PER_CM2, 1e-5, PLATE
        ),
        Check(
            "two equal layers in series", gating.in_series_F_per_m2, ([2.0, 2.0],), 1.0, 1e-12, "capacitors in series"
        ),
        Check("gate at 2 V", gating.gated_density_per_m2, (1e15, 5e14, 2.0, 0.5), 1.75e15, 1e-12, COMMON_PRACTICE),
    ]
)
def test_gate(check: Check) -> None:
    check.holds()


@page(
    [
        Check("slope at 1e15 m^-2", carriers.hall_slope_ohm_per_T, (1e15,), 6241.509, 1e-6, DRUDE),
        Check("slope at 2e15 m^-2", carriers.hall_slope_ohm_per_T, (2e15,), 3120.755, 1e-6, DRUDE),
        Check("slope at 3e15 m^-2", carriers.hall_slope_ohm_per_T, (3e15,), 2080.503, 1e-6, DRUDE),
        Check("density of a slope", carriers.density_of_hall_slope_per_m2, (3120.755,), 2e15, 1e-6, DRUDE),
        Check("density of a reversed slope", carriers.density_of_hall_slope_per_m2, (-3120.755,), -2e15, 1e-6, DRUDE),
        Check("mobility, 2e15 m^-2, 31.2 ohm", carriers.mobility_m2_per_Vs, (2e15, 31.2), 100.024, 1e-5, DRUDE),
        Check(
            "Fermi energy, GaAs 1, 2, 3e15 m^-2",
            carriers.fermi_energy_J,
            ([1e15, 2e15, 3e15], 0.067),
            np.array([3.572959, 7.145917, 10.71888]) * milli * e,
            1e-5,
            "parabolic band, CODATA",
        ),
    ]
)
def test_carriers(check: Check) -> None:
    check.holds()


@given(
    st.floats(-1e17, 1e17),
    st.floats(-1e17, 1e17),
    st.sampled_from([-1.0, 1.0]),
    st.floats(1e13, 1e16),
    st.floats(-50, 50),
)
def test_gate_and_density_invert_each_other(
    wanted: float, density: float, sign: float, size: float, reference_V: float
) -> None:
    gate_V = gating.gate_for_density_V(wanted, density, sign * size, reference_V)
    back = gating.gated_density_per_m2(density, sign * size, gate_V, reference_V)
    scale = max(abs(wanted), abs(density), size * 50)
    assert back == pytest.approx(wanted, abs=1e-12 * scale)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (gating.gate_for_density_V, (1e15, 1e15, 0.0, 0.0)),
        (gating.gated_density_per_m2, (1e15, 1e15, np.inf, 0.0)),
        (gating.parallel_plate_F_per_m2, (0.0, 1e-7)),
        (gating.parallel_plate_F_per_m2, (3.9, -1e-7)),
        (gating.in_series_F_per_m2, ([1.0, 0.0],)),
        (gating.gate_slope_per_m2_V, (0.0,)),
        (carriers.hall_slope_ohm_per_T, (0.0,)),
        (carriers.density_of_hall_slope_per_m2, (0.0,)),
        (carriers.mobility_m2_per_Vs, (1e15, 0.0)),
        (carriers.fermi_energy_J, (-1e15, 0.067)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
