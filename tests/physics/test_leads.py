"""Current leads."""

from __future__ import annotations

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import atm, e, k, milli
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from planner.errors import OutOfRangeError
from planner.physics import leads

from .handbook import Check, page

MCFEE = "R. McFee, Rev. Sci. Instrum. 30, 98 (1959)"
KADIN = "A. M. Kadin, arXiv:cond-mat/0508697"
LOCK = "J. M. Lock, Cryogenics 9, 438 (1969); M. N. Wilson, Superconducting Magnets (Oxford 1983); from memory"

conducting = leads.conducting_lead_W_per_A


@page(
    [
        Check("300 to 4.2 K", conducting, (300, 4.2), 46.886 * milli, 1e-4, MCFEE),
        Check("293.15 to 4.2 K", conducting, (293.15, 4.2), 45.815 * milli, 1e-4, MCFEE),
        Check("300 to 77 K", conducting, (300, 77), 45.319 * milli, 1e-4, MCFEE),
        Check("300 to 50 K", conducting, (300, 50), 46.234 * milli, 1e-4, MCFEE),
        Check("77 to 4.2 K", conducting, (77, 4.2), 12.017 * milli, 1e-4, MCFEE),
        Check("50 to 4.2 K", conducting, (50, 4.2), 7.787 * milli, 1e-4, MCFEE),
        Check("a pair from 300 K: 3.6 kT/e", lambda: 2 * conducting(300, 4.2), (), 3.6 * k * 300 / e, 0.01, KADIN),
        Check("vapour-cooled, 1.04 to 1.1 W/kA", leads.vapour_cooled_W_per_A, (), 1.07 * milli, 0.10, LOCK),
        Check(
            "a pair of vapour-cooled leads, L/h at 1 kA",
            leads.lead_pair_L_per_h,
            (1000, 1.083 * milli),
            3.04,
            0.01,
            LOCK,
        ),
    ]
)
def test_leads(check: Check) -> None:
    check.holds()


def test_conducting_lead_with_the_other_lorenz_number() -> None:
    assert conducting(300, 4.2) * np.sqrt(2.45e-8 / leads.LORENZ_W_ohm_per_K2) == pytest.approx(46.953e-3, rel=1e-4)


def vapour_cooled_by_ode(latent: float, share: float, capacity) -> float:  # type: ignore[no-untyped-def]
    """Shoot from the cold end: dq/dT = ṁ·c_p(T) − L₀·T/q per ampere, until no heat enters at 300 K.

    The square of q is integrated, which stays smooth where q itself turns to zero.
    """

    def left_over(heat: float) -> float:
        def slope(T: float, square: np.ndarray) -> np.ndarray:
            q = np.sqrt(np.maximum(square, 0.0))
            return 2 * (share * heat / latent * capacity(T) * q - 2.443e-8 * T)

        return float(solve_ivp(slope, (4.2221, 300.0), [heat**2], rtol=1e-8, atol=1e-14).y[0, -1])

    return float(brentq(left_over, 0.9e-3, 1.6e-3, xtol=1e-9))


@pytest.mark.parametrize("share", [1.0, 0.8644])
def test_vapour_cooled_against_the_differential_equation(share: float) -> None:
    by_ode = vapour_cooled_by_ode(20564.4, share, lambda _T: 5193.2)
    assert leads.vapour_cooled_W_per_A(vapour_share=share) == pytest.approx(by_ode, rel=1e-3)


@pytest.mark.parametrize(("share", "published"), [(1.0, 1.083e-3), (0.8644, 1.235e-3)])
def test_vapour_cooled_with_the_true_heat_capacity_of_helium(share: float, published: float) -> None:
    """CoolProp's c_p, higher near 4 K, lowers the heat by 2 to 3 %."""
    knots = np.geomspace(4.2245, 300.0, 200)
    values = [PropsSI("C", "T", T, "P", atm, "Helium") for T in knots]
    by_ode = vapour_cooled_by_ode(20564.4, share, lambda T: np.interp(T, knots, values))
    assert by_ode == pytest.approx(published, rel=0.005), LOCK
    assert leads.vapour_cooled_W_per_A(vapour_share=share) == pytest.approx(by_ode, rel=0.05)


@given(st.floats(10.0, 400.0), st.floats(10.0, 400.0), st.floats(0.2, 1.0))
def test_a_warmer_end_brings_more_and_vapour_always_helps(one_K: float, other_K: float, share: float) -> None:
    low, high = sorted((one_K, other_K))
    assert leads.vapour_cooled_W_per_A(low, share) <= leads.vapour_cooled_W_per_A(high, share) * (1 + 1e-9)
    assert leads.vapour_cooled_W_per_A(high, share) < conducting(high, 4.2221)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (conducting, (4.2, 300.0)),
        (conducting, (300.0, 0.0)),
        (leads.vapour_cooled_W_per_A, (4.0,)),
        (leads.vapour_cooled_W_per_A, (500.0,)),
        (leads.vapour_cooled_W_per_A, (300.0, 0.0)),
        (leads.vapour_cooled_W_per_A, (300.0, 1.1)),
        (leads.lead_pair_L_per_h, (100.0, -1.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
