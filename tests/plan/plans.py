"""A small plan with one step of every kind, written out by hand."""

from __future__ import annotations

from datetime import datetime
from zoneinfo import ZoneInfo

from planner.plan import (
    Charge,
    Coil,
    CoilMode,
    Fills,
    Finding,
    HandOrder,
    Kind,
    LeftOut,
    Leg,
    Plan,
    Score,
    Source,
    Stage,
    State,
    Step,
    StepKind,
    along_z,
)

VIENNA = ZoneInfo("Europe/Vienna")
START = datetime(2031, 3, 3, 8, 30, tzinfo=VIENNA)

REST = State(
    Coil(),
    Stage(0.015, Charge("circulating", -3600)),
    (("S1/back", 0.0), ("S1/top", -0.25)),
    (("S1", "dark"),),
    Fills(helium_s=-7200),
)
DRIVEN = State(Coil(along_z(6.0), CoilMode.DRIVEN, along_z(60.0)), REST.stage, REST.gates_V, REST.light, REST.fills)
PARKED = State(
    Coil(along_z(6.0), CoilMode.PERSISTENT, along_z(0.0), along_z(60.0)), REST.stage, REST.gates_V, REST.light
)
UNKNOWN = State(Coil(along_z(6.0), CoilMode.PERSISTENT, along_z(0.0), "unknown"), REST.stage)


def small_plan() -> Plan:
    ramp = Leg("coil", "ramp", 0, 1200, "rate table 0–6 T", 0.8, 0.005, (REST.coil, DRIVEN.coil))
    warm = Leg("stage", "warm", 0, 600, "stage table", stage_K=(0.015, 0.1))
    gates = Leg("gates", "gate ramp", 0, 25, "gate rate", gates_V=(REST.gates_V, (("S1/back", 0.0), ("S1/top", 0.0))))
    hold = Leg("coil", "hold", 1200, 4800, "duration asked", 0.7, coil=(DRIVEN.coil, DRIVEN.coil))
    steps = (
        Step(1, StepKind.MOVE, "ramp to 6 T", 0, 1200, REST, DRIVEN, (ramp, warm, gates), 80.0, 79.2, pace="table"),
        Step(2, StepKind.TAKE, "hold at 6 T", 1200, 4800, DRIVEN, DRIVEN, (hold,), 79.2, 78.5, target="T1",
             take="T1 · 1", user="U1", sample="S1", direction="up", attended=True, people=("Operator 1", "Operator 2"),
             details=(("file", "s1_hold"),), notes=("provisional",)),
        Step(3, StepKind.SERVICE, "helium transfer", 4800, 6000, PARKED, PARKED, (), 78.5, 98.5, 20.0, 25.0, 40.0,
             "helium transfer"),
        Step(4, StepKind.WAIT, "wait", 6000, 7200, UNKNOWN, UNKNOWN),
    )  # fmt: skip
    return Plan(
        title="A small plan",
        rig="Round-number rig",
        zone="Europe/Vienna",
        start=START,
        end=datetime(2031, 3, 3, 10, 30, tzinfo=VIENNA),
        sources=(Source("week", "w.toml", "ab" * 32, "title = 'ν ≤ Ω'"), Source("rig", "r.toml", "cd" * 32, "x = 1")),
        steps=steps,
        left_out=(LeftOut("T2", "", "U1", 2, "does not fit"),),
        score=Score(30, 40, 1200, 1.5, 0.7083333333333333, 0.5, 7200, 0.25, proven=False, stopped="time"),
        compared=(HandOrder("as listed", 1, 30, 1500, 2.0, 1, 30, 1200, 1.5),),
        findings=(Finding("helium lines", Kind.WARN, "low", 47.5, 50.0, -2.5, "%", 300, 1, "T1", "rig", "fill first"),),
        recovery=True,
        made_by="the tests",
    )
