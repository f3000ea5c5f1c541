"""Eddy heating by geometry."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import micro, milli, minute, mu_0
from scipy.integrate import dblquad, quad
from scipy.special import jn_zeros

from planner.errors import OutOfRangeError
from planner.physics import eddy

from .handbook import COMMON_PRACTICE, FROM_MEMORY, Check, page

INDUCTION = "induction law, derived; cf. F. Pobell, Matter and Methods at Low Temperatures, ch. 10"
RATE, RHO, R = 0.1 / minute, 1.55e-10, 0.010
ROD_m3 = np.pi * R**2 * 0.050


def rod_W(rrr: float, field_T: float = 0.0) -> float:
    return float(eddy.axial_cylinder_W_per_m3(R, RATE, eddy.copper_ohm_m(rrr, field_T))) * ROD_m3


@page(
    [
        Check(
            "rod of 10 mm radius, RRR 100, 0.1 T/min",
            eddy.axial_cylinder_W_per_m3,
            (R, RATE, RHO),
            0.224014,
            1e-4,
            INDUCTION,
        ),
        Check("50 mm of it", rod_W, (100,), 3.519 * micro, 2e-4, INDUCTION),
        Check("50 mm of RRR 1000", rod_W, (1000,), 35.19 * micro, 2e-4, INDUCTION),
        Check("at 10 T, RRR 100", rod_W, (100, 10.0), 0.859 * micro, 0.15, FROM_MEMORY),
        Check("at 10 T, RRR 1000", rod_W, (1000, 10.0), 1.10 * micro, 0.15, FROM_MEMORY),
        Check("ring of 30 mm radius, 10 mm^2", eddy.ring_W, (0.030, 10e-6, RATE, RHO), 7.6006 * micro, 1e-4, INDUCTION),
        Check("plate of 2 mm", eddy.plate_W_per_m3, (0.002, RATE, RHO), 5.974 * milli, 1e-4, INDUCTION),
        Check("decay time of the rod", eddy.diffusion_time_s, (R, RHO), 0.140, 2e-3, INDUCTION),
        Check(
            "copper at 4 K, RRR 50, 100, 1000",
            eddy.copper_ohm_m,
            ([50, 100, 1000],),
            [3.1e-10, 1.55e-10, 1.55e-11],
            1e-9,
            COMMON_PRACTICE,
        ),
        Check("copper at 4 K in 10 T", eddy.copper_ohm_m, (100, 10.0), 6.35e-10, 0.15, FROM_MEMORY),
    ]
)
def test_eddy(check: Check) -> None:
    check.holds()


def mean_over_disc(square_of_field_line) -> float:  # type: ignore[no-untyped-def]
    """Mean of a function of (x, y) over the unit disc."""
    area, _ = dblquad(
        lambda y, x: square_of_field_line(x, y), -1, 1, lambda x: -np.sqrt(1 - x * x), lambda x: np.sqrt(1 - x * x)
    )
    return area / np.pi


def test_geometries_by_integrating_the_electric_field() -> None:
    """E from Faraday's law, in units where size, rate and resistivity are one, squared and averaged."""
    around = mean_over_disc(lambda x, y: (x * x + y * y) / 4)  # E = r/2 around the axis
    along = mean_over_disc(lambda x, _y: x * x)  # E = x along the rod, returning at the far ends
    ball, _ = quad(lambda z: (1 - z * z) ** 2 / 8 * 0.75, -1, 1)  # a ball is a stack of discs: r²/8 each
    plate, _ = quad(lambda x: x * x, -0.5, 0.5)  # E = x across the thickness
    assert eddy.axial_cylinder_W_per_m3(1, 1, 1) == pytest.approx(around, rel=1e-6)
    assert eddy.transverse_cylinder_W_per_m3(1, 1, 1) == pytest.approx(along, rel=1e-6)
    assert eddy.sphere_W_per_m3(1, 1, 1) == pytest.approx(ball, rel=1e-6)
    assert eddy.plate_W_per_m3(1, 1, 1) == pytest.approx(plate, rel=1e-6)
    assert eddy.tube_W_per_m3(1, 1, 1) == pytest.approx(0.25, rel=1e-12)  # E = a/2 in the wall


def test_a_round_bar_is_a_cylinder() -> None:
    torsion_m4 = np.pi * R**4 / 2
    per_m = eddy.axial_cylinder_W_per_m3(R, RATE, RHO) * np.pi * R**2
    assert eddy.bar_W_per_m(torsion_m4, RATE, RHO) == pytest.approx(per_m, rel=1e-12)


def test_decay_time_is_the_slowest_mode_of_a_cylinder() -> None:
    assert eddy.diffusion_time_s(R, RHO) == pytest.approx(mu_0 * R**2 / (jn_zeros(0, 1)[0] ** 2 * RHO), rel=1e-12)


SHAPES = [
    eddy.axial_cylinder_W_per_m3,
    eddy.transverse_cylinder_W_per_m3,
    eddy.sphere_W_per_m3,
    eddy.plate_W_per_m3,
    eddy.tube_W_per_m3,
]


@given(st.sampled_from(SHAPES), st.floats(1e-4, 0.1), st.floats(1e-6, 0.1), st.floats(1e-11, 1e-6))
def test_heat_goes_as_the_square_of_the_rate(shape, size_m: float, rate: float, rho: float) -> None:  # type: ignore[no-untyped-def]
    assert shape(size_m, 2 * rate, rho) == pytest.approx(4 * shape(size_m, rate, rho))
    assert shape(size_m, -rate, rho) == shape(size_m, rate, rho)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [(shape, (0.0, RATE, RHO)) for shape in SHAPES]
    + [(shape, (R, RATE, 0.0)) for shape in SHAPES]
    + [
        (eddy.ring_W, (R, 0.0, RATE, RHO)),
        (eddy.bar_W_per_m, (0.0, RATE, RHO)),
        (eddy.diffusion_time_s, (0.0, RHO)),
        (eddy.copper_ohm_m, (1.0,)),
        (eddy.copper_ohm_m, (100, 50.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
