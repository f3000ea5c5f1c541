"""Cooling stages below 4 K: dilution, one-shot ³He, pumped ⁴He, and the heat capacity of copper."""

from __future__ import annotations

import numpy as np
from numpy.polynomial import polynomial
from numpy.typing import ArrayLike
from scipy.constants import R

from planner.physics.helium import latent_heat_J_per_kg, liquid_density_kg_per_m3
from planner.physics.ranges import Values, as_values, not_negative, positive, within

STANDARD_LITRE_mol = 1.0 / 22.414
"""Amount of gas in a litre at 0 °C and 1 atm (ideal)."""

HELIUM3_m3_per_mol = 36.84e-6
"""Molar volume of liquid ³He at low temperature (from memory)."""

LOST_IN_PRECOOLING = 0.20
"""Share of condensed ³He spent on cooling itself from 1.5 to 0.3 K (F. Pobell, ch. 6)."""

LARGEST_EXCHANGER_RATIO: float = float(np.sqrt(95.0 / 11.0))
"""T_ex/T_mc = 2.939, at which a dilution stage has no cooling power left."""

# ln(p in mmHg) of ³He on the 1962 scale: Σ cᵢ·Tⁱ for i = −1, 0, 1 …, and a coefficient of ln T.
_T62 = (-2.49174, 4.80386, -0.286001, 0.198608, -0.0502237, 0.00505486)
_T62_LOG = 2.24846
_MMHG_Pa = 133.322387415

# Temperature in K, heat capacity of liquid ⁴He along saturation in J/kg/K. Up to the lambda point from memory
# (they give 2 % more entropy than the accepted 1.56 J/g/K); above it from the equation of state named in `helium`.
_HELIUM4_CAPACITY = np.array(
    [
        (1.2, 323), (1.3, 517), (1.4, 780), (1.5, 1127), (1.6, 1572), (1.7, 2130), (1.8, 2810), (1.9, 3790),
        (2.0, 5180), (2.05, 6160), (2.1, 7510), (2.15, 10000), (2.17, 13000), (2.1768, 14000), (2.18, 3133),
        (2.2, 3014), (2.25, 2776), (2.3, 2606), (2.4, 2404), (2.6, 2306), (2.8, 2391), (3.0, 2554), (3.2, 2760),
        (3.4, 2998), (3.6, 3271), (3.8, 3588), (4.0, 3966), (4.1, 4188), (4.2, 4438), (4.3, 4725), (4.4, 5062),
    ]
)  # fmt: skip


def dilution_cooling_W(flow_mol_per_s: ArrayLike, mixing_K: ArrayLike, exchanger_K: ArrayLike | None = None) -> Values:
    """Return the cooling power ṅ₃·(95·T_mc² − 11·T_ex²) of a dilution stage.

    Parameters
    ----------
    flow_mol_per_s
        Circulation of ³He, positive.
    mixing_K
        Temperature of the mixing chamber, above 0, at most 0.1 K.
    exchanger_K
        Temperature at which ³He enters it, between T_mc and 2.939·T_mc; T_mc (an ideal exchanger) by default.

    Returns
    -------
    float or ndarray
        Power in W, zero at the largest T_ex.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.

    Notes
    -----
    F. Pobell, Matter and Methods at Low Temperatures, ch. 7 (from memory): coefficients J/mol/K² of the
    Fermi-liquid limit, good below 40 mK and indicative to 100 mK.
    """
    mixing = within("mixing_K", mixing_K, 0.0, 0.1, open_low=True, because="Fermi-liquid coefficients")
    entering = mixing if exchanger_K is None else positive("exchanger_K", exchanger_K)
    within("T_ex/T_mc", entering / mixing, 1.0, LARGEST_EXCHANGER_RATIO * (1.0 + 1e-12))
    power = positive("flow_mol_per_s", flow_mol_per_s) * (95.0 * mixing**2 - 11.0 * entering**2)
    return as_values(np.maximum(power, 0.0))


def dilution_flow_mol_per_s(cooling_W: ArrayLike, mixing_K: ArrayLike) -> Values:
    """Return the least circulation Q/(84·T²) of ³He that takes up a heat with an ideal exchanger.

    Raises `OutOfRangeError` for a negative heat or a temperature outside 0 to 0.1 K. Source as in
    `dilution_cooling_W`.
    """
    mixing = within("mixing_K", mixing_K, 0.0, 0.1, open_low=True, because="Fermi-liquid coefficients")
    return as_values(not_negative("cooling_W", cooling_W) / (84.0 * mixing**2))


def copper_capacity_J_per_mol_K(temperature_K: ArrayLike) -> Values:
    """Return γ·T + β·T³ of copper, γ = 0.691 mJ/mol/K² and β = 0.0478 mJ/mol/K⁴.

    Raises `OutOfRangeError` outside 5 mK (below, nuclear moments in a field matter) to 10 K. From memory, 2 %.
    """
    temperature = within("temperature_K", temperature_K, 0.005, 10.0)
    return as_values(0.691e-3 * temperature + 0.0478e-3 * temperature**3)


def helium3_pressure_T62_Pa(temperature_K: ArrayLike) -> Values:
    """Return the vapour pressure of ³He on the scale of 1962, 0.2 to 3.324 K.

    Raises `OutOfRangeError` outside.

    Notes
    -----
    R. H. Sherman, S. G. Sydoriak, T. R. Roberts, J. Res. Natl. Bur. Stand. 68A, 579 (1964); coefficients from
    memory. Serves the latent heat below 0.65 K, where ITS-90 (`planner.physics.vapour_pressure`) ends; its
    normal boiling point is 3.1905 K against 3.1968 K there.
    """
    T = within("temperature_K", temperature_K, 0.2, 3.324)
    logarithm = polynomial.polyval(T, _T62) / T + _T62_LOG * np.log(T)
    return as_values(np.asarray(np.exp(logarithm) * _MMHG_Pa))


def helium3_latent_J_per_mol(temperature_K: ArrayLike) -> Values:
    """Return the latent heat R·T²·d(ln p)/dT of ³He with its vapour taken as an ideal gas, 0.2 to 0.8 K.

    Raises `OutOfRangeError` outside: at 1 K the vapour is no longer ideal and the form 6 % too high.
    Vapour pressure of 1962; within 1 % of the slope of ITS-90 at 0.65 K.
    """
    T = within("temperature_K", temperature_K, 0.2, 0.8, because="the vapour is not ideal above")
    slope = polynomial.polyval(T, polynomial.polyder(_T62)) / T - polynomial.polyval(T, _T62) / T**2
    return as_values(R * T**2 * (slope + _T62_LOG / T))


def one_shot_hold_s(
    gas_L: ArrayLike, heat_W: ArrayLike, temperature_K: ArrayLike = 0.3, lost: ArrayLike = LOST_IN_PRECOOLING
) -> Values:
    """Return the hold time n·(1 − f)·L/Q of a one-shot ³He stage.

    Parameters
    ----------
    gas_L
        Charge of ³He, litres at 0 °C and 1 atm, all of it condensed; positive.
    heat_W
        Heat load, positive.
    temperature_K
        Temperature held, 0.2 to 0.8 K.
    lost
        Share f evaporated while the liquid cools itself from 1.5 K; at least 0, below 1.

    Returns
    -------
    float or ndarray
        Time in s: 52 h for 20 L and 100 µW at 0.3 K.

    Raises
    ------
    OutOfRangeError
        For a value outside these ranges.
    """
    left = 1.0 - within("lost", lost, 0.0, 1.0, open_high=True)
    amount = positive("gas_L", gas_L) * STANDARD_LITRE_mol * left
    return as_values(amount * helium3_latent_J_per_mol(temperature_K) / positive("heat_W", heat_W))


def helium3_liquid_m3(gas_L: ArrayLike) -> Values:
    """Return the volume of liquid ³He from litres of gas at 0 °C and 1 atm: 32.9 cm³ from 20 L.

    Raises `OutOfRangeError` for a negative volume.
    """
    return as_values(not_negative("gas_L", gas_L) * STANDARD_LITRE_mol * HELIUM3_m3_per_mol)


def pumped_mass_share(from_K: float, to_K: float) -> float:
    """Return the share of a ⁴He bath's mass that evaporates while pumping cools what is left.

    Parameters
    ----------
    from_K, to_K
        Temperatures at the start and the end, 4.4 K ≥ from ≥ to ≥ 1.25 K.

    Returns
    -------
    float
        1 − exp(−∫C/L dT): 0.24 from 4.222 K to the lambda point, 0.33 to 1.3 K.

    Raises
    ------
    OutOfRangeError
        For temperatures outside or out of order.

    Notes
    -----
    Quasi-static and without heat from the vessel, so a lower bound; 2 points. Derived from the heat balance
    L·dm = m·C·dT.
    """
    high = float(within("from_K", from_K, 1.25, 4.4))
    low = float(within("to_K", to_K, 1.25, high, because="pumping cools"))
    knots = _HELIUM4_CAPACITY[:, 0]
    inside = knots[(knots > low) & (knots < high)]
    T = np.unique(np.concatenate(([low, high], inside, np.linspace(low, high, 500))))
    per_K = np.interp(T, knots, _HELIUM4_CAPACITY[:, 1]) / np.asarray(latent_heat_J_per_kg(T))
    return float(-np.expm1(-np.trapezoid(per_K, T)))


def pumped_level_share(from_K: float, to_K: float) -> float:
    """Return the share of a ⁴He bath's volume lost while pumping cools it: what the level shows.

    More than the mass share, because cold liquid is denser: 0.42 from 4.222 to 1.3 K. Parameters and errors
    as in `pumped_mass_share`.
    """
    mass_left = 1.0 - pumped_mass_share(from_K, to_K)
    shrink = float(np.asarray(liquid_density_kg_per_m3(from_K))) / float(np.asarray(liquid_density_kg_per_m3(to_K)))
    return 1.0 - mass_left * shrink
