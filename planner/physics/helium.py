"""Liquid helium: density and latent heat, boil-off and gas, flash on transfer; nitrogen's boil-off beside it.

Two sets of data serve two ends. At and around the normal boiling point everything comes from one equation
of state (D. O. Ortiz Vega, thesis, Texas A&M 2013, evaluated with CoolProp 8), because heat balances need
density, latent heat and enthalpy that belong together. Below the lambda point, where that equation ends,
latent heats are the measured ones of R. J. Donnelly and C. F. Barenghi, J. Phys. Chem. Ref. Data 27, 1217
(1998). The sets agree to 0.5 % between 2.2 and 4.2 K. Temperatures are ITS-90; the equation of state boils
at 4.2238 K instead of 4.2221 K, a difference that no figure here notices. For pressures and temperatures on
the saturation line use `planner.physics.vapour_pressure`.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import R, atm, hour, litre, minute

from planner.physics.ranges import Values, as_values, finite, not_negative, within

MOLAR_MASS_kg_per_mol = 4.002602e-3
"""Molar mass of ⁴He."""

BOILING_K = 4.2221
"""Normal boiling point on ITS-90 (H. Preston-Thomas, Metrologia 27, 3 (1990), Table 3)."""

BOILING_DENSITY_kg_per_m3 = 124.669
"""Density of the liquid at the normal boiling point (equation of state)."""

BOILING_VAPOUR_kg_per_m3 = 16.9026
"""Density of the saturated vapour at the normal boiling point (equation of state)."""

BOILING_LATENT_J_per_kg = 20564.4
"""Latent heat at the normal boiling point (equation of state)."""

BOILING_LATENT_J_PER_L: float = BOILING_LATENT_J_per_kg * BOILING_DENSITY_kg_per_m3 * litre
"""Heat that evaporates one litre at the normal boiling point: 2563.7 J."""

NITROGEN_DENSITY_kg_per_m3 = 806.085
"""Density of liquid nitrogen at its normal boiling point, 77.355 K.

Source: R. Span et al., J. Phys. Chem. Ref. Data 29, 1361 (2000), evaluated with CoolProp 8.
"""

NITROGEN_LATENT_J_per_kg = 199176.0
"""Latent heat of nitrogen at its normal boiling point (same source)."""

GAS_CP_J_per_kg_K = 5193.2
"""Heat capacity of helium gas at constant pressure, 5/2·R/M."""

# Temperature in K, density of the liquid in kg/m³, latent heat in J/kg. Latent heats below the lambda point
# (2.1768 K) are the adopted data of Donnelly and Barenghi, Table 16.1, densities there from memory (0.5 %);
# at and above it both are from the equation of state.
_SATURATED = np.array(
    [
        (1.2033, 145.1, 21029), (1.3033, 145.1, 21494), (1.4035, 145.1, 21926), (1.5036, 145.15, 22368),
        (1.6037, 145.2, 22685), (1.7039, 145.25, 22960), (1.8041, 145.3, 23165), (1.9042, 145.45, 23272),
        (2.0042, 145.6, 23252), (2.1044, 145.85, 23030), (2.1546, 146.0, 22815), (2.1768, 146.02, 22722),
        (2.2, 145.99, 22745), (2.3, 145.76, 22865), (2.4, 145.38, 23000), (2.6, 144.29, 23251),
        (2.8, 142.88, 23431), (3.0, 141.20, 23506), (3.2, 139.27, 23460), (3.4, 137.09, 23274),
        (3.6, 134.64, 22933), (3.7, 133.30, 22696), (3.8, 131.88, 22412), (3.9, 130.36, 22076),
        (4.0, 128.74, 21683), (4.1, 127.00, 21227), (4.2, 125.14, 20701),
        (BOILING_K, BOILING_DENSITY_kg_per_m3, BOILING_LATENT_J_per_kg), (4.3, 123.11, 20095),
        (4.4, 120.91, 19398), (4.5, 118.49, 18594), (4.6, 115.80, 17660),
    ]
)  # fmt: skip

# Pressure in Pa, enthalpy of the saturated liquid above that at 101 325 Pa in J/kg, latent heat in J/kg.
_LIQUID_ENTHALPY = np.array(
    [
        (90000, -627.5, 21227), (100000, -73.3, 20645), (101325, 0.0, 20564.4), (105000, 203.3, 20336),
        (110000, 480.2, 20014), (115000, 757.7, 19680), (120000, 1036.4, 19333), (125000, 1316.7, 18973),
        (130000, 1599.0, 18598), (135000, 1883.8, 18209), (140000, 2171.7, 17804), (145000, 2463.2, 17383),
        (150000, 2758.9, 16944), (160000, 3365.9, 16008),
    ]
)  # fmt: skip

# Temperature in K, enthalpy of the gas at 101 325 Pa above the saturated vapour, less GAS_CP·(T − T_boiling),
# in J/kg: what the attraction between atoms in the cold vapour adds to an ideal gas.
_GAS_DEPARTURE = np.array(
    [
        (4.2221, 0), (4.3, 307), (4.4, 647), (4.5, 937), (4.75, 1516), (5, 1960), (5.5, 2618), (6, 3093),
        (7, 3752), (8, 4198), (10, 4774), (12, 5137), (15, 5489), (20, 5835), (30, 6180), (50, 6454),
        (77, 6595), (100, 6650), (150, 6705), (200, 6725), (300, 6734), (400, 6730),
    ]
)  # fmt: skip

# Second virial coefficient of helium between 250 and 350 K, m³/mol (equation of state; changes by 3 %).
_VIRIAL_m3_per_mol = 1.186e-5


def liquid_density_kg_per_m3(temperature_K: ArrayLike) -> Values:
    """Return the density of saturated liquid ⁴He between 1.25 and 4.6 K.

    Raises `OutOfRangeError` outside. Accuracy 0.2 % above the lambda point, 0.5 % below (from memory there).
    """
    temperature = within("temperature_K", temperature_K, 1.25, 4.6)
    return as_values(np.interp(temperature, _SATURATED[:, 0], _SATURATED[:, 1]))


def latent_heat_J_per_kg(temperature_K: ArrayLike) -> Values:
    """Return the latent heat of ⁴He between 1.25 and 4.6 K.

    Raises `OutOfRangeError` outside. Donnelly and Barenghi (1998) below the lambda point, the equation of
    state above, where it lies within 0.5 % of them. Accuracy 0.5 %.
    """
    temperature = within("temperature_K", temperature_K, 1.25, 4.6)
    return as_values(np.interp(temperature, _SATURATED[:, 0], _SATURATED[:, 2]))


def boil_off_L_per_h(heat_W: ArrayLike, temperature_K: ArrayLike = BOILING_K) -> Values:
    """Return the rate at which heat lowers the level of a saturated helium bath, as liquid at the bath's T.

    Parameters
    ----------
    heat_W
        Heat into the liquid, not negative.
    temperature_K
        Temperature of the bath, 1.25 to 4.6 K; the normal boiling point by default.

    Returns
    -------
    float or ndarray
        Q/(L·ρ) in L/h: 1.404 L/h per watt at 4.22 K, 1.155 at 1.3 K.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    Exact for the *level* at constant pressure. The gas that leaves is less, because vapour fills the
    space the liquid leaves: see `gas_leaving_share`. Energy balance of the vessel, derived.
    """
    heat = not_negative("heat_W", heat_W)
    volumetric = latent_heat_J_per_kg(temperature_K) * np.asarray(liquid_density_kg_per_m3(temperature_K))
    return as_values(heat / volumetric / litre * hour)


def heat_for_boil_off_W(level_loss_L_per_h: ArrayLike) -> Values:
    """Return the heat that lowers the level of a bath at 4.22 K by a rate, in W.

    Raises `OutOfRangeError` for a negative rate. Inverse of `boil_off_L_per_h`.
    """
    return as_values(not_negative("level_loss_L_per_h", level_loss_L_per_h) * BOILING_LATENT_J_PER_L / hour)


def nitrogen_boil_off_L_per_h(heat_W: ArrayLike) -> Values:
    """Return the rate at which heat evaporates liquid nitrogen at 77.4 K: 0.02242 L/h per watt.

    Raises `OutOfRangeError` for negative heat.
    """
    volumetric = NITROGEN_LATENT_J_per_kg * NITROGEN_DENSITY_kg_per_m3 * litre
    return as_values(not_negative("heat_W", heat_W) / volumetric * hour)


def gas_leaving_share() -> float:
    """Return 1 − ρ_v/ρ_l = 0.8644, the mass that leaves a bath at 4.22 K over the mass that evaporates."""
    return 1.0 - BOILING_VAPOUR_kg_per_m3 / BOILING_DENSITY_kg_per_m3


def gas_density_kg_per_m3(temperature_K: ArrayLike) -> Values:
    """Return the density of helium gas at 1 atm between 250 and 350 K.

    Raises `OutOfRangeError` outside. Ideal gas with the second virial coefficient; good to 1e-5.
    """
    temperature = within("temperature_K", temperature_K, 250.0, 350.0)
    return as_values(MOLAR_MASS_kg_per_mol / (R * temperature / atm + _VIRIAL_m3_per_mol))


def expansion_ratio(temperature_K: ArrayLike = 293.15) -> Values:
    """Return the volume of gas at 1 atm from one volume of liquid at 4.22 K: 749.6 at 20 °C.

    Raises `OutOfRangeError` outside 250 to 350 K.
    """
    return as_values(BOILING_DENSITY_kg_per_m3 / np.asarray(gas_density_kg_per_m3(temperature_K)))


def gas_volume_m3(liquid_L: ArrayLike, temperature_K: ArrayLike = 293.15) -> Values:
    """Return the volume of gas at 1 atm, by default at 20 °C, from litres of liquid at 4.22 K.

    Raises `OutOfRangeError` for a negative volume or a temperature outside 250 to 350 K.
    """
    return as_values(not_negative("liquid_L", liquid_L) * litre * expansion_ratio(temperature_K))


def gas_flow_L_per_min(
    level_loss_L_per_h: ArrayLike, temperature_K: ArrayLike = 293.15, *, vapour_stays: bool = True
) -> Values:
    """Return the flow a gas meter shows (L/min at 1 atm) while the level of a bath falls.

    Parameters
    ----------
    level_loss_L_per_h
        Loss of level, litres of liquid per hour, not negative.
    temperature_K
        Temperature at the meter, 250 to 350 K.
    vapour_stays
        Whether cold vapour fills the space the liquid leaves, as in a closed vessel (10.80 L/min for
        1 L/h). Without it, everything that evaporates passes the meter (12.49 L/min).

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    share = gas_leaving_share() if vapour_stays else 1.0
    evaporated_m3_per_h = gas_volume_m3(level_loss_L_per_h, temperature_K)
    return as_values(np.asarray(evaporated_m3_per_h) * share / litre / (hour / minute))


def gas_enthalpy_J_per_kg(temperature_K: ArrayLike) -> Values:
    """Return the enthalpy of helium gas at 1 atm above the saturated vapour at 4.22 K, to 400 K.

    The heat that gas leaving at ``temperature_K`` has taken up after evaporating: 75 times the latent heat
    at 300 K. Raises `OutOfRangeError` outside 4.2221 to 400 K. Equation of state, to 35 J/kg.
    """
    temperature = within("temperature_K", temperature_K, BOILING_K, 400.0)
    departure = np.interp(temperature, _GAS_DEPARTURE[:, 0], _GAS_DEPARTURE[:, 1])
    return as_values(GAS_CP_J_per_kg_K * (temperature - BOILING_K) + departure)


def flash_fraction(dewar_Pa: ArrayLike, bath_Pa: ArrayLike = atm) -> Values:
    """Return the mass share of saturated liquid that evaporates when it drops to the bath's pressure.

    Parameters
    ----------
    dewar_Pa
        Absolute pressure of the storage dewar, 90 to 160 kPa.
    bath_Pa
        Absolute pressure of the bath, 90 to 160 kPa, at most that of the dewar.

    Returns
    -------
    float or ndarray
        (h_l(p₁) − h_l(p₀))/L(p₀): 5 % from 1.2 bar to 1 atm.

    Raises
    ------
    OutOfRangeError
        For a pressure outside these ranges.

    Notes
    -----
    Holds for liquid in equilibrium at the dewar's pressure. A dewar pressurised just for the transfer
    holds colder liquid and flashes less.
    """
    dewar = within("dewar_Pa", dewar_Pa, 90e3, 160e3)
    bath = within("bath_Pa", bath_Pa, 90e3, 160e3)
    within("fall of pressure", dewar - bath, 0.0, because="the bath is at a higher pressure than the dewar")
    pressure, enthalpy, latent = _LIQUID_ENTHALPY.T
    fall = np.interp(dewar, pressure, enthalpy) - np.interp(bath, pressure, enthalpy)
    return as_values(finite("flash", fall / np.interp(bath, pressure, latent)))
