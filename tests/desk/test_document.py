"""The document: edits by place, undo to the very text, problems, saving that loses nothing."""

from __future__ import annotations

import stat
from pathlib import Path

import pytest

from planner.desk.document import ChangedOnDiskError, Document
from planner.desk.place import Place
from planner.desk.rows import copied_row, free_name, new_row
from planner.errors import InputError
from planner.files import read_week
from tests.desk.sessions import document_in, week_in

RATED = Place.of("rig", "magnet.rated_field")
TARGETS, SAMPLES = Place.of("week", "targets"), Place.of("week", "samples")


def test_an_untouched_document_asks_for_what_its_files_ask_for(tmp_path: Path) -> None:
    path = week_in(tmp_path)
    document = Document.open(path)
    assert document.problems == ()
    assert document.request == read_week(path)
    assert not document.changed
    assert document.save() == ()


def test_undo_goes_back_to_the_very_text(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    start = document.texts
    document.set(RATED, "11 T")
    document.add_row(TARGETS, 2, new_row(document, TARGETS))
    document.move_row(Place.of("week", "targets[2]"), 0)
    document.delete(Place.of("week", "targets[4]"))
    document.clear(Place.of("week", "samples[0].lockin.poles"))
    document.set(Place.of("week", "samples[0].lockin.poles"), 2)
    last = document.texts
    labels = [document.undo() for _ in range(6)]
    assert labels == [
        "set samples[0].lockin.poles", "clear samples[0].lockin.poles", "delete targets[4]", "move targets[2]",
        "add to targets", "set magnet.rated_field",
    ]  # fmt: skip
    assert document.texts == start
    assert document.undo() == ""
    while document.redo():
        pass
    assert document.texts == last
    document.undo()
    document.set(RATED, "10 T")
    assert document.redo() == ""  # a new edit forgets what was undone


def test_setting_the_same_value_is_no_edit(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    document.set(RATED, "12 T")
    document.clear(Place.of("week", "targets[0].file"))
    assert document.undoable == 0
    document.set(Place.of("week", "targets[0].priority"), 5)
    assert document.undoable == 0


def test_problems_stand_at_their_places(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    document.set(Place.of("week", "targets[3].filling"), "two")
    document.set(Place.of("week", "targets[4].sample"), "H9")
    document.set(Place.of("rig", "bath.lines.reserve"), "60 %")
    assert document.request is None
    assert {document.place_of(one).where for one in document.problems} == {
        "targets[3].filling", "targets[4].sample", "bath",
    }  # fmt: skip
    assert [one.expected for one in document.problems_at(Place.of("week", "targets[4]"))] == [
        "expected a sample of this file"
    ]
    assert document.problems_at(Place.of("rig", "bath"))
    assert not document.problems_at(Place.of("rig", "magnet"))
    assert [document.words(one) for one in document.problems if one.where == "targets[4].sample"] == [
        'first_week.toml · Gap at 2/3 · sample is "H9": expected a sample of this file (known: H1)'
    ]
    assert document.rig is None


def test_parts_that_are_well_but_do_not_fit_are_a_problem(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    document.clear(Place.of("week", "present.level"))
    assert [one.where for one in document.problems] == ["present.level"]
    assert document.rig is not None
    assert document.request is None


def test_another_rig_is_read_when_the_week_names_it(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    other = tmp_path / "other.rig.toml"
    other.write_text(document.texts.rig.replace('rated_field = "12 T"', 'rated_field = "11 T"'), encoding="utf-8")
    document.set(Place.of("week", "rig"), "other.rig.toml")
    assert document.rig is not None
    assert float(document.rig.magnet.rated_field_T) == 11.0
    assert document.name("rig") == "other.rig.toml"
    document.set(Place.of("week", "rig"), "../nowhere.toml")
    assert document.rig is None
    assert any(one.where == "rig" for one in document.problems)
    document.undo()
    document.undo()
    assert document.name("rig") == "wet_dilution.rig.toml"
    assert document.request is not None


def test_saving_writes_what_changed_with_comments_and_permissions(tmp_path: Path) -> None:
    path = week_in(tmp_path)
    path.chmod(0o640)
    document = Document.open(path)
    before = path.read_text(encoding="utf-8")
    document.set(Place.of("week", "title"), "Other")
    assert document.save() == (path,)
    after = path.read_text(encoding="utf-8")
    assert after == before.replace("First week: one Hall bar", "Other")
    assert stat.S_IMODE(path.stat().st_mode) == 0o640
    assert sorted(one.name for one in tmp_path.iterdir()) == ["first_week.toml", "wet_dilution.rig.toml"]
    assert not document.changed
    document.undo()
    assert document.changed
    document.save()
    assert path.read_text(encoding="utf-8") == before


def test_a_file_changed_on_disk_is_not_written_over_unasked(tmp_path: Path) -> None:
    path = week_in(tmp_path)
    document = Document.open(path)
    document.set(RATED, "11 T")
    theirs = path.read_text(encoding="utf-8") + "# theirs\n"
    path.write_text(theirs, encoding="utf-8")
    with pytest.raises(ChangedOnDiskError, match=r"first_week\.toml"):
        document.save()
    assert path.read_text(encoding="utf-8") == theirs
    assert '"12 T"' in (tmp_path / "wet_dilution.rig.toml").read_text(encoding="utf-8")
    document.save(overwrite=True)
    assert "# theirs" not in path.read_text(encoding="utf-8")
    assert document.save() == ()


def test_reading_again_can_be_undone(tmp_path: Path) -> None:
    path = week_in(tmp_path)
    document = Document.open(path)
    document.set(Place.of("week", "title"), "Mine")
    path.write_text(path.read_text(encoding="utf-8") + "# theirs\n", encoding="utf-8")
    document.reload()
    assert "# theirs" in document.texts.week
    assert not document.changed
    assert document.undo() == "reload from disk"
    assert document.get(Place.of("week", "title")) == "Mine"
    assert document.changed


def test_what_cannot_be_written_is_said(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    document.set(RATED, "11 T")
    (tmp_path / "wet_dilution.rig.toml").unlink()
    (tmp_path / "wet_dilution.rig.toml").mkdir()
    with pytest.raises(InputError, match="cannot be written"):
        document.save(overwrite=True)


@pytest.mark.parametrize("text", ["", "a = ", "\x00", "kind = 'week'\n[[targets]]\ntargets"])
def test_a_file_that_is_no_toml_is_told(text: str, tmp_path: Path) -> None:
    path = tmp_path / "week.toml"
    path.write_text(text, encoding="utf-8")
    if text:
        with pytest.raises(InputError):
            Document.open(path)
    else:
        assert Document.open(path).problems


def test_a_byte_order_mark_is_no_change(tmp_path: Path) -> None:
    path = week_in(tmp_path)
    path.write_bytes(b"\xef\xbb\xbf" + path.read_bytes())
    document = Document.open(path)
    assert document.request is not None
    assert document.changed_on_disk() == []


def test_new_rows_have_names_and_letters_of_their_own(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    users = Place.of("week", "users")
    document.add_row(users, 1, new_row(document, users))
    assert document.get(users / 1) == {"name": "New user", "letter": "B"}
    copy = copied_row(document, users / 0)
    assert (copy["name"], copy["letter"]) == ("Hall group 2", "C")
    target = copied_row(document, TARGETS / 4)
    assert target["name"] == "Gap at 2/3 2"
    assert target["file"] == ""
    assert new_row(document, SAMPLES) == {"name": "New sample", "user": "Hall group"}
    assert free_name("A 2", {"A 2", "A 3"}) == "A 4"
    assert free_name("new", {"old"}) == "new"
