"""Why a take was left out, and why there is no plan, in words with numbers."""

from __future__ import annotations

from planner.files.level import level_at
from planner.optimise.misses import Miss, Reason
from planner.optimise.result import Result
from planner.plan import LeftOut
from planner.planning.compile import HELIUM, Compiled, QuietNode, TakeNode


def left_out(compiled: Compiled, result: Result, *, seconds: float) -> tuple[LeftOut, ...]:
    """Targets that the rig cannot do, then takes that found no place, each with its reason.

    Each take is tried at every place of the order, for ``seconds`` in all.
    """
    from planner.optimise import explain

    impossible = [LeftOut(item.ask.name, "", item.user, item.ask.priority, item.reason) for item in compiled.impossible]
    if not result.left_out:
        return tuple(impossible)
    missed = [
        _left_out(compiled, miss)
        for miss in explain(compiled.problem, result.order, seconds=seconds)
        if miss.take < len(compiled.takes)
    ]
    return (*impossible, *missed)


def _left_out(compiled: Compiled, miss: Miss) -> LeftOut:
    take = compiled.takes[miss.take]
    return LeftOut(take.ask.name, take.name, take.user, take.ask.priority, reason_text(compiled, miss))


def reason_text(compiled: Compiled, miss: Miss) -> str:
    """The nearest miss of a take as a sentence."""
    text = _nearest(compiled, miss)
    if miss.reason in (Reason.NO_WAY, Reason.FITS, Reason.NOT_TRIED):
        return text
    return f"{text}; alone it would fit, so it gives way to other work" if miss.alone else text


def _nearest(compiled: Compiled, miss: Miss) -> str:
    if miss.reason is Reason.ROOM:
        needs = duration_text(miss.needed_s)
        gap = duration_text(miss.gap_s)
        late = f"; the week would end {duration_text(miss.late_s)} late" if miss.late_s else ""
        return f"no room: needs {needs} incl. moves, longest idle time {gap}{late}"
    if miss.reason is Reason.WINDOW:
        needs = duration_text(miss.needed_s) if miss.needed_s else _own_duration(compiled, miss.take)
        return f"no window: needs {needs} within its own hours, staff and quiet times, and none of them has that left"
    if miss.reason is Reason.LEVEL:
        return f"helium: {_short(compiled, miss)} at {_when(compiled, miss.moment)} where it comes nearest"
    if miss.reason is Reason.SOURCE:
        return f"helium: the stock lacks {miss.short:.2g} L for the transfer it needs at {_when(compiled, miss.moment)}"
    if miss.reason is Reason.PRECEDENCE:
        return f'comes after "{_name(compiled, miss.before)}", which is left out too'
    if miss.reason is Reason.FITS:
        return "fits as it is: the search ended before it was put in; give it more seconds"
    if miss.reason is Reason.NOT_TRIED:
        return "left out for work worth more; the time ended before every place was tried"
    return "no way of doing it is left"


def _short(compiled: Compiled, miss: Miss) -> str:
    bath = compiled.request.rig.bath
    if bath is None or miss.reservoir != HELIUM:
        return f"short by {miss.short:.2g} L"
    percent = level_at(bath, bath.calibration[-1].volume_L) - level_at(bath, bath.calibration[-1].volume_L - miss.short)
    return f"short by {miss.short:.2g} L ({percent:.2g} %) of a line"


def _own_duration(compiled: Compiled, take: int) -> str:
    ways = compiled.takes[take].alternatives
    return duration_text(min(sum(part.seconds for part in way.stretches) for way in ways))


def _name(compiled: Compiled, take: int) -> str:
    if take < len(compiled.takes):
        return compiled.takes[take].name
    quiet = [node for node in compiled.nodes if isinstance(node, QuietNode)]
    return quiet[take - len(compiled.takes)].name


def _when(compiled: Compiled, second: int) -> str:
    return f"{compiled.availability.moment(second):%a %H:%M}"


def why_no_plan(compiled: Compiled, result: Result) -> str:
    """What stands in the way of a plan: the musts that found no place, with what was tried."""
    from planner.optimise import explain

    cannot = [f'"{item.ask.name}": {item.reason}' for item in compiled.impossible if item.ask.must]
    if result.objective is None:
        reasons = [_no_end(compiled)]
    else:
        musts = set(result.missing_musts)
        misses = {miss.take: miss for miss in explain(compiled.problem, result.order, seconds=5.0)}
        reasons = [f'"{_name(compiled, take)}": {reason_text(compiled, misses[take])}' for take in sorted(musts)]
    proof = "No order of work can" if result.proven_infeasible else "No order of work was found that would"
    lines = "\n".join(f"  {reason}" for reason in (*cannot, *reasons))
    return f"{proof} do everything that must be done and keep every limit.\n{lines}"


def _no_end(compiled: Compiled) -> str:
    """Why not even the week's end can be reached."""
    week, rig = compiled.request.week, compiled.request.rig
    if rig.bath is None:
        return "The wanted end state cannot be reached by the end of the week."
    transfers = [node for node in compiled.nodes if not isinstance(node, (TakeNode, QuietNode)) and node is not None]
    if any(service.name == "helium transfer" for service in transfers):
        return (
            "Helium does not last to the end of the week in the wanted end state, with all transfers that staff, hours "
            "and stock allow."
        )
    present = week.present.level_percent
    return (
        f"Helium does not last to the end of the week from {present:g} %, and no transfer is possible: no staffed "
        "transfer hours, too few trained people, or no stock."
    )


def duration_text(seconds: float) -> str:
    """A duration as people say it: "3 h 20 min", "40 min", "50 s"."""
    whole = round(seconds)
    if whole < 60:
        return f"{whole} s"
    hours, minutes = divmod(round(whole / 60), 60)
    if not hours:
        return f"{minutes} min"
    return f"{hours} h {minutes:02d} min" if minutes else f"{hours} h"
