"""Helium of a week before planning: the present level, the idle bath up to the next transfer, holds that empty it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from planner.checks.asks import least_take_s, point_fields
from planner.checks.burn import driven_L, quickest_ramp
from planner.checks.rules.helium_lines import AT_FIELD, COVERED, EXACT_L, RESERVE, START
from planner.checks.spans import Spans, shared
from planner.checks.week_view import WeekView
from planner.checks.wording import length, litres, percent, tesla
from planner.files.level import litres_at
from planner.files.rig import Bath
from planner.files.targets import AtOneField, FieldSweep, Target
from planner.plan import Finding, Kind


def transfers_in_week(view: WeekView) -> Spans:
    """When transfers may run inside the week, spans too short for the smallest left out."""
    spans = shared(view.transfer_spans, ((0, view.horizon_s),))
    return tuple((begin, end) for begin, end in spans if end - begin >= view.least_transfer_s - 1e-6)


@AT_FIELD.week
def present_at_field(view: WeekView) -> Iterator[Finding]:
    """A rig that begins at field with the trusted level below the floor must run down now."""
    if view.bath is None or not view.week.present.field_T:
        return
    line = float(view.bath.lines.at_field_percent)
    if view.start_L >= view.line_L(line) - EXACT_L:
        return
    field = float(view.week.present.field_T)
    seconds, burnt = quickest_ramp(view.bath, view.magnet, field, 0.0)
    left = view.start_L - burnt
    top = float(view.bath.lines.coil_top_percent)
    uncovered = (
        f", below the top of the coil ({percent(top)}): call the responsible person" if left < view.line_L(top) else ""
    )
    yield AT_FIELD.finding(
        f"At {tesla(field)} the helium reads {view.reads(view.start_L)} {view.wall(0)}, below the floor at "
        f"field, {percent(line)}.",
        value=view.trusted(view.start_L),
        least=line,
        unit="%",
        at_s=0,
        mend=f"run down now, which is always allowed: {length(seconds)}, {litres(burnt)}, to {view.reads(left)}"
        f"{uncovered}; "
        f"then {_next_transfer(view)}",
    )


def _next_transfer(view: WeekView) -> str:
    first = next(iter(transfers_in_week(view)), None)
    return "no transfer is possible this week" if first is None else f"transfer, from {view.wall(max(0, first[0]))} on"


def _wants_more_field(view: WeekView) -> tuple[str, ...]:
    """Names of the targets that need a ramp up from the present field."""
    present = abs(float(view.week.present.field_T))
    return tuple(
        target.name
        for target in view.targets.values()
        if isinstance(target, FieldSweep)
        or any(abs(f.nominal_T) > present + 1e-9 for f in point_fields(view.week, target))
    )


@START.week
def present_to_start(view: WeekView) -> Iterator[Finding]:
    """A level below the line to start a ramp: which ramps wait for a transfer, or never come."""
    if view.bath is None:
        return
    line = float(view.bath.lines.start_ramp_percent)
    missing = view.line_L(line) - view.start_L
    if missing <= EXACT_L:
        return
    wanting = _wants_more_field(view)
    never = not transfers_in_week(view)
    kind = Kind.NOTE if not wanting else Kind.STOP if never else Kind.WARN
    who = f" Waiting: {', '.join(wanting[:6])}{' …' if len(wanting) > 6 else ''}." if wanting else ""
    yield START.finding(
        f"The helium reads {view.reads(view.start_L)} {view.wall(0)}: no ramp up starts below a trusted "
        f"{percent(line)}.{who}",
        kind=kind,
        value=view.trusted(view.start_L),
        least=line,
        unit="%",
        at_s=0,
        mend=f"{_next_transfer(view)}; {litres(missing)} or more into the bath",
    )


@COVERED.week
def present_covered(view: WeekView) -> Iterator[Finding]:
    """A rig that begins with current and the coil uncovered."""
    if view.bath is None or not view.week.present.field_T:
        return
    line = float(view.bath.lines.coil_top_percent)
    if view.start_L < view.line_L(line) - EXACT_L:
        yield COVERED.finding(
            f"At {tesla(view.week.present.field_T)} the helium reads {view.reads(view.start_L)} "
            f"{view.wall(0)}, and the "
            f"top of the coil is at {percent(line)}.",
            value=view.trusted(view.start_L),
            least=line,
            unit="%",
            at_s=0,
            mend="run down now and call the responsible person",
        )


@dataclass(frozen=True, slots=True)
class _Drain:
    """An idle bath: where the level would be at an instant at best, and when it passed the reserve."""

    at_s: int
    litres: float
    since_s: int
    crossed_s: float


def idle_at_best(view: WeekView, bath: Bath) -> _Drain | None:
    """The first stretch in which even an idle bath, filled whenever it can be, passes the reserve."""
    per_s = float(bath.losses.static_L_per_s)
    line_L = view.line_L(float(bath.lines.reserve_percent))
    full_L = litres_at(bath, float(bath.transfer.fill_to_percent))
    efficiency = bath.transfer.efficiency_percent / 100
    level, at, drawn = view.start_L, 0, 0.0
    for begin, end in (*transfers_in_week(view), (view.horizon_s, view.horizon_s)):
        drained = level - per_s * (begin - at)
        if drained < line_L - EXACT_L:
            crossed = at + max(0.0, level - line_L) / per_s if per_s else float(at)
            return _Drain(begin, drained, at, crossed)
        there = max(0.0, view.stored_L(end) - drawn - bath.transfer.line_loss_L)
        poured = min(max(0.0, full_L - drained), there * efficiency)
        if poured > 0:
            drawn += poured / efficiency
            level, at = drained + poured, end
    return None


@RESERVE.week
def idle_bath(view: WeekView) -> Iterator[Finding]:
    """Idle at zero field and filled whenever people and stock allow, the bath must outlast every stretch between."""
    if view.bath is None:
        return
    drain = idle_at_best(view, view.bath)
    if drain is None:
        return
    lines = view.bath.lines
    last = drain.at_s == view.horizon_s
    until = "the end of the week" if last else "the next attended transfer"
    top = float(lines.coil_top_percent)
    coil = f"; the coil (top {percent(top)}) is uncovered" if view.trusted(drain.litres) < top else ""
    rule_line = float(lines.reserve_percent)
    missing = view.line_L(rule_line) - drain.litres
    yield RESERVE.finding(
        f"Idle at 0 T from {view.wall(drain.since_s)} the helium reads {view.reads(drain.litres)} at {until}, "
        f"{view.wall(drain.at_s)}, {length(drain.at_s - drain.since_s)} later{coil}. "
        f"The reserve is a trusted {percent(rule_line)}.",
        value=view.trusted(drain.litres),
        least=rule_line,
        unit="%",
        at_s=drain.crossed_s,
        mend=f"transfer {litres(missing)} or more into the bath by {view.wall(int(drain.crossed_s))}: "
        "staffed transfer hours, people or stock are missing for it",
    )


@dataclass(frozen=True, slots=True)
class _Stay:
    """A stay at a field: seconds and litres of the way there, litres per second of the stay, its length."""

    way_s: float
    way_L: float
    per_s: float
    stay_s: float

    @property
    def burnt_L(self) -> float:
        """Litres of the whole."""
        return self.way_L + self.per_s * self.stay_s


def _stays(view: WeekView, bath: Bath, field: float, stay_s: float, first_T: float) -> tuple[_Stay, _Stay | None]:
    """The stay driven, and persistent with the leads down where the rig has a switch."""
    magnet, switch = view.magnet, view.magnet.switch
    way_s, way_L = quickest_ramp(bath, magnet, first_T, field)
    if way_s:
        way_s, way_L = way_s + magnet.settle_s, way_L + driven_L(bath, magnet, field, field, magnet.settle_s)
    driven = _Stay(way_s, way_L, driven_L(bath, magnet, field, field, 1.0), stay_s)
    if switch is None:
        return driven, None
    current = abs(field) / magnet.field_per_current_T_per_A
    leads_s = current / switch.leads_A_per_s
    still_L = driven_L(bath, magnet, field, field, switch.hold_before_s)
    static, per_A = bath.losses.static_L_per_s, bath.losses.leads_L_per_s_A
    still_L += static * (switch.cool_s + leads_s) + per_A * current * (switch.cool_s + leads_s / 2)
    closing_s = switch.hold_before_s + switch.cool_s + leads_s
    return driven, _Stay(way_s + closing_s, way_L + still_L, float(static), max(0.0, stay_s - closing_s))


def _best_start(view: WeekView, bath: Bath) -> tuple[float, float, float]:
    """The most helium a stay can begin with, the field the way to it begins at, and the earliest second of that."""
    present_T = float(view.week.present.field_T)
    spans = transfers_in_week(view)
    full_L = litres_at(bath, float(bath.transfer.fill_to_percent))
    if not spans or full_L <= view.start_L:
        return view.start_L, present_T, 0.0
    return full_L, 0.0, float(spans[0][0])


@AT_FIELD.week
def holds_that_empty_the_bath(view: WeekView) -> Iterator[Finding]:
    """A take at one field must end, or run down, with the trusted level at the floor even from a full bath."""
    if view.bath is None:
        return
    for target in view.targets.values():
        if not isinstance(target, AtOneField):
            continue
        field = point_fields(view.week, target)[0].nominal_T
        if field == 0 or abs(field) > view.magnet.rated_field_T:
            continue
        yield from _emptied(view, view.bath, target, target.coil, field)


def _emptied(view: WeekView, bath: Bath, target: Target, mode: str, field: float) -> Iterator[Finding]:
    start_L, first_T, start_s = _best_start(view, bath)
    take_s = least_take_s(view.week, view.rig, target)
    driven, persistent = _stays(view, bath, field, take_s, first_T)
    if mode != "driven" and persistent is not None:
        full = _Stay(persistent.way_s, persistent.way_L, persistent.per_s, take_s)
        driven, persistent = (full if mode == "persistent" else min(driven, full, key=lambda s: s.burnt_L)), None
    line = float(bath.lines.at_field_percent)
    usable = start_L - view.line_L(line)
    if driven.burnt_L <= usable + EXACT_L:
        return
    after_s = driven.way_s + (usable - driven.way_L) / driven.per_s if driven.way_L < usable else 0.0
    end_L = start_L - driven.burnt_L
    total = driven.way_s + driven.stay_s
    offer = ""
    if persistent is not None:
        kept = start_L - persistent.burnt_L
        allowed = "" if view.rig.policies.unattended_persistent else ", which this site does not allow unattended"
        good = "ends at" if kept >= view.line_L(line) else "still only ends at"
        offer = f"; persistent with the leads down{allowed} it {good} {view.reads(kept)}"
    how = ", driven," if mode == "driven" or persistent is not None else ""
    when = f"{view.wall(start_s + after_s)}, " if not start_s else ""
    yield AT_FIELD.finding(
        f'"{target.name}": {length(total)} at {tesla(field)}{how} from {view.reads(start_L)} of helium pass the floor '
        f"at field, {percent(line)}, {when}{length(after_s)} after the ramp begins, and would end at "
        f"{view.reads(end_L)}{_at_end(view, start_s, total)}.",
        value=view.trusted(end_L),
        least=line,
        unit="%",
        at_s=start_s + after_s,
        subject=target.name,
        mend=f"stay {length(max(0.0, after_s - driven.way_s))} at most{offer}",
    )


def _at_end(view: WeekView, start_s: float, total: float) -> str:
    return "" if start_s else f", {view.wall(start_s + total)}"
