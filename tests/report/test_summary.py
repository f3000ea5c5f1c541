"""The terminal's summary, read as text at 80 and 120 columns, with and without colour."""

from __future__ import annotations

import io
import json
from dataclasses import replace

import pytest
from rich.console import Console

from planner.plan import Finding, Kind, Plan, Step
from planner.report import as_data, findings_table, summary
from planner.report.summary import bound_words, stretches
from tests.runsheet.plans import clock_change_plan, dry_plan, hostile_plan, large_plan, small_plan, with_finding


def printed(plan: Plan, width: int = 120, **more: bool) -> str:
    out = io.StringIO()
    summary(plan, Console(file=out, width=width, **more))  # type: ignore[arg-type]
    return out.getvalue()


def squeezed(text: str) -> str:
    return " ".join(text.split())


def test_what_is_done_when_totals_and_reasons() -> None:
    told = squeezed(printed(small_plan()))
    for part in (
        "Three groups, one magnet · Wet dilution rig",
        "Mon 3 08:30–09:10 Contacts and gate leakage (attended) A 0 15 mK 92 %",
        "11:26–13:17 Survey A +4.500 … +11.500 15 mK 84 %",
        "17:23–03:23+ Quiet night B +3.200 15 mK 83 %",
        "09:27–10:06 helium transfer (attended)",
        "10:00–10:20 look, then decide: Low-field Hall (attended)",
        "10 takes, 96 of at most 104 points",
        "2 transfers pour 40.7 L",
        "gap 7.0 %, not proven best",
        "Fan between 2 and 1 · 6 A 2 no time left before the end",
        "warn Fri 02:30 3 helium line: Survey: the gauge comes near the line (value 45.1 %",
        "as listed 20 of 10 14.3 h, 95.6 L 5.3 h, 81.6 L 9.0 h, 14.0 L",
        "sorted by field 22 of 10 8.3 h, 85.6 L 5.3 h, 81.6 L 3.0 h, 4.0 L",
        "A planning aid: it protects neither magnet nor people.",
    ):
        assert part in told


@pytest.mark.parametrize("width", [60, 80, 120])
@pytest.mark.parametrize("build", [small_plan, hostile_plan, dry_plan, clock_change_plan])
def test_no_line_is_wider_than_the_terminal(width: int, build: object) -> None:
    from rich.cells import cell_len

    plan = build()  # type: ignore[operator]
    assert all(cell_len(line.rstrip()) <= width for line in printed(plan, width).splitlines())


def test_every_take_is_in_some_line() -> None:
    plan = large_plan()
    found = stretches(plan.steps, plan.clock)
    shown = [step for stretch in found for step in stretch.steps]
    assert shown == [step for step in plan.steps if step.kind in ("take", "service")]


def test_neighbouring_takes_of_one_target_are_one_line() -> None:
    plan = small_plan()
    steps = tuple(
        replace(step, target="Gap", user="Hall group") if "Gap at" in step.label else step for step in plan.steps
    )
    assert "Gap (3 takes)" in printed(replace(plan, steps=steps))


def test_no_colour_and_no_escape_codes_without_a_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    assert "\x1b" not in printed(with_finding(hostile_plan(), Kind.STOP))
    monkeypatch.setenv("NO_COLOR", "1")
    told = printed(with_finding(small_plan(), Kind.STOP), force_terminal=True)
    assert "\x1b[3" not in told.replace("\x1b[3m", "")  # italic is no colour; 30–37 are
    assert "STOP" in told


def test_markup_and_control_characters_of_users_are_data() -> None:
    told = printed(hostile_plan(), 500)
    assert "[bold red]x[/] :fire:" in told
    assert "<script>alert(1)</script>" in told
    assert not set(told) & set("\x00\x07\x1b\r\u202e\u2066")


def test_kinds_are_words_and_the_worst_comes_first() -> None:
    plan = small_plan()
    out = io.StringIO()
    findings = [
        Finding("a", Kind.NOTE, "n"),
        Finding("b", Kind.STOP, "s", at_s=0),
        Finding("c", Kind.WARN, "w"),
        Finding("d", Kind.POLICY, "p"),
    ]
    findings_table(findings, plan.clock, Console(file=out, width=80))
    assert [line.split()[0] for line in out.getvalue().splitlines()[1:]] == ["STOP", "POLICY", "warn", "note"]
    assert "Mon 08:30" in out.getvalue()


def test_no_findings_nothing_left_out_and_no_steps() -> None:
    told = printed(replace(small_plan(), findings=(), left_out=(), compared=(), steps=()))
    assert "No findings." in told
    assert "Nothing." in told
    assert "No takes and no services." in told
    assert "by hand" not in told


def test_a_proven_plan_and_a_recovery_plan_say_so() -> None:
    plan = small_plan()
    assert bound_words(replace(plan.score, proven=True)).endswith("proven best.")
    assert "RECOVERY PLAN" in printed(replace(plan, recovery=True))


def test_levels_are_litres_where_the_plan_carries_no_rig() -> None:
    told = squeezed(printed(replace(small_plan(), sources=())))
    assert "Contacts and gate leakage (attended) Hall group 0 15 mK 66 L" in told


def test_a_dry_rig_has_no_level() -> None:
    told = printed(dry_plan())
    assert "09:26–17:32 Survey (2 takes) A −2.000 … +8.500 1.5 … 4.2 K" in map(squeezed, told.splitlines())
    assert "helium 0" not in told


def test_data_for_programs_is_json_and_complete() -> None:
    plan = small_plan()
    data = json.loads(json.dumps(as_data(plan), allow_nan=False))
    assert [step["number"] for step in data["steps"]] == [step.number for step in plan.steps]
    assert data["steps"][3]["start"] == "2031-03-03T10:20:30+01:00"  # 40 min, 30 s and 50 min, 20 min after 08:30
    assert data["score"]["gap"] == pytest.approx(0.07)
    assert data["compared"][0]["saved_h"] == pytest.approx(9)
    assert data["compared"][1]["saved_L"] == pytest.approx(4)
    assert data["findings"][0]["kind"] == "warn"
    assert data["findings"][0]["at"] == "2031-03-07T02:30:00+01:00"  # 90 h after Mon 08:30
    assert data["left_out"][1]["reason"] == "costs more helium than the stock holds"
    assert {source["role"] for source in data["sources"]} == {"week", "rig"}
    first: Step = plan.steps[0]
    assert data["steps"][0]["people"] == list(first.people)
