"""The persistent switch: hold, heater off, leads down; and out: leads to the recorded current, settle, heater on."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from planner.checks.plan_view import MOVES_FIELD, Placed, PlanView
from planner.checks.registry import Rule, register
from planner.checks.spans import less, lies_in, next_fit
from planner.checks.week_view import WeekView
from planner.checks.wording import length, number, tesla
from planner.files.rig import Switch
from planner.plan import CoilMode, Finding, Kind

EXACT_S = 1e-6
EXACT_A = 1e-6
ORDER = register(
    Rule(
        "switch order",
        "switch",
        "the coil: hold, heater off, leads down; leads up, settle, heater on",
        "rig: magnet.switch; M. N. Wilson, Superconducting Magnets (Oxford 1983)",
        Kind.STOP,
    )
)
TIMES = register(
    Rule(
        "switch times",
        "switch",
        "the coil: leads or field moved while the switch is half open",
        "rig: magnet.switch.hold_before, cool, settle_after, warm",
        Kind.STOP,
    )
)
MATCH = register(
    Rule(
        "lead current matches the coil",
        "switch",
        "the coil: a heater on with mismatched leads quenches it",
        "rig: magnet.switch.match",
        Kind.STOP,
    )
)
KNOWN = register(
    Rule(
        "persistent current is known",
        "switch",
        "the coil: no switch is worked while nobody knows its current",
        "week: present.persistent_current",
        Kind.STOP,
    )
)
LEADS = register(Rule("lead rate", "switch", "the leads and the supply", "rig: magnet.switch.leads", Kind.STOP))
ATTENDED = register(
    Rule(
        "switch attended",
        "switch",
        "the coil: somebody must be there when leads and heater are worked at field",
        "rig: magnet.switch.attended",
        Kind.POLICY,
    )
)
ALONE = register(
    Rule(
        "unattended persistent field",
        "switch",
        "the site's rule on a persistent field with nobody there",
        "rig: policies.unattended_persistent",
        Kind.POLICY,
    )
)


@dataclass(slots=True)
class _Since:
    """How long field and leads have stood still before a leg."""

    field_s: float = float("inf")
    leads_s: float = float("inf")

    def after(self, item: Placed) -> None:
        """Count a leg."""
        leads_move = item.before.lead_current_A != item.after.lead_current_A
        self.field_s = 0.0 if item.moves else self.field_s + item.leg.seconds
        self.leads_s = 0.0 if leads_move else self.leads_s + item.leg.seconds


def _say(view: PlanView, rule: Rule, item: Placed, text: str, mend: str, **numbers: float | str) -> Finding:
    return rule.finding(
        f"{item.step.label}: {text}, {view.wall(item.leg.start_s)}.",
        at_s=item.leg.start_s,
        step=item.step.number,
        subject=item.step.target,
        mend=mend,
        **numbers,  # type: ignore[arg-type]
    )


@ORDER.plan
def switch_order(view: PlanView) -> Iterator[Finding]:
    """Modes change only as the switch allows, and the leads move alone only with it closed."""
    for item in view.placed:
        wrong = _order_broken(view, item)
        if wrong:
            yield _say(view, ORDER, item, *wrong)


def _order_broken(view: PlanView, item: Placed) -> tuple[str, str] | None:
    action, before, after = item.leg.action, item.before, item.after
    leads_move = before.lead_current_A != after.lead_current_A
    if action in ("heater on", "heater off", "leads") and view.magnet.switch is None:
        return f'"{action}" on a magnet without a switch', "leave it out"
    if action == "leads":
        closed = before.mode is CoilMode.PERSISTENT and after.mode is CoilMode.PERSISTENT
        return None if closed else (f"leads move alone with the coil {before.mode}", "close the switch first")
    if action == "heater off":
        closes = before.mode is CoilMode.DRIVEN and after.mode is CoilMode.PERSISTENT
        if not closes:
            return f"the heater goes off with the coil {before.mode}, then {after.mode}", "close it on a driven coil"
        if leads_move:
            return "the leads move while the switch cools", "wait for the switch, then the leads"
        trapped = after.persistent_current_A
        if not isinstance(trapped, tuple) or abs(trapped[2] - before.lead_current_A[2]) > EXACT_A:
            return (
                "the trapped current is not recorded as it was in the leads",
                f"record {before.lead_current_A[2]:.5g} A",
            )
        return None
    if action == "heater on":
        opens = after.mode is CoilMode.DRIVEN and not leads_move
        return None if opens else (f"the heater goes on and the coil is {after.mode}", "leads still, then driven")
    return _still_order(view, item, leads_move=leads_move)


def _still_order(view: PlanView, item: Placed, *, leads_move: bool) -> tuple[str, str] | None:
    """Modes and leads in every other leg."""
    before, after = item.before, item.after
    ends = before.mode is CoilMode.DRIVEN and after.mode is CoilMode.ZERO and item.last_T == 0
    begins = view.magnet.switch is None and before.mode is CoilMode.ZERO and after.mode is CoilMode.DRIVEN
    if before.mode is not after.mode and not ends and not (begins and item.leg.action in (*MOVES_FIELD, "reverse")):
        return f'the coil goes from {before.mode} to {after.mode} in a leg "{item.leg.action}"', "work the switch"
    if before.mode is CoilMode.PERSISTENT and leads_move:
        return f'the leads move in a leg "{item.leg.action}"', 'a leg "leads" of its own'
    if before.mode is CoilMode.PERSISTENT and before.persistent_current_A != after.persistent_current_A:
        return "the trapped current changes with the switch closed", "keep the recorded current"
    return None


@TIMES.plan
def switch_times(view: PlanView) -> Iterator[Finding]:
    """Hold before, cooling, settling of the leads and warming last at least as long as the rig's file says."""
    switch = view.magnet.switch
    if switch is None:
        return
    since = _Since()
    for item in view.placed:
        for what, given, needed, key in _times(switch, item, since):
            if given < needed - EXACT_S:
                yield _say(
                    view,
                    TIMES,
                    item,
                    f"{length(given)} of {length(needed)} {what}",
                    f"give it {length(needed)}",
                    value=float(given),
                    least=needed,
                    unit="s",
                    source=f"rig: magnet.switch.{key}",
                )
        since.after(item)


def _times(switch: Switch, item: Placed, since: _Since) -> Iterator[tuple[str, float, float, str]]:
    if item.leg.action == "heater off":
        yield "at the field before the heater goes off", since.field_s, float(switch.hold_before_s), "hold_before"
        yield "for the switch to cool", item.leg.seconds, float(switch.cool_s), "cool"
    if item.leg.action == "heater on":
        if item.before.mode is CoilMode.PERSISTENT:
            yield "for the leads to settle", since.leads_s, float(switch.settle_after_s), "settle_after"
        yield "for the switch to warm", item.leg.seconds, float(switch.warm_s), "warm"


@MATCH.plan
def lead_current_matches(view: PlanView) -> Iterator[Finding]:
    """When the heater goes on the leads carry the coil's current, sign included."""
    switch = view.magnet.switch
    if switch is None:
        return
    for item in view.placed:
        if item.leg.action != "heater on" or item.before.mode is CoilMode.DRIVEN:
            continue
        trapped = item.before.persistent_current_A
        if trapped == "unknown":
            continue
        in_coil = trapped[2] if isinstance(trapped, tuple) else 0.0
        in_leads = item.before.lead_current_A[2]
        if abs(in_leads - in_coil) > switch.match_A * (1 + 1e-9):
            yield _say(
                view,
                MATCH,
                item,
                f"the heater goes on with {number(in_leads, 5)} A in the leads and {number(in_coil, 5)} A in the coil",
                f"leads to {number(in_coil, 5)} A first ({length(abs(in_coil - in_leads) / switch.leads_A_per_s)})",
                value=abs(in_leads - in_coil),
                most=float(switch.match_A),
                unit="A",
            )


@KNOWN.plan
def persistent_current_known(view: PlanView) -> Iterator[Finding]:
    """No heater and no lead is worked while the trapped current is unknown."""
    for item in view.placed:
        worked = item.leg.action in ("heater on", "heater off", "leads") or item.moves
        if worked and item.before.persistent_current_A == "unknown":
            yield _say(
                view,
                KNOWN,
                item,
                f'"{item.leg.action}" with the persistent current unknown',
                "let staff determine the field first, with a Hall probe or a sample's Hall voltage, and log it",
            )


@KNOWN.week
def present_current_known(view: WeekView) -> Iterator[Finding]:
    """A week that begins with a persistent field of which nobody logged the current."""
    if view.week.present.persistent_current_A == "unknown":
        yield KNOWN.finding(
            f"The week begins persistent at {tesla(view.week.present.field_T)} with its current unknown: no switch is "
            "worked before staff confirm it, so nothing that changes the field can be planned.",
            at_s=0,
            mend="let staff determine the field first, with a Hall probe or a sample's Hall voltage, and log it",
        )


@LEADS.plan
def lead_rate(view: PlanView) -> Iterator[Finding]:
    """With the switch closed the leads move no faster than the rig allows."""
    switch = view.magnet.switch
    if switch is None:
        return
    for item in view.placed:
        change = abs(item.after.lead_current_A[2] - item.before.lead_current_A[2])
        if item.leg.action != "leads" or not change:
            continue
        limit = float(switch.leads_A_per_s)
        needed = change / limit
        claimed = max(item.leg.rate or 0.0, change / item.leg.seconds if item.leg.seconds else float("inf"))
        if claimed > limit * (1 + 1e-9):
            yield _say(
                view,
                LEADS,
                item,
                f"the leads move {number(change)} A at {number(claimed * 60)} A/min of {number(limit * 60)} A/min",
                f"give them {length(needed)}",
                value=claimed * 60,
                most=limit * 60,
                unit="A/min",
            )


@ATTENDED.plan
def switch_attended(view: PlanView) -> Iterator[Finding]:
    """Leads and heater are worked at field only while somebody is there."""
    switch = view.magnet.switch
    if switch is None or not switch.attended:
        return
    for at, step in enumerate(view.steps):
        worked = [i for i in view.by_step[at] if i.leg.action in ("heater on", "heater off", "leads") and i.at_field]
        if not worked:
            continue
        begin, end = worked[0].leg.start_s, worked[-1].leg.end_s
        if step.attended and lies_in(view.staffed, begin, end):
            continue
        follows = next_fit(view.staffed, begin, step.seconds)
        why = "not marked attended" if not step.attended else "outside staffed hours"
        yield ATTENDED.finding(
            f"{step.label}: leads and heater are worked at {tesla(worked[0].first_T)} from {view.wall(begin)} to "
            f"{view.wall(end)}, {why}.",
            at_s=begin,
            step=step.number,
            subject=step.target,
            mend="mark it attended" if follows == begin else _when(view, follows),
        )


def _when(view: PlanView, follows: int | None) -> str:
    return "nobody is there later either" if follows is None else f"begin at {view.wall(follows)}"


@ALONE.plan
def unattended_persistent(view: PlanView) -> Iterator[Finding]:
    """Where the site forbids it, no persistent field stands outside staffed hours."""
    if view.rig.policies.unattended_persistent:
        return
    previous_alone = False
    for item in view.placed:
        stands = item.before.mode is CoilMode.PERSISTENT and item.at_field
        alone = less(((item.leg.start_s, item.leg.end_s),), view.staffed) if stands else ()
        if alone and not previous_alone:
            yield ALONE.finding(
                f"{item.step.label}: a persistent {tesla(item.first_T)} stands with nobody there from "
                f"{view.wall(alone[0][0])} on.",
                kind=view.in_recovery(ALONE.kind, item.leg.start_s),
                at_s=alone[0][0],
                step=item.step.number,
                subject=item.step.target,
                mend=f"be at zero field by {view.wall(alone[0][0])}",
            )
        previous_alone = bool(alone)
