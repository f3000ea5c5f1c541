"""The solve itself: first order, exact search if small, then annealing here and CP-SAT beside it."""

from __future__ import annotations

import os
import threading
import time
from collections.abc import Callable
from typing import TYPE_CHECKING

from planner.optimise.bounds import Floors, cost_bound, floors, prize_bound
from planner.optimise.builder import Builder
from planner.optimise.chains import Beside, Chain
from planner.optimise.compiled.warm import Compiled, Warmer, compile_all
from planner.optimise.construct import Constructor
from planner.optimise.cooling import shares, temperature
from planner.optimise.exact import is_small, solve_exactly
from planner.optimise.incumbent import Incumbent
from planner.optimise.insertion import Insertion
from planner.optimise.moves import Costs, static_costs
from planner.optimise.problem import Problem
from planner.optimise.result import Progress, Result, Stopped
from planner.optimise.search import Annealer
from planner.optimise.tables import Tables, build_tables

if TYPE_CHECKING:
    from planner.optimise.cpsat.run import Relaxation

CONSTRUCTIONS = 6  # first orders if the compiled kernels are still to come, or the result is to be reproducible
COOLINGS = 4  # of a reproducible solve
FILL_S = 0.5  # kept at the end for putting in what still fits, at most a tenth of the time
OTHER_SEED = 7919  # added for the annealing beside
DETERMINISTIC_UNITS = 0.2  # of CP-SAT for each second of a reproducible solve
TRIALS_PER_SECOND = 10_000  # work that stands for a second if the solve is to be reproducible


class Solver:
    """One solve: the parts it is made of and the state they share."""

    def __init__(
        self,
        problem: Problem,
        seconds: float,
        seed: int,
        on_progress: Callable[[Progress], None] | None,
        stop: threading.Event | None,
        *,
        reproducible: bool,
    ) -> None:
        self.problem = problem
        self.seconds = seconds
        self.seed = seed
        self.stop = stop if stop is not None else threading.Event()
        self.warmer = Warmer(start=not reproducible)
        self.tables: Tables = build_tables(problem)
        self.costs: Costs = static_costs(self.tables)
        self.floors: Floors = floors(problem, self.tables, self.costs)
        self.incumbent = Incumbent(problem, self.tables, self.warmer.plain, on_progress)
        self.deadline = self.incumbent.began + seconds

    def asked(self) -> bool:
        """Whether to stop was asked."""
        return self.stop.is_set()

    def late(self) -> bool:
        """Whether to stop was asked or the time is used up."""
        return self.stop.is_set() or time.perf_counter() >= self.deadline

    def proven(self) -> bool:
        """Whether nothing is left to do."""
        return self.incumbent.exact or (self.incumbent.prize_proven and self.incumbent.cost_proven)

    def begin(self, halt: Callable[[], bool], *, most: int) -> None:
        """First bounds, and the orders of the first ``most`` constructions."""
        self.incumbent.bound(prize=prize_bound(self.problem, self.floors))
        builder = Builder(self.problem, self.tables, self.warmer.plain)
        self.constructor = Constructor(builder, self.costs, self.seed, halt)
        for _ in range(most):
            self.construct()
            if halt() or self.incumbent.best is None:
                break
        self.tighten()

    def construct(self) -> None:
        """One more construction."""
        best = self.incumbent.best
        order = self.constructor.another(best.order if best is not None else ())
        if order is not None and self.incumbent.offer(order, "construction"):
            self.tighten()
        self.incumbent.report()

    def tighten(self) -> None:
        """Static cost bound for the prize reached."""
        objective = self.incumbent.objective
        if objective is not None:
            self.incumbent.bound(cost=cost_bound(self.problem, self.floors, objective.prize))

    def exactly(self, halt: Callable[[], bool], *, compiled: bool) -> None:
        """Exact search if the problem is small."""
        if not is_small(self.problem, self.tables):
            return
        kernels = (lambda: Compiled) if compiled else (lambda: self.warmer.kernels)
        if solve_exactly(self.problem, self.tables, self.floors, self.incumbent, kernels, halt):
            self.incumbent.exact = True
            objective = self.incumbent.objective
            if objective is None or objective.missing > 0:
                self.incumbent.proven_infeasible = True
            if objective is not None:
                self.incumbent.bound(prize=objective.prize if objective.missing == 0 else None)
                self.incumbent.bound(cost=objective.cost)
        self.incumbent.report()

    def annealer(self, seed: int) -> Annealer:
        """A search that has not begun."""
        return Annealer(self.problem, self.tables, self.costs, seed, self.warmer.plain)

    def chain(self, seed: int) -> Chain:
        """An annealing by the clock."""
        insertion = Insertion(self.problem, self.tables)
        return Chain(self.annealer(seed), insertion, self.incumbent, lambda: self.warmer.kernels)

    def relaxation(self, seconds: float, *, deterministic: bool) -> Relaxation:
        """The CP-SAT model, not yet begun."""
        from planner.optimise.cpsat.run import Relaxation

        return Relaxation(
            self.problem,
            self.tables,
            self.costs,
            self.floors,
            self.incumbent,
            seconds=seconds,
            seed=self.seed,
            deterministic=deterministic,
        )

    def take_proposals(self, relaxation: Relaxation) -> None:
        """Read what the relaxation proposes with the exact decoder, leaving out what cannot be done."""
        for order in relaxation.proposals():
            builder = Builder(self.problem, self.tables, self.warmer.plain)
            builder.careful = False
            for node in order:
                builder.push(node)
            if builder.close():
                self.incumbent.offer(builder.items, "CP-SAT")

    def search_for_time(self) -> None:
        """Construct until the compiled kernels are there, then anneal; CP-SAT, then a second annealing, beside it."""
        finish = self.deadline - min(FILL_S, 0.1 * self.seconds)

        def over() -> bool:
            return self.asked() or self.proven() or time.perf_counter() >= finish

        relaxation = self.relaxation(finish - time.perf_counter(), deterministic=False)
        second = self.chain(self.seed + OTHER_SEED)

        def bound(_: Callable[[], bool]) -> None:
            relaxation.run()

        def anneal_too(closing: Callable[[], bool]) -> None:
            self.anneal(second, finish, lambda: over() or closing())

        beside = Beside([bound, anneal_too] if (os.cpu_count() or 1) > 1 else [bound], relaxation.cancel)
        chain = self.chain(self.seed)

        def between() -> None:
            self.take_proposals(relaxation)
            self.incumbent.report()

        try:
            while not over() and not self.warmer.ready("anneal"):
                # as plain Python annealing gets nowhere
                self.construct()
                between()
            self.anneal(chain, finish, over, between)
        finally:
            beside.close()
        late = time.perf_counter() + 0.1 if self.asked() else self.deadline
        chain.fill(lambda: time.perf_counter() >= late)

    def anneal(
        self, chain: Chain, finish: float, over: Callable[[], bool], between: Callable[[], None] = lambda: None
    ) -> None:
        """Run ``chain`` once its kernel is there."""
        while not over() and not self.warmer.ready("anneal"):
            time.sleep(0.05)
        chain.run(finish - time.perf_counter(), over, between)

    def run_relaxation(self, relaxation: Relaxation) -> None:
        """Run it to its end here, stopped from a thread of its own if that is asked for."""
        over = threading.Event()

        def watch() -> None:
            while not over.wait(0.02):
                if self.asked():
                    relaxation.cancel()

        watcher = threading.Thread(target=watch, name="relaxation watch")
        watcher.start()
        try:
            relaxation.run()
        finally:
            over.set()
            watcher.join()

    def search_for_work(self, trials: int) -> None:
        """Cool a few times in a fixed number of trials."""
        annealer = self.annealer(self.seed)
        annealer.kernels = Compiled
        piece = 400
        for share in shares(COOLINGS):
            best, count = self.incumbent.best, max(1, int(share * trials))
            annealer.restart(best.order if best is not None else ())
            fine = self.incumbent.prize_proven
            for done in range(0, count, piece):
                if self.asked() or self.proven():
                    break
                warm, end = (temperature(min(1.0, at / count), fine=fine) for at in (done, done + piece))
                annealer.run(min(piece, count - done), warm, end)
                self.incumbent.report()
            if annealer.objective is not None and annealer.objective.better_than(self.incumbent.objective):
                self.incumbent.offer(annealer.order, "annealing")
            self.fill_in()

    def fill_in(self) -> None:
        """Put what still fits into the incumbent."""
        best = self.incumbent.best
        if best is not None:
            order = Insertion(self.problem, self.tables).fill(best.order, Compiled, self.asked)
            self.incumbent.offer(order, "insertion")

    def result(self, stopped: Stopped) -> Result:
        """What is known now."""
        best = self.incumbent.best
        objective = self.incumbent.objective
        done = {take for node in best.order for take in self.problem.covers[node]} if best is not None else set()
        left = tuple(take for take in range(self.problem.takes) if take not in done)
        return Result(
            order=best.order if best is not None else (),
            feasible=objective is not None and objective.missing == 0,
            objective=objective,
            trace=best.trace if best is not None else (),
            prize_bound=self.incumbent.prize_bound,
            cost_bound=self.incumbent.cost_bound,
            prize_proven=self.incumbent.prize_proven,
            cost_proven=self.incumbent.cost_proven,
            proven_infeasible=self.incumbent.proven_infeasible,
            stopped=Stopped.PROVEN if self.proven() else stopped,
            left_out=left,
            missing_musts=tuple(take for take in left if self.problem.must[take]),
            elapsed_s=self.incumbent.elapsed_s,
            first_feasible_s=next((e.elapsed_s for e in self.incumbent.events if not e.objective.missing), None),
            events=tuple(self.incumbent.events),
        )


def solve(
    problem: Problem,
    *,
    seconds: float = 30.0,
    seed: int = 0,
    reproducible: bool = False,
    on_progress: Callable[[Progress], None] | None = None,
    stop: threading.Event | None = None,
) -> Result:
    """Find the best order of ``problem`` within ``seconds`` and bound how much better any other can be.

    Parameters
    ----------
    seed
        Of the search; the same seed gives the same order only if ``reproducible``.
    reproducible
        Stop on a count of work that stands for ``seconds``, not on the clock, and use one thread.
    on_progress
        Called in the caller's thread when the best order changes and about every 0.25 s.
    stop
        Set it from anywhere to have the best order so far.

    Raises
    ------
    ValueError
        If the problem's tables do not fit each other.
    """
    solver = Solver(problem, seconds, seed, on_progress, stop, reproducible=reproducible)
    return _reproducibly(solver) if reproducible else _by_the_clock(solver)


def _by_the_clock(solver: Solver) -> Result:
    small = is_small(solver.problem, solver.tables)
    solver.begin(solver.late, most=1 if small or solver.warmer.ready("anneal") else CONSTRUCTIONS)
    solver.exactly(solver.late, compiled=False)
    if not solver.proven() and not solver.late():
        solver.search_for_time()
    solver.tighten()
    return solver.result(Stopped.ASKED if solver.asked() else Stopped.TIME)


def _reproducibly(solver: Solver) -> Result:
    compile_all()
    solver.begin(solver.asked, most=CONSTRUCTIONS)
    solver.exactly(solver.asked, compiled=True)
    if not solver.proven():
        solver.search_for_work(int(solver.seconds * TRIALS_PER_SECOND))
        if not solver.asked():
            relaxation = solver.relaxation(solver.seconds * DETERMINISTIC_UNITS, deterministic=True)
            solver.run_relaxation(relaxation)
            solver.take_proposals(relaxation)
            solver.fill_in()
    solver.tighten()
    return solver.result(Stopped.ASKED if solver.asked() else Stopped.WORK)
