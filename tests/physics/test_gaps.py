"""Energy scales and gaps of a layer in a field."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from scipy.constants import e, milli

from planner.errors import OutOfRangeError
from planner.physics import gaps

from .handbook import COMMON_PRACTICE, SI_2019, Check, page

F = Fraction

MEV = milli * e
GAAS = "GaAs m* = 0.067, |g| = 0.44, eps = 12.9: common practice; constants CODATA"
GRAPHENE = "A. H. Castro Neto et al., Rev. Mod. Phys. 81, 109 (2009)"
ARRHENIUS = "thermal activation over the full gap (convention)"


def in_K(function, *arguments):  # type: ignore[no-untyped-def]
    return gaps.energy_K(function(*arguments))


@page(
    [
        Check("cyclotron gap of GaAs, meV/T", gaps.cyclotron_gap_J, (1.0,), 1.727875 * MEV, 1e-5, GAAS),
        Check("cyclotron gap of GaAs, K/T", in_K, (gaps.cyclotron_gap_J, 1.0), 20.05116, 1e-5, GAAS),
        Check("graphene, level 1 at 1 T", gaps.graphene_level_J, (1, 1.0), 36.28256 * MEV, 1e-5, GRAPHENE),
        Check("graphene, level 1 at 10 T", gaps.graphene_level_J, (1, 10.0), 114.7355 * MEV, 1e-5, GRAPHENE),
        Check("graphene, level -1 at 10 T", gaps.graphene_level_J, (-1, 10.0), -114.7355 * MEV, 1e-5, GRAPHENE),
        Check("graphene, level 1 at 10 T in K", in_K, (gaps.graphene_level_J, 1, 10.0), 1331.45, 1e-5, GRAPHENE),
        Check("spin splitting of GaAs, ueV/T", gaps.zeeman_J, (1.0,), 25.4689e-3 * MEV, 1e-5, GAAS),
        Check("spin splitting of GaAs, K/T", in_K, (gaps.zeeman_J, 1.0), 0.295554, 1e-5, GAAS),
        Check("Bohr magneton, ueV/T", lambda: gaps.BOHR_MAGNETON_J_per_T, (), 57.88382e-3 * MEV, 1e-6, "CODATA"),
        Check("k_B/e, ueV/K", gaps.energy_K, (86.17333e-3 * MEV,), 1.0, 1e-6, SI_2019),
        Check("magnetic length at 1 T", gaps.magnetic_length_m, (1.0,), 25.65564e-9, 1e-6, SI_2019),
        Check("magnetic length at 10 T", gaps.magnetic_length_m, (10.0,), 8.113026e-9, 1e-6, SI_2019),
        Check("Coulomb scale in vacuum, K", in_K, (gaps.coulomb_scale_J, 1.0, 1.0), 651.3224, 1e-5, "CODATA"),
        Check("Coulomb scale, eps 12.9, K", in_K, (gaps.coulomb_scale_J, 1.0, 12.9), 50.4901, 1e-5, GAAS),
        Check("Coulomb scale, eps 12.9, meV", gaps.coulomb_scale_J, (1.0, 12.9), 4.35090 * MEV, 1e-5, GAAS),
        Check("Coulomb scale, eps 13, K", in_K, (gaps.coulomb_scale_J, 1.0, 13.0), 50.1017, 1e-5, COMMON_PRACTICE),
        Check("Coulomb scale, eps 12.4, K", in_K, (gaps.coulomb_scale_J, 1.0, 12.4), 52.526, 1e-5, COMMON_PRACTICE),
        Check(
            "the 50.8 K of the trade is eps 12.82",
            in_K,
            (gaps.coulomb_scale_J, 1.0, 12.82),
            50.8,
            1e-3,
            COMMON_PRACTICE,
        ),
        Check(
            "1 K gap at 0.1, 0.2, 0.5 K",
            gaps.activated_share,
            (1.0, [0.1, 0.2, 0.5]),
            [6.73795e-3, 0.0820850, 0.367879],
            1e-5,
            ARRHENIUS,
        ),
        Check("temperature for 1 % left", gaps.temperature_to_resolve_K, (9.210340,), 1.0, 1e-6, ARRHENIUS),
    ]
)
def test_energy_scales(check: Check) -> None:
    check.holds()


def test_graphene_gap_between_levels_1_and_2() -> None:
    one, two = gaps.graphene_level_J([1, 2], 10.0)
    assert two - one == pytest.approx(47.525 * MEV, rel=1e-5), GRAPHENE


def test_longitudinal_resistance_of_a_10_K_gap_between_1_and_2_K() -> None:
    cold, warm = gaps.activated_share(10.0, [1.0, 2.0])
    assert warm / cold == pytest.approx(12.1825, rel=1e-5), ARRHENIUS


def test_slope_of_an_arrhenius_plot_is_half_the_gap() -> None:
    temperature_K = np.linspace(0.1, 0.5, 20)
    slope = np.polyfit(1.0 / temperature_K, np.log(gaps.activated_share(3.0, temperature_K)), 1)[0]
    assert slope == pytest.approx(-1.5, rel=1e-9)


def test_order_of_gaps_in_one_field() -> None:
    """Common practice, no source: even integers, then fractions, 5/2 weakest of the fractions here."""
    at_5_T = {f: gaps.gap_scale_K(f, 5.0, 5.0) for f in (F(2), F(1, 3), F(2, 5), F(5, 2), F(1))}
    assert at_5_T[F(2)] > at_5_T[F(1, 3)] > at_5_T[F(2, 5)] > at_5_T[F(5, 2)]
    assert at_5_T[F(2)] == pytest.approx(5 * (20.05116 - 0.295554), rel=1e-5)
    assert at_5_T[F(1)] == pytest.approx(5 * 0.295554, rel=1e-5)


def test_tilt_widens_the_spin_gap_only() -> None:
    assert gaps.gap_scale_K(F(1), 5.0, 10.0) == pytest.approx(2 * gaps.gap_scale_K(F(1), 5.0, 5.0))
    assert gaps.gap_scale_K(F(1, 3), 5.0, 10.0) == pytest.approx(gaps.gap_scale_K(F(1, 3), 5.0, 5.0))


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (gaps.cyclotron_gap_J, (1.0, 0.0)),
        (gaps.graphene_level_J, (20, 14.0)),
        (gaps.magnetic_length_m, (0.0,)),
        (gaps.coulomb_scale_J, (1.0, -1.0)),
        (gaps.activated_share, (1.0, 0.0)),
        (gaps.activated_share, (-1.0, 1.0)),
        (gaps.temperature_to_resolve_K, (1.0, 1.0)),
        (gaps.gap_scale_K, (F(1, 2), 5.0, 5.0)),
        (gaps.gap_scale_K, (F(0), 5.0, 5.0)),
        (gaps.gap_scale_K, (F(1), 5.0, 4.0)),
        (gaps.gap_scale_K, (F(2), 0.1, 20.0)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
