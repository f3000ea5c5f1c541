"""Files on the disk: hashes, where a rig may lie, what cannot be read."""

from __future__ import annotations

import hashlib
from pathlib import Path

import pytest

from planner.errors import InputError
from planner.files import parse_rig, read_rig, read_week, request_of
from planner.files.reading import LARGEST_FILE
from tests.builders import rig_text, week_text, written

EXAMPLES = Path(__file__).parents[2] / "example_plans"


def test_a_week_and_its_rig_are_read_with_their_hashes(tmp_path: Path) -> None:
    path = written(tmp_path, week_text(), rig_text())
    request = read_week(path)
    assert request.week.title == "A test week"
    assert request.rig.name == "Round-number rig"
    assert [(s.role, s.path) for s in request.sources] == [("week", "week.toml"), ("rig", "round.rig.toml")]
    assert request.sources[0].sha256 == hashlib.sha256(path.read_bytes()).hexdigest()
    again = request_of(request.sources)
    assert (again.week, again.rig) == (request.week, request.rig)


def test_the_hash_is_the_files_own_whatever_the_line_ends(tmp_path: Path) -> None:
    raw = b"\xef\xbb\xbf" + rig_text().replace("\n", "\r\n").encode()
    path = tmp_path / "windows.rig.toml"
    path.write_bytes(raw)
    rig, source = read_rig(path)
    assert rig == parse_rig(rig_text())
    assert source.sha256 == hashlib.sha256(raw).hexdigest()


@pytest.mark.parametrize("place", ["sub/round.rig.toml", "./round.rig.toml", "sub/../round.rig.toml"])
def test_a_rig_may_lie_beside_the_week_or_below(tmp_path: Path, place: str) -> None:
    (tmp_path / "sub").mkdir()
    (tmp_path / place).write_text(rig_text(), encoding="utf-8")
    assert read_week(written(tmp_path, week_text({"rig": place}))).rig.name == "Round-number rig"


@pytest.mark.parametrize(
    "place", ["../round.rig.toml", "/etc/hostname", "sub/../../round.rig.toml", "a\x00b", "x" * 190 + "/../../r.toml"]
)
def test_a_rig_elsewhere_is_refused(tmp_path: Path, place: str) -> None:
    folder = tmp_path / "weeks"
    folder.mkdir()
    (tmp_path / "round.rig.toml").write_text(rig_text(), encoding="utf-8")
    with pytest.raises(InputError, match="relative path of a rig file in the week's folder or below it"):
        read_week(written(folder, week_text({"rig": place})))


def test_a_rig_that_a_link_leads_out_to_is_refused(tmp_path: Path) -> None:
    folder = tmp_path / "weeks"
    folder.mkdir()
    (tmp_path / "outside.toml").write_text(rig_text(), encoding="utf-8")
    (folder / "round.rig.toml").symlink_to(tmp_path / "outside.toml")
    with pytest.raises(InputError, match="in the week's folder or below it"):
        read_week(written(folder, week_text()))


def test_a_rig_that_is_not_there_gets_the_nearest_name(tmp_path: Path) -> None:
    path = written(tmp_path, week_text({"rig": "round.rg.toml"}), rig_text())
    with pytest.raises(InputError) as caught:
        read_week(path)
    assert [(p.where, p.hint) for p in caught.value.problems] == [("rig", 'did you mean "round.rig.toml"?')]


@pytest.mark.parametrize("name", ["", ".", "x" * 300])
def test_odd_rig_names_are_problems_not_crashes(tmp_path: Path, name: str) -> None:
    with pytest.raises(InputError) as caught:
        read_week(written(tmp_path, week_text({"rig": name}), rig_text()))
    assert "rig" in {problem.where for problem in caught.value.problems}


@pytest.mark.parametrize(
    ("raw", "says"),
    [
        (b"", "the file is empty"),
        (b"# nothing\n", "the file is empty"),
        (b"title = \xff\xfe", "expected text in UTF-8"),
        (b"title = ", "not valid TOML"),
        (b"a = " + b"[" * 20000, "not valid TOML"),
        (b"a = 1" + b"0" * 5000, "not valid TOML"),
        (b"#" * (LARGEST_FILE + 1), f"{LARGEST_FILE + 1} bytes: expected at most {LARGEST_FILE} bytes"),
    ],
)
def test_files_that_cannot_be_read(tmp_path: Path, raw: bytes, says: str) -> None:
    path = tmp_path / "odd.toml"
    path.write_bytes(raw)
    for read in (read_week, read_rig):
        with pytest.raises(InputError) as caught:
            read(path)
        (problem,) = caught.value.problems
        assert says in str(problem)
        assert problem.file == "odd.toml"


def test_no_file_a_folder_and_an_impossible_name(tmp_path: Path) -> None:
    for path, says in [
        (tmp_path / "none.toml", "there is no such file"),
        (tmp_path, "expected a file"),
        (tmp_path / ("x" * 300), "cannot be read"),
        (tmp_path / "a\x00b", "cannot be read"),
    ]:
        with pytest.raises(InputError) as caught:
            read_week(path)
        (problem,) = caught.value.problems
        assert problem.expected.startswith(says)


@pytest.mark.parametrize("path", sorted(EXAMPLES.glob("*.rig.toml")), ids=lambda path: path.name)
def test_the_demo_rigs_can_be_read(path: Path) -> None:
    assert read_rig(path)[0].name


def test_the_first_demo_week_can_be_read() -> None:
    assert len(read_week(EXAMPLES / "first_week.toml").week.targets) == 8
