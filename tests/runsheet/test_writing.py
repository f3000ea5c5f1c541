"""File names, whole files, nothing outside the folder, the same bytes for the same plan."""

from __future__ import annotations

import hashlib
import os
import re
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from planner.errors import InputError
from planner.plan import Plan
from planner.runsheet import FORMATS, write_sheets
from planner.runsheet.writing import file_stem
from tests.runsheet.plans import HOSTILE

ROOT = Path(__file__).parents[2]


def test_three_files_by_default_in_the_order_asked_for(
    small_files: tuple[Path, ...], small: Plan, tmp_path: Path
) -> None:
    assert [path.name for path in small_files] == [
        "three_groups_one_magnet-run_sheet.html",
        "three_groups_one_magnet-run_sheet.csv",
        "three_groups_one_magnet-plan.json",
    ]
    assert [path.suffix for path in write_sheets(small, tmp_path, ("json", "csv"))] == [".json", ".csv"]


@given(st.text(max_size=120))
def test_a_stem_is_a_plain_name_whatever_the_title(title: str) -> None:
    assert re.fullmatch(r"[a-z0-9_]{1,67}", file_stem(title))


def test_titles_that_lose_letters_stay_apart() -> None:
    assert file_stem("ν = 1") != file_stem("µ = 1")
    assert file_stem("🧲") != file_stem("🔥")
    assert file_stem("A week") == "a_week"


@pytest.mark.parametrize("title", HOSTILE)
def test_nothing_lands_outside_the_folder(small: Plan, tmp_path: Path, title: str) -> None:
    folder = tmp_path / "deep" / "out"
    before = set(tmp_path.rglob("*"))
    (path,) = write_sheets(replace(small, title=title), folder, ("json",))
    assert path.parent == folder
    assert set(tmp_path.rglob("*")) - before == {tmp_path / "deep", folder, path}


def test_a_link_is_replaced_and_not_followed(small: Plan, tmp_path: Path) -> None:
    (path,) = write_sheets(small, tmp_path, ("json",))
    precious = tmp_path / "precious"
    precious.write_text("keep", encoding="utf-8")
    path.unlink()
    path.symlink_to(precious)
    write_sheets(small, tmp_path, ("json",))
    assert precious.read_text(encoding="utf-8") == "keep"
    assert not path.is_symlink()


def test_files_are_replaced_and_no_part_is_left(small: Plan, tmp_path: Path) -> None:
    first = write_sheets(small, tmp_path)
    first[0].write_text("old", encoding="utf-8")
    second = write_sheets(small, tmp_path)
    assert first == second
    assert sorted(tmp_path.iterdir()) == sorted(second)
    assert second[0].stat().st_size > 1000


def test_unknown_formats_are_named_with_the_nearest(small: Plan, tmp_path: Path) -> None:
    with pytest.raises(InputError) as refused:
        write_sheets(small, tmp_path, ("htm", "csv"))
    assert '"htm"' in str(refused.value)
    assert "html" in str(refused.value)
    assert list(tmp_path.iterdir()) == []


def test_a_folder_that_is_a_file_is_an_input_error(small: Plan, tmp_path: Path) -> None:
    (tmp_path / "out").write_text("", encoding="utf-8")
    with pytest.raises(InputError, match="cannot be written"):
        write_sheets(small, tmp_path / "out", ("json",))


def test_another_process_with_another_hash_seed_writes_the_same_bytes(
    small_files: tuple[Path, ...], tmp_path: Path
) -> None:
    program = (
        "import sys; from pathlib import Path; from planner.plan import Plan;"
        "from planner.runsheet import write_sheets;"
        "write_sheets(Plan.from_json(Path(sys.argv[1]).read_bytes()), Path(sys.argv[2]))"
    )
    subprocess.run(
        [sys.executable, "-c", program, str(small_files[2]), str(tmp_path)],
        check=True,
        cwd=ROOT,
        env={**os.environ, "PYTHONHASHSEED": "77"},
    )

    def digests(paths: tuple[Path, ...]) -> list[str]:
        return [hashlib.sha256(path.read_bytes()).hexdigest() for path in paths]

    assert digests(tuple(tmp_path / path.name for path in small_files)) == digests(small_files)


def test_every_registered_format_writes_the_crowded_and_the_hostile_plan(
    large: Plan, hostile: Plan, tmp_path: Path
) -> None:
    for plan in (large, hostile):
        for path in write_sheets(plan, tmp_path, tuple(FORMATS)):
            assert path.read_bytes().decode("utf-8-sig")


def test_importing_the_sheets_does_not_load_the_drawing_or_page_libraries() -> None:
    program = (
        "import sys, planner.runsheet, planner.report;"
        "print([name for name in ('matplotlib', 'jinja2', 'pandas', 'scipy') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", program], check=True, cwd=ROOT, capture_output=True, text=True)
    assert done.stdout.strip() == "[]"
