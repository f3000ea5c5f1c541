"""Orders by dispatch rules, in plain Python: what earns most a second comes next, waiting and moving included.

Each `Rule` is one opinion on what a take is worth and how far to look; many are tried and the best order is kept.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from planner.optimise.builder import Builder
from planner.optimise.compiled.decode import PLACE
from planner.optimise.compiled.fitting import LOW, OK
from planner.optimise.moves import Costs
from planner.optimise.outlook import Outlook
from planner.optimise.problem import Bools, Floats, Problem
from planner.optimise.tables import COUNT, EXIT, FIRST, PLACE_MIN, REFILL, SECONDS, START_MIN, USE, Tables


@dataclass(frozen=True)
class Rule:
    """How one construction decides.

    ``heirs`` is the share of the prize of takes that come after a take which counts as its own; ``must`` the worth of a
    must, in typical prizes; ``patience`` what is added to every candidate's time so that haste counts less, in typical
    lengths of a take;
    ``looked_at`` how many candidates are tried exactly, each with its best successor if ``ahead``; ``thirst`` the
    burn that a reservoir must last for until its next refill, in typical burns; ``noise`` how much worths are shaken.
    """

    heirs: float = 0.05
    must: float = 2.0
    patience: float = 0.1
    looked_at: int = 4
    ahead: bool = False
    thirst: float = 1.0
    noise: float = 0.0


class Dispatcher:
    """Builds orders by rules for one problem."""

    def __init__(self, problem: Problem, builder: Builder, costs: Costs, halt: Callable[[], bool]) -> None:
        self._problem, self._builder, self._halt = problem, builder, halt
        self._outlook = Outlook(problem, builder.tables)
        self._exit = builder.tables.node[:, EXIT]
        takes = problem.takes
        self._covers = np.zeros((problem.nodes, takes), dtype=np.bool_)
        for node, covered in enumerate(problem.covers):
            self._covers[node, list(covered)] = True
        self._before = np.zeros((takes, takes), dtype=np.bool_)
        if len(problem.before_after):
            self._before[problem.before_after[:, 1], problem.before_after[:, 0]] = True
        self._heirs = _closure(self._before.T)
        tables = builder.tables
        takes_nodes = [node for node, covered in enumerate(problem.covers) if covered]
        self._length = float(costs.node_seconds[takes_nodes].mean()) if takes_nodes else 1.0
        self._burn = _typical_burn(problem, tables)
        self._floor = {n: _start_floor(tables, n) for n in builder.services}
        self._end_floor = tables.place[tables.node[Problem.END, EXIT], PLACE_MIN]

    def build(self, rule: Rule, rng: np.random.Generator, start: Sequence[int] = ()) -> bool:
        """Fill the builder by ``rule``, beginning with the items ``start``; whether the end can be reached."""
        builder = self._builder
        builder.cut(0)
        builder.careful = builder.can_finish()
        for node in start:
            builder.push(node)
        worth = self._worth(rule, rng)
        while not self._halt() and self._next(rule, worth):
            pass
        return builder.close()

    def _worth(self, rule: Rule, rng: np.random.Generator) -> Floats:
        """What each take counts for, its heirs not yet included, (T,)."""
        prize = self._problem.prize.astype(np.float64)
        typical = float(prize[prize > 0].mean()) if (prize > 0).any() else 1.0
        # what comes before a must is as needed as the must itself
        needed = self._problem.must | (self._heirs & self._problem.must).any(axis=1)
        worth = prize + rule.must * typical * needed
        return np.asarray(worth * np.exp(rule.noise * rng.standard_normal(len(prize))), dtype=np.float64)

    def _values(self, worth: Floats, done: Bools, rule: Rule) -> Floats:
        """What each node is worth if it comes next, 0 if it may not, (N,)."""
        open_takes = ~done & ~(self._before & ~done).any(axis=1)
        # a take that opens the way to others counts for a share of each that is left
        whole = np.where(open_takes, worth + rule.heirs * (self._heirs & ~done) @ worth, 0.0)
        allowed = ~(self._covers & ~open_takes).any(axis=1)
        return np.asarray(np.where(allowed, self._covers @ whole, 0.0), dtype=np.float64)

    def _next(self, rule: Rule, worth: Floats) -> bool:
        """Append what the rule puts next, if there is anything."""
        builder = self._builder
        now, patience = builder.time, max(1.0, rule.patience * self._length)
        place = int(builder.states.state[len(builder.items), PLACE])
        done = np.zeros(self._problem.takes, dtype=np.bool_)
        done[list(builder.done)] = True
        value = self._values(worth, done, rule)
        ends = self._outlook.ends(place, now)
        score = value / (ends - now + patience)
        refilled = self._refilled()
        best: tuple[float, list[int]] | None = None
        found = 0
        for node in np.argsort(-score, kind="stable")[: 8 * rule.looked_at].tolist():
            put = self._try(node, rule, refilled) if score[node] > 0.0 else None
            if put is None:
                continue
            rate = float(value[node]) / (builder.time - now + patience)
            if rule.ahead:
                rate = self._with_successor(float(value[node]), now, worth, done, node, rule)
            builder.cut(len(builder.items) - len(put))
            if best is None or rate > best[0]:
                best = rate, put
            found += 1
            if found >= rule.looked_at:
                break
        return best is not None and builder.push_all(best[1]) == OK

    def _with_successor(self, earned: float, now: int, worth: Floats, done: Bools, node: int, rule: Rule) -> float:
        """Rate of the candidate just appended together with the best that can follow it."""
        builder, patience = self._builder, max(1.0, rule.patience * self._length)
        after = done | self._covers[node]
        value = self._values(worth, after, rule)
        ends = self._outlook.ends(int(self._exit[node]), builder.time)
        both = (earned + value) / (ends - now + 2 * patience)
        return float(max(both.max(initial=0.0), earned / (builder.time - now + patience)))

    def _try(self, node: int, rule: Rule, refilled: dict[int, float]) -> list[int] | None:
        """Append ``node``, with a refill before it if levels need one now or soon; what was appended."""
        builder = self._builder
        status = builder.push_all([node])
        if status == OK:
            service = self._last_chance(rule, refilled)
            if service < 0:
                return [node]
            builder.cut(len(builder.items) - 1)
            if builder.push_all([service, node]) == OK:
                return [service, node]
            return [node] if builder.push_all([node]) == OK else None
        if status == LOW:
            for service in builder.services:
                if builder.push_all([service, node]) == OK:
                    return [service, node]
        return None

    def _last_chance(self, rule: Rule, refilled: dict[int, float]) -> int:
        """A refill that had better be done before the node just appended, -1 if there is none.

        That is one of those that could have been done (``refilled``: ends), and which now is so far away, or gone, that
        the level would not last.
        """
        builder = self._builder
        now = builder.time
        level = builder.states.level[len(builder.items)].copy()
        later = self._refilled()
        for service, sooner in refilled.items():
            reservoir = int(builder.tables.node[service, REFILL])
            until, floor = float(self._problem.horizon), self._end_floor[reservoir]
            if service in later:
                until, floor = later[service], self._floor[service]
            if sooner < until and level[reservoir] - rule.thirst * self._burn[reservoir] * (until - now) < floor:
                return service
        return -1

    def _refilled(self) -> dict[int, float]:
        """Ends of the refills that can be done now."""
        builder = self._builder
        found = {}
        for service in builder.services:
            if builder.tables.node[service, REFILL] >= 0 and builder.push(service) == OK:
                found[service] = float(builder.time)
                builder.pop()
        return found


def _closure(direct: Bools) -> Bools:
    """Everything that comes after each take, at any remove, (T, T)."""
    whole = direct.copy()
    while True:
        longer = whole | (whole.astype(np.int64) @ whole.astype(np.int64) > 0)
        if (longer == whole).all():
            return whole
        whole = longer


def _typical_burn(problem: Problem, tables: Tables) -> Floats:
    """Burn of each reservoir a second in the blocks of an average take, (R,)."""
    nodes = [n for n, takes in enumerate(problem.covers) if takes]
    rows = [row for n in nodes for row in range(tables.node[n, FIRST], tables.node[n, FIRST] + tables.node[n, COUNT])]
    seconds = float(tables.block[rows, SECONDS].sum())
    return np.asarray(tables.rule[rows, USE].sum(axis=0) / max(seconds, 1.0), dtype=np.float64)


def _start_floor(tables: Tables, service: int) -> float:
    """Level that a refill needs to begin."""
    reservoir, first = tables.node[service, REFILL], tables.node[service, FIRST]
    if reservoir < 0 or tables.node[service, COUNT] == 0:
        return 0.0
    return float(tables.rule[first, START_MIN, reservoir])
