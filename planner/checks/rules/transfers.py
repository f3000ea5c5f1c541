"""Transfers in a plan: their hours, people, coil, amounts, time and stock."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.plan_view import TRANSFER, PlanView, heads
from planner.checks.registry import Rule, register
from planner.checks.spans import lies_in, next_fit
from planner.checks.wording import length, litres, percent
from planner.files.level import level_at, litres_at
from planner.files.rig import Transfer
from planner.plan import CoilMode, Finding, Kind, Step

EXACT_L = 1e-6
HOURS = register(
    Rule(
        "transfer hours",
        "transfers",
        "people and bath: transfers are attended",
        "rig: bath.transfer.hours",
        Kind.POLICY,
    )
)
PEOPLE = register(
    Rule("transfer people", "transfers", "people: enough who are trained", "rig: bath.transfer.people", Kind.POLICY)
)
COIL = register(Rule("transfer coil", "transfers", "the coil during a transfer", "rig: bath.transfer.coil", Kind.STOP))
FILL = register(Rule("transfer fill", "transfers", "the bath's neck", "rig: bath.transfer.fill_to", Kind.STOP))
LEAST = register(
    Rule(
        "transfer least", "transfers", "helium: cooling the line for little", "rig: bath.transfer.least_pour", Kind.WARN
    )
)
TIME = register(
    Rule("transfer time", "transfers", "everything after it", "rig: bath.transfer.rate, line_cooling", Kind.STOP)
)
STOCK = register(Rule("transfer stock", "transfers", "a transfer against an empty vessel", "week: helium", Kind.STOP))
DRAWN = register(
    Rule("transfer book", "transfers", "the helium book", "rig: bath.transfer.efficiency, line_loss", Kind.STOP)
)


def transfers(view: PlanView) -> Iterator[tuple[Step, Transfer]]:
    """The transfers of a plan with the rig's rules for them."""
    if view.bath is not None:
        for step in view.steps:
            if step.service == TRANSFER:
                yield step, view.bath.transfer


@HOURS.plan
def transfer_hours(view: PlanView) -> Iterator[Finding]:
    """The whole transfer lies inside staffed hours in which transfers are allowed."""
    for step, _ in transfers(view):
        if lies_in(view.transfer_hours, step.start_s, step.end_s):
            continue
        follows = next_fit(view.transfer_hours, step.start_s, step.seconds)
        allowed = next((end for begin, end in view.transfer_hours if begin <= step.start_s < end), None)
        late = f", {length(step.end_s - allowed)} too long" if allowed is not None else ""
        yield HOURS.finding(
            f"The transfer from {view.wall(step.start_s)} to {view.wall(step.end_s)} is not wholly inside staffed "
            f"transfer hours{late}.",
            value=None if allowed is None else step.end_s / 3600,
            most=None if allowed is None else allowed / 3600,
            unit="" if allowed is None else "h",
            at_s=step.start_s if allowed is None else allowed,
            step=step.number,
            subject=TRANSFER,
            mend="no transfer hours are long enough" if follows is None else f"begin at {view.wall(follows)}",
        )


@PEOPLE.plan
def transfer_people(view: PlanView) -> Iterator[Finding]:
    """Enough trained people are named, and are there for the whole of it."""
    for step, rules in transfers(view):
        able = set(view.trained(rules.training))
        named = list(dict.fromkeys(step.people))
        if view.week.people:
            good = [n for n in named if n in able and lies_in(view.presence[n], step.start_s, step.end_s)]
        else:
            good = named
        count = heads(tuple(good))
        if count >= rules.people:
            continue
        others = [name for name in named if name not in good]
        why = f" ({', '.join(others)}: not trained, or not there all the while)" if others else ""
        follows = next_fit(view.transfer_spans, step.start_s, step.seconds)
        yield PEOPLE.finding(
            f"The transfer from {view.wall(step.start_s)} to {view.wall(step.end_s)} has {count} of the "
            f"{rules.people} people trained for it{why}.",
            value=float(count),
            least=float(rules.people),
            unit="people",
            at_s=step.start_s,
            step=step.number,
            subject=TRANSFER,
            mend="nobody could do it this week"
            if follows is None
            else f"enough people are there at {view.wall(follows)}",
        )


@COIL.plan
def transfer_coil(view: PlanView) -> Iterator[Finding]:
    """No current in the leads; the coil at zero, or persistent where the rig allows it."""
    for at, step in enumerate(view.steps):
        if view.bath is None or step.service != TRANSFER:
            continue
        for coil in (step.before.coil, *(item.after for item in view.by_step[at])):
            zero = coil.mode is CoilMode.ZERO and coil.field_T[2] == 0
            parked = coil.mode is CoilMode.PERSISTENT and view.bath.transfer.coil == "persistent or zero"
            if (zero or parked) and coil.lead_current_A[2] == 0:
                continue
            yield COIL.finding(
                f"The transfer at {view.wall(step.start_s)} has the coil {coil.mode} at {coil.field_T[2]:g} T with "
                f"{coil.lead_current_A[2]:.4g} A in the leads; this rig wants it {view.bath.transfer.coil}, "
                "leads at 0 A.",
                value=abs(coil.lead_current_A[2]),
                most=0.0,
                unit="A",
                at_s=step.start_s,
                step=step.number,
                subject=TRANSFER,
                mend="run down first" if view.bath.transfer.coil == "zero" else "run down, or close the switch first",
            )
            break


@FILL.plan
def transfer_fill(view: PlanView) -> Iterator[Finding]:
    """The bath ends at its fill level at most, by the level as reckoned here."""
    if view.bath is None:
        return
    most = float(view.bath.transfer.fill_to_percent)
    for at, step in enumerate(view.steps):
        if step.service != TRANSFER or not view.by_step[at]:
            continue
        after_L = view.by_step[at][-1].after_L + step.poured_L
        full_L = litres_at(view.bath, most)
        if after_L > full_L + EXACT_L:
            yield FILL.finding(
                f"The transfer at {view.wall(step.start_s)} fills to {percent(level_at(view.bath, after_L))}; the bath "
                f"takes {percent(most)}, {litres(after_L - full_L)} less.",
                value=level_at(view.bath, after_L),
                most=most,
                unit="%",
                at_s=step.end_s,
                step=step.number,
                subject=TRANSFER,
                mend=f"pour {litres(max(0.0, step.poured_L - (after_L - full_L)))}",
            )


@LEAST.plan
def transfer_least(view: PlanView) -> Iterator[Finding]:
    """A transfer pours at least what is worth cooling the line for."""
    for step, rules in transfers(view):
        least = float(rules.least_pour_L)
        if step.poured_L < least - EXACT_L:
            yield LEAST.finding(
                f"The transfer at {view.wall(step.start_s)} pours {litres(step.poured_L)}; below {litres(least)} it is "
                "not worth cooling the line.",
                value=step.poured_L,
                least=least,
                unit="L",
                at_s=step.start_s,
                step=step.number,
                subject=TRANSFER,
                mend=f"pour {litres(least)}, later, or leave it out",
            )


@TIME.plan
def transfer_time(view: PlanView) -> Iterator[Finding]:
    """It lasts at least as long as cooling the line and pouring take."""
    for step, rules in transfers(view):
        needed = float(rules.line_cooling_s) + step.poured_L / rules.rate_L_per_s
        if step.seconds < needed - 1e-6:
            yield TIME.finding(
                f"The transfer at {view.wall(step.start_s)} pours {litres(step.poured_L)} in {length(step.seconds)}; "
                f"with the line to cool it takes {length(needed)}.",
                value=float(step.seconds),
                least=needed,
                unit="s",
                at_s=step.end_s,
                step=step.number,
                subject=TRANSFER,
                mend=f"end at {view.wall(step.start_s + needed)}",
            )


@STOCK.plan
def transfer_stock(view: PlanView) -> Iterator[Finding]:
    """What is drawn is in stock: the week's stock, what was delivered until then, less what was drawn before."""
    drawn = 0.0
    short = False
    for step in view.steps:
        if step.drawn_L <= 0:
            continue
        there = view.stored_L(step.start_s) - drawn
        drawn += step.drawn_L
        was_short, short = short, step.drawn_L > there + EXACT_L
        if short and not was_short:
            missing = step.drawn_L - there
            arrival = next((at for at, _ in view.deliveries if view.stored_L(at) >= drawn - EXACT_L), None)
            yield STOCK.finding(
                f"The transfer at {view.wall(step.start_s)} draws {litres(step.drawn_L)}; "
                f"{litres(max(0.0, there))} are there.",
                value=step.drawn_L,
                most=there,
                unit="L",
                at_s=step.start_s,
                step=step.number,
                subject=TRANSFER,
                mend=f"order {litres(missing)} more"
                if arrival is None
                else f"transfer after the delivery {view.wall(arrival)}",
            )


@DRAWN.plan
def transfer_book(view: PlanView) -> Iterator[Finding]:
    """Drawn = line loss + poured / efficiency, the stock falls by it, and nothing is poured but by transfers."""
    drawn = 0.0
    for step in view.steps:
        own = 0.0
        if step.service == TRANSFER and view.bath is not None:
            rules = view.bath.transfer
            own = rules.line_loss_L + step.poured_L / (rules.efficiency_percent / 100)
        elif step.poured_L:
            yield DRAWN.finding(
                f"{step.label}: {litres(step.poured_L)} are poured {view.wall(step.start_s)}, and it is no transfer.",
                value=step.poured_L,
                most=0.0,
                unit="L",
                at_s=step.start_s,
                step=step.number,
                mend="pour in a transfer",
            )
        yield from _equal(view, step, "drawn", step.drawn_L, own)
        drawn += step.drawn_L
        if step.stock_after_L is not None:
            books = [view.stored_L(second) - drawn for second in (step.start_s, step.end_s)]
            claimed = step.stock_after_L
            own = min(books, key=lambda book: abs(book - claimed))
            yield from _equal(view, step, "left in stock", claimed, own)


def _equal(view: PlanView, step: Step, what: str, claimed: float, own: float) -> Iterator[Finding]:
    if abs(claimed - own) > EXACT_L:
        yield DRAWN.finding(
            f"{step.label}, {view.wall(step.start_s)}: {own:.4f} L are {what}; the plan says {claimed:.4f} L.",
            value=claimed,
            least=own if claimed < own else None,
            most=own if claimed > own else None,
            unit="L",
            at_s=step.start_s,
            step=step.number,
            subject=step.service,
            mend=f"{own:.6f} L",
        )
