"""What empties the bath, leg by leg: static, open switch, leads, and moving the field."""

from __future__ import annotations

from planner.checks.ramp_table import pieces
from planner.files.rig import Bath, Magnet
from planner.plan import CoilMode, Leg


def heater_on(leg: Leg) -> bool:
    """Whether the switch is open, or warming, all through a coil leg."""
    if leg.coil is None or leg.action == "heater off":
        return False
    return CoilMode.DRIVEN in (leg.coil[0].mode, leg.coil[1].mode)


def mean_size(first: float, last: float) -> float:
    """The mean of |x| while x goes steadily from one value to another."""
    if first * last >= 0:
        return (abs(first) + abs(last)) / 2
    return (first * first + last * last) / (2 * abs(last - first))


def leg_burn_L(bath: Bath, leg: Leg, *, transferring: bool) -> float:
    """Litres a coil leg takes out of the bath.

    Parameters
    ----------
    bath
        The rig's bath with its losses.
    leg
        A leg of the channel "coil".
    transferring
        Whether it is part of a helium transfer: the static loss is then inside the transfer's efficiency.
    """
    losses = bath.losses
    litres_per_s = 0.0 if transferring else float(losses.static_L_per_s)
    if heater_on(leg):
        litres_per_s += losses.switch_open_L_per_s
    moved_T = 0.0
    if leg.coil is not None:
        before, after = leg.coil
        mean_A = mean_size(before.lead_current_A[2], after.lead_current_A[2])
        litres_per_s += losses.leads_L_per_s_A * mean_A
        moved_T = abs(after.field_T[2] - before.field_T[2])
    return litres_per_s * leg.seconds + losses.moving_L_per_T * moved_T


def driven_L(bath: Bath, magnet: Magnet, first_T: float, last_T: float, seconds: float) -> float:
    """Litres a driven coil takes in a time while its field goes steadily from one value to another, or stands."""
    losses = bath.losses
    per_A = magnet.field_per_current_T_per_A
    rate = losses.static_L_per_s + losses.switch_open_L_per_s
    rate += losses.leads_L_per_s_A * mean_size(first_T / per_A, last_T / per_A)
    return rate * seconds + losses.moving_L_per_T * abs(last_T - first_T)


def quickest_ramp(bath: Bath, magnet: Magnet, first_T: float, last_T: float) -> tuple[float, float]:
    """Seconds and litres of the fastest driven ramp the table allows; not rounded."""
    parts = pieces(magnet, first_T, last_T)
    litres = sum(driven_L(bath, magnet, begin, end, seconds) for begin, end, seconds in parts)
    return sum(seconds for _, _, seconds in parts), litres
