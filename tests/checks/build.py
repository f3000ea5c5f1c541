"""Plans made by hand for the checks: a small writer of steps that does its own arithmetic and plans nothing."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import replace
from pathlib import Path

from planner.files import Request, parse_rig, parse_week
from planner.files.reading import source
from planner.files.start import start_state
from planner.plan import (
    Coil,
    CoilMode,
    Finding,
    Kind,
    LeftOut,
    Leg,
    Plan,
    Score,
    State,
    Step,
    StepKind,
    along_z,
)

HOUR = 3600
MINUTE = 60
DATA = Path(__file__).parent.parent / "data"
REF_W = (DATA / "ref_w.rig.toml").read_text(encoding="utf-8")
SCORE = Score(0, 0, 0, 0.0, 0.0, 0.0, 0, 0.25, proven=False, stopped="by hand")


def request(week: str, rig: str = REF_W) -> Request:
    """A request from two texts."""
    sources = (source("week", "week.toml", week), source("rig", "rig.toml", rig))
    return Request(parse_week(week), parse_rig(rig), sources)


def driven(field_T: float, per_A: float = 0.12) -> Coil:
    """A driven coil; at 0 T it carries nothing."""
    return Coil(along_z(field_T), CoilMode.DRIVEN, along_z(field_T / per_A))


def persistent(field_T: float, leads_A: float = 0.0, per_A: float = 0.12) -> Coil:
    """A coil that carries its own current."""
    return Coil(along_z(field_T), CoilMode.PERSISTENT, along_z(leads_A), along_z(field_T / per_A))


class Writer:
    """Writes one step after the other from where the week begins; every number is worked out here."""

    def __init__(self, asked: Request) -> None:
        self.request = asked
        self.week, self.rig = asked.week, asked.rig
        self.state: State = start_state(self.week, self.rig)
        self.now = 0
        self.steps: list[Step] = []
        self.left_out: list[LeftOut] = []
        level = self.week.present.level_percent
        self.litres = None if level is None else float(level) / 100 * 80.0  # linear gauge: 100 % is 80 L
        self.stock = float(self.week.helium.stock_L)

    # ---- legs ------------------------------------------------------------------------------------------------------

    def leg(self, action: str, seconds: int, before: Coil, after: Coil, rate: float | None = None) -> Leg:
        """A coil leg with its litres, beginning at 0."""
        return Leg(
            "coil", action, 0, seconds, "by hand", self.burn(action, seconds, before, after), rate, (before, after)
        )

    def burn(self, action: str, seconds: int, before: Coil, after: Coil) -> float:
        """Litres, by the rule book: static, switch heater, leads by their mean current, tesla moved."""
        if self.rig.bath is None:
            return 0.0
        losses = self.rig.bath.losses
        open_ = CoilMode.DRIVEN in (before.mode, after.mode) and action != "heater off"
        mean_A = abs(before.lead_current_A[2] + after.lead_current_A[2]) / 2
        rate = losses.static_L_per_s + open_ * losses.switch_open_L_per_s + losses.leads_L_per_s_A * mean_A
        return rate * seconds + losses.moving_L_per_T * abs(after.field_T[2] - before.field_T[2])

    def ramp_legs(self, stops: Iterable[float], rates: Iterable[float], action: str = "ramp") -> list[Leg]:
        """Driven legs from stop to stop at rates in T/min, the first from a coil that is driven or warm."""
        legs, here = [], self.state.coil
        if here.mode is CoilMode.ZERO and self.rig.magnet.switch is not None:
            legs.append(self.leg("heater on", 30, here, driven(0.0)))
            here = driven(0.0)
        for stop, rate in zip(stops, rates, strict=True):
            seconds = math.ceil(abs(stop - here.field_T[2]) * 60 / rate - 1e-6)
            there = driven(stop)
            legs.append(self.leg(action, seconds, here, there, rate / 60))
            here = there
        if here.field_T[2] == 0:
            last = legs.pop()
            assert last.coil is not None
            legs.append(replace(last, coil=(last.coil[0], Coil())))
        return legs

    # ---- steps -----------------------------------------------------------------------------------------------------

    def write(self, kind: StepKind, label: str, legs: list[Leg], **more: object) -> Step:
        """A step of these legs one after the other, on the coil; other channels' legs keep their times in the step."""
        placed, at = [], self.now
        for leg in legs:
            if leg.channel == "coil":
                placed.append(replace(leg, start_s=at, end_s=at + leg.seconds))
                at += leg.seconds
            else:
                placed.append(replace(leg, start_s=self.now + leg.start_s, end_s=self.now + leg.end_s))
        coils = [leg.coil[1] for leg in placed if leg.coil is not None]
        kelvins = [leg.stage_K[1] for leg in placed if leg.stage_K is not None]
        gates = dict(self.state.gates_V)
        for leg in placed:
            if leg.gates_V is not None:
                gates.update(leg.gates_V[1])
        after = replace(
            self.state,
            coil=coils[-1] if coils else self.state.coil,
            stage=replace(self.state.stage, temperature_K=kelvins[-1] if kelvins else self.state.stage.temperature_K),
            gates_V=tuple(sorted(gates.items())),
        )
        poured = float(more.get("poured_L", 0.0))  # type: ignore[arg-type]
        self.stock -= float(more.get("drawn_L", 0.0))  # type: ignore[arg-type]
        burnt = sum(leg.litres for leg in placed)
        left = None if self.litres is None else self.litres - burnt + poured
        step = Step(
            len(self.steps) + 1, kind, label, self.now, at, self.state, after, tuple(placed), self.litres, left,
            stock_after_L=None if left is None else self.stock, **more,  # type: ignore[arg-type]
        )  # fmt: skip
        self.steps.append(step)
        self.now, self.state, self.litres = at, after, left
        return step

    def still(self, seconds: int, action: str = "hold") -> Leg:
        """A leg in which the coil stays as it is."""
        return self.leg(action, seconds, self.state.coil, self.state.coil)

    def wait_until(self, second: int) -> None:
        """A wait up to a second."""
        if second > self.now:
            self.write(StepKind.WAIT, "wait", [self.still(second - self.now)])

    def ramp(
        self, stops: Iterable[float], rates: Iterable[float], settle: int = 0, beside: list[Leg] | None = None
    ) -> None:
        """A move from stop to stop."""
        legs = self.ramp_legs(stops, rates)
        last = legs[-1].coil
        assert last is not None
        if settle:
            legs.append(self.leg("settle", settle, last[1], last[1]))
        self.write(StepKind.MOVE, "ramp", [*legs, *(beside or [])])

    def change(self, seconds: int, legs: list[Leg]) -> None:
        """A move of stage and gates alone."""
        self.write(StepKind.MOVE, "change", [self.still(seconds), *legs])

    def take(self, target: str, legs: list[Leg], take: str = "", label: str = "", **more: object) -> None:
        """A take of a target."""
        ask = next(ask for ask in self.week.targets if ask.name == target)
        user = ask.user or self.week.sample(ask.sample).user
        about = {"target": target, "take": take or target, "user": user, "sample": ask.sample, **more}
        self.write(StepKind.TAKE, label or target, legs, **about)

    def transfer(self, poured: float, people: tuple[str, ...] = ("Ada", "Ben"), seconds: int | None = None) -> None:
        """A helium transfer: 20 min for the line, then 1 L a minute; 80 % arrive."""
        length = math.ceil(20 * MINUTE + poured * 60 - 1e-6) if seconds is None else seconds
        still = replace(self.still(length), litres=0.0)
        self.write(
            StepKind.SERVICE, "helium transfer", [still], service="helium transfer", attended=True, people=people,
            poured_L=poured, drawn_L=poured / 0.8,
        )  # fmt: skip

    def close_switch(self, people: tuple[str, ...] = ("Ada",)) -> None:
        """Hold, heater off, leads down."""
        field = self.state.coil.field_T[2]
        up, trapped = driven(field), persistent(field, field / 0.12)
        down = persistent(field)
        legs = [
            self.leg("hold", 300, up, up),
            self.leg("heater off", 60, up, trapped),
            self.leg("leads", math.ceil(abs(field) / 0.12 / 2 - 1e-6), trapped, down, 2.0),
        ]
        self.write(StepKind.MOVE, "close switch", legs, attended=True, people=people)

    def open_switch(self, people: tuple[str, ...] = ("Ada",)) -> None:
        """Leads to the recorded current, settle, heater on."""
        field = self.state.coil.field_T[2]
        down, matched = self.state.coil, persistent(field, field / 0.12)
        legs = [
            self.leg("leads", math.ceil(abs(field) / 0.12 / 2 - 1e-6), down, matched, 2.0),
            self.leg("settle", 10, matched, matched),
            self.leg("heater on", 30, matched, driven(field)),
        ]
        self.write(StepKind.MOVE, "open switch", legs, attended=True, people=people)

    def plan(self, *, recovery: bool = False) -> Plan:
        """The plan, with a last wait to the week's end."""
        self.wait_until(self.week.horizon_s)
        return Plan(
            self.week.title, self.rig.name, self.week.zone, self.week.clock.start,
            self.week.clock.moment(self.week.horizon_s), self.request.sources, tuple(self.steps),
            tuple(self.left_out), SCORE, recovery=recovery,
        )  # fmt: skip


def gates_leg(
    start: int, end: int, before: dict[str, float], after: dict[str, float], action: str = "gate ramp"
) -> Leg:
    """A leg of gates, times in its step."""
    pair = (tuple(sorted(before.items())), tuple(sorted(after.items())))
    return Leg("gates", action, start, end, "by hand", gates_V=pair)


def stage_leg(start: int, end: int, before: float, after: float, action: str = "warm") -> Leg:
    """A leg of the stage, times in its step."""
    return Leg("stage", action, start, end, "by hand", stage_K=(before, after))


def serious(findings: Iterable[Finding]) -> list[Finding]:
    """Findings that are more than a note."""
    return [found for found in findings if found.kind is not Kind.NOTE]


def rules(findings: Iterable[Finding]) -> set[str]:
    """Names of the rules broken."""
    return {found.rule for found in findings}


def of(findings: Iterable[Finding], rule: str) -> Finding:
    """The one finding of a rule."""
    found = [finding for finding in findings if finding.rule == rule]
    assert len(found) == 1, [finding.text for finding in findings]
    return found[0]


def at_step(plan: Plan, number: int, edit: Callable[[Step], Step]) -> Plan:
    """The plan with one step edited."""
    return replace(plan, steps=tuple(edit(step) if step.number == number else step for step in plan.steps))


def leg_of(step: Step, action: str, edit: Callable[[Leg], Leg]) -> Step:
    """The step with its first leg of an action edited."""
    legs, done = [], False
    for leg in step.legs:
        if leg.action == action and not done:
            leg, done = edit(leg), True
        legs.append(leg)
    assert done, (action, [leg.action for leg in step.legs])
    return replace(step, legs=tuple(legs))


def rebooked(asked: Request, plan: Plan) -> Plan:
    """The plan with litres and levels worked out again after its legs were edited."""
    book = Writer(asked)
    steps = []
    litres = book.litres
    for step in plan.steps:
        legs: list[Leg] = []
        for leg in step.legs:
            if leg.coil is None:
                legs.append(leg)
                continue
            spent = book.burn(leg.action, leg.seconds, *leg.coil)
            if step.service == "helium transfer" and asked.rig.bath is not None:
                spent -= asked.rig.bath.losses.static_L_per_s * leg.seconds
            legs.append(replace(leg, litres=spent))
        left = None if litres is None else litres - sum(leg.litres for leg in legs) + step.poured_L
        steps.append(replace(step, legs=tuple(legs), helium_before_L=litres, helium_after_L=left))
        litres = left
    return replace(plan, steps=tuple(steps))
