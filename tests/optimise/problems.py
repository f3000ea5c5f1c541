"""Random problems for tests: seeded, small or middling, every feature of the problem in turn and together."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from planner.optimise.problem import Blocks, Calendars, Problem, Reservoirs, Services


@dataclass(frozen=True)
class Shape:
    """What a random problem is to contain."""

    takes: int = 4
    places: int = 4
    refills: int = 1
    source: bool = False
    need_full: bool = False
    park: bool = False
    second_reservoir: bool = False
    calendars: bool = True
    chains: bool = True
    musts: int = 0
    precedences: int = 0
    merged: bool = False
    room: float = 1.0
    week: bool = False


def draw_shape(rng: np.random.Generator, takes: int) -> Shape:
    """A small shape with features drawn at random."""
    flags = rng.random(8)
    return Shape(
        takes=takes,
        places=int(rng.integers(2, 5)),
        refills=int(flags[0] < 0.75),
        source=bool(flags[1] < 0.5),
        need_full=bool(flags[2] < 0.5),
        park=bool(flags[3] < 0.4),
        second_reservoir=bool(flags[4] < 0.5),
        calendars=bool(flags[5] < 0.8),
        musts=int(rng.integers(0, 3)) if flags[6] < 0.5 else 0,
        precedences=int(rng.integers(0, 3)),
        merged=bool(flags[7] < 0.3),
        room=float(rng.choice([0.2, 0.5, 1.2, 2.0])),
    )


class _BlockTable:
    """Blocks of an array of owners, filled one owner at a time."""

    def __init__(self, owners: tuple[int, ...], most: int, reservoirs: int) -> None:
        self.count = np.zeros(owners, dtype=np.int64)
        self.seconds = np.zeros((*owners, most), dtype=np.int64)
        self.calendar = np.zeros((*owners, most), dtype=np.int64)
        self.wait_ok = np.ones((*owners, most), dtype=np.bool_)
        self.rates = {
            name: np.zeros((*owners, most, reservoirs))
            for name in ("use", "start_min", "end_min", "wait_rate", "wait_min")
        }

    def build(self) -> Blocks:
        return Blocks(self.count, self.seconds, self.calendar, wait_ok=self.wait_ok, **self.rates)


def _calendars(rng: np.random.Generator, shape: Shape, horizon: int) -> Calendars:
    """Calendar 0 is any time, 1 days, 2 a part of the days, 3 nights."""
    day = horizon // 7 if shape.week else max(horizon // int(rng.integers(2, 5)), 40)
    rows: list[list[tuple[int, int]]] = [[(0, horizon)], [], [], []]
    if not shape.calendars:
        rows = [[(0, horizon)]] * 4
    else:
        for begin in range(0, horizon, day):
            morning, evening = begin + day // 6, begin + 2 * day // 3
            rows[1].append((morning, min(evening, horizon)))
            rows[2].append((morning, min(begin + day // 2, horizon)))
            rows[3].append((evening, min(begin + day, horizon)))
        rows = [[(b, f) for b, f in row if f > b] for row in rows]
    flat = [pair for row in rows for pair in row]
    first = np.cumsum([0, *(len(row) for row in rows)])
    pairs = np.array(flat, dtype=np.int64).reshape(-1, 2)
    return Calendars(first.astype(np.int64), pairs[:, 0].copy(), pairs[:, 1].copy())


def random_problem(seed: int, shape: Shape | None = None, takes: int = 4) -> Problem:
    """A random problem; the same seed gives the same problem."""
    rng = np.random.default_rng(seed)
    shape = draw_shape(rng, takes) if shape is None else shape
    R = 1 + int(shape.second_reservoir) + int(shape.source)
    scale = 60 if shape.week else 1
    horizon = 604800 if shape.week else int(shape.room * 90 * (shape.takes + 2))
    P = shape.places + int(shape.refills > 0) + int(shape.park)
    place_of_refill, place_of_park = shape.places, P - 1
    covers, entry, exit_, service_rows = _nodes(rng, shape, place_of_refill, place_of_park)
    N = len(covers)
    node = _BlockTable((N,), 3, R)
    source = R - 1 if shape.source else -1
    waiting = int(shape.source)
    base = rng.uniform(0.001, 0.006, size=(P, R)) if not shape.week else rng.uniform(1e-5, 2e-5, size=(P, R))
    if shape.week:
        base[:, 1:] *= 0.2
    else:
        base[:, 0] *= rng.choice([0.5, 1.0, 3.0])
    light = 0.1 if shape.week else 1.0
    place_rate = base * rng.choice([1.0, 1.0, 2.5], size=(P, 1))
    if waiting:
        place_rate[:, -1] = rng.choice([0.0, 0.0005 / scale])
    full = 10.0
    line = float(rng.uniform(0.5, 2.0))
    place_min = np.zeros((P, R))
    place_min[:, 0] = line / 2
    for n in range(2, N):
        _fill_node(rng, node, n, shape, scale, R, line, bool(service_rows.get(n)))
    arcs = _BlockTable((P, P), 3, R)
    for a in range(P):
        for b in range(P):
            count = int(rng.integers(0, 4)) if a != b else 0
            arcs.count[a, b] = count
            for k in range(count):
                arcs.seconds[a, b, k] = int(rng.integers(2, 25)) * scale
                arcs.calendar[a, b, k] = int(rng.choice([0, 0, -1, 1, 2]))
                arcs.rates["use"][a, b, k] = light * rng.uniform(0, 0.3, R)
                arcs.rates["wait_rate"][a, b, k] = rng.choice([0.5, 1.0, 3.0]) * base[a]
                if rng.random() < 0.3:
                    arcs.rates["start_min"][a, b, k, 0] = line
                if rng.random() < 0.2:
                    arcs.rates["end_min"][a, b, k, 0] = line * 0.8
                if rng.random() < 0.2:
                    arcs.rates["wait_min"][a, b, k, 0] = line
    musts = np.zeros(shape.takes, dtype=np.bool_)
    musts[rng.permutation(shape.takes)[: shape.musts]] = True
    pairs = {
        tuple(sorted(rng.choice(shape.takes, 2, replace=False).tolist()))
        for _ in range(shape.precedences if shape.takes > 1 else 0)
    }
    level = rng.uniform(7.0 if shape.week else 4.0, full, R)
    price = np.full(R, 15.0 * scale)
    arrivals: tuple[list[int], list[int], list[float]] = ([], [], [])
    if shape.source:
        price[-1] = 0.0
        level[-1] = rng.uniform(0.0, 10.0)
        for second in sorted(rng.integers(0, horizon, size=2).tolist()):
            arrivals[0].append(source)
            arrivals[1].append(second)
            arrivals[2].append(float(rng.uniform(2.0, 8.0)))
    return Problem(
        horizon=horizon,
        entry=np.array(entry, dtype=np.int64),
        exit=np.array(exit_, dtype=np.int64),
        moving=np.array([kind == "park" for kind in (service_rows.get(n, "") for n in range(N))]),
        covers=tuple(covers),
        node_blocks=node.build(),
        arc_blocks=arcs.build(),
        place_wait_rate=place_rate,
        place_wait_min=place_min,
        calendars=_calendars(rng, shape, horizon),
        reservoirs=Reservoirs(
            level,
            np.full(R, full),
            price,
            np.array(arrivals[0], dtype=np.int64),
            np.array(arrivals[1], dtype=np.int64),
            np.array(arrivals[2], dtype=np.float64),
        ),
        services=_services(rng, shape, N, service_rows, full, source, scale),
        prize=rng.integers(1, 6, size=shape.takes).astype(np.int64),
        must=musts,
        before_after=np.array(sorted(pairs), dtype=np.int64).reshape(-1, 2),
    )


def _nodes(
    rng: np.random.Generator, shape: Shape, refill_place: int, park_place: int
) -> tuple[list[tuple[int, ...]], list[int], list[int], dict[int, str]]:
    covers: list[tuple[int, ...]] = [(), ()]
    start, end = rng.integers(0, shape.places, 2).tolist()
    entry, exit_ = [start, end], [start, end]
    for take in range(shape.takes):
        a, b = rng.integers(0, shape.places, 2).tolist()
        covers.append((take,))
        entry.append(a)
        exit_.append(b)
        if rng.random() < 0.5:
            covers.append((take,))
            entry.append(b)
            exit_.append(a)
    if shape.merged and shape.takes > 1:
        covers.append((0, 1))
        a, b = rng.integers(0, shape.places, 2).tolist()
        entry.append(a)
        exit_.append(b)
    services: dict[int, str] = {}
    for kind, place in [("refill", refill_place)] * shape.refills + [("park", park_place)] * int(shape.park):
        services[len(covers)] = kind
        covers.append(())
        entry.append(place)
        exit_.append(place)
    return covers, entry, exit_, services


def _fill_node(
    rng: np.random.Generator, node: _BlockTable, n: int, shape: Shape, scale: int, R: int, line: float, service: bool
) -> None:
    count = 1 if service else int(rng.integers(1, 4))
    node.count[n] = count
    for k in range(count):
        node.seconds[n, k] = int(rng.integers(5, 25)) * scale * (3 if shape.week and not service else 1)
        node.calendar[n, k] = int(rng.choice([0, -1, 1, 2, 3])) if not service else int(rng.choice([-1, 1]))
        node.rates["use"][n, k] = (0.05 if shape.week else 1.0) * rng.uniform(0, 0.5, R)
        node.rates["wait_rate"][n, k] = (0.002 if shape.week else 1.0) * rng.uniform(0.002, 0.03, R)
        if shape.chains:
            node.wait_ok[n, k] = rng.random() < 0.6
        if rng.random() < 0.3:
            node.rates["start_min"][n, k, 0] = line
        if rng.random() < 0.3:
            node.rates["end_min"][n, k, 0] = line * 0.7
        if rng.random() < 0.3:
            node.rates["wait_min"][n, k, 0] = line * 0.9
    if shape.source:
        node.rates["use"][n, :, R - 1] = 0.0
        node.rates["wait_rate"][n, :, R - 1] = 0.0


def _services(
    rng: np.random.Generator, shape: Shape, N: int, rows: dict[int, str], full: float, source: int, scale: int
) -> Services:
    uses = np.zeros(N, dtype=np.int64)
    refill = np.full(N, -1, dtype=np.int64)
    values = {name: np.zeros(N) for name in ("to", "spu", "least", "per", "fixed")}
    for n, kind in rows.items():
        uses[n] = 12 if shape.week else 1 + int(rng.integers(0, 2)) if kind == "refill" else 1
        if kind != "refill":
            continue
        refill[n] = 0
        values["to"][n] = full * 0.95
        values["spu"][n] = rng.uniform(0.5, 3.0) * scale
        values["least"][n] = rng.uniform(0.2, 2.0)
        values["per"][n] = rng.uniform(1.0, 1.5)
        values["fixed"][n] = rng.uniform(0.0, 1.0)
    return Services(
        max_uses=uses,
        refill_reservoir=refill,
        refill_to=values["to"],
        seconds_per_unit=values["spu"],
        min_pour=values["least"],
        need_full=np.full(N, shape.need_full),
        source=np.where(refill >= 0, source, -1),
        source_per_unit=values["per"],
        source_fixed=values["fixed"],
    )
