"""The state in which a week begins and the state in which it shall end."""

from __future__ import annotations

from planner.files.rig import Rig
from planner.files.week import Week
from planner.plan import ZERO, Charge, Coil, CoilMode, Gates, Stage, State, along_z


def resting_gates(week: Week) -> Gates:
    """Every gate of every sample at its rest voltage."""
    return tuple(sorted((f"{s.name}/{g.name}", float(g.rest_V)) for s in week.samples for g in s.gates))


def driven_coil(rig: Rig, field_T: float) -> Coil:
    """The coil at a field with the supply carrying its current; at zero field there is none."""
    if field_T == 0:
        return Coil()
    current_A = field_T / rig.magnet.field_per_current_T_per_A
    return Coil(along_z(float(field_T)), CoilMode.DRIVEN, along_z(current_A))


def persistent_coil(rig: Rig, field_T: float) -> Coil:
    """The coil at a field by its own current, leads at zero."""
    if field_T == 0:
        return Coil()
    current_A = field_T / rig.magnet.field_per_current_T_per_A
    return Coil(along_z(float(field_T)), CoilMode.PERSISTENT, ZERO, along_z(current_A))


def charge_of(rig: Rig) -> Charge:
    """What the stage holds while it is cold and in use."""
    return Charge("circulating") if rig.stage.kind == "dilution" else Charge()


def temperature_of(rig: Rig, written: float | str) -> float:
    """A temperature in K; "base" is the stage's lowest."""
    return float(rig.stage.base_K) if isinstance(written, str) else float(written)


def start_state(week: Week, rig: Rig) -> State:
    """The rig as the week begins, from the week's table [present]."""
    present = week.present
    field_T = float(present.field_T)
    coil = driven_coil(rig, field_T)
    if present.coil == "persistent":
        current = present.persistent_current_A
        trapped = "unknown" if isinstance(current, str) else along_z(float(current or 0.0))
        leads = along_z(float(present.lead_current_A or 0.0))
        if not isinstance(trapped, str):  # the recorded current says more exactly what the field is
            field_T = trapped[2] * rig.magnet.field_per_current_T_per_A
        coil = Coil(along_z(field_T), CoilMode.PERSISTENT, leads, "unknown" if isinstance(trapped, str) else trapped)
    gates = dict(resting_gates(week)) | {name: float(volt) for name, volt in present.gates.items()}
    stage = Stage(temperature_of(rig, present.temperature_K), charge_of(rig))
    light = tuple((sample.name, "dark") for sample in week.samples)
    return State(coil, stage, tuple(sorted(gates.items())), light)


def end_state(week: Week, rig: Rig) -> State:
    """The rig as the week shall end: gates at rest."""
    stage = Stage(temperature_of(rig, week.wanted_end.temperature_K), charge_of(rig))
    light = tuple((sample.name, "dark") for sample in week.samples)
    coil_at = persistent_coil if week.wanted_end.coil == "persistent" else driven_coil
    return State(coil_at(rig, float(week.wanted_end.field_T)), stage, resting_gates(week), light)
