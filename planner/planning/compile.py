"""Compile a week into the optimiser's problem: states become places, takes and services nodes, moves arcs."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from planner.calendars import Calendar, both
from planner.clock import Clock
from planner.files import Request
from planner.files.level import litres_at
from planner.files.start import end_state, start_state
from planner.moves import Lines, Needs, Setup, Stretch, rate_L_per_s, setup_of, stretch
from planner.moves.stretch import held
from planner.moves.table import CHANGE, CLOSE, OPEN, move_table
from planner.optimise.problem import Blocks, Calendars, Ints, Problem, Reservoirs, Services
from planner.plan import Coil, CoilMode, State
from planner.planning.people import Availability
from planner.planning.services import SERVICES, Service, resting_state
from planner.takes import Impossible, Take, context_of, expand, precedence

HELIUM, STOCK = 0, 1
POINTS_A_PRIORITY = 100
QUIET = "quiet time"


@dataclass(frozen=True, slots=True)
class TakeNode:
    """A take done in one of its ways."""

    take: int
    way: int


@dataclass(frozen=True, slots=True)
class QuietNode:
    """A neighbour's quiet time that wants the field low: the rig rests at zero field through it."""

    name: str
    stretch: Stretch
    calendar: Calendar


Node = TakeNode | QuietNode | Service | None
"""What a node of the problem stands for; None for start and end."""


@dataclass(frozen=True)
class Compiled:
    """The problem with what its numbers stand for. ``nodes[n]`` is node n of the problem."""

    request: Request
    setup: Setup
    lines: Lines
    availability: Availability
    takes: list[Take]
    impossible: list[Impossible]
    nodes: list[Node]
    states: list[State]
    entry: list[int]
    exit: list[int]
    problem: Problem
    recovering: bool
    points: list[int] = field(default_factory=list)


def begins_below_a_line(request: Request) -> bool:
    """Whether the week's first state already breaks a helium line."""
    bath, level = request.rig.bath, request.week.present.level_percent
    if bath is None or level is None:
        return False
    return litres_at(bath, level) < Lines(request.rig).stay_L(start_state(request.week, request.rig).coil) - 1e-9


def compile_week(request: Request) -> Compiled:
    """The optimiser's problem for a week."""
    recovering = begins_below_a_line(request)
    lines = Lines(request.rig, recovering)
    availability = Availability(request.week)
    context = context_of(request, lines)
    takes, impossible = expand(context)
    services = [service for make in SERVICES.values() for service in make(context, availability, takes)]
    quiet = list(_quiet_nodes(request, lines, resting_state(context, Coil())))

    builder = _Builder(availability, request, lines)
    builder.add_node(None, start_state(request.week, request.rig), (), ())
    builder.add_node(None, end_state(request.week, request.rig), (), ())
    for at, take in enumerate(takes):
        window = availability.windows(take.ask, take.user)
        for number, way in enumerate(take.alternatives):
            builder.add_node(TakeNode(at, number), way.entry, way.stretches, (at,), window, way.exit)
    for at, silence in enumerate(quiet, len(takes)):
        builder.add_node(silence, silence.stretch.before, (silence.stretch,), (at,), silence.calendar)
    for service in services:
        builder.add_service(service)

    points = _points(takes)
    before_after = np.array(precedence(context, takes), dtype=np.int64).reshape(-1, 2)
    must = [take.ask.must for take in takes] + [True] * len(quiet)
    problem = builder.problem(
        prize=np.array(points + [0] * len(quiet), dtype=np.int64),
        must=np.array(must, dtype=np.bool_),
        before_after=before_after,
        recovering=recovering,
    )
    setup = setup_of(request.rig, request.week)
    return Compiled(
        request,
        setup,
        lines,
        availability,
        takes,
        impossible,
        builder.nodes,
        builder.states,
        builder.entry,
        builder.exit,
        problem,
        recovering,
        points,
    )


def _points(takes: Sequence[Take]) -> list[int]:
    """A target is worth 100 points a step of priority, shared by its takes."""
    count: dict[str, int] = {}
    for take in takes:
        count[take.ask.name] = count.get(take.ask.name, 0) + 1
    return [max(1, round(POINTS_A_PRIORITY * take.ask.priority / count[take.ask.name])) for take in takes]


def _quiet_nodes(request: Request, lines: Lines, resting: State) -> list[QuietNode]:
    """Quiet times that limit the field itself become work that must be done: to rest at zero field."""
    nodes = []
    for row in request.week.quiet:
        if row.forbids == "ramps":
            continue
        begin, finish = request.week.seconds(row)
        begin, finish = max(0, begin), min(request.week.horizon_s, finish)
        if begin < finish:
            label = f"zero field for {row.name}"
            legs = held((), resting.coil, finish - begin, QUIET)
            resting_stretch = stretch(lines, label, resting, resting, legs, pace=QUIET)
            nodes.append(QuietNode(row.name, resting_stretch, ((begin, finish),)))
    return nodes


@dataclass
class _Row:
    """One block before it goes into arrays."""

    seconds: int
    calendar: int
    litres: float
    least_start_L: float
    wait_ok: bool
    wait_L_per_s: float
    stay_L: float


class _Builder:
    """Collects nodes and calendars, then lays them out as arrays."""

    def __init__(self, availability: Availability, request: Request, lines: Lines) -> None:
        self._availability = availability
        self._request = request
        self._lines = lines
        self._reservoirs = 0 if request.rig.bath is None else 2
        self._places: dict[tuple[object, ...], int] = {}
        self._calendars: dict[Calendar, int] = {availability.always: 0}
        self._rows: list[list[_Row]] = []
        self._covers: list[tuple[int, ...]] = []
        self.nodes: list[Node] = []
        self.states: list[State] = []
        self.entry: list[int] = []
        self.exit: list[int] = []

    def place(self, state: State) -> int:
        """The place of a state; light history and fills make no difference to moves."""
        key = (state.coil, state.stage, state.gates_V)
        if key not in self._places:
            self._places[key] = len(self.states)
            self.states.append(state)
        return self._places[key]

    def calendar(self, intervals: Calendar) -> int:
        """The number of a calendar."""
        return self._calendars.setdefault(intervals, len(self._calendars))

    def add_node(
        self,
        node: Node,
        entry: State,
        stretches: Sequence[Stretch],
        covers: tuple[int, ...],
        window: Calendar | None = None,
        exit_state: State | None = None,
    ) -> None:
        """A node whose first stretch is bound to ``window``; waits may fall between its stretches."""
        rows = []
        for number, part in enumerate(stretches):
            allowed = self._availability.meets(part.needs)
            if number == 0 and window is not None:
                allowed = both(allowed, window)
            coil = part.after.coil
            rows.append(
                _Row(
                    part.seconds,
                    self.calendar(allowed),
                    part.litres,
                    part.least_start_L,
                    wait_ok=True,
                    wait_L_per_s=rate_L_per_s(self._request.rig, coil),
                    stay_L=self._lines.stay_L(coil),
                )
            )
        self._append(node, self.place(entry), self.place(exit_state or entry), rows, covers)

    def add_service(self, service: Service) -> None:
        """A service node: one block; its static loss lies inside a transfer's efficiency."""
        place, coil = self.place(service.state), service.state.coil
        rate, stay = rate_L_per_s(self._request.rig, coil), self._lines.stay_L(coil)
        row = _Row(service.seconds, self.calendar(service.calendar), 0.0, stay, True, rate, stay)
        self._append(service, place, place, [row], ())

    def _append(self, node: Node, entry: int, exit_: int, rows: list[_Row], covers: tuple[int, ...]) -> None:
        self.nodes.append(node)
        self.entry.append(entry)
        self.exit.append(exit_)
        self._rows.append(rows)
        self._covers.append(covers)

    def problem(self, *, prize: Ints, must: np.ndarray, before_after: Ints, recovering: bool) -> Problem:
        """Everything as arrays."""
        rig, count = self._request.rig, self._reservoirs
        arcs = self._arc_blocks(recovering)
        node_blocks = self._node_blocks()
        rates = _filled(np.array([rate_L_per_s(rig, state.coil) for state in self.states]), count)
        stays = _filled(np.array([self._lines.stay_L(state.coil) for state in self.states]), count)
        moving = np.array([isinstance(node, Service) for node in self.nodes], dtype=np.bool_)
        return Problem(
            horizon=self._availability.horizon_s,
            entry=np.array(self.entry, dtype=np.int64),
            exit=np.array(self.exit, dtype=np.int64),
            moving=moving,
            covers=tuple(self._covers),
            node_blocks=node_blocks,
            arc_blocks=arcs,
            place_wait_rate=rates,
            place_wait_min=stays,
            calendars=self._calendar_arrays(),
            reservoirs=self._reservoir_arrays(),
            services=self._service_arrays(),
            prize=prize,
            must=must,
            before_after=before_after,
        )

    def _arc_blocks(self, recovering: bool) -> Blocks:
        setup = setup_of(self._request.rig, self._request.week)
        table = move_table(setup, self._lines, self.states)
        switch = self._request.rig.magnet.switch
        handled = Needs(1, "switch") if switch is not None and switch.attended else Needs()
        attended = self.calendar(self._availability.meets(handled))
        ramping = self.calendar(self._availability.meets(Needs(ramps=True)))
        calendar = np.zeros(table.present.shape, dtype=np.int64)
        calendar[:, :, OPEN] = calendar[:, :, CLOSE] = attended
        calendar[:, :, CHANGE] = np.where(table.ramps[:, :, CHANGE], ramping, 0)
        least = table.least_start_L
        if recovering:  # a run-down from where the week begins is forbidden by no rule
            down = [state.coil.mode is CoilMode.ZERO for state in self.states]
            start = self.entry[Problem.START]
            calendar[start, down, CHANGE] = 0
            least[start, down, :] = 0.0
        order = np.argsort(~table.present, axis=2, kind="stable")

        def packed(values: np.ndarray) -> np.ndarray:
            return np.take_along_axis(np.where(table.present, values, 0), order, axis=2)

        return Blocks(
            count=table.present.sum(axis=2).astype(np.int64),
            seconds=packed(table.seconds),
            calendar=packed(calendar),
            use=_filled(packed(table.litres), self._reservoirs),
            start_min=_filled(packed(least), self._reservoirs),
            end_min=_filled(np.zeros(table.present.shape), self._reservoirs),
            wait_ok=np.ones(table.present.shape, dtype=np.bool_),
            wait_rate=_filled(packed(table.wait_L_per_s), self._reservoirs),
            wait_min=_filled(packed(table.stay_L), self._reservoirs),
        )

    def _node_blocks(self) -> Blocks:
        widest = max((len(rows) for rows in self._rows), default=1)
        shape = (len(self._rows), max(1, widest))
        seconds, calendar = np.zeros(shape, dtype=np.int64), np.zeros(shape, dtype=np.int64)
        litres, least, rate, stay = (np.zeros(shape) for _ in range(4))
        wait_ok = np.ones(shape, dtype=np.bool_)
        for at, rows in enumerate(self._rows):
            for slot, row in enumerate(rows):
                seconds[at, slot], calendar[at, slot], wait_ok[at, slot] = row.seconds, row.calendar, row.wait_ok
                litres[at, slot], least[at, slot] = row.litres, row.least_start_L
                rate[at, slot], stay[at, slot] = row.wait_L_per_s, row.stay_L
        count = self._reservoirs
        return Blocks(
            count=np.array([len(rows) for rows in self._rows], dtype=np.int64),
            seconds=seconds,
            calendar=calendar,
            use=_filled(litres, count),
            start_min=_filled(least, count),
            end_min=_filled(np.zeros(shape), count),
            wait_ok=wait_ok,
            wait_rate=_filled(rate, count),
            wait_min=_filled(stay, count),
        )

    def _calendar_arrays(self) -> Calendars:
        rows = [interval for calendar in self._calendars for interval in calendar]
        lengths = [len(calendar) for calendar in self._calendars]
        flat = np.array(rows, dtype=np.int64).reshape(-1, 2)
        first = np.concatenate([[0], np.cumsum(lengths)]).astype(np.int64)
        return Calendars(first, flat[:, 0].copy(), flat[:, 1].copy())

    def _reservoir_arrays(self) -> Reservoirs:
        bath, week = self._request.rig.bath, self._request.week
        if bath is None or week.present.level_percent is None:
            none, numbers = np.zeros(0), np.zeros(0, dtype=np.int64)
            return Reservoirs(none, none, none, numbers, numbers, none)
        arrivals = _arrivals(week.clock, self._request)
        coming = sum(litres for _, litres in arrivals)
        return Reservoirs(
            level=np.array([litres_at(bath, week.present.level_percent), float(week.helium.stock_L)]),
            capacity=np.array([float(bath.calibration[-1].volume_L), week.helium.stock_L + coming]),
            price=np.array([week.objective.hours_per_litre * 3600.0, 0.0]),
            arrival_reservoir=np.full(len(arrivals), STOCK, dtype=np.int64),
            arrival_second=np.array([second for second, _ in arrivals], dtype=np.int64),
            arrival_amount=np.array([litres for _, litres in arrivals], dtype=np.float64),
        )

    def _service_arrays(self) -> Services:
        count = len(self.nodes)
        whole = {name: np.zeros(count, dtype=np.int64) for name in ("uses", "refill", "source")}
        whole["refill"] -= 1
        whole["source"] -= 1
        real = {name: np.zeros(count) for name in ("to", "seconds", "least", "per", "fixed")}
        need_full = np.zeros(count, dtype=np.bool_)
        for at, node in enumerate(self.nodes):
            if not isinstance(node, Service):
                continue
            whole["uses"][at] = node.most_uses
            if node.refill is not None:
                whole["refill"][at], whole["source"][at] = HELIUM, STOCK
                real["to"][at], real["seconds"][at] = node.refill.fill_to_L, node.refill.seconds_per_L
                real["least"][at], need_full[at] = node.refill.least_pour_L, node.refill.need_full
                real["per"][at], real["fixed"][at] = node.refill.drawn_per_L, node.refill.drawn_fixed_L
        return Services(
            max_uses=whole["uses"],
            refill_reservoir=whole["refill"],
            refill_to=real["to"],
            seconds_per_unit=real["seconds"],
            min_pour=real["least"],
            need_full=need_full,
            source=whole["source"],
            source_per_unit=real["per"],
            source_fixed=real["fixed"],
        )


def _filled(values: np.ndarray, reservoirs: int) -> np.ndarray:
    """The bath's numbers as the first of the reservoirs; the stock has none of its own."""
    out = np.zeros((*values.shape, reservoirs))
    if reservoirs:
        out[..., HELIUM] = values
    return out


def _arrivals(clock: Clock, request: Request) -> list[tuple[int, float]]:
    """Deliveries within the week, in order; those before its start count at its start."""
    horizon_s = request.week.horizon_s
    rows = [(clock.second(clock.read(row.at)), float(row.volume_L)) for row in request.week.helium.deliveries]
    return sorted((max(0, second), litres) for second, litres in rows if second < horizon_s)
