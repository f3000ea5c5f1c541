"""A two-dimensional layer as a page needs it: density with its uncertainty, and the gates that move it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from planner.errors import InputError, Problem
from planner.files.references import nearest
from planner.files.week import Sample, Week
from planner.physics.gating import gate_for_density_V, gated_density_per_m2
from planner.units import parse_amount


@dataclass(frozen=True, slots=True)
class GateLine:
    """A gate's line n(V) and the voltage it stands at; its window where that is known."""

    name: str
    slope_per_m2_V: float
    reference_V: float = 0.0
    voltage_V: float = 0.0
    lowest_V: float | None = None
    highest_V: float | None = None

    def moves_per_m2(self) -> float:
        """Return what the gate adds to the density at its voltage."""
        return float(gated_density_per_m2(0.0, self.slope_per_m2_V, self.voltage_V, self.reference_V))

    def voltage_for_V(self, wanted_per_m2: float, now_per_m2: float) -> float | None:
        """Return the voltage at which the layer has a density, all else as now; None for a gate that moves nothing."""
        if self.slope_per_m2_V == 0:
            return None
        return float(gate_for_density_V(wanted_per_m2, now_per_m2, self.slope_per_m2_V, self.voltage_V))

    def allows(self, volt_V: float) -> bool:
        """Say whether a voltage lies in the gate's window, as far as that is known."""
        low = -float("inf") if self.lowest_V is None else self.lowest_V
        high = float("inf") if self.highest_V is None else self.highest_V
        return low <= volt_V <= high


@dataclass(frozen=True, slots=True)
class Layer:
    """Density with the gates at their references (electrons positive) and its uncertainty (not negative)."""

    density_per_m2: float
    uncertainty_per_m2: float = 0.0
    gates: tuple[GateLine, ...] = ()

    @property
    def now_per_m2(self) -> float:
        """Density with the gates where they stand. Their part counts as known."""
        return self.density_per_m2 + sum(gate.moves_per_m2() for gate in self.gates)


def layer_of_sample(sample: Sample, voltages_V: Mapping[str, float] | None = None) -> Layer:
    """Take the layer from a week's sample, its gates at rest but for the voltages given.

    Raises
    ------
    InputError
        If a voltage is given for a gate the sample does not have.
    """
    given = dict(voltages_V or {})
    known = {gate.name for gate in sample.gates}
    if unknown := sorted(set(given) - known):
        names = ", ".join(sorted(known)) or "it has none"
        raise InputError([Problem(sample.name, "gate", f'"{unknown[0]}"', f"expected a gate of this sample: {names}")])
    sign = 1.0 if sample.carriers == "electrons" else -1.0
    gates = tuple(
        GateLine(
            gate.name,
            float(gate.density_slope_per_m2_V),
            float(gate.reference_V),
            float(given.get(gate.name, gate.rest_V)),
            float(gate.lowest_V),
            float(gate.highest_V),
        )
        for gate in sample.gates
        if gate.density_slope_per_m2_V is not None
    )
    density = float(sample.density_per_m2)
    return Layer(sign * density, density * float(sample.density_error_percent) / 100.0, gates)


def typed_layer(
    density_per_m2: float,
    uncertainty: str | None = None,
    holes: bool = False,
    gate_slope_per_m2_V: float | None = None,
    gate_reference_V: float = 0.0,
    gate_voltage_V: float | None = None,
) -> Layer:
    """Take the layer from numbers as typed: density (positive), uncertainty as text, carriers, one gate.

    A gate without a voltage stands at its reference.

    Raises
    ------
    InputError
        If the uncertainty cannot be read.
    """
    gates: tuple[GateLine, ...] = ()
    if gate_slope_per_m2_V is not None:
        stands_V = gate_reference_V if gate_voltage_V is None else gate_voltage_V
        gates = (GateLine("gate", gate_slope_per_m2_V, gate_reference_V, stands_V),)
    bare = Layer(-density_per_m2 if holes else density_per_m2, 0.0, gates)
    return with_density(bare, density_per_m2, uncertainty)


def sample_named(week: Week, name: str | None) -> Sample:
    """Return the sample of a week by its name; without one, the only sample.

    Raises
    ------
    InputError
        If there is no such sample, or several and no name.
    """
    names = [sample.name for sample in week.samples]
    if name is None and len(names) == 1:
        return week.samples[0]
    found = next((sample for sample in week.samples if sample.name == name), None)
    if found is None:
        expected = f"expected a sample of this week: {', '.join(names)}" if names else "this week has no samples"
        hint = "" if name is None else nearest(name, names)
        raise InputError([Problem(week.title, "sample", "" if name is None else f'"{name}"', expected, hint)])
    return found


def with_density(layer: Layer, density_per_m2: float | None, uncertainty: str | None) -> Layer:
    """Return the layer with a density typed or fitted in place of its own, its sign kept, and with an uncertainty.

    Raises
    ------
    InputError
        If the uncertainty cannot be read.
    """
    size = abs(layer.density_per_m2) if density_per_m2 is None else density_per_m2
    if uncertainty is None:
        spread = layer.uncertainty_per_m2 if density_per_m2 is None else 0.0
    else:
        try:
            spread = uncertainty_of(uncertainty, size)
        except ValueError as error:
            raise InputError([Problem("uncertainty", "", f'"{uncertainty}"', str(error))]) from None
    return Layer(size if layer.density_per_m2 > 0 else -size, spread, layer.gates)


def uncertainty_of(text: str, density_per_m2: float) -> float:
    """Read an uncertainty: a share ("5 %") of the density or a density of its own. Raises ValueError otherwise."""
    if "%" in text:
        found = abs(density_per_m2) * parse_amount(text, "percent") / 100.0
    else:
        found = float(parse_amount(text, "1/m**2"))
    if not 0.0 <= found < abs(density_per_m2):
        raise ValueError("expected an uncertainty from 0 to less than the density")
    return found
