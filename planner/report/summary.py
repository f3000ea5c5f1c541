"""The summary of a plan for the terminal: what is done when, totals, what was left out, findings, hand orders."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, replace
from itertools import groupby

from rich.console import Console
from rich.table import Table
from rich.text import Text

from planner.clock import WEEKDAYS, Clock
from planner.errors import InputError
from planner.files import Request, Rig, request_of
from planner.files.level import level_at
from planner.plan import LeftOut, Plan, Score, Step, StepKind
from planner.report.findings import findings_table
from planner.report.wording import hours, kelvin, plain, rounded, tesla

CAUTION = (
    "A planning aid: it protects neither magnet nor people. The maker's limits, the rig's interlocks, local codes and "
    "licensed people come first."
)


def summary(plan: Plan, console: Console) -> None:
    """Print the summary of a plan."""
    request = _request(plan)
    rig = request.rig if request else None
    letters = {user.name: user.letter for user in request.week.users} if request else {}
    heading = plain(plan.title, "bold")
    heading.append(" · ").append_text(plain(plan.rig, "not bold"))
    console.print(heading)
    if letters:
        console.print(Text(" · ").join(plain(f"{letter} {name}") for name, letter in letters.items()))
    if plan.recovery:
        console.print(Text("RECOVERY PLAN: runs down, calls people, transfers helium.", "bold"))
    _days(plan, rig, letters, console)
    console.print()
    _totals(plan, console)
    _left_out(plan.left_out, letters, console)
    _section("Findings", console)
    findings_table(plan.findings, plan.clock, console)
    _compared(plan, console)
    console.print()
    console.print(Text(CAUTION, "italic"))


def _request(plan: Plan) -> Request | None:
    """The week and rig, for letters and gauge levels; None where the plan carries no readable files."""
    try:
        return request_of(plan.sources)
    except (InputError, KeyError):
        return None


def _section(name: str, console: Console) -> None:
    console.print()
    console.print(Text(name, "bold underline"))


@dataclass(frozen=True, slots=True)
class Stretch:
    """Takes of one target in a row, or one service: a line of the summary."""

    steps: tuple[Step, ...]

    @property
    def label(self) -> str:
        """The target's name and how many takes, the take's name, or the step's own label."""
        first = self.steps[0]
        if len(self.steps) > 1:
            return f"{first.target} ({len(self.steps)} takes)"
        if decides(first):
            return first.label if first.take in first.label else f"{first.label}: {first.take}"
        return first.take or first.label


def decides(step: Step) -> bool:
    """Whether a step is the pause after a take in which people decide what comes next."""
    return step.label.startswith("look, then decide")


def stretches(steps: Iterable[Step], clock: Clock) -> list[Stretch]:
    """Takes and services in time order; neighbouring takes of one target on one day are one stretch."""
    found: list[Stretch] = []
    for step in steps:
        if step.kind not in (StepKind.TAKE, StepKind.SERVICE):
            continue
        last = found[-1].steps[-1] if found else None
        same = (
            last is not None
            and last.kind == step.kind == StepKind.TAKE
            and bool(step.target)
            and not decides(last)
            and not decides(step)
            and (last.target, last.user, last.attended) == (step.target, step.user, step.attended)
            and clock.moment(last.start_s).date() == clock.moment(step.start_s).date()
        )
        if same:
            found[-1] = replace(found[-1], steps=(*found[-1].steps, step))
        else:
            found.append(Stretch((step,)))
    return found


def _days(plan: Plan, rig: Rig | None, letters: dict[str, str], console: Console) -> None:
    clock = plan.clock
    table = Table(box=None, padding=(0, 2, 0, 0), show_edge=False, header_style="bold")
    table.add_column("time", no_wrap=True)
    table.add_column("what", overflow="fold")
    table.add_column("user", overflow="fold", max_width=16)
    table.add_column("field / T", justify="right", no_wrap=True)
    table.add_column("stage", justify="right", no_wrap=True)
    table.add_column("helium", justify="right", no_wrap=True)
    grouped = groupby(stretches(plan.steps, clock), key=lambda stretch: clock.moment(stretch.steps[0].start_s).date())
    for day, found in grouped:
        table.add_row(Text(f"{WEEKDAYS[day.weekday()]} {day.day}", "bold"))
        for stretch in found:
            table.add_row(*_cells(stretch, clock, rig, letters))
    if table.row_count:
        console.print(table)
    else:
        console.print(Text("No takes and no services."))


def _cells(stretch: Stretch, clock: Clock, rig: Rig | None, letters: dict[str, str]) -> list[Text]:
    first, last = stretch.steps[0], stretch.steps[-1]
    begin, end = clock.moment(first.start_s), clock.moment(last.end_s)
    times = f"{begin:%H:%M}–{end:%H:%M}" + ("+" if end.date() != begin.date() else "")
    what = plain(stretch.label)
    if first.attended:
        what.append(" (attended)")
    fields = [b.coil.field_T[2] for step in stretch.steps for b in (step.before, step.after)]
    fields += [leg.coil[1].field_T[2] for step in stretch.steps for leg in step.legs if leg.coil is not None]
    kelvins = [step.after.stage.temperature_K for step in stretch.steps]
    return [
        Text(times),
        what,
        plain(letters.get(first.user, first.user)),
        Text(_range(min(fields), max(fields), tesla)),
        Text(_range(min(kelvins), max(kelvins), kelvin)),
        Text(_helium(last, rig)),
    ]


def _range(low: float, high: float, write: Callable[[float], str]) -> str:
    first, last = write(low), write(high)
    if first == last:
        return first
    number, _, unit = first.partition(" ")
    return f"{number if last.endswith(unit) else first} … {last}"


def _helium(step: Step, rig: Rig | None) -> str:
    if step.helium_after_L is None:
        return ""
    if rig is None or rig.bath is None:
        return f"{step.helium_after_L:.0f} L"
    return f"{level_at(rig.bath, step.helium_after_L):.0f} %"


def _totals(plan: Plan, console: Console) -> None:
    score = plan.score
    wet = any(step.helium_after_L is not None for step in plan.steps)
    takes = _takes_done(plan)
    transfers = sum(step.poured_L > 0 for step in plan.steps)
    poured_L = sum(step.poured_L for step in plan.steps)
    pour = "transfer pours" if transfers == 1 else "transfers pour"
    console.print(
        Text(
            f"{takes} takes, {score.points} of at most {score.points_bound} points; moving {hours(score.moving_s)}"
            + (f", helium {rounded(score.litres)} L" if wet else "")
            + (f"; {transfers} {pour} {rounded(poured_L)} L" if transfers else "")
            + "."
        )
    )
    console.print(Text(bound_words(score)))


def bound_words(score: Score) -> str:
    """Cost, proven bound and gap in words."""
    cost = f"Cost {score.cost_h:.2f} h (moving hours + {rounded(score.hours_per_litre)} h a litre)"
    if score.proven:
        return f"{cost}: proven best."
    bound = f"none that does this work costs less than {score.cost_bound_h:.2f} h"
    return f"{cost}; {bound}: gap {100 * score.gap:.1f} %, not proven best."


def _left_out(left_out: tuple[LeftOut, ...], letters: dict[str, str], console: Console) -> None:
    """One line a target: how many of its takes are left out, and the nearest miss of the first of them."""
    _section("Left out, and why", console)
    if not left_out:
        console.print(Text("Nothing."))
        return
    table = Table(box=None, padding=(0, 2, 0, 0), show_edge=False, header_style="bold")
    table.add_column("target or take", overflow="fold")
    table.add_column("user", overflow="fold", max_width=16)
    table.add_column("priority", justify="right")
    table.add_column("why (of the first)", overflow="fold")
    for target, items in groupby(left_out, key=lambda item: item.target):
        takes = list(items)
        first = takes[0]
        name = f"{target} ({len(takes)} takes)" if len(takes) > 1 else first.take or target
        user = letters.get(first.user, first.user)
        table.add_row(plain(name), plain(user), str(first.priority), plain(first.reason))
    console.print(table)


def _takes_done(plan: Plan) -> int:
    return sum(step.kind == StepKind.TAKE and not decides(step) for step in plan.steps)


def _compared(plan: Plan, console: Console) -> None:
    """Work that a hand order does not fit comes first; then hours and litres on the takes that both do."""
    if not plan.compared:
        return
    _section("Against orders made by hand, on the takes they fit", console)
    table = Table(box=None, padding=(0, 2, 0, 0), show_edge=False, header_style="bold")
    table.add_column("order", overflow="fold")
    for name in ("takes", "by hand", "this plan", "saved"):
        table.add_column(name, justify="right")
    done = _takes_done(plan)
    for order in plan.compared:
        saved_L = order.litres - order.plan_litres
        table.add_row(
            plain(order.name),
            f"{order.takes} of {done}",
            f"{hours(order.moving_s)}, {order.litres:.1f} L",
            f"{hours(order.plan_moving_s)}, {order.plan_litres:.1f} L",
            f"{hours(order.moving_s - order.plan_moving_s)}, {saved_L:.1f} L".replace("-", "−"),
        )
    console.print(table)
