"""What the week's targets ask for, in tesla, kelvin and seconds: fields from fillings, least durations, repeats."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

from planner.checks.ramp_table import least_seconds
from planner.files import Rig, Week
from planner.files.asks import Range
from planner.files.targets import (
    AtOneField,
    FieldSweep,
    GateSweep,
    Hold,
    LockIn,
    Map,
    OtherWork,
    Target,
    TemperatureSeries,
)
from planner.files.week import Sample
from planner.physics.fillings import FLUX_QUANTUM_T_m2
from planner.physics.lockin import honest_rate_T_per_s, settle_time_s


@dataclass(frozen=True, slots=True)
class FieldSpan:
    """A field and the interval the density's error leaves it."""

    nominal_T: float
    low_T: float
    high_T: float


def swept_gates(target: Target) -> tuple[str, ...]:
    """The gates a target sweeps."""
    names = (getattr(target, "gate", None), getattr(target, "second_gate", None))
    return tuple(name for name in names if name)


def density_per_m2(sample: Sample, target: Target) -> tuple[float, float]:
    """Signed density in the take (electrons positive) and its error; the swept gate stands at its reference.

    A gate adds carriers to the sample's own, whose error it does not change.
    """
    nominal = float(sample.density_per_m2) * (1 if sample.carriers == "electrons" else -1)
    error = abs(nominal) * sample.density_error_percent / 100
    for gate in sample.gates:
        if gate.density_slope_per_m2_V is not None and gate.name != getattr(target, "gate", ""):
            swing_V = float(target.gates.get(gate.name, gate.rest_V)) - gate.reference_V
            nominal += gate.density_slope_per_m2_V * swing_V
    return nominal, error


def field_of_filling(sample: Sample, target: Target, filling: float) -> FieldSpan:
    """The signed field B = n·h/(e·ν) of a filling, and where it may lie within the density's error.

    Source: K. von Klitzing, G. Dorda, M. Pepper, Phys. Rev. Lett. 45, 494 (1980); constants of the SI of 2019.
    """
    density, error = density_per_m2(sample, target)
    fields = [n * FLUX_QUANTUM_T_m2 / filling for n in (density, density - error, density + error)]
    return FieldSpan(fields[0], min(fields), max(fields))


def _exact(field_T: float) -> FieldSpan:
    return FieldSpan(float(field_T), float(field_T), float(field_T))


def point_fields(week: Week, target: Target) -> tuple[FieldSpan, ...]:
    """Every single field a target asks for; a map's rungs over a range lie at equal steps of field.

    Empty for a field sweep.
    """
    sample = week.sample(target.sample)
    if isinstance(target, OtherWork):
        return (_exact(target.field_T),)
    if isinstance(target, AtOneField):
        if target.filling is not None:
            return (field_of_filling(sample, target, target.filling),)
        return (_exact(target.field_T or 0.0),)
    if not isinstance(target, Map):
        return ()
    if target.fields_T:
        return tuple(_exact(field) for field in target.fields_T)
    if target.fillings:
        return tuple(field_of_filling(sample, target, filling) for filling in target.fillings)
    if target.field is not None:
        first, last = _exact(target.field.first), _exact(target.field.last)
    else:
        assert target.filling is not None
        ends = (target.filling.first, target.filling.last)
        first, last = (field_of_filling(sample, target, end) for end in ends)
    last_rung = (target.rungs or 2) - 1
    return tuple(_between(first, last, rung / last_rung) for rung in range(last_rung + 1))


def _between(first: FieldSpan, last: FieldSpan, share: float) -> FieldSpan:
    pairs = ((first.nominal_T, last.nominal_T), (first.low_T, last.low_T), (first.high_T, last.high_T))
    nominal, low, high = (one + (other - one) * share for one, other in pairs)
    return FieldSpan(nominal, low, high)


def sweep_ends(week: Week, target: FieldSweep) -> tuple[FieldSpan, FieldSpan]:
    """The two ends of a field sweep in the order asked, each with the interval the density leaves it."""
    if target.field is not None:
        return _exact(target.field.first), _exact(target.field.last)
    sample = week.sample(target.sample)
    if isinstance(target.filling, Range):
        first, last = (field_of_filling(sample, target, end) for end in (target.filling.first, target.filling.last))
        return first, last
    middle = field_of_filling(sample, target, float(target.filling or 1.0))
    half = (target.width_T or 0.0) / 2
    low = FieldSpan(middle.nominal_T - half, middle.low_T - half, middle.high_T - half)
    return low, FieldSpan(middle.nominal_T + half, middle.low_T + half, middle.high_T + half)


def sweep_range_T(week: Week, rig: Rig, target: FieldSweep) -> tuple[float, float]:
    """Lowest and highest field a sweep must cover: widened by the density's error, cut at the rated field."""
    ends = sweep_ends(week, target)
    rated_T = float(rig.magnet.rated_field_T)
    low = min(end.low_T for end in ends)
    high = max(end.high_T for end in ends)
    return max(low, -rated_T), min(high, rated_T)


def lockin_of(week: Week, target: Target) -> LockIn | None:
    """The lock-in a target is measured with: its own, else its sample's."""
    return target.lockin or week.sample(target.sample).lockin


@lru_cache(maxsize=512)
def _settle_s(time_constant_s: float, poles: int, settled: float) -> float:
    return float(settle_time_s(time_constant_s, poles, settled))


@lru_cache(maxsize=512)
def _honest(feature_T: float, time_constant_s: float, poles: int, points: int, settled: float) -> float:
    return float(honest_rate_T_per_s(feature_T, time_constant_s, poles, points, settled))


def honest_rate(week: Week, target: FieldSweep) -> float | None:
    """The fastest sweep the lock-in follows, in T/s; None without a lock-in or a feature to resolve."""
    lockin = lockin_of(week, target)
    if lockin is None or target.feature_T is None:
        return None
    share = lockin.settled_percent / 100
    return _honest(float(target.feature_T), float(lockin.time_constant_s), lockin.poles, lockin.points_across, share)


def passes(target: Target) -> int:
    """How often a sweep is gone through in one take: twice for both directions."""
    return 2 if getattr(target, "direction", "") == "both" else 1


def gate_pass_s(week: Week, target: GateSweep | Map) -> float:
    """The least time of one pass over the swept gate: the dwell of its points, and the way between them."""
    lockin = lockin_of(week, target)
    dwell_s = float(target.dwell_s or 0.0)
    if target.dwell_s is None and lockin is not None:
        dwell_s = _settle_s(float(lockin.time_constant_s), lockin.poles, lockin.settled_percent / 100)
    gate = week.sample(target.sample).gate(target.gate)
    travel_s = abs(target.sweep.last - target.sweep.first) / gate.rate_V_per_s if gate.rate_V_per_s > 0 else 0.0
    return target.points * dwell_s + travel_s


def least_take_s(week: Week, rig: Rig, target: Target) -> float:
    """The least time of one take of a target, moves and settling apart; not rounded."""
    if isinstance(target, (Hold, TemperatureSeries, OtherWork)):
        return float(target.duration_s)
    if isinstance(target, GateSweep):
        return passes(target) * (target.second_points or 1) * gate_pass_s(week, target)
    if isinstance(target, Map):
        return passes(target) * gate_pass_s(week, target)
    if isinstance(target, FieldSweep):
        low, high = sweep_range_T(week, rig, target)
        cap = target.rate_T_per_s or honest_rate(week, target) or float("inf")
        return passes(target) * least_seconds(rig.magnet, low, high, cap) if high > low else 0.0
    raise TypeError(f"no least time is known for a target of kind {type(target).__name__}")


def takes_asked(target: Target) -> int:
    """How many takes a target asks for, repeats included."""
    each = 1
    if isinstance(target, TemperatureSeries):
        each = len(target.temperatures_K)
    if isinstance(target, Map):
        each = target.rungs or len(target.fields_T) or len(target.fillings)
    return each * target.repeats


def temperatures_asked(target: Target, base_K: float) -> tuple[tuple[float, bool], ...]:
    """The temperatures of a target's takes as (kelvin, whether lower ones do too)."""
    if isinstance(target, TemperatureSeries):
        return tuple((float(value), False) for value in target.temperatures_K)
    ask = target.temperature
    return ((base_K if ask.kelvin is None else ask.kelvin, ask.at_most),)
