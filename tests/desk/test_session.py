"""A sitting: edits are kept, a plan knows whether it is current, findings follow the week, sheets refuse."""

from __future__ import annotations

import threading
import time
from importlib import resources
from pathlib import Path

import pytest

from planner.desk.place import Place
from planner.desk.remembered import DEMO, Remembered, state_folder
from planner.desk.session import Session
from planner.desk.solving import Effort, Solve, SolveState
from planner.desk.telling import finding_words, findings_of, progress_words, score_words, step_at, tell
from planner.errors import InputError, NoPlanError, RefusedError
from planner.plan import Kind
from planner.planning import Progress
from tests.desk.sessions import EXAMPLES, session_in, week_in
from tests.screens.stored_plan import session_with_plan

RATED = Place.of("rig", "magnet.rated_field")


def test_unsaved_work_is_kept_and_offered_and_forgotten(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    assert session.draft() is None
    session.set(RATED, "11 T")
    again = Session.begin(session.document.week_path, session.remembered)
    draft = again.draft()
    assert draft is not None
    assert draft.texts == session.document.texts
    again.take_draft(draft)
    assert again.document.get(RATED) == "11 T"
    assert again.document.undo().startswith("unsaved work of ")
    again.redo()
    again.save()
    assert Session.begin(session.document.week_path, session.remembered).draft() is None


def test_undoing_everything_forgets_the_unsaved_work(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    session.set(RATED, "11 T")
    session.undo()
    assert session.draft() is None
    session.redo()
    assert session.remembered.draft(session.document.week_path) is not None
    session.discard()
    assert session.remembered.draft(session.document.week_path) is None


def test_a_draft_that_cannot_be_read_counts_as_none(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    session.set(RATED, "11 T")
    for path in (tmp_path / "state").glob("*.json"):
        path.write_text("{", encoding="utf-8")
    assert session.draft() is None
    assert session.remembered.last_week() is None


def test_the_last_week_comes_again_and_the_demo_week_first(tmp_path: Path) -> None:
    remembered = Remembered(tmp_path / "state")
    first = Session.begin(None, remembered)
    assert first.document.week_path == (tmp_path / "state" / "first week" / "first_week.toml").resolve()
    assert first.document.problems == ()
    other = week_in(tmp_path)
    Session.begin(other, remembered)
    assert Session.begin(None, remembered).document.week_path == other.resolve()
    other.unlink()
    assert Session.begin(None, remembered).document.week_path == first.document.week_path


def test_the_demo_is_the_example(tmp_path: Path) -> None:
    for name in DEMO:
        packaged = resources.files("planner.desk.demo").joinpath(name).read_bytes()
        assert packaged == (EXAMPLES / name).read_bytes(), f"copy example_plans/{name} to planner/desk/demo/"
    edited = Remembered(tmp_path).demo_week()
    edited.write_text("mine", encoding="utf-8")
    assert Remembered(tmp_path).demo_week().read_text(encoding="utf-8") == "mine"


def test_the_state_folder_is_where_the_specification_says(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    # XDG Base Directory Specification 0.8: $XDG_STATE_HOME, absolute; by default $HOME/.local/state
    monkeypatch.setenv("XDG_STATE_HOME", str(tmp_path))
    assert state_folder() == tmp_path / "fridgeweek"
    monkeypatch.setenv("XDG_STATE_HOME", "relative")
    monkeypatch.setenv("HOME", str(tmp_path))
    assert state_folder() == tmp_path / ".local" / "state" / "fridgeweek"


def test_solving_in_the_background(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    heard: list[str] = []
    session.start_solve(lambda: heard.append(threading.current_thread().name))
    with pytest.raises(RefusedError, match="running"):
        session.start_solve()
    assert session.solve is not None
    session.solve.wait(60)
    found = session.collect()
    assert found is not None
    assert found.state is SolveState.DONE
    assert found.progress is not None
    assert found.progress.best_points == found.plan.score.points if found.plan else False
    assert set(heard) == {"solve"}
    assert session.plan is found.plan
    assert session.plan_is_current
    assert session.collect() is None


def test_a_solve_stops_with_the_best_so_far(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    session.effort = Effort(3600.0)
    solve = session.start_solve()
    while solve.snapshot().progress is None:
        time.sleep(0.01)
    assert solve.snapshot().state is SolveState.RUNNING
    session.stop_solve()
    found = solve.wait(30)
    assert found.state is SolveState.DONE
    assert found.plan is not None
    assert found.elapsed_s < 30


def test_a_solve_that_fails_says_why(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    session.set(Place.of("week", "staffed"), [])  # a must that has to be attended
    session.start_solve()
    assert session.solve is not None
    session.solve.wait(60)
    found = session.collect()
    assert found is not None
    assert found.state is SolveState.FAILED
    assert isinstance(found.error, NoPlanError)
    assert not session.solving


def test_an_error_that_nobody_meant_is_not_swallowed(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def broken(*_args: object, **_more: object) -> None:
        raise ZeroDivisionError

    monkeypatch.setattr("planner.desk.solving.plan_request", broken)
    session = session_in(tmp_path)
    session.start_solve()
    assert session.solve is not None
    session.solve.wait(30)
    with pytest.raises(ZeroDivisionError):
        session.collect()


def test_a_week_with_problems_is_not_solved(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    session.set(Place.of("week", "targets[3].filling"), "two")
    with pytest.raises(InputError, match="filling"):
        session.start_solve()
    assert session.solve is None


def test_leaving_ends_a_solve(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    assert session.document.request is not None
    solve = Solve(session.document.request, Effort(3600.0))
    while solve.snapshot().progress is None:
        time.sleep(0.01)
    assert solve.leave(30)
    assert not solve.running


def test_findings_judge_the_plan_by_the_week_as_it_stands(tmp_path: Path) -> None:
    session = session_with_plan(tmp_path)
    assert session.plan is not None
    kinds = {finding.kind for finding in session.findings}
    assert Kind.STOP not in kinds
    session.set(RATED, "9 T")
    stops = [finding for finding in session.findings if finding.kind is Kind.STOP]
    assert {finding.rule for finding in stops} >= {"rated field"}
    assert any(finding.step is not None for finding in stops)
    assert not session.plan_is_current
    session.undo()
    assert session.plan_is_current
    assert {finding.kind for finding in session.findings} == kinds


def test_sheets_are_written_for_a_current_plan_only(tmp_path: Path) -> None:
    session = session_with_plan(tmp_path)
    with pytest.raises(RefusedError, match="no plan"):
        session_in(tmp_path).write(tmp_path / "out", ["csv"])
    session.set(Place.of("week", "title"), "Another")
    with pytest.raises(RefusedError, match="edited since"):
        session.write(tmp_path / "out", ["csv"])
    assert not (tmp_path / "out").exists()
    assert [path.suffix for path in session.write(tmp_path / "out", ["csv"], review=True)] == [".csv"]
    session.undo()
    assert [path.suffix for path in session.write(tmp_path / "out", ["csv", "json"])] == [".csv", ".json"]


def test_a_step_is_told(tmp_path: Path) -> None:
    session = session_with_plan(tmp_path)
    plan = session.plan
    assert plan is not None
    for step in plan.steps:
        told = tell(plan, step, session.document.rig, session.findings)
        lines = dict(told.lines)
        assert {"when", "from", "to", "helium", "people"} <= set(lines)
        assert lines["helium"].count("%") >= 3
        assert "lowest allowed" in lines["helium"]
        assert told.heading.startswith(f"{step.number} ")
    move = next(step for step in plan.steps if step.kind == "move" and step.legs[0].action == "ramp")
    assert "T/min" in dict(tell(plan, move, session.document.rig).lines)["pace"]
    poured = next(step for step in plan.steps if step.poured_L)
    assert "pours" in dict(tell(plan, poured, session.document.rig).lines)["helium"]


def test_a_finding_finds_its_step(tmp_path: Path) -> None:
    session = session_with_plan(tmp_path)
    session.set(RATED, "9 T")
    plan = session.plan
    assert plan is not None
    found = next(finding for finding in session.findings if finding.step is not None)
    at = step_at(plan, found)
    assert at is not None
    assert plan.steps[at].number == found.step
    assert found in findings_of(plan.steps[at], session.findings)
    words = finding_words(found, plan.clock)
    assert "limit 9 T" in words
    assert "Mend:" in words


def test_a_solve_in_one_short_line() -> None:
    known = Progress(15292, 16900, 61.44, 24.01, 0.609, 12.0)
    assert progress_words(known, 12.2) == "12 s · best 15292/16900 points, 61.44 h · bound 24.01 h · gap 60.9 %"
    assert progress_words(None, 0.4) == "0 s · looking for a first plan"
    assert progress_words(Progress(None, 100, None, 3.0, None, 1.0), 1.0) == "1 s · no plan yet, at most 100 points"


def test_a_proven_plan_is_said_to_be_best(tmp_path: Path) -> None:
    session = session_with_plan(tmp_path)
    assert session.plan is not None
    assert score_words(session.plan.score).startswith("best ")
