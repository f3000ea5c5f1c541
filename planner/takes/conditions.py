"""What a target means on this rig today: fields from fillings, temperatures, gate voltages."""

from __future__ import annotations

from dataclasses import dataclass

from planner.files.asks import filling_name, temperature_name
from planner.files.rig import Rig
from planner.files.start import charge_of, driven_coil, persistent_coil
from planner.files.targets import Target
from planner.files.week import Sample
from planner.physics.fillings import field_for_filling_T
from planner.plan import Gates, Stage, State
from planner.takes.take import Context


class CannotError(Exception):
    """This rig cannot do what a target asks; the message says why, with numbers."""


@dataclass(frozen=True, slots=True)
class FieldAsk:
    """A field with the interval that the density's uncertainty leaves; ``text`` says what was asked."""

    field_T: float
    low_T: float
    high_T: float
    text: str

    @property
    def uncertain(self) -> bool:
        """Whether the field is known only within an interval."""
        return self.high_T > self.low_T


def density_per_m2(sample: Sample, held_V: dict[str, float], free: str = "") -> float:
    """Signed density with the gates at the voltages held; gates not held are at rest, ``free`` at its reference."""
    density = sample.density_per_m2 if sample.carriers == "electrons" else -sample.density_per_m2
    for gate in sample.gates:
        if gate.density_slope_per_m2_V is not None and gate.name != free:
            density += gate.density_slope_per_m2_V * (held_V.get(gate.name, gate.rest_V) - gate.reference_V)
    return float(density)


def field_of(ask: Target, sample: Sample, field_T: float | None, filling: float | None, free: str = "") -> FieldAsk:
    """The field a target asks for, in tesla or as a filling of its sample.

    Raises
    ------
    CannotError
        If the gates empty the sample, so that no field gives the filling.
    """
    if field_T is not None:
        return FieldAsk(float(field_T), float(field_T), float(field_T), f"{field_T:g} T")
    if filling is None:
        raise ValueError("a target gives a field or a filling")
    density = density_per_m2(sample, dict(ask.gates), free)
    if density == 0:
        raise CannotError(f"ν = {filling_name(filling)}: the gates leave {sample.name} without carriers")
    field = float(field_for_filling_T(density, filling))
    uncertain_per_m2 = sample.density_per_m2 * sample.density_error_percent / 100  # the gates' part counts as known
    spread = abs(float(field_for_filling_T(uncertain_per_m2, filling))) if uncertain_per_m2 else 0.0
    return FieldAsk(field, field - spread, field + spread, f"ν = {filling_name(filling)}")


def within_reach(rig: Rig, ask: FieldAsk) -> tuple[float, tuple[str, ...]]:
    """The field to go to, with a note where it is uncertain or cut at the limit.

    Raises
    ------
    CannotError
        If the whole interval lies beyond the rated field.
    """
    limit = float(rig.magnet.rated_field_T)
    if min(abs(ask.low_T), abs(ask.high_T)) > limit:
        raise CannotError(f"{ask.text} lies at {ask.field_T:.3f} T; this rig reaches {limit:g} T")
    notes = []
    if ask.uncertain:
        notes.append(f"{ask.text}: {ask.field_T:.3f} T, between {ask.low_T:.3f} and {ask.high_T:.3f} T by the density")
    field = max(-limit, min(limit, ask.field_T))
    if field != ask.field_T:
        notes.append(f"{ask.text} may lie beyond the limit: cut at {field:g} T until the density is known")
    return field, tuple(notes)


def kelvin_of(rig: Rig, ask: Target) -> float:
    """The temperature to hold. An upper limit is met at base.

    Raises
    ------
    CannotError
        If the stage cannot hold it.
    """
    wanted = ask.temperature
    base, highest = float(rig.stage.base_K), float(rig.stage.highest_K)
    if wanted.kelvin is None:
        return base
    return checked_kelvin(rig, base if wanted.at_most and wanted.kelvin >= base else wanted.kelvin, highest)


def checked_kelvin(rig: Rig, kelvin: float, highest_K: float | None = None) -> float:
    """The temperature itself; raises CannotError where the stage cannot hold it."""
    base, highest = float(rig.stage.base_K), float(rig.stage.highest_K) if highest_K is None else highest_K
    if not base <= kelvin <= highest:
        reach = f"{temperature_name(base)} to {temperature_name(highest)}"
        raise CannotError(f"{temperature_name(kelvin)}: this stage holds {reach}")
    return float(kelvin)


def gates_of(context: Context, ask: Target, more_V: dict[str, float] | None = None) -> Gates:
    """Every gate of the load: the target's own as asked, all others at rest.

    Raises
    ------
    CannotError
        If a voltage lies outside its gate's window.
    """
    sample = context.sample(ask)
    wanted = {**ask.gates, **(more_V or {})}
    for name, volt in wanted.items():
        gate = sample.gate(name)
        if not gate.lowest_V <= volt <= gate.highest_V:
            raise CannotError(
                f"{volt:g} V on {sample.name}/{name}: its window is {gate.lowest_V:g} V to {gate.highest_V:g} V"
            )
    full = dict(context.setup.resting) | {f"{sample.name}/{name}": float(volt) for name, volt in wanted.items()}
    return tuple(sorted(full.items()))


def state_at(context: Context, field_T: float, kelvin: float, gates_V: Gates, *, persistent: bool = False) -> State:
    """The rig settled at a field, a temperature and gate voltages."""
    coil = persistent_coil(context.rig, field_T) if persistent else driven_coil(context.rig, field_T)
    return State(coil, Stage(kelvin, charge_of(context.rig)), gates_V, context.start.light, context.start.fills)


def coil_ways(rig: Rig, field_T: float, wish: str, attended: bool) -> tuple[bool, ...]:
    """Whether the field may be driven (False) and persistent (True) through a take at one field.

    Raises
    ------
    CannotError
        If the target insists on a persistent field that this rig or site does not have.
    """
    if field_T == 0:
        return (False,)
    possible = rig.magnet.switch is not None and (rig.policies.unattended_persistent or attended)
    if wish == "persistent" and not possible:
        why = "has no persistent switch" if rig.magnet.switch is None else "lets no persistent field stand unattended"
        raise CannotError(f"a persistent field is asked for, but this rig {why}")
    return {"driven": (False,), "persistent": (True,)}.get(wish, (False, True) if possible else (False,))
