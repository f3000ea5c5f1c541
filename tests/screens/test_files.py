"""Saving, opening and leaving on the screen: nothing is lost unasked. Other people's words are shown as they are."""

from __future__ import annotations

from pathlib import Path

from planner.desk.place import Place
from planner.desk.session import Session
from tests.screens.sitting import SMALL, run, session_in, sitting

TITLE = Place.of("week", "title")


def test_a_file_changed_on_disk_is_asked_about(tmp_path: Path) -> None:
    async def saving() -> None:
        session = session_in(tmp_path)
        path = session.document.week_path
        async with sitting(session) as user:
            session.set(TITLE, "Mine")
            path.write_text(path.read_text(encoding="utf-8") + "# theirs\n", encoding="utf-8")
            await user.keys("ctrl+s")
            assert "has changed on disk" in user.text()
            await user.keys("escape")
            assert "# theirs" in path.read_text(encoding="utf-8")
            assert session.document.changed
            await user.keys("ctrl+s", "down", "enter")  # read theirs
            assert "# theirs" in session.document.texts.week
            await user.keys("u")
            assert session.document.get(TITLE) == "Mine"
            await user.keys("ctrl+s")
            assert "# theirs" not in path.read_text(encoding="utf-8")

    run(saving())


def test_unsaved_work_is_offered_and_can_be_undone(tmp_path: Path) -> None:
    async def offering() -> None:
        session = session_in(tmp_path)
        session.set(TITLE, "Unsaved")
        again = Session.begin(session.document.week_path, session.remembered)
        async with sitting(again) as user:
            assert "unsaved work on this week" in user.text()
            await user.keys("enter")
            assert "Unsaved" in user.text()
            await user.keys("u")
            assert "First week" in user.text()
            assert not again.document.changed

    run(offering())


def test_leaving_with_unsaved_work_asks(tmp_path: Path) -> None:
    async def leaving() -> None:
        session = session_in(tmp_path)
        async with sitting(session) as user:
            session.set(TITLE, "Unsaved")
            await user.keys("ctrl+q")
            assert "Not all is saved" in user.text()
            await user.keys("escape")
            assert user.app.is_running
            await user.keys("ctrl+q", "enter")  # save it
            await user.pilot.pause()
            assert not user.app.is_running
        assert "Unsaved" in session.document.week_path.read_text(encoding="utf-8")

    run(leaving())


def test_another_week_is_opened(tmp_path: Path) -> None:
    async def opening() -> None:
        session = session_in(tmp_path)
        other = tmp_path / "other.toml"
        other.write_text(session.document.texts.week.replace("First week", "Other week"), encoding="utf-8")
        async with sitting(session) as user:
            await user.keys("ctrl+o")
            field = user.app.focused
            field.value = str(tmp_path / "none.toml")  # type: ignore[union-attr]
            await user.keys("enter")
            assert "there is no such file" in user.text()
            await user.keys("ctrl+o")
            user.app.focused.value = str(other)  # type: ignore[union-attr]
            await user.keys("enter")
            await user.pilot.pause()
            assert user.session.document.week_path == other.resolve()
            assert "Other week" in user.text()
            await user.keys("f2", "f5", "c")
            assert len(user.session.document.data("week")["targets"]) == 9

    run(opening())


def test_a_broken_rig_is_mended_on_the_screen(tmp_path: Path) -> None:
    async def mending() -> None:
        session = session_in(tmp_path)
        rig = tmp_path / "wet_dilution.rig.toml"
        rig.write_text(
            rig.read_text(encoding="utf-8").replace('"12 T"\nfield_per', '"12"\nfield_per'), encoding="utf-8"
        )
        again = Session.begin(session.document.week_path, session.remembered)
        async with sitting(again) as user:
            assert "✗1 to mend" in user.text()
            await user.keys("s")
            assert user.app.place == "findings"
            assert "must be mended first" in user.text()
            assert again.solve is None
            await user.keys("enter", "enter")
            assert user.app.place == "rig"
            await user.keys("enter")
            assert "the unit is" in user.text()
            await user.type("12 T")
            await user.keys("enter")
            assert again.document.problems == ()

    run(mending())


def test_words_of_others_are_shown_as_they_are(tmp_path: Path) -> None:
    words = "[red]x[/] {{y}} :fire: $z"

    async def showing() -> None:
        session = session_in(tmp_path)
        session.set(TITLE, words)
        session.set(Place.of("week", "targets[1].name"), words)
        session.set(Place.of("week", "targets[0].before"), [words])
        session.set(Place.of("week", "users[0].name"), "[bold]A[/]")
        session.set(Place.of("week", "samples[0].user"), "[bold]A[/]")
        for at in range(2, 8):
            session.set(Place.of("week", f"targets[{at}].after"), [words])
        assert session.document.problems == ()
        async with sitting(session, (120, 40)) as user:
            assert user.text().count(words) >= 2
            await user.keys("f2")
            assert "[bold]A[/]" in user.text()
            await user.keys("s")
            await user.solved()
            await user.keys("f6", "down", "down")
            assert words in user.text()
            await user.keys("f7", "f8")
            assert words in user.text()

    run(showing())


def test_every_look_is_shown_and_remembered(tmp_path: Path) -> None:
    async def looking() -> None:
        session = session_in(tmp_path)
        async with sitting(session, SMALL) as user:
            first = user.app.theme
            await user.keys("ctrl+t")
            assert user.app.theme != first
            assert session.remembered.look() == user.app.theme
        async with sitting(Session.begin(session.document.week_path, session.remembered)) as user:
            assert user.app.theme == session.remembered.look()

    run(looking())
