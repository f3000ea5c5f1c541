"""Builds plausible plans step by step, by a walk of its own through a rig's numbers."""

from __future__ import annotations

import json
import math
from dataclasses import replace
from itertools import pairwise
from pathlib import Path

from planner.files import parse_rig, parse_week
from planner.files.level import litres_at
from planner.files.reading import source
from planner.files.start import driven_coil, persistent_coil, start_state
from planner.plan import (
    Coil,
    CoilMode,
    Finding,
    Gates,
    HandOrder,
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

EXAMPLES = Path(__file__).parents[2] / "example_plans"
WET = (EXAMPLES / "wet_dilution.rig.toml").read_text(encoding="utf-8")
DRY = (EXAMPLES / "dry_insert.rig.toml").read_text(encoding="utf-8")
HOUR = 3600


def week_text(
    *,
    title: str = "Three groups, one magnet",
    users: tuple[str, ...] = ("Hall group", "Noise group", "Wires group"),
    start: str = "2031-03-03T08:30:00",
    end: str = "2031-03-10T08:30:00",
    zone: str = "Europe/Vienna",
    rig: str = "wet_dilution.rig.toml",
    level: str | None = "92 %",
) -> str:
    """A week file with the given users, each with one sample of one gate."""
    lines = [
        "format = 1",
        'kind = "week"',
        f"title = {json.dumps(title, ensure_ascii=False)}",
        f'rig = "{rig}"',
        f'zone = "{zone}"',
        f"start = {start}",
        f"end = {end}",
        'staffed = [{ days = "Mon-Fri", from = "08:30", to = "18:00" }]',
        "[present]",
        f'level = "{level}"' if level else "",
        "[helium]",
        'stock = "200 L"',
    ]
    for at, name in enumerate(users):
        lines += [
            "[[users]]",
            f"name = {json.dumps(name, ensure_ascii=False)}",
            f'letter = "{chr(65 + at)}"',
            "[[samples]]",
            f'name = "chip {at + 1}"',
            f"user = {json.dumps(name, ensure_ascii=False)}",
            'density = "1.1e11 cm^-2"',
            'gates = [{ name = "top", lowest = "-1.5 V", highest = "0.5 V", rate = "20 mV/s" }]',
        ]
    return "\n".join(lines) + "\n"


class Builder:
    """Adds one step after the other; states, levels and times follow."""

    def __init__(self, week: str | None = None, rig: str = WET) -> None:
        self.texts = (week if week is not None else week_text(), rig)
        self.week, self.rig = parse_week(self.texts[0]), parse_rig(self.texts[1])
        self.state: State = start_state(self.week, self.rig)
        self.second = 0
        self.steps: list[Step] = []
        self.litres: float | None = None
        if self.rig.bath is not None:
            self.litres = litres_at(self.rig.bath, float(self.week.present.level_percent or 0))
        self.stock_L = float(self.week.helium.stock_L)

    # --- legs -------------------------------------------------------------------------------------------------------

    def burn(self, seconds: int, coil: Coil, moved_T: float = 0.0) -> float:
        if self.rig.bath is None:
            return 0.0
        losses = self.rig.bath.losses
        rate = losses.static_L_per_s
        if coil.mode == CoilMode.DRIVEN:
            rate += losses.switch_open_L_per_s + losses.leads_L_per_s_A * abs(coil.lead_current_A[2])
        return rate * seconds + losses.moving_L_per_T * abs(moved_T)

    def still(self, action: str, seconds: int, at: int, coil: Coil, after: Coil | None = None) -> Leg:
        return Leg("coil", action, at, at + seconds, action, self.burn(seconds, coil), None, (coil, after or coil))

    def driving(self, action: str, field_T: float, at: int, coil: Coil, most: float = math.inf) -> list[Leg]:
        """Legs from the coil's field to another, split at the table's edges and at zero."""
        begin = coil.field_T[2]
        edges = {s * float(r.to_T) for r in self.rig.magnet.ramp_table for s in (-1, 1)} | {0.0}
        low, high = sorted((begin, field_T))
        corners = sorted({begin, field_T} | {e for e in edges if low < e < high}, reverse=begin > field_T)
        legs: list[Leg] = []
        for a, b in pairwise(corners):
            middle = abs(a + b) / 2
            rate = min(most, next(float(r.rate_T_per_s) for r in self.rig.magnet.ramp_table if middle <= r.to_T))
            seconds = math.ceil(abs(b - a) / rate - 1e-6)
            last = b == corners[-1]
            per_current = float(self.rig.magnet.field_per_current_T_per_A)
            after = Coil(along_z(b), CoilMode.DRIVEN, along_z(b / per_current))
            if last and b == 0 and action == "ramp":
                after = Coil()
            litres = self.burn(seconds, replace(coil, mode=CoilMode.DRIVEN), b - a)
            reason = "lock-in filter" if rate == most else f"ramp table to {middle:.3g} T"
            legs.append(Leg("coil", action, at, at + seconds, reason, litres, rate, (coil, after)))
            coil, at = after, at + seconds
        return legs

    def opened(self, at: int) -> tuple[list[Leg], Coil]:
        """The heater warms before anything moves from no current."""
        coil = self.state.coil
        if coil.mode != CoilMode.ZERO or self.rig.magnet.switch is None:
            return [], coil
        warm = Coil(coil.field_T, CoilMode.DRIVEN, coil.lead_current_A)
        leg = self.still("heater on", round(self.rig.magnet.switch.warm_s), at, warm, warm)
        return [replace(leg, coil=(coil, warm))], warm

    # --- steps ------------------------------------------------------------------------------------------------------

    def add(self, kind: StepKind, label: str, legs: list[Leg], after: State, **more: object) -> Builder:
        """Append a step that lasts as long as its coil legs."""
        if kind == StepKind.TAKE:
            more.setdefault("take", label)
        coil = [leg for leg in legs if leg.channel == "coil"]
        end = coil[-1].end_s if coil else self.second
        poured = float(more.get("poured_L", 0.0))  # type: ignore[arg-type]
        left = None if self.litres is None else self.litres - sum(leg.litres for leg in coil) + poured
        step = Step(
            len(self.steps) + 1,
            kind,
            label,
            self.second,
            end,
            self.state,
            after,
            tuple(legs),
            self.litres,
            left,
            **more,  # type: ignore[arg-type]
        )
        self.steps.append(step)
        self.second, self.state, self.litres = end, after, left
        return self

    def move(self, field_T: float, temperature_K: float | None = None, gates: Gates | None = None) -> Builder:
        """Go to a field, a temperature and gate voltages together."""
        at = self.second
        legs, coil = self.opened(at)
        at = legs[-1].end_s if legs else at
        legs += self.driving("ramp", field_T, at, coil)
        coil = legs[-1].coil[1] if legs and legs[-1].coil else coil
        at = legs[-1].end_s if legs else at
        legs.append(self.still("settle", round(self.rig.magnet.settle_s) or 60, at, coil))
        end = legs[-1].end_s
        stage, volts = self.state.stage, self.state.gates_V
        if temperature_K is not None and temperature_K != stage.temperature_K:
            legs.append(
                Leg("stage", "warm", self.second, end, "table", 0, None, None, (stage.temperature_K, temperature_K))
            )
            stage = replace(stage, temperature_K=temperature_K)
        if gates is not None:
            legs.append(
                Leg(
                    "gates",
                    "gate ramp",
                    self.second,
                    min(end, self.second + 50),
                    "gate rate",
                    0,
                    0.02,
                    gates_V=(volts, gates),
                )
            )
            volts = gates
        after = replace(self.state, coil=coil, stage=stage, gates_V=volts)
        return self.add(StepKind.MOVE, f"to {field_T:.3f} T", legs, after, pace="ramp table")

    def hold(self, label: str, seconds: int, **more: object) -> Builder:
        """A take, a wait or a pause in which nothing moves."""
        kind = more.pop("kind", StepKind.TAKE)
        legs = [self.still("hold", seconds, self.second, self.state.coil)] if seconds else []
        return self.add(kind, label, legs, self.state, **more)  # type: ignore[arg-type]

    def sweep(self, label: str, ends_T: tuple[float, ...], rate_T_per_s: float, **more: object) -> Builder:
        """A field sweep through the given turning points."""
        legs, coil = self.opened(self.second)
        for field_T in ends_T:
            at = legs[-1].end_s if legs else self.second
            legs += self.driving("sweep", field_T, at, coil, rate_T_per_s)
            coil = legs[-1].coil[1] if legs[-1].coil else coil
        return self.add(StepKind.TAKE, label, legs, replace(self.state, coil=coil), **more)

    def gate_sweep(self, label: str, seconds: int, gate: str, ends_V: tuple[float, ...], **more: object) -> Builder:
        """A sweep of one gate at a steady field."""
        legs = [self.still("hold", seconds, self.second, self.state.coil)]
        volts, share = self.state.gates_V, seconds // len(ends_V)
        for at, volt in enumerate(ends_V):
            after = tuple((name, volt if name == gate else old) for name, old in volts)
            begin = self.second + at * share
            legs.append(Leg("gates", "gate sweep", begin, begin + share, "dwell", 0, 0.005, gates_V=(volts, after)))
            volts = after
        return self.add(StepKind.TAKE, label, legs, replace(self.state, gates_V=volts), **more)

    def park(self) -> Builder:
        """Into persistent mode."""
        switch = self.rig.magnet.switch
        assert switch is not None
        driven, parked = self.state.coil, persistent_coil(self.rig, self.state.coil.field_T[2])
        closed = replace(parked, lead_current_A=driven.lead_current_A)
        legs = [self.still("hold", round(switch.hold_before_s), self.second, driven)]
        legs.append(self.still("heater off", round(switch.cool_s), legs[-1].end_s, closed))
        legs[-1] = replace(legs[-1], coil=(driven, closed))
        seconds = math.ceil(abs(driven.lead_current_A[2]) / switch.leads_A_per_s)
        leads = self.still("leads", seconds, legs[-1].end_s, parked)
        legs.append(replace(leads, coil=(closed, parked), rate=float(switch.leads_A_per_s)))
        return self.add(
            StepKind.MOVE, "close switch", legs, replace(self.state, coil=parked), attended=True, people=("Operator 1",)
        )

    def unpark(self) -> Builder:
        """Out of persistent mode."""
        switch = self.rig.magnet.switch
        assert switch is not None
        parked, driven = self.state.coil, driven_coil(self.rig, self.state.coil.field_T[2])
        matched = replace(parked, lead_current_A=driven.lead_current_A)
        seconds = math.ceil(abs(driven.lead_current_A[2]) / switch.leads_A_per_s)
        leads = replace(
            self.still("leads", seconds, self.second, parked), coil=(parked, matched), rate=float(switch.leads_A_per_s)
        )
        settle = self.still("settle", round(switch.settle_after_s), leads.end_s, matched)
        warm = replace(self.still("heater on", round(switch.warm_s), settle.end_s, driven), coil=(matched, driven))
        return self.add(
            StepKind.MOVE,
            "open switch",
            [leads, settle, warm],
            replace(self.state, coil=driven),
            attended=True,
            people=("Operator 1",),
        )

    def transfer(self, to_percent: float) -> Builder:
        """Pour helium up to a gauge level."""
        bath = self.rig.bath
        assert bath is not None
        assert self.litres is not None
        poured = litres_at(bath, to_percent) - self.litres
        drawn = float(bath.transfer.line_loss_L) + poured / (float(bath.transfer.efficiency_percent) / 100)
        self.stock_L -= drawn
        seconds = math.ceil(bath.transfer.line_cooling_s + poured / bath.transfer.rate_L_per_s)
        leg = replace(self.still("hold", seconds, self.second, self.state.coil), litres=0.0)
        return self.add(
            StepKind.SERVICE,
            "helium transfer",
            [leg],
            self.state,
            service="helium transfer",
            poured_L=poured,
            drawn_L=drawn,
            stock_after_L=self.stock_L,
            attended=True,
            people=("Operator 1", "Operator 2"),
        )

    def until(self, second: int, label: str = "wait") -> Builder:
        """Wait to a second of the week."""
        return self.hold(label, max(0, second - self.second), kind=StepKind.WAIT)

    def plan(self, **more: object) -> Plan:
        """The plan, with a last wait to the end of the week."""
        self.until(self.week.horizon_s)
        sources = (source("week", "week.toml", self.texts[0]), source("rig", self.week.rig, self.texts[1]))
        moving_s = sum(step.seconds for step in self.steps if step.kind == StepKind.MOVE)
        litres = sum(leg.litres for step in self.steps for leg in step.legs)
        cost_h = moving_s / HOUR + 0.25 * litres
        score = Score(96, 104, moving_s, litres, cost_h, 0.93 * cost_h, self.steps[-1].start_s, 0.25, False, "time")
        hand = (
            HandOrder("as listed", 20, 80, moving_s + 9 * HOUR, litres + 14, 20, 80, moving_s, litres),
            HandOrder("sorted by field", 22, 88, moving_s + 3 * HOUR, litres + 4, 22, 88, moving_s, litres),
        )
        findings = (
            Finding("helium line", Kind.WARN, "the gauge comes near the line", 45.1, 44.0, 1.1, "%", 90 * HOUR, 3,
                    "Survey", "rig file", "transfer on Wednesday"),
            Finding("density", Kind.NOTE, "fields of fillings are provisional until the density is measured"),
        )  # fmt: skip
        left_out = (
            LeftOut(
                "Fan between 2 and 1",
                "Fan between 2 and 1 · 6",
                self.week.users[0].name,
                2,
                "no time left before the end",
            ),
            LeftOut("Long night", "", self.week.users[-1].name, 1, "costs more helium than the stock holds"),
        )
        plan = Plan(
            self.week.title,
            self.rig.name,
            self.week.zone,
            self.plan_start,
            self.plan_end,
            sources,
            tuple(self.steps),
            left_out,
            score,
            hand,
            findings,
            False,
            "fridgeweek 0.1.0",
        )
        return replace(plan, **more)  # type: ignore[arg-type]

    @property
    def plan_start(self):  # type: ignore[no-untyped-def]
        return self.week.clock.start

    @property
    def plan_end(self):  # type: ignore[no-untyped-def]
        return self.week.clock.moment(self.week.horizon_s)
