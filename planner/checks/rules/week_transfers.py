"""Whether a week has transfers at all: hours, people, stock."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.rules.transfers import HOURS, PEOPLE, STOCK
from planner.checks.spans import shared
from planner.checks.week_view import WeekView
from planner.checks.wording import length, litres
from planner.plan import Finding, Kind


def _longest(spans: tuple[tuple[int, int], ...]) -> int:
    return max((end - begin for begin, end in spans), default=0)


@HOURS.week
def hours_for_a_transfer(view: WeekView) -> Iterator[Finding]:
    """The week has staffed transfer hours long enough for the smallest transfer."""
    if view.bath is None:
        return
    longest = _longest(shared(view.transfer_hours, ((0, view.horizon_s),)))
    if longest < view.least_transfer_s - 1e-6:
        yield HOURS.finding(
            f"No transfer is possible before {view.wall(view.horizon_s)}: the smallest lasts "
            f"{length(view.least_transfer_s)}, "
            f"and the longest stretch of staffed transfer hours is {length(longest)}.",
            kind=Kind.WARN,
            value=longest / 60,
            least=view.least_transfer_s / 60,
            unit="min",
            mend=f"{length(view.least_transfer_s - longest)} more of staffed transfer hours",
        )


@PEOPLE.week
def people_for_a_transfer(view: WeekView) -> Iterator[Finding]:
    """Enough people of the roster are trained for transfers, and there at once in transfer hours."""
    if view.bath is None or not view.week.people:
        return
    rules = view.bath.transfer
    trained = view.trained(rules.training)
    hours = _longest(shared(view.transfer_hours, ((0, view.horizon_s),)))
    longest = _longest(shared(view.transfer_spans, ((0, view.horizon_s),)))
    if hours < view.least_transfer_s - 1e-6 or longest >= view.least_transfer_s - 1e-6:
        return
    names = f" ({', '.join(trained)})" if trained else ""
    few = len(trained) < rules.people
    text = f"{len(trained)} of the {rules.people} people a transfer needs are trained for it{names}"
    if not few:
        text = (
            f"The {rules.people} people a transfer needs are never there together for {length(view.least_transfer_s)}"
        )
    yield PEOPLE.finding(
        f"{text}: no transfer is possible before {view.wall(view.horizon_s)}.",
        kind=Kind.WARN,
        value=float(len(trained)) if few else longest / 60,
        least=float(rules.people) if few else view.least_transfer_s / 60,
        unit="people" if few else "min",
        mend="train or ask one more person" if few else "let their hours overlap",
    )


@STOCK.week
def stock_for_a_transfer(view: WeekView) -> Iterator[Finding]:
    """Stock and deliveries reach for the smallest transfer."""
    if view.bath is None:
        return
    rules = view.bath.transfer
    needed = rules.line_loss_L + rules.least_pour_L / (rules.efficiency_percent / 100)
    there = view.stored_L(view.horizon_s)
    if there < needed - 1e-6:
        yield STOCK.finding(
            f"The smallest transfer draws {litres(needed)}, and stock and deliveries up to "
            f"{view.wall(view.horizon_s)} are "
            f"{litres(there)}: no transfer is possible.",
            kind=Kind.WARN,
            value=there,
            least=needed,
            unit="L",
            mend=f"order {litres(needed - there)} or more",
        )
