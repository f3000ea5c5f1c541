"""The supply: charging voltage both ways, largest current, polarity, and whether the leads carry the field."""

from __future__ import annotations

import math
from collections.abc import Iterator

from planner.checks.plan_view import PlanView
from planner.checks.registry import Rule, register
from planner.checks.wording import number, rate, tesla
from planner.plan import CoilMode, Finding, Kind

EXACT = 1e-9
CURRENT_EXACT_A = 1e-6
VOLTAGE = register(
    Rule(
        "charging voltage",
        "supply",
        "the ramp against a supply that cannot follow",
        "rig: magnet.supply.max_voltage; V = L·dI/dt + I·R",
        Kind.STOP,
    )
)
CURRENT = register(
    Rule("supply current", "supply", "the supply and its leads", "rig: magnet.supply.max_current", Kind.STOP)
)
POLARITY = register(
    Rule(
        "supply polarity",
        "supply",
        "a unipolar supply against current of the other sign",
        "rig: magnet.supply.polarity",
        Kind.STOP,
    )
)
CARRIES = register(
    Rule(
        "lead current carries the field",
        "supply",
        "everything, if lead current and field of a driven coil disagree",
        "rig: magnet.field_per_current",
        Kind.STOP,
    )
)


@VOLTAGE.plan
def charging_voltage(view: PlanView) -> Iterator[Finding]:
    """|L·dI/dt + I·R| stays within the supply at both ends of every ramp, up and down."""
    supply = view.magnet.supply
    per_A = float(view.magnet.field_per_current_T_per_A)
    limit = float(supply.max_voltage_V)
    for item in view.placed:
        if not item.moves or not item.leg.seconds:
            continue
        set_rate = item.leg.rate or abs(item.last_T - item.first_T) / item.leg.seconds
        inductive = math.copysign(view.magnet.inductance_H * set_rate / per_A, item.last_T - item.first_T)
        ends = [inductive + field / per_A * supply.lead_resistance_ohm for field in (item.first_T, item.last_T)]
        worst = max(ends, key=abs)
        if abs(worst) <= limit * (1 + EXACT):
            continue
        resistive = abs(worst) - abs(inductive)
        allowed = (limit - resistive) / view.magnet.inductance_H * per_A
        at_s = item.leg.start_s if abs(ends[0]) > limit else item.leg.end_s
        yield VOLTAGE.finding(
            f"{item.step.label}: {tesla(item.first_T)} to {tesla(item.last_T)} at {rate(set_rate)} needs "
            f"{number(abs(worst))} V, {view.wall(at_s)}; the supply gives {number(limit)} V.",
            value=abs(worst),
            most=limit,
            unit="V",
            at_s=at_s,
            step=item.step.number,
            subject=item.step.target,
            mend=f"ramp at {rate(allowed)} at most" if allowed > 0 else "the leads alone take the whole voltage",
        )


@CURRENT.plan
def supply_current(view: PlanView) -> Iterator[Finding]:
    """The leads never carry more than the supply gives."""
    limit = float(view.magnet.supply.max_current_A)
    broken = False
    for item in view.placed:
        current = max(abs(item.before.lead_current_A[2]), abs(item.after.lead_current_A[2]))
        over = current > limit * (1 + EXACT)
        if over and not broken:
            yield CURRENT.finding(
                f"{item.step.label}: {number(current, 5)} A in the leads by {view.wall(item.leg.end_s)}; "
                f"the supply gives {number(limit, 5)} A.",
                value=current,
                most=limit,
                unit="A",
                at_s=item.leg.start_s if abs(item.before.lead_current_A[2]) > limit else item.leg.end_s,
                step=item.step.number,
                subject=item.step.target,
                mend=f"stay at or below {tesla(limit * view.magnet.field_per_current_T_per_A)}",
            )
        broken = over


@POLARITY.plan
def supply_polarity(view: PlanView) -> Iterator[Finding]:
    """A unipolar supply changes the sign of its current only after a reversal at zero, long enough."""
    supply = view.magnet.supply
    if supply.polarity == "bipolar":
        return
    sign = 0.0
    turned = False
    reversed_s = 0.0
    for item in view.placed:
        before, after = item.before.lead_current_A[2], item.after.lead_current_A[2]
        if item.leg.action == "reverse" and before == after == 0:
            turned = True
            reversed_s += item.leg.seconds
        for current in (before, after):
            if current == 0:
                continue
            new = math.copysign(1.0, current)
            if sign and new != sign and (not turned or reversed_s < supply.reversal_s - 1e-6):
                yield POLARITY.finding(
                    f"{item.step.label}: the lead current changes sign {view.wall(item.leg.start_s)}; the supply is "
                    f"unipolar and had {number(reversed_s)} s at zero to be reversed, of "
                    f"{number(supply.reversal_s)} s.",
                    value=reversed_s,
                    least=float(supply.reversal_s),
                    unit="s",
                    at_s=item.leg.start_s,
                    step=item.step.number,
                    subject=item.step.target,
                    mend=f"stop at zero for {number(supply.reversal_s)} s and reverse the supply",
                )
            sign, turned, reversed_s = new, False, 0.0


@CARRIES.plan
def lead_current_carries_the_field(view: PlanView) -> Iterator[Finding]:
    """Driven: lead current = field / (T/A). At zero and idle: none. Persistent: the coil's current makes the field."""
    per_A = float(view.magnet.field_per_current_T_per_A)
    wrong = False
    for item in view.placed:
        was_wrong, wrong = wrong, False
        for coil, at_s in ((item.before, item.leg.start_s), (item.after, item.leg.end_s)):
            carrier: object = coil.lead_current_A
            allowed_A = CURRENT_EXACT_A
            if coil.mode is CoilMode.PERSISTENT:
                carrier = coil.persistent_current_A
                allowed_A = float(view.magnet.switch.match_A) if view.magnet.switch else CURRENT_EXACT_A
            if not isinstance(carrier, tuple):
                continue
            field = carrier[2] * per_A
            idle = coil.mode is CoilMode.ZERO and (coil.field_T[2] != 0 or coil.lead_current_A[2] != 0)
            if abs(field - coil.field_T[2]) <= allowed_A * per_A and not idle:
                continue
            wrong = True
            if not was_wrong:
                yield CARRIES.finding(
                    f"{item.step.label}: {number(carrier[2], 5)} A make {tesla(field)}, but the plan says "
                    f"{tesla(coil.field_T[2])} with the coil {coil.mode}, {view.wall(at_s)}.",
                    value=carrier[2],
                    least=coil.field_T[2] / per_A,
                    unit="A",
                    at_s=at_s,
                    step=item.step.number,
                    subject=item.step.target,
                    mend=f"{number(coil.field_T[2] / per_A, 5)} A belong to {tesla(coil.field_T[2])}",
                )
            break
