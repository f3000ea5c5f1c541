"""The registry of actions: every key does one thing in a place, every action is done by somebody, typing is typing."""

from __future__ import annotations

from collections import Counter
from pathlib import Path

import pytest

from planner.desk.place import Place
from planner.screens.actions import ACTIONS, PLACES, TITLES, here, shown_key
from planner.screens.app import FridgeweekApp
from planner.screens.field_sheet import Entry, Lines
from planner.screens.outline_place import OutlinePlace
from planner.screens.plan_place import PlanPlace
from planner.screens.sheet_place import SheetPlace
from planner.screens.targets_place import TargetsPlace
from tests.screens.sitting import Sitting, run, session_in, sitting
from tests.screens.stored_plan import session_with_plan

WIDGETS = {
    **dict.fromkeys(("week", "rig", "samples"), OutlinePlace),
    "targets": TargetsPlace,
    "plan": PlanPlace,
    "sheet": SheetPlace,
}


@pytest.mark.parametrize("place", PLACES)
def test_a_key_does_one_thing_in_a_place(place: str) -> None:
    counts = Counter(key for action in here(place) for key in action.keys)
    assert [key for key, count in counts.items() if count > 1] == []


@pytest.mark.parametrize("place", PLACES)
def test_every_action_is_done(place: str) -> None:
    for action in here(place):
        if action.name.startswith("place_"):
            continue
        owners = (FridgeweekApp, WIDGETS.get(place, FridgeweekApp))
        assert any(hasattr(owner, f"do_{action.name}") for owner in owners), action.name


def test_no_action_takes_a_key_that_a_line_of_text_needs() -> None:
    # Keys of textual's Input, from its documentation ("Bindings"): these edit text wherever one types.
    own = {f"ctrl+{letter}" for letter in "acdekuvwx"} | {"backspace"}
    taken = {key for action in ACTIONS.values() for key in action.keys}
    assert taken & own == set()


def test_keys_are_written_as_people_write_them() -> None:
    assert [shown_key(key) for key in ("ctrl+s", "shift+up", "f9", "question_mark", "a", "plus", "pageup")] == [
        "^s", "⇧↑", "F9", "?", "a", "+", "PgUp",
    ]  # fmt: skip


def test_letters_are_text_where_one_types(tmp_path: Path) -> None:
    async def typing() -> None:
        async with sitting(session_in(tmp_path)) as user:
            start = user.session.document.texts
            await user.keys("enter", "enter")  # into the form of the first target, into its name
            assert isinstance(user.app.focused, Entry)
            await user.type("acdnsxurfgw123?")
            assert user.app.focused.value == "acdnsxurfgw123?"
            assert user.app.place == "targets"
            assert user.session.document.texts == start
            await user.keys("escape")
            assert isinstance(user.app.focused, Lines)
            assert user.session.document.texts == start

    run(typing())


def test_help_is_about_the_thing_in_focus(tmp_path: Path) -> None:
    async def helping() -> None:
        async with sitting(session_in(tmp_path), (120, 40)) as user:
            await user.keys("f3", "down", "enter", "f1")
            text = user.text()
            assert "Rig: rated field" in text
            assert "the highest field the maker allows" in text
            await user.keys("escape")
            await user.keys("f6", "f1")
            assert TITLES["plan"] in user.text()
            assert "the step under the cursor" in user.text()
            await user.keys("escape")
            assert "No plan yet" in user.text()

    run(helping())


def test_the_palette_is_the_registry(tmp_path: Path) -> None:
    async def palette() -> None:
        async with sitting(session_in(tmp_path)) as user:
            titles = [command.title for command in user.app.get_system_commands(user.app.screen)]
            assert titles == [action.long for action in here("targets")]

    run(palette())


def test_choices_turn_with_space_and_the_arrows(tmp_path: Path) -> None:
    async def turning() -> None:
        async with sitting(session_in(tmp_path)) as user:
            where = Place.of("week", "targets[1].direction")
            await user.keys("down", "enter")
            sheet = user.app.query_one(TargetsPlace).sheet
            row = next(at for at, one in enumerate(sheet.form.rows()) if one.key == "direction")
            sheet.lines.move_cursor(row=row)
            await user.keys("space")
            assert user.session.document.get(where) == "either"
            await user.keys("enter", "up", "up", "enter")
            assert user.session.document.get(where) == "down"
            sheet.lines.move_cursor(row=row)
            await user.keys("backspace")
            assert user.session.document.get(where) is None
            await user.keys("u", "u", "u")
            assert user.session.document.get(where) == "both"

    run(turning())


def test_the_cursor_walks_the_steps_and_zooms(tmp_path: Path) -> None:
    async def walking() -> None:
        async with sitting(session_with_plan(tmp_path)) as user:
            await user.keys("f6")
            timeline = user.app.query_one(PlanPlace).timeline
            steps = user.session.plan.steps if user.session.plan else ()
            seen = []
            for _ in range(6):
                await user.keys("down")
                seen.append(str(steps[timeline.at].kind))
            assert set(seen) <= {"take", "service"}
            await user.keys("right")
            assert f" {steps[timeline.at].number} " in user.text().splitlines()[15]
            whole = timeline.window
            await user.keys("plus", "plus")
            assert timeline.window.end_s - timeline.window.start_s == pytest.approx((whole.end_s - whole.start_s) / 4)
            await user.keys("end")
            last = steps[timeline.at]
            assert timeline.window.start_s <= last.start_s <= timeline.window.end_s
            await user.keys("0", "home")
            assert timeline.window.end_s == timeline.lanes.horizon_s if timeline.lanes else False
            assert timeline.at == 0

    run(walking())


def test_a_finding_leads_to_its_step_or_target(tmp_path: Path) -> None:
    async def jumping() -> None:
        session = session_with_plan(tmp_path)
        async with sitting(session) as user:
            session.set(Place.of("rig", "magnet.rated_field"), "11 T")
            await user.keys("f7")
            found = user.app.query_one("FindingsPlace").item  # type: ignore[attr-defined]
            assert found.kind == "stop"
            await user.keys("enter")
            assert user.app.place == "plan"
            assert session.plan is not None
            assert session.plan.steps[user.app.query_one(PlanPlace).timeline.at].number == found.step
            assert "STOP" in user.text()
            await user.keys("g")
            assert user.app.place == "targets"

    run(jumping())


def test_a_problem_leads_to_its_line(tmp_path: Path) -> None:
    async def mending() -> None:
        session = session_in(tmp_path)
        async with sitting(session) as user:
            session.set(Place.of("week", "people[1].trained"), 5)
            await user.keys("f7")
            assert "FILE" in user.text()
            await user.keys("enter")
            assert user.app.place == "week"
            assert _opened(user) == Place.of("week", "people[1]")

    run(mending())


def _opened(user: Sitting) -> Place | None:
    node = user.app.query_one("#week", OutlinePlace).node
    return node.place if node is not None else None
