"""Load line, operating fraction and temperature margin of a coil section."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import milli

from planner.errors import OutOfRangeError
from planner.physics import load_line, nb3sn, nbti

from .handbook import Check, page

STANDARD = "load line against L. Bottura, IEEE Trans. Appl. Supercond. 10, 1054 (2000), set A (from memory)"
SET, AREA, KAPPA = nbti.SET_A, 0.25 * milli**2, 0.09
MM2 = milli**2


@page(
    [
        Check("short sample at 4.2 K", load_line.short_sample_A, (SET, AREA, KAPPA, 4.2), 109.784, 1e-4, STANDARD),
        Check("short sample at 2.2 K", load_line.short_sample_A, (SET, AREA, KAPPA, 2.2), 136.557, 1e-4, STANDARD),
        Check(
            "peak field there, 4.2 K",
            lambda: KAPPA * load_line.short_sample_A(SET, AREA, KAPPA, 4.2),
            (),
            9.8806,
            1e-4,
            STANDARD,
        ),
        Check(
            "peak field there, 2.2 K",
            lambda: KAPPA * load_line.short_sample_A(SET, AREA, KAPPA, 2.2),
            (),
            12.2901,
            1e-4,
            STANDARD,
        ),
        Check("90 A at 4.2 K", load_line.operating_fraction, (90, SET, AREA, KAPPA, 4.2), 0.8198, 1e-4, STANDARD),
        Check("90 A at 2.2 K", load_line.operating_fraction, (90, SET, AREA, KAPPA, 2.2), 0.6591, 1e-4, STANDARD),
        Check("sharing of 500 A/mm^2 at 8 T", load_line.current_sharing_K, (500, SET, MM2, 8), 5.21058, 1e-4, STANDARD),
        Check("its margin at 4.2 K", load_line.temperature_margin_K, (500, SET, MM2, 8, 4.2), 1.01058, 1e-4, STANDARD),
        Check(
            "its straight-line estimate", load_line.linear_margin_K, (500, SET, MM2, 8, 4.2), 0.96640, 1e-4, STANDARD
        ),
        Check(
            "margin of 1000 A/mm^2 at 7 T",
            load_line.temperature_margin_K,
            (1000, SET, MM2, 7, 4.2),
            0.96545,
            1e-4,
            STANDARD,
        ),
        Check(
            "its straight-line estimate ", load_line.linear_margin_K, (1000, SET, MM2, 7, 4.2), 0.94645, 1e-4, STANDARD
        ),
        Check(
            "sharing of 90 A on the load line",
            load_line.current_sharing_K,
            (90, SET, AREA, 90 * KAPPA),
            5.31945,
            1e-4,
            STANDARD,
        ),
    ]
)
def test_load_line(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize("bath_K", [1.9, 2.2, 3.0, 4.2])
def test_short_sample_by_walking_up_the_load_line(bath_K: float) -> None:
    """The last current of a fine ladder that the wire still carries, without a root finder."""
    ladder_A = np.arange(12.0, 160.0, 0.001)
    carried = AREA * SET.critical_A_per_m2(KAPPA * ladder_A, bath_K) >= ladder_A
    assert load_line.short_sample_A(SET, AREA, KAPPA, bath_K) == pytest.approx(ladder_A[carried][-1], abs=0.001)


def test_without_current_sharing_begins_at_the_critical_temperature() -> None:
    assert load_line.current_sharing_K(0.0, SET, AREA, 8.0) == SET.critical_temperature_K(8.0)


CURRENT = st.floats(12.0, 120.0)
SECTIONS = [(nbti.SET_A, AREA, KAPPA), (nb3sn.SUMMERS, AREA, KAPPA), (nb3sn.ITER_STRAND, AREA, KAPPA)]


@pytest.mark.parametrize("section", SECTIONS, ids=["NbTi", "Summers", "fusion strand"])
@given(one_A=CURRENT, other_A=CURRENT)
def test_more_current_never_leaves_more_margin(section, one_A: float, other_A: float) -> None:  # type: ignore[no-untyped-def]
    surface, area, kappa = section
    low, high = sorted((one_A, other_A))
    margins = [load_line.temperature_margin_K(A, surface, area, kappa * A, 4.2) for A in (low, high)]
    assert margins[1] <= margins[0] + 1e-9
    fractions = [load_line.operating_fraction(A, surface, area, kappa, 4.2) for A in (low, high)]
    assert fractions[0] <= fractions[1]


@given(CURRENT, st.floats(1.9, 4.5))
def test_margin_is_positive_exactly_below_short_sample(current_A: float, bath_K: float) -> None:
    margin = load_line.temperature_margin_K(current_A, SET, AREA, KAPPA * current_A, bath_K)
    fraction = load_line.operating_fraction(current_A, SET, AREA, KAPPA, bath_K)
    assert (margin > 1e-9) == (fraction < 1.0 - 1e-9) or abs(margin) < 1e-6


@given(st.floats(1.8, 4.4), st.floats(1.8, 4.4))
def test_a_warmer_bath_never_leaves_more_current(one_K: float, other_K: float) -> None:
    cold, warm = (load_line.short_sample_A(SET, AREA, KAPPA, T) for T in sorted((one_K, other_K)))
    assert warm <= cold + 1e-9


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (load_line.short_sample_A, (SET, 0.0, KAPPA, 4.2)),
        (load_line.short_sample_A, (SET, AREA, KAPPA, 1.5)),
        (load_line.short_sample_A, (SET, 1e-12, KAPPA, 4.2)),
        (load_line.current_sharing_K, (1e4, SET, AREA, 8.0)),
        (load_line.current_sharing_K, (90.0, SET, AREA, 0.5)),
        (load_line.current_sharing_K, (90.0, SET, AREA, 14.3)),
        (load_line.temperature_margin_K, (90.0, SET, AREA, 8.0, 1.0)),
        (load_line.linear_margin_K, (1e4, SET, AREA, 8.0, 4.2)),
        (load_line.linear_margin_K, (0.0, SET, AREA, 8.0, 6.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
