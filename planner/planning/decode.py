"""Turn the optimiser's answer into the steps of a plan: the same times, with states, legs, people and levels."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from planner.calendars import Interval
from planner.files.level import litres_at
from planner.moves import Stretch, delayed, held, move, rate_L_per_s, stretch, whole_seconds
from planner.moves.helium import with_litres
from planner.plan import Leg, Step, StepKind
from planner.planning.compile import Compiled, QuietNode, TakeNode
from planner.planning.services import Refill, Service
from planner.takes import Alternative, Take


@dataclass(frozen=True, slots=True)
class Timing:
    """When the optimiser does one node: starts of the blocks that lead to it and of its own, and what it pours."""

    node: int
    arc_starts: tuple[int, ...]
    node_starts: tuple[int, ...]
    poured: float = 0.0


@dataclass(frozen=True, slots=True)
class _Ask:
    """What one step is about, before it has a time."""

    kind: StepKind
    part: Stretch
    service: str = ""
    take: Take | None = None
    way: Alternative | None = None
    poured_L: float = 0.0
    drawn_L: float = 0.0


class _Book:
    """Writes steps one after the other and keeps time, helium, stock and fills."""

    def __init__(self, compiled: Compiled) -> None:
        self._compiled = compiled
        self._rig, self._week = compiled.request.rig, compiled.request.week
        self.steps: list[Step] = []
        self.now_s = 0
        level = self._week.present.level_percent
        self._litres = None if self._rig.bath is None or level is None else litres_at(self._rig.bath, level)
        self._drawn_L = 0.0
        self.state = compiled.states[compiled.entry[0]]

    def wait_until(self, second: int, reason: str) -> None:
        """A wait in the present state; after a parking it is the parking that lasts."""
        seconds = second - self.now_s
        if seconds <= 0:
            return
        legs = with_litres(self._rig, held((), self.state.coil, seconds, reason))
        litres = rate_L_per_s(self._rig, self.state.coil) * seconds
        if self.steps and self.steps[-1].service == "parking" and self.steps[-1].seconds == 0:
            step = self.steps.pop()
            self._write(replace(step, end_s=second, legs=_placed(legs, self.now_s), pace=reason), litres)
        else:
            step = self._step(StepKind.WAIT, "wait", second, _placed(legs, self.now_s))
            self._write(replace(step, pace=reason), litres)

    def write(self, ask: _Ask, start_s: int) -> None:
        """One stretch as a step, with a wait before it if it starts later than now."""
        part = ask.part
        self.wait_until(start_s, self._waits_for(part, start_s))
        if part.seconds == 0 and ask.service != "parking":
            return
        end_s = start_s + part.seconds
        self._drawn_L += ask.drawn_L
        step = replace(
            self._step(ask.kind, part.label, end_s, _placed(part.legs, start_s)),
            after=replace(part.after, light=self.state.light, fills=self.state.fills),
            pace=part.pace,
            service=ask.service,
            attended=part.needs.people > 0,
            people=self._people(part, start_s, end_s),
            poured_L=ask.poured_L,
            drawn_L=ask.drawn_L,
        )
        if ask.poured_L:
            step = replace(step, after=replace(step.after, fills=replace(step.after.fills, helium_s=end_s)))
        if ask.take is not None and ask.way is not None:
            step = _about(step, ask.take, ask.way)
        self._write(step, part.litres)

    def _step(self, kind: StepKind, label: str, end_s: int, legs: tuple[Leg, ...]) -> Step:
        return Step(len(self.steps) + 1, kind, label, self.now_s, end_s, self.state, self.state, legs)

    def _write(self, step: Step, litres: float) -> None:
        before = self._litres
        if self._litres is not None:
            self._litres = self._litres - litres + step.poured_L
        self.steps.append(
            replace(
                step,
                number=len(self.steps) + 1,
                helium_before_L=before,
                helium_after_L=self._litres,
                stock_after_L=self._stock(step.end_s),
            )
        )
        self.now_s, self.state = step.end_s, step.after

    def _stock(self, second: int) -> float | None:
        if self._litres is None:
            return None
        helium, clock = self._week.helium, self._week.clock
        arrived = sum(row.volume_L for row in helium.deliveries if clock.second(clock.read(row.at)) <= second)
        return helium.stock_L + arrived - self._drawn_L

    def _waits_for(self, part: Stretch, start_s: int) -> str:
        if part.needs.people and not _inside(
            self._compiled.availability.staffed, self.now_s, self.now_s + part.seconds
        ):
            return "until staff are there"
        quiet = self._compiled.availability.no_ramps
        if part.needs.ramps and any(begin < start_s and finish > self.now_s for begin, finish in quiet):
            return "until the quiet time ends"
        if part.needs.ramps or part.label in ("change", "open switch", "close switch"):
            return "until what follows may begin"
        return "until its window opens"

    def _people(self, part: Stretch, start_s: int, end_s: int) -> tuple[str, ...]:
        needs = part.needs
        if needs.people == 0:
            return ()
        roster = self._compiled.availability.present(needs.training, start_s, end_s)
        if len(roster) >= needs.people:
            return tuple(roster[: needs.people])
        role = f"trained for {needs.training}" if needs.training else "staff"
        return (f"{needs.people} × {role}",)


def _inside(calendar: Sequence[Interval], begin: int, finish: int) -> bool:
    return any(a <= begin and finish <= b for a, b in calendar)


def _placed(legs: tuple[Leg, ...], start_s: int) -> tuple[Leg, ...]:
    return delayed(legs, start_s)


def _about(step: Step, take: Take, way: Alternative) -> Step:
    return replace(
        step,
        target=take.ask.name,
        take=take.name,
        user=take.user,
        sample=take.ask.sample,
        direction=way.direction,
        details=take.details,
        notes=take.notes,
    )


def steps_of(compiled: Compiled, timings: Sequence[Timing]) -> tuple[Step, ...]:
    """The steps of a plan from second 0 to the end of the week; the last timing is that of the end node."""
    book = _Book(compiled)
    here = compiled.states[compiled.entry[0]]
    for timing in timings:
        there = compiled.states[compiled.entry[timing.node]]
        parts = move(compiled.setup, compiled.lines, here, there)
        for part, start_s in zip(parts, timing.arc_starts, strict=True):
            book.write(_Ask(StepKind.MOVE, part), start_s)
        for ask, start_s in zip(_asks(compiled, timing), timing.node_starts, strict=True):
            book.write(ask, start_s)
        here = compiled.states[compiled.exit[timing.node]]
    book.wait_until(compiled.request.week.horizon_s, "until the week ends")
    return tuple(_numbered(step for step in book.steps if step.seconds > 0))


def _numbered(steps: Iterator[Step]) -> Iterator[Step]:
    for number, step in enumerate(steps, 1):
        yield replace(step, number=number)


def _asks(compiled: Compiled, timing: Timing) -> Iterator[_Ask]:
    node = compiled.nodes[timing.node]
    if isinstance(node, TakeNode):
        take = compiled.takes[node.take]
        way = take.alternatives[node.way]
        for part in way.stretches:
            yield _Ask(StepKind.TAKE, part, take=take, way=way)
    elif isinstance(node, QuietNode):
        yield _Ask(StepKind.SERVICE, node.stretch, service="quiet")
    elif isinstance(node, Service):
        yield _service(compiled, node, timing.poured)


def _service(compiled: Compiled, service: Service, poured_L: float) -> _Ask:
    refill = service.refill
    seconds = service.seconds
    if refill is not None:
        seconds = pouring_seconds(service, refill, poured_L)
    legs = held((), service.state.coil, seconds, service.label)
    part = stretch(
        compiled.lines,
        service.label,
        service.state,
        service.state,
        legs,
        people=service.people,
        training=service.training,
        pace="line cooling and transfer rate" if refill else "",
    )
    if refill is None:
        return _Ask(StepKind.SERVICE, part, service.name)
    # the static loss of a transfer lies inside its efficiency
    part = replace(part, litres=0.0, legs=tuple(replace(leg, litres=0.0) for leg in part.legs))
    drawn_L = refill.drawn_fixed_L + refill.drawn_per_L * poured_L
    return _Ask(StepKind.SERVICE, part, service.name, poured_L=poured_L, drawn_L=drawn_L)


def pouring_seconds(service: Service, refill: Refill, poured_L: float) -> int:
    """Length of a transfer: the line's cooling, then the litres at their rate, rounded up."""
    return whole_seconds(service.seconds + refill.seconds_per_L * poured_L)
