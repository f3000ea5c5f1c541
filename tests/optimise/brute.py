"""Brute force and simulator, written from the statement in `planner.optimise.problem` alone.

Shares nothing with the optimiser but the `Problem` dataclasses: its own calendars, levels, waits and enumeration.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from planner.optimise.problem import Problem

EPS = 1e-9


class CannotError(Exception):
    """The order breaks a rule; the message says which."""


@dataclass
class Piece:
    """One block as stated: seconds, calendar, use, rules."""

    seconds: int
    calendar: int
    use: list[float]
    start_min: list[float]
    end_min: list[float]
    wait_ok: bool
    wait_rate: list[float]
    wait_min: list[float]


@dataclass
class Now:
    """Where a simulation stands."""

    time: int
    place: int
    level: list[float]
    moving: int = 0
    used: list[float] = field(default_factory=list)  # burnt or lost, per reservoir
    starts: list[int] = field(default_factory=list)
    levels: list[list[float]] = field(default_factory=list)
    poured: list[float] = field(default_factory=list)

    def copy(self) -> Now:
        return Now(
            self.time,
            self.place,
            list(self.level),
            self.moving,
            list(self.used),
            list(self.starts),
            list(self.levels),
            list(self.poured),
        )


class Simulator:
    """The statement, carried out."""

    def __init__(self, problem: Problem) -> None:
        self.p = problem
        self.R = len(problem.reservoirs.level)
        self.price = problem.reservoirs.price.tolist()
        c = problem.calendars
        self.intervals = [
            [(int(c.begin[i]), int(c.finish[i])) for i in range(c.first[k], c.first[k + 1])]
            for k in range(len(c.first) - 1)
        ]
        r = problem.reservoirs
        self.arrivals = [
            (int(a), int(s), float(x))
            for a, s, x in zip(r.arrival_reservoir, r.arrival_second, r.arrival_amount, strict=True)
        ]
        places = len(problem.place_wait_rate)
        self.arcs = {(a, b): self._pieces(problem.arc_blocks, (a, b)) for a in range(places) for b in range(places)}
        self.own = [self._pieces(problem.node_blocks, (n,)) for n in range(problem.nodes)]
        self.place_rate = problem.place_wait_rate.tolist()
        self.place_min = problem.place_wait_min.tolist()

    @staticmethod
    def _pieces(blocks, owner) -> list[Piece]:  # type: ignore[no-untyped-def]
        return [
            Piece(
                int(blocks.seconds[owner][k]),
                int(blocks.calendar[owner][k]),
                blocks.use[owner][k].tolist(),
                blocks.start_min[owner][k].tolist(),
                blocks.end_min[owner][k].tolist(),
                bool(blocks.wait_ok[owner][k]),
                blocks.wait_rate[owner][k].tolist(),
                blocks.wait_min[owner][k].tolist(),
            )
            for k in range(int(blocks.count[owner]))
        ]

    def initial(self) -> Now:
        level = self.p.reservoirs.level.tolist()
        for reservoir, second, amount in self.arrivals:
            if second <= 0:
                level[reservoir] += amount
        return Now(0, int(self.p.exit[0]), level, used=[0.0] * self.R)

    def earliest(self, calendar: int, moment: int, seconds: int) -> int:
        if calendar < 0:
            return moment
        starts = [max(moment, b) for b, f in self.intervals[calendar] if max(moment, b) + seconds <= f]
        if not starts:
            raise CannotError("calendar")
        return min(starts)

    def latest(self, calendar: int, finish: int, seconds: int) -> int:
        if calendar < 0:
            return finish - seconds
        return max(min(finish, f) - seconds for b, f in self.intervals[calendar] if min(finish, f) - seconds >= b)

    def came(self, reservoir: int, after: int, until: int) -> float:
        return sum(x for r, s, x in self.arrivals if r == reservoir and after < s <= until)

    def chain(self, pieces: list[Piece], at: int) -> list[int]:
        """Starts of a node's blocks from ``at`` on; blocks without a wait between them start as one."""
        groups: list[list[Piece]] = [[]]
        for k, piece in enumerate(pieces):
            groups[-1].append(piece)
            if piece.wait_ok and k < len(pieces) - 1:
                groups.append([])
        starts: list[int] = []
        for group in groups:
            offsets = [sum(q.seconds for q in group[:k]) for k in range(len(group))]
            candidates = {at}
            for piece, offset in zip(group, offsets, strict=True):
                if piece.calendar >= 0:
                    candidates |= {b - offset for b, _ in self.intervals[piece.calendar] if b - offset >= at}
            fitting = [
                t
                for t in sorted(candidates)
                if all(self.fits(q.calendar, t + o, q.seconds) for q, o in zip(group, offsets, strict=True))
            ]
            if not fitting:
                raise CannotError("calendar")
            starts += [fitting[0] + o for o in offsets]
            at = fitting[0] + sum(q.seconds for q in group)
        return starts

    def fits(self, calendar: int, start: int, seconds: int) -> bool:
        if calendar < 0:
            return True
        return any(b <= start and start + seconds <= f for b, f in self.intervals[calendar])

    def priced(self, rate: list[float]) -> float:
        return sum(p * r for p, r in zip(self.price, rate, strict=True))

    def do(self, now: Now, node: int) -> Now:
        """The state after going to ``node`` and doing it."""
        target = int(self.p.entry[node])
        arc, own = self.arcs[now.place, target], self.own[node]
        starts = []
        at = now.time
        for piece in arc:
            starts.append(self.earliest(piece.calendar, at, piece.seconds))
            at = starts[-1] + piece.seconds
        refills = self.p.services.refill_reservoir[node] >= 0
        if refills:
            node_starts = [self.refill_moment(now, node, arc, starts, at)]
        else:
            node_starts = self.chain(own, at) if own else []
        keep = node_starts[0] if own else at
        shifted = self.shift(now, arc, starts, target, keep)
        if shifted is not None:
            try:
                return self.run(now, node, arc, shifted, own, node_starts)
            except CannotError:
                pass
        return self.run(now, node, arc, starts, own, node_starts)

    def gaps(self, now: Now, arc: list[Piece], starts: list[int], target: int, keep: int):  # type: ignore[no-untyped-def]
        """(begin, end, rate) of every gap of an arc."""
        begins = [now.time] + [s + q.seconds for s, q in zip(starts, arc, strict=True)]
        ends = [*starts, keep]
        rates = [self.place_rate[now.place]]
        rates += [q.wait_rate for q in arc[:-1]] + ([self.place_rate[target]] if arc else [])
        return list(zip(begins, ends, rates, strict=True))

    def shift(self, now: Now, arc: list[Piece], starts: list[int], target: int, keep: int) -> list[int] | None:
        if not arc:
            return None
        gaps = self.gaps(now, arc, starts, target, keep)
        rates = [self.priced(rate) for _, _, rate in gaps]
        later = list(starts)
        limit = keep
        for i in reversed(range(len(arc))):
            if min(rates[: i + 1]) < rates[i + 1] - EPS:
                later[i] = max(later[i], self.latest(arc[i].calendar, limit, arc[i].seconds))
            limit = later[i]
        burn = sum(self.priced(rate) * (e - b) for b, e, rate in gaps)
        after = sum(self.priced(rate) * (e - b) for b, e, rate in self.gaps(now, arc, later, target, keep))
        return later if after < burn - EPS else None

    def refill_moment(self, now: Now, node: int, arc: list[Piece], starts: list[int], at: int) -> int:
        s = self.p.services
        reservoir, source = int(s.refill_reservoir[node]), int(s.source[node])
        target = int(self.p.entry[node])
        level = list(now.level)
        for begin, end, rate in self.gaps(now, arc, starts, target, at)[: len(arc)]:
            for r in range(self.R):
                level[r] += self.came(r, begin, end) - rate[r] * (end - begin)
        for piece, start in zip(arc, starts, strict=True):
            for r in range(self.R):
                level[r] += self.came(r, start, start + piece.seconds) - piece.use[r]
        rate = self.place_rate[target if arc else now.place]
        calendar = self.own[node][0].calendar
        moments = {at} | {t for r, t, _ in self.arrivals if r in (reservoir, source) and t > at}
        if calendar >= 0:
            moments |= {b for b, _ in self.intervals[calendar] if b > at}
        for t in sorted(moments):
            if t > self.p.horizon:
                break
            there = [level[r] + self.came(r, at, t) - rate[r] * (t - at) for r in range(self.R)]
            room, have = self.room_and_supply(node, there)
            need = room if s.need_full[node] else float(s.min_pour[node])
            if have >= need - EPS and self.fits(calendar, t, self.length(node, min(room, have))):
                return t
        raise CannotError("refill never agrees")

    def room_and_supply(self, node: int, level: list[float]) -> tuple[float, float]:
        s = self.p.services
        room = float(s.refill_to[node]) - level[int(s.refill_reservoir[node])]
        if s.source[node] < 0:
            return room, math.inf
        spare = level[int(s.source[node])] - float(s.source_fixed[node])
        if s.source_per_unit[node] == 0:
            return room, math.inf if spare >= -EPS else -math.inf
        return room, spare / float(s.source_per_unit[node])

    def length(self, node: int, poured: float) -> int:
        seconds = self.own[node][0].seconds + float(self.p.services.seconds_per_unit[node]) * max(poured, 0.0)
        return math.ceil(seconds - 1e-6)

    def wait(self, now: Now, until: int, rate: list[float], least: list[float]) -> None:
        if until == now.time:
            return
        for r in range(self.R):
            burnt = rate[r] * (until - now.time)
            now.level[r] += self.came(r, now.time, until) - burnt
            now.used[r] += burnt
        now.time = until
        self.keep(now, least, "wait")

    def keep(self, now: Now, least: list[float], what: str) -> None:
        for r in range(self.R):
            if now.level[r] < least[r] - EPS:
                raise CannotError(f"level {r} at {what}")

    def run(
        self, before: Now, node: int, arc: list[Piece], starts: list[int], own: list[Piece], node_starts: list[int]
    ) -> Now:
        """Walk the arc and the node at given starts, keeping every rule."""
        now = before.copy()
        target = int(self.p.entry[node])
        for k, (piece, start) in enumerate(zip(arc + own, starts + node_starts, strict=True)):
            if k == 0:
                self.wait(now, start, self.place_rate[before.place], self.place_min[before.place])
            elif k == len(arc):
                self.wait(now, start, self.place_rate[target], self.place_min[target])
            else:
                previous = (arc + own)[k - 1]
                self.wait(now, start, previous.wait_rate, previous.wait_min)
            self.block(now, node, piece, k >= len(arc))
        if now.time > self.p.horizon:
            raise CannotError("horizon")
        now.moving += sum(q.seconds for q in arc)
        now.place = int(self.p.exit[node])
        return now

    def block(self, now: Now, node: int, piece: Piece, is_own: bool) -> None:
        s = self.p.services
        self.keep(now, piece.start_min, "start")
        now.starts.append(now.time)
        now.levels.append(list(now.level))
        seconds, poured = piece.seconds, 0.0
        reservoir = int(s.refill_reservoir[node]) if is_own else -1
        if reservoir >= 0:
            room, have = self.room_and_supply(node, now.level)
            poured = min(room, have)
            if poured < max(float(s.min_pour[node]), 0.0) - EPS:
                raise CannotError("too little to pour")
            if s.need_full[node] and have < room - EPS:
                raise CannotError("source")
            poured = max(poured, 0.0)
            seconds = self.length(node, poured)
            if not self.fits(piece.calendar, now.time, seconds):
                raise CannotError("calendar")
            per, fixed = float(s.source_per_unit[node]), float(s.source_fixed[node])
            if s.source[node] >= 0:
                now.level[int(s.source[node])] -= fixed + per * poured
            now.used[reservoir] += fixed + (per - 1) * poured
            now.poured.append(poured)
        end = now.time + seconds
        for r in range(self.R):
            now.level[r] += self.came(r, now.time, end) - piece.use[r]
            now.used[r] += piece.use[r]
        if reservoir >= 0:
            now.level[reservoir] += poured
        if is_own and self.p.moving[node]:
            now.moving += seconds
        now.time = end
        self.keep(now, piece.end_min, "end")

    def finish(self, now: Now) -> tuple[float, int, Now]:
        """Cost, end and last state of going to the end and waiting for the horizon there."""
        there = self.do(now, 1)
        end = there.time
        last = int(self.p.exit[1])
        self.wait(there, self.p.horizon, self.place_rate[last], self.place_min[last])
        self.keep(there, self.place_min[last], "horizon")
        return there.moving + self.priced(there.used), end, there


def may_follow(problem: Problem, done: list[int], node: int) -> bool:
    """Whether ``node`` may come after the nodes ``done``: takes once, uses counted, precedence kept."""
    if not problem.covers[node]:
        return done.count(node) < problem.services.max_uses[node]
    takes = {t for n in done for t in problem.covers[n]}
    if takes & set(problem.covers[node]):
        return False
    return all(a in takes for a, b in problem.before_after.tolist() if b in problem.covers[node])


def read(problem: Problem, order: list[int]) -> tuple[float, int, Now]:
    """Cost, end and last state of an order, or `CannotError`; missing musts are not an error here."""
    simulator = Simulator(problem)
    now = simulator.initial()
    for position, node in enumerate(order):
        if not may_follow(problem, order[:position], node):
            raise CannotError("not allowed")
        now = simulator.do(now, node)
    return simulator.finish(now)


def best_order(problem: Problem) -> tuple[tuple[int, int, float, int] | None, list[int]]:
    """Over all orders: least (musts missing, minus prize, cost, end), None if the end cannot be reached."""
    simulator = Simulator(problem)
    best: list[tuple[tuple[int, int, float, int] | None, list[int]]] = [(None, [])]
    musts = {t for t in range(problem.takes) if problem.must[t]}

    def visit(now: Now, order: list[int]) -> None:
        takes = {t for n in order for t in problem.covers[n]}
        try:
            cost, end, _ = simulator.finish(now)
        except CannotError:
            pass
        else:
            value = (len(musts - takes), -sum(int(problem.prize[t]) for t in takes), round(cost, 7), end)
            if best[0][0] is None or value < best[0][0]:
                best[0] = (value, list(order))
        for node in range(2, problem.nodes):
            if may_follow(problem, order, node):
                try:
                    after = simulator.do(now, node)
                except CannotError:
                    continue
                visit(after, [*order, node])

    visit(simulator.initial(), [])
    return best[0]
