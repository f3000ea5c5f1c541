"""Liquid helium: properties, boil-off, gas, flash. Outside reference: the fluid library CoolProp."""

from __future__ import annotations

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import atm, bar, hour, kilo, litre

from planner.errors import OutOfRangeError
from planner.physics import helium
from planner.physics.vapour_pressure import helium4_pressure_Pa

from .handbook import FROM_MEMORY, Check, page

DONNELLY = "R. J. Donnelly, C. F. Barenghi, J. Phys. Chem. Ref. Data 27, 1217 (1998)"
STATE = "equation of state of D. O. Ortiz Vega (2013), by CoolProp 8"
BALANCE = "energy balance with the latent heat of " + STATE
SPAN = "R. Span et al., J. Phys. Chem. Ref. Data 29, 1361 (2000), by CoolProp 8"
AT_1_ATM = ("P", atm, "Helium")

boil, ratio = helium.boil_off_L_per_h, helium.expansion_ratio


@page(
    [
        Check(
            "latent heat at 1.3, 1.5, 1.8 K",
            helium.latent_heat_J_per_kg,
            ([1.3, 1.5, 1.8],),
            [21479, 22323, 23165],
            0.01,
            DONNELLY,
        ),
        Check(
            "latent heat at 2.2, 3, 4, 4.2 K",
            helium.latent_heat_J_per_kg,
            ([2.2, 3.0, 4.0, 4.2],),
            [22703, 23512, 21736, 20784],
            0.01,
            DONNELLY,
        ),
        Check("latent heat at 4.222 K", helium.latent_heat_J_per_kg, (4.2221,), 20564, 0.01, STATE),
        Check("density at 4.2 K", helium.liquid_density_kg_per_m3, (4.2,), 125.41, 0.005, DONNELLY),
        Check("density at 4.222 K", helium.liquid_density_kg_per_m3, (4.2221,), 124.67, 0.002, STATE),
        Check(
            "density at 1.3 and 1.5 K",
            helium.liquid_density_kg_per_m3,
            ([1.3, 1.5],),
            [145.1, 145.1],
            0.005,
            FROM_MEMORY,
        ),
        Check("joules in a litre", lambda: helium.BOILING_LATENT_J_PER_L, (), 2563.7, 1e-3, STATE),
        Check("liquid over vapour density", lambda: 1 / (1 - helium.gas_leaving_share()), (), 7.376, 1e-3, STATE),
        Check("vapour that leaves", helium.gas_leaving_share, (), 0.8644, 1e-3, STATE),
        Check("1 W at 4.222 K, L/h", boil, (1.0,), 1.4042, 0.01, BALANCE),
        Check("1 W at 1.3, 1.5, 1.8 K, L/h", boil, (1.0, [1.3, 1.5, 1.8]), [1.155, 1.111, 1.070], 0.01, DONNELLY),
        Check("1 L/h is a heat of", helium.heat_for_boil_off_W, (1.0,), 1 / 1.4042, 0.01, BALANCE),
        Check("1 W into nitrogen, L/h", helium.nitrogen_boil_off_L_per_h, (1.0,), 0.022423, 0.01, SPAN),
        Check(
            "gas from liquid at 0, 15, 20, 27 C",
            ratio,
            ([273.15, 288.15, 293.15, 300],),
            [698.5, 736.8, 749.6, 767.1],
            0.005,
            STATE,
        ),
        Check("39 L make", helium.gas_volume_m3, (39.0,), 29.2, 0.01, STATE),
        Check("1 L/h at the meter", helium.gas_flow_L_per_min, (1.0,), 10.80, 0.01, BALANCE),
        Check("1 W at the meter", helium.gas_flow_L_per_min, (1.4042,), 15.16, 0.01, BALANCE),
        Check(
            "enthalpy to 20, 77 K",
            helium.gas_enthalpy_J_per_kg,
            ([20, 77],),
            [87.76 * kilo, 384.5 * kilo],
            0.005,
            STATE,
        ),
        Check(
            "enthalpy to 0, 20, 27 C",
            helium.gas_enthalpy_J_per_kg,
            ([273.15, 293.15, 300],),
            [1403.3 * kilo, 1507.2 * kilo, 1542.8 * kilo],
            0.005,
            STATE,
        ),
        Check(
            "flash from 1.1, 1.2 bar", helium.flash_fraction, ([1.1 * bar, 1.2 * bar],), [0.0233, 0.0504], 0.05, STATE
        ),
        Check(
            "flash from 1.3, 1.5 bar", helium.flash_fraction, ([1.3 * bar, 1.5 * bar],), [0.0778, 0.1342], 0.05, STATE
        ),
    ]
)
def test_helium(check: Check) -> None:
    check.holds()


def test_all_vapour_at_the_meter() -> None:
    assert helium.gas_flow_L_per_min(1.0, vapour_stays=False) == pytest.approx(12.494, rel=0.01), STATE
    assert helium.gas_flow_L_per_min(1.4042, vapour_stays=False) == pytest.approx(17.54, rel=0.01), STATE


@pytest.mark.parametrize("temperature_K", [2.25, 2.7, 3.1, 3.77, 4.05, 4.21, 4.35, 4.55])
def test_saturated_liquid_against_coolprop(temperature_K: float) -> None:
    density = PropsSI("D", "T", temperature_K, "Q", 0, "Helium")
    latent = PropsSI("H", "T", temperature_K, "Q", 1, "Helium") - PropsSI("H", "T", temperature_K, "Q", 0, "Helium")
    assert helium.liquid_density_kg_per_m3(temperature_K) == pytest.approx(density, rel=1e-3)
    assert helium.latent_heat_J_per_kg(temperature_K) == pytest.approx(latent, rel=2e-3)


@pytest.mark.parametrize(
    "temperature_K", [4.26, 4.35, 4.6, 5.2, 6, 6.5, 7, 8, 9, 10, 12, 15, 17, 20, 30, 40, 50, 90, 180, 260, 350]
)
def test_gas_enthalpy_against_coolprop(temperature_K: float) -> None:
    """To 35 J/kg, of which 9 are the boiling point of ITS-90 instead of the equation's own."""
    above_vapour = PropsSI("H", "T", temperature_K, *AT_1_ATM) - PropsSI("H", "Q", 1, *AT_1_ATM)
    assert helium.gas_enthalpy_J_per_kg(temperature_K) == pytest.approx(above_vapour, abs=35)


@pytest.mark.parametrize("temperature_K", [255.0, 280.0, 310.0, 345.0])
def test_gas_density_against_coolprop(temperature_K: float) -> None:
    assert helium.gas_density_kg_per_m3(temperature_K) == pytest.approx(
        PropsSI("D", "T", temperature_K, *AT_1_ATM), rel=2e-5
    )


@pytest.mark.parametrize(("dewar_bar", "bath_bar"), [(1.07, 1.01325), (1.28, 1.03), (1.58, 1.2)])
def test_flash_against_coolprop(dewar_bar: float, bath_bar: float) -> None:
    def enthalpy(pressure_bar: float, quality: int) -> float:
        return float(PropsSI("H", "P", pressure_bar * bar, "Q", quality, "Helium"))

    share = (enthalpy(dewar_bar, 0) - enthalpy(bath_bar, 0)) / (enthalpy(bath_bar, 1) - enthalpy(bath_bar, 0))
    assert helium.flash_fraction(dewar_bar * bar, bath_bar * bar) == pytest.approx(share, rel=0.005)


def test_nitrogen_against_coolprop() -> None:
    density = PropsSI("D", "P", atm, "Q", 0, "Nitrogen")
    latent = PropsSI("H", "P", atm, "Q", 1, "Nitrogen") - PropsSI("H", "P", atm, "Q", 0, "Nitrogen")
    assert helium.nitrogen_boil_off_L_per_h(1.0) == pytest.approx(hour / (density * latent * litre), rel=1e-5)


@pytest.mark.parametrize("temperature_K", [2.5, 3.0, 3.5, 4.0, 4.2])
def test_latent_heat_is_the_slope_of_the_vapour_pressure(temperature_K: float) -> None:
    """Clausius and Clapeyron, L = T·(dp/dT)·(v_vapour − v_liquid): ITS-90 differentiated numerically."""
    step_K = 1e-3
    above, below = helium4_pressure_Pa([temperature_K + step_K, temperature_K - step_K])
    volumes = [1.0 / PropsSI("D", "T", temperature_K, "Q", quality, "Helium") for quality in (1, 0)]
    latent = temperature_K * (above - below) / (2 * step_K) * (volumes[0] - volumes[1])
    assert helium.latent_heat_J_per_kg(temperature_K) == pytest.approx(latent, rel=0.01)


@given(st.floats(0.0, 100.0))
def test_boil_off_and_heat_invert_each_other(heat_W: float) -> None:
    assert helium.heat_for_boil_off_W(boil(heat_W)) == pytest.approx(heat_W, rel=1e-12)


def test_properties_run_on_without_jumps() -> None:
    temperature_K = np.linspace(1.25, 4.6, 3000)
    for curve in (helium.liquid_density_kg_per_m3, helium.latent_heat_J_per_kg):
        steps = np.diff(curve(temperature_K)) / np.mean(curve(temperature_K))
        assert np.abs(steps).max() < 1e-3


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (helium.liquid_density_kg_per_m3, (1.2,)),
        (helium.liquid_density_kg_per_m3, (4.7,)),
        (helium.latent_heat_J_per_kg, (5.0,)),
        (boil, (-1.0,)),
        (boil, (1.0, 0.3)),
        (helium.heat_for_boil_off_W, (-1.0,)),
        (helium.nitrogen_boil_off_L_per_h, (-1.0,)),
        (helium.gas_density_kg_per_m3, (77.0,)),
        (ratio, (400.0,)),
        (helium.gas_volume_m3, (-1.0,)),
        (helium.gas_flow_L_per_min, (1.0, 100.0)),
        (helium.gas_enthalpy_J_per_kg, (4.0,)),
        (helium.gas_enthalpy_J_per_kg, (401.0,)),
        (helium.flash_fraction, (2.0 * bar,)),
        (helium.flash_fraction, (1.0 * bar, 1.1 * bar)),
    ],
)
def test_outside_its_range_it_raises(function, arguments) -> None:  # type: ignore[no-untyped-def]
    with pytest.raises(OutOfRangeError):
        function(*arguments)
