"""Cooling stages: dilution, one-shot 3He, pumped 4He."""

from __future__ import annotations

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import R, atm, hour, micro
from scipy.integrate import solve_ivp

from planner.errors import OutOfRangeError
from planner.physics import stages
from planner.physics.vapour_pressure import helium3_pressure_Pa

from .handbook import FROM_MEMORY, Check, page

POBELL = "F. Pobell, Matter and Methods at Low Temperatures, ch. 7; from memory"
POBELL_6 = "F. Pobell, Matter and Methods at Low Temperatures, ch. 6 (share lost 0.20)"
T62 = "R. H. Sherman, S. G. Sydoriak, T. R. Roberts, J. Res. NBS 68A, 579 (1964); coefficients from memory"
ITS_90 = "H. Preston-Thomas, Metrologia 27, 3 (1990), differentiated numerically"

dilution, latent = stages.dilution_cooling_W, stages.helium3_latent_J_per_mol


@page(
    [
        Check("1 mmol/s at 100 mK, ideal", dilution, (1e-3, 0.1), 840.0 * micro, 1e-6, POBELL),
        Check("0.5 mmol/s, 100 and 150 mK", dilution, (0.5e-3, 0.1, 0.15), 351.25 * micro, 1e-6, POBELL),
        Check("0.5 mmol/s, 20 and 30 mK", dilution, (0.5e-3, 0.02, 0.03), 14.05 * micro, 1e-6, POBELL),
        Check(
            "400 uW at 100 mK needs", stages.dilution_flow_mol_per_s, (400 * micro, 0.1), 476.2 * micro, 1e-4, POBELL
        ),
        Check("no power left at T_ex/T_mc of", lambda: stages.LARGEST_EXCHANGER_RATIO, (), 2.93877, 1e-6, POBELL),
        Check("copper at 0.1 K", stages.copper_capacity_J_per_mol_K, (0.1,), 6.915e-5, 0.02, FROM_MEMORY),
        Check("3He latent heat at 0.3, 0.4, 0.5 K", latent, ([0.3, 0.4, 0.5],), [26.19, 27.996, 29.810], 1e-3, T62),
        Check("3He latent heat at 0.65, 0.7 K", latent, ([0.65, 0.7],), [32.57, 33.50], 1e-3, T62),
        Check("3He latent heat at 0.65, 0.7 K again", latent, ([0.65, 0.7],), [32.76, 33.71], 0.02, ITS_90),
        Check("3He pressure at 0.3 K", stages.helium3_pressure_T62_Pa, (0.3,), 0.250, 2e-3, T62),
        Check("3He boils at 3.19047 K", stages.helium3_pressure_T62_Pa, (3.19047,), atm, 1e-4, T62),
        Check(
            "20 L, 100 and 20 uW",
            stages.one_shot_hold_s,
            (20, [100 * micro, 20 * micro]),
            [51.95 * hour, 259.8 * hour],
            0.01,
            POBELL_6,
        ),
        Check("20 L of gas as liquid", stages.helium3_liquid_m3, (20,), 32.9e-6, 0.005, FROM_MEMORY),
    ]
)
def test_stages(check: Check) -> None:
    check.holds()


@pytest.mark.parametrize("temperature_K", [0.66, 0.7, 0.8])
def test_latent_heat_of_helium3_is_the_slope_of_its_its90_pressure(temperature_K: float) -> None:
    step_K = 1e-3
    above, below = np.log(helium3_pressure_Pa([temperature_K + step_K, temperature_K - step_K]))
    by_slope = R * temperature_K**2 * (above - below) / (2 * step_K)
    assert latent(temperature_K) == pytest.approx(by_slope, rel=0.02), ITS_90


LATENT_DONNELLY = (
    "latent heat: R. J. Donnelly, C. F. Barenghi, JPCRD 27, 1217 (1998); heat capacity below 2.18 K from memory"
)


@pytest.mark.parametrize(
    ("to_K", "mass_share", "level_share"),
    [(2.1768, 0.236, 0.342), (1.8, 0.303, None), (1.5, 0.320, 0.414), (1.3, 0.325, 0.419)],
)
def test_pumping_a_bath_from_4_222_K(to_K: float, mass_share: float, level_share: float | None) -> None:
    """Tolerance: two points of a hundred, as far as the heat capacity near the lambda point is known."""
    assert stages.pumped_mass_share(4.222, to_K) == pytest.approx(mass_share, abs=0.02), LATENT_DONNELLY
    if level_share is not None:
        assert stages.pumped_level_share(4.222, to_K) == pytest.approx(level_share, abs=0.02), LATENT_DONNELLY


def test_pumping_from_the_lambda_point_to_1_3_K() -> None:
    assert stages.pumped_mass_share(2.1768, 1.3) == pytest.approx(0.116, abs=0.02), LATENT_DONNELLY


def test_pumping_to_2_2_K_against_a_differential_equation_with_coolprop() -> None:
    """dm/dT = m·C/L, with C along saturation from CoolProp's entropy, T·ds/dT."""

    def per_K(T: float, m: np.ndarray) -> np.ndarray:
        step = 0.002
        entropy = [PropsSI("S", "T", T + d, "Q", 0, "Helium") for d in (step, -step)]
        latent_heat = PropsSI("H", "T", T, "Q", 1, "Helium") - PropsSI("H", "T", T, "Q", 0, "Helium")
        return np.asarray(m * T * (entropy[0] - entropy[1]) / (2 * step) / latent_heat)

    left = solve_ivp(per_K, (4.222, 2.2), [1.0], rtol=1e-6).y[0, -1]
    assert stages.pumped_mass_share(4.222, 2.2) == pytest.approx(1 - left, abs=0.002)


@given(st.floats(1e-5, 1e-2), st.floats(0.005, 0.1), st.floats(1.0, 2.9))
def test_a_worse_exchanger_never_cools_more(flow: float, mixing_K: float, ratio: float) -> None:
    assert 0.0 <= dilution(flow, mixing_K, ratio * mixing_K) <= dilution(flow, mixing_K) * (1 + 1e-12)
    assert stages.dilution_flow_mol_per_s(dilution(flow, mixing_K), mixing_K) == pytest.approx(flow)


@given(st.floats(1.25, 4.4), st.floats(1.25, 4.4), st.floats(1.25, 4.4))
def test_pumping_in_two_steps_loses_the_same(a_K: float, b_K: float, c_K: float) -> None:
    low, middle, high = sorted((a_K, b_K, c_K))
    left = (1 - stages.pumped_mass_share(high, middle)) * (1 - stages.pumped_mass_share(middle, low))
    assert 1 - left == pytest.approx(stages.pumped_mass_share(high, low), abs=1e-5)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (dilution, (1e-3, 0.2)),
        (dilution, (0.0, 0.1)),
        (dilution, (1e-3, 0.1, 0.05)),
        (dilution, (1e-3, 0.1, 0.3)),
        (stages.dilution_flow_mol_per_s, (1e-4, 0.2)),
        (stages.copper_capacity_J_per_mol_K, (0.001,)),
        (stages.helium3_pressure_T62_Pa, (0.1,)),
        (latent, (1.0,)),
        (stages.one_shot_hold_s, (20, 0.0)),
        (stages.one_shot_hold_s, (20, 1e-4, 0.3, 1.0)),
        (stages.helium3_liquid_m3, (-1.0,)),
        (stages.pumped_mass_share, (4.2, 1.0)),
        (stages.pumped_mass_share, (1.5, 4.2)),
        (stages.pumped_level_share, (5.0, 4.2)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
