"""Working the persistent switch: into persistent mode and out of it, in the order that is safe."""

from __future__ import annotations

from dataclasses import replace

from planner.files.rig import Rig, Switch
from planner.files.start import persistent_coil
from planner.moves.field import driven
from planner.moves.setup import whole_seconds
from planner.plan import ZERO, Coil, CoilMode, Leg, along_z


def closing_legs(rig: Rig, switch: Switch, field_T: float) -> tuple[Leg, ...]:
    """From driven at a field to persistent with the leads down: hold, heater off, leads to zero."""
    open_coil, parked = driven(rig, field_T), persistent_coil(rig, field_T)
    carrying = replace(parked, lead_current_A=open_coil.lead_current_A)
    hold, cool = whole_seconds(switch.hold_before_s), whole_seconds(switch.cool_s)
    lead_s = _lead_seconds(rig, switch, field_T)
    rate = float(switch.leads_A_per_s)
    return (
        Leg("coil", "hold", 0, hold, "hold before the switch closes", coil=(open_coil, open_coil)),
        Leg("coil", "heater off", hold, hold + cool, "switch cools", coil=(open_coil, carrying)),
        Leg("coil", "leads", hold + cool, hold + cool + lead_s, "lead rate", rate=rate, coil=(carrying, parked)),
    )


def opening_legs(switch: Switch, coil: Coil) -> tuple[Leg, ...]:
    """From persistent to driven: leads to the coil's recorded current with its sign, settle, heater on.

    Raises
    ------
    ValueError
        If the coil's current is not known: then no switch step may be made.
    """
    current = coil.persistent_current_A
    if current is None or isinstance(current, str):
        raise ValueError("the persistent current is not known: no switch step before staff confirm it")
    matched = replace(coil, lead_current_A=current)
    after = Coil(coil.field_T, CoilMode.DRIVEN, along_z(current[2]))
    seconds = whole_seconds(abs(current[2] - coil.lead_current_A[2]) / switch.leads_A_per_s)
    settled = seconds + whole_seconds(switch.settle_after_s)
    warm = settled + whole_seconds(switch.warm_s)
    rate = float(switch.leads_A_per_s)
    return (
        Leg("coil", "leads", 0, seconds, "lead rate", rate=rate, coil=(coil, matched)),
        Leg("coil", "settle", seconds, settled, "leads settle before the heater", coil=(matched, matched)),
        Leg("coil", "heater on", settled, warm, "switch warms", coil=(matched, after)),
    )


def warming_leg(rig: Rig) -> Leg | None:
    """The switch opens at zero field and zero current, before a ramp; None where there is none or it takes no time."""
    switch = rig.magnet.switch
    if switch is None or whole_seconds(switch.warm_s) == 0:
        return None
    seconds = whole_seconds(switch.warm_s)
    return Leg("coil", "heater on", 0, seconds, "switch warms", coil=(Coil(), Coil(ZERO, CoilMode.DRIVEN, ZERO)))


def _lead_seconds(rig: Rig, switch: Switch, field_T: float) -> int:
    current_A = abs(field_T) / rig.magnet.field_per_current_T_per_A
    return whole_seconds(current_A / switch.leads_A_per_s)
