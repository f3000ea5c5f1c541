"""Plausible and hostile plans for the tests of sheets and summaries."""

from __future__ import annotations

import math
from dataclasses import replace

from planner.plan import Finding, HandOrder, Kind, LeftOut, Plan
from tests.runsheet.builder import DRY, HOUR, Builder, week_text


def said(at: int, users: int) -> dict[str, object]:
    """User, sample and words of the take number ``at``."""
    names = ("Hall group", "Noise group", "Wires group")[:users]
    who = at % users
    return {
        "user": names[who],
        "sample": f"chip {who + 1}",
        "target": ("Survey", "Gap at 2/3", "Fan between 2 and 1", "Two fifths, slowly")[at % 4],
        "details": (("excitation", "10 nA"), ("contacts", "current 1-5, Rxx 2-3"), ("file", f"run_{at + 1:03d}")),
    }


def small_plan(**more: object) -> Plan:
    """About thirty steps in a week: every kind of step once at least."""
    build = Builder()
    build.hold("Contacts and gate leakage", 2400, attended=True, people=("Operator 1",), **said(0, 3))
    build.sweep("Low-field Hall", (1.0, -1.0, 1.0), 0.1 / 60, direction="up, down", pace="lock-in filter", **said(0, 3))
    build.hold("look, then decide", 1200, take="Low-field Hall", attended=True, people=("Operator 2",), **said(0, 3))
    build.move(11.5)
    build.sweep("Survey", (4.5, 11.5), 0.2 / 60, direction="down, up", pace="rate asked for", **said(0, 3))
    build.move(6.8243, 0.05).park().hold("Gap at 2/3 at 50 mK", 5 * HOUR, **said(1, 3)).until(24 * HOUR + 1800)
    build.unpark().move(0.0, 0.015).transfer(97.0)
    top = tuple((name, -0.5 if name == "chip 3/top" else 0.0) for name, _ in build.state.gates_V)
    build.move(-4.5491, gates=top)
    build.gate_sweep("Gate map at −1", 4 * HOUR, "chip 3/top", (0.4, -1.0), direction="up, down", **said(2, 3))
    for at, temperature in enumerate((0.03, 0.08, 0.3)):
        build.move(-6.8, temperature).hold(
            f"Gap at {temperature * 1000:.0f} mK", 2400, notes=("settled first",), **said(at, 3)
        )
    build.until(build.second).move(3.2, 0.015).park().hold("Quiet night", 10 * HOUR, **said(1, 3))
    build.until(72 * HOUR).until(73 * HOUR).unpark().move(0.0).transfer(95.0)
    build.move(9.0).hold("Noise at 9 T", 9 * HOUR, **said(1, 3)).move(0.0)
    return build.plan(**more)


def large_plan(steps: int = 300) -> Plan:
    """A crowded week: moves and takes in turn, transfers each morning that needs one."""
    build = Builder(week_text(title="A crowded week"))
    at = 0
    while len(build.steps) < steps - 3:
        day_hour = (build.second / HOUR + 8.5) % 24
        if build.litres is not None and build.litres < 48 and 9 <= day_hour < 15:
            build.move(0.0).transfer(97.0)
        field_T = round(4.0 + 3.0 * math.sin(at / 9.0), 4)
        build.move(field_T, 0.015 if at % 5 else 0.12)
        if at % 3 == 2:
            ends = (field_T + 0.05, field_T - 0.05, field_T)
            build.sweep(f"Window {at}", ends, 0.03 / 60, direction="up, down", **said(at, 3))
        else:
            build.hold(f"Rung {at}", 3000, **said(at, 3))
        at += 1
    build.move(0.0)
    return build.plan()


def dry_plan() -> Plan:
    """A short plan for the rig without helium or switch."""
    text = week_text(
        title="Dry rig", users=("Hall group",), end="2031-03-05T18:00:00", rig="dry_insert.rig.toml", level=None
    )
    build = Builder(text, DRY)
    build.move(8.5, 4.2).hold("Hold at 8.5 T", 6 * HOUR, **said(0, 1)).move(2.0, 1.5)
    build.sweep("Sweep", (-2.0, 2.0), 0.1 / 60, direction="down, up", **said(0, 1)).move(0.0)
    return build.plan()


def clock_change_plan() -> Plan:
    """A week in which the clocks go back (Europe/Vienna, 26 October 2031)."""
    text = week_text(start="2031-10-24T08:30:00", end="2031-10-28T08:30:00")
    build = Builder(text)
    for at in range(9):
        build.move(1.0 + 0.2 * at).hold(f"Hold {at}", 7 * HOUR, **said(at, 3))
    return build.move(0.0).plan()


def with_finding(plan: Plan, kind: Kind) -> Plan:
    """The plan with one more finding of a kind."""
    finding = Finding(
        "ramp rate",
        kind,
        "the ramp is faster than the table",
        0.3,
        0.28,
        -0.02,
        "T/min",
        3600,
        2,
        mend="ramp at 0.28 T/min",
    )
    return replace(plan, findings=(*plan.findings, finding))


HOSTILE = (
    "<script>alert(1)</script>",
    '"><img src=http://x.test/a.png onerror=alert(1)>',
    "</title></style></table><h1>owned</h1>",
    "{{ 7 * 7 }}{% include 'x' %}",
    '=HYPERLINK("http://x.test","click")',
    "+1+cmd|' /C calc'!A0",
    "-2+3",
    "@SUM(A1:A9)",
    "\t=1+1",
    "\r\n=1+1",
    "＝1+1",
    "../../../etc/passwd",
    "C:\\con\\nul",
    "a\x00b\x07c\x1b[31md",
    "[bold red]x[/] :fire:",
    "$\\frac{1}{2}$ % \\n",
    "שלום \u202e dlrow \u2066 عربى",
    "🧲🔥 Ωµν≤ ﷽",
    "W" * 400,
    "word " * 80,
)


def hostile_plan() -> Plan:
    """The small plan with hostile words in every text of every step, finding, left-out take and hand order."""
    words = [*HOSTILE]
    plan = small_plan()
    steps = []
    for at, step in enumerate(plan.steps):
        word = words[at % len(words)]
        steps.append(
            replace(
                step,
                label=word,
                user=word,
                sample=word,
                target=word,
                take=f"{word} ",
                direction=word,
                pace=word,
                people=(word, word),
                details=((word, word),),
                notes=(word,),
                legs=tuple(replace(leg, reason=word) for leg in step.legs),
            )
        )
    findings = tuple(Finding(w, Kind.WARN, w, unit=w[:5], value=1.0, subject=w, source=w, mend=w) for w in words)
    left_out = tuple(LeftOut(w, w, w, 3, w) for w in words)
    compared = tuple(HandOrder(w, 1, 1, 1, 1.0, 1, 1, 1, 1.0) for w in words)
    return replace(
        plan,
        title=" ".join(words[:6]),
        rig=words[0],
        made_by=words[1],
        steps=tuple(steps),
        findings=findings,
        left_out=left_out,
        compared=compared,
    )
