"""Field: what the magnet is rated for, what it is asked for, and what a filling needs at today's density."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.asks import FieldSpan, density_per_m2, field_of_filling, point_fields, sweep_ends
from planner.checks.plan_view import PlanView
from planner.checks.registry import Rule, register
from planner.checks.week_view import WeekView
from planner.checks.wording import number, tesla
from planner.files.asks import filling_name
from planner.files.targets import AnyTarget, FieldSweep
from planner.physics.fillings import FLUX_QUANTUM_T_m2, fillings_to_list
from planner.plan import Finding, Kind

EXACT = 1e-9
LARGEST_DENOMINATOR = 7
"""Offers are fillings strong enough to be worth a change of plan (common practice, no source)."""

RATED = register(
    Rule(
        "rated field",
        "field",
        "the coil against more field than it is made for",
        "rig: magnet.rated_field",
        Kind.STOP,
    )
)
REACH = register(
    Rule(
        "filling in reach",
        "field",
        "the week against a filling that no field of this magnet shows",
        "rig: magnet.rated_field; B = n·h/(e·ν), Phys. Rev. Lett. 45, 494 (1980)",
        Kind.STOP,
    )
)
PROVISIONAL = register(
    Rule(
        "provisional filling",
        "field",
        "a sweep around a filling against a density that is not known well enough",
        "week: samples.density_error",
        Kind.NOTE,
    )
)


@RATED.plan
def rated_field(view: PlanView) -> Iterator[Finding]:
    """No leg and no state beyond the rated field."""
    rated = float(view.magnet.rated_field_T)
    broken = False
    for item in view.placed:
        reached = max(item.first_T, item.last_T, key=abs)
        beyond = abs(reached) > rated * (1 + EXACT)
        if beyond and not broken:
            at_s: float = item.leg.start_s
            if abs(item.first_T) <= rated:
                share = (rated - abs(item.first_T)) / (abs(item.last_T) - abs(item.first_T))
                at_s += share * item.leg.seconds
            yield RATED.finding(
                f"{item.step.label}: goes to {tesla(reached)} and passes the rated {tesla(rated)} {view.wall(at_s)}; "
                f"that is {tesla(abs(reached) - rated)} too much.",
                value=abs(reached),
                most=rated,
                unit="T",
                at_s=at_s,
                step=item.step.number,
                subject=item.step.target,
                mend=f"stay at or below {tesla(rated)}",
            )
        broken = beyond


@RATED.week
def asked_field(view: WeekView) -> Iterator[Finding]:
    """No target, present field or wanted end beyond the rated field."""
    rated = float(view.magnet.rated_field_T)
    asks = [("the present state", "", float(view.week.present.field_T), "week: present.field")]
    asks.append(("the wanted end", "", float(view.week.wanted_end.field_T), "week: wanted_end.field"))
    for target in view.targets.values():
        if not _by_filling(target):
            fields = (
                sweep_ends(view.week, target) if isinstance(target, FieldSweep) else point_fields(view.week, target)
            )
            largest = max((field.nominal_T for field in fields), key=abs)
            asks.append((f'"{target.name}"', target.name, largest, RATED.source))
    for who, name, field, source in asks:
        if abs(field) > rated * (1 + EXACT):
            yield RATED.finding(
                f"{who[0].upper()}{who[1:]} has {tesla(field)}; the magnet is rated for {tesla(rated)}, "
                f"{tesla(abs(field) - rated)} less.",
                value=abs(field),
                most=rated,
                unit="T",
                subject=name,
                source=source,
                mend=f"ask for {tesla(rated)} at most",
            )


def _by_filling(target: AnyTarget) -> bool:
    return getattr(target, "filling", None) is not None or bool(getattr(target, "fillings", ()))


def _fields(view: WeekView, target: AnyTarget) -> tuple[FieldSpan, ...]:
    """The fields that must be in reach: each filling asked, not the wings of a window around it."""
    if isinstance(target, FieldSweep) and isinstance(target.filling, float):
        return (field_of_filling(view.week.sample(target.sample), target, target.filling),)
    return sweep_ends(view.week, target) if isinstance(target, FieldSweep) else point_fields(view.week, target)


def _least(field: FieldSpan) -> float:
    """The least |B| of the interval."""
    if field.low_T <= 0 <= field.high_T:
        return 0.0
    return min(abs(field.low_T), abs(field.high_T))


@REACH.week
def filling_in_reach(view: WeekView) -> Iterator[Finding]:
    """Every filling has a field this magnet reaches, within the density's error; a range must be reached in part."""
    rated = float(view.magnet.rated_field_T)
    for target in filter(_by_filling, view.targets.values()):
        fields = _fields(view, target)
        beyond = [field for field in fields if _least(field) > rated * (1 + EXACT)]
        swept = isinstance(target, FieldSweep) and len(fields) > 1
        if not beyond or (swept and len(beyond) < len(fields)):
            continue
        worst = max(beyond, key=_least)
        offers = reachable_offers(view, target, worst.nominal_T)
        density, error = density_per_m2(view.week.sample(target.sample), target)
        least = " even at the lowest density its error allows" if error else ""
        yield REACH.finding(
            f'"{target.name}" needs {tesla(worst.nominal_T)} at a density of {number(abs(density) / 1e15)}e11 cm^-2; '
            f"the magnet ends at {tesla(rated)}, {tesla(_least(worst) - rated)} short{least}.",
            value=_least(worst),
            most=rated,
            unit="T",
            subject=target.name,
            mend=offers,
        )


def reachable_offers(view: WeekView, target: AnyTarget, needed_T: float) -> str:
    """The nearest fillings within reach with their fields, and the density or gate voltage that brings this one in."""
    rated = float(view.magnet.rated_field_T)
    sample = view.week.sample(target.sample)
    density, _ = density_per_m2(sample, target)
    filling = density * FLUX_QUANTUM_T_m2 / needed_T
    sign = 1 if filling > 0 else -1
    reach = [
        (abs(density) * FLUX_QUANTUM_T_m2 / float(nu), sign * float(nu))
        for nu in fillings_to_list()
        if nu.denominator <= LARGEST_DENOMINATOR
    ]
    nearest = sorted((field, nu) for field, nu in reach if field <= rated)[-3:][::-1]
    offers = [f"ν = {filling_name(nu)} at {number(field)} T" for field, nu in nearest]
    most_density = abs(filling) * rated / FLUX_QUANTUM_T_m2
    offers.append(f"or a density of {number(most_density / 1e15, 3)}e11 cm^-2 at most for {tesla(rated)}")
    for gate in sample.gates:
        slope = gate.density_slope_per_m2_V
        if not slope or gate.name == getattr(target, "gate", ""):
            continue
        held = float(target.gates.get(gate.name, gate.rest_V))
        volt = held + (abs(most_density) * (1 if density > 0 else -1) - density) / slope
        inside = gate.lowest_V <= volt <= gate.highest_V
        where = (
            "" if inside else f", which is outside its window of {number(gate.lowest_V)} to {number(gate.highest_V)} V"
        )
        offers.append(f"gate {gate.name} at {number(volt)} V{where}")
    return "; ".join(offers)


@PROVISIONAL.week
def provisional_filling(view: WeekView) -> Iterator[Finding]:
    """A filling whose field interval straddles the rated field is provisional."""
    rated = float(view.magnet.rated_field_T)
    for target in filter(_by_filling, view.targets.values()):
        for field in _fields(view, target):
            largest = max(abs(field.low_T), abs(field.high_T))
            if _least(field) <= rated < largest and field.low_T != field.high_T:
                yield PROVISIONAL.finding(
                    f'"{target.name}" is provisional: within the density\'s error its filling lies between '
                    f"{tesla(field.low_T)} and {tesla(field.high_T)}, and the magnet ends at {tesla(rated)}. "
                    f"A sweep is widened to that interval and cut at {tesla(rated)}.",
                    value=largest,
                    most=rated,
                    unit="T",
                    subject=target.name,
                    mend="measure the density first",
                )
                break
