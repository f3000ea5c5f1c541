"""The commands: data alone on stdout, the rest on stderr, exit status 0, 1, 2 or 3."""

from __future__ import annotations

import json
import os
import shutil
import signal
import subprocess
import sys
from pathlib import Path

import pytest

from planner.cli.output import CAUTION
from planner.plan import Plan
from tests.builders import Changes, rig_text, week_text
from tests.cli.run import Ran, put, run

ROOT = Path(__file__).parents[2]
EXAMPLES = ROOT / "example_plans"
HOLDS: list[Changes] = [
    {"name": f"At {field} T", "kind": "hold", "field": f"{field} T", "duration": "1 h"} for field in (3, 1, 2)
]
QUICK = ("--seconds", "0.3", "--reproducible")


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    put(tmp_path, week=week_text(None, HOLDS), rig=rig_text())
    return tmp_path


@pytest.fixture(scope="module")
def planned(tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, Ran]:
    """A folder with a plan's sheets in ``out``, and what the command said."""
    folder = tmp_path_factory.mktemp("planned")
    put(folder, week=week_text(None, HOLDS), rig=rig_text())
    return folder, run(folder, "plan", "week.toml", "-o", "out", *QUICK)


def test_plan_prints_a_summary_and_writes_the_sheets(planned: tuple[Path, Ran]) -> None:
    folder, ran = planned
    assert ran.status == 0
    for hold in HOLDS:
        assert hold["name"] in ran.out
    assert "points · cost" in ran.err
    assert "points · cost" not in ran.out
    written = sorted(ran.after.keys() - ran.before.keys())
    assert written == [f"out/a_test_week-{name}" for name in ("plan.json", "run_sheet.csv", "run_sheet.html")]
    assert [line for line in ran.lines if line.startswith("wrote ")] == [
        f"wrote out/a_test_week-{name}" for name in ("run_sheet.html", "run_sheet.csv", "plan.json")
    ]
    assert CAUTION in ran.lines
    plan = Plan.from_json((folder / "out" / "a_test_week-plan.json").read_bytes())
    assert {step.target for step in plan.steps if step.target} == {hold["name"] for hold in HOLDS}


def test_plan_without_a_folder_writes_nothing(folder: Path) -> None:
    ran = run(folder, "plan", "week.toml", *QUICK)
    assert ran.status == 0
    assert ran.after == ran.before


def test_plan_as_json(folder: Path) -> None:
    ran = run(folder, "plan", "week.toml", "--json", *QUICK)
    assert ran.status == 0
    data = json.loads(ran.out)
    assert data["title"] == "A test week"


def test_the_same_seed_gives_the_same_plan(folder: Path) -> None:
    first, second = (run(folder, "plan", "week.toml", "--json", "--seed", "5", *QUICK).out for _ in range(2))
    assert first == second


def test_a_week_of_which_no_plan_exists(folder: Path) -> None:
    present = {"level": "90 %", "field": "3 T", "coil": "persistent", "persistent_current": "unknown"}
    put(folder, week=week_text({"present": present}, HOLDS))
    ran = run(folder, "plan", "week.toml", *QUICK)
    assert ran.status == 3
    assert ran.out == ""
    assert "The persistent current is not known" in ran.err
    assert "Traceback" not in ran.err


def test_check_of_a_week_without_a_stop(folder: Path) -> None:
    ran = run(folder, "check", "week.toml")
    assert ran.status == 0
    assert ran.err == ""
    assert ran.after == ran.before


def test_check_of_a_week_with_mistakes(tmp_path: Path) -> None:
    for name in ("mistaken_week.toml", "wet_dilution.rig.toml"):
        shutil.copy(EXAMPLES / name, tmp_path)
    ran = run(tmp_path, "check", "mistaken_week.toml")
    assert ran.status == 1
    assert "STOP" in ran.out
    assert ran.err == ""
    as_json = run(tmp_path, "check", "mistaken_week.toml", "--json")
    assert as_json.status == 1
    found = json.loads(as_json.out)
    assert {"stop"} < {finding["kind"] for finding in found}
    assert all(finding["text"] for finding in found)


def test_a_target_beyond_the_rated_field_is_a_stop(folder: Path) -> None:
    put(folder, week=week_text(None, [{**HOLDS[0], "field": "10.5 T"}]))
    ran = run(folder, "check", "week.toml")
    assert ran.status == 1
    assert "10.5" in ran.out


def test_check_of_a_plan(planned: tuple[Path, Ran]) -> None:
    folder, _ = planned
    ran = run(folder, "check", "out/a_test_week-plan.json")
    assert ran.status == 0
    assert ran.err == ""


def test_a_plan_that_was_meddled_with_is_a_stop_and_gets_no_sheet(planned: tuple[Path, Ran], tmp_path: Path) -> None:
    folder, _ = planned
    data = json.loads((folder / "out" / "a_test_week-plan.json").read_bytes())
    ramp = next(leg for step in data["steps"] for leg in step["legs"] if leg["action"] == "ramp")
    ramp["rate"] = 1.0
    put(tmp_path, **{"meddled.json": json.dumps(data)})
    checked = run(tmp_path, "check", "meddled.json", "--json")
    assert checked.status == 1
    assert "stop" in {finding["kind"] for finding in json.loads(checked.out)}
    refused = run(tmp_path, "sheet", "meddled.json", "-o", "out")
    assert refused.status == 1
    assert refused.out == ""
    assert refused.after == refused.before
    review = run(tmp_path, "sheet", "meddled.json", "-o", "out", "--review", "--as", "html")
    assert review.status == 0
    assert list(review.after.keys() - review.before.keys()) == ["out/a_test_week-REVIEW_COPY-run_sheet.html"]


def test_sheet_writes_the_formats_asked_for(planned: tuple[Path, Ran], tmp_path: Path) -> None:
    folder, _ = planned
    shutil.copy(folder / "out" / "a_test_week-plan.json", tmp_path / "plan.json")
    ran = run(tmp_path, "sheet", "plan.json", "-o", "sheets", "--as", "csv, html,csv")
    assert ran.status == 0
    assert ran.out == ""
    assert sorted(ran.after.keys() - ran.before.keys()) == [
        f"sheets/a_test_week-run_sheet.{end}" for end in ("csv", "html")
    ]
    same = (folder / "out" / "a_test_week-run_sheet.csv").read_bytes()
    assert ran.after["sheets/a_test_week-run_sheet.csv"] == same


def test_sheet_says_that_a_file_has_changed(planned: tuple[Path, Ran], tmp_path: Path) -> None:
    folder, _ = planned
    shutil.copy(folder / "out" / "a_test_week-plan.json", tmp_path / "plan.json")
    put(tmp_path, week=week_text({"title": "Another"}, HOLDS))
    ran = run(tmp_path, "sheet", "plan.json", "--as", "csv")
    assert ran.status == 0
    assert "warn: the week file week.toml has changed since this plan was made" in ran.err


def test_schema(tmp_path: Path) -> None:
    ran = run(tmp_path, "schema")
    assert ran.status == 0
    assert ran.err == ""
    data = json.loads(ran.out)
    assert data["rig"]["properties"]["magnet"]
    assert data["week"]["properties"]["targets"]


@pytest.mark.parametrize(
    "line", [(), ("plan",), ("check",), ("sheet",), ("targets",), ("schema",), ("new",), ("new", "rig")]
)
def test_help_says_what_a_command_does(tmp_path: Path, line: tuple[str, ...]) -> None:
    for option in ("--help", "-h"):
        if line and option == "-h":
            continue
        ran = run(tmp_path, *line, option)
        assert ran.status == 0
        assert ran.out.startswith("Usage: fridgeweek")
        assert ran.err == ""


def test_help_imports_nothing_that_is_slow() -> None:
    code = (
        "import sys\nfrom planner.entry import main\n"
        "try:\n    main(['--help'])\nexcept SystemExit:\n    pass\n"
        "slow = {'pydantic', 'numpy', 'pandas', 'pint', 'ortools', 'matplotlib', 'textual', 'numba', 'openpyxl'}\n"
        "print(sorted(slow & sys.modules.keys()), file=sys.stderr)\n"
    )
    ran = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert ran.stdout.startswith("Usage:")
    assert ran.stderr == "[]\n"


def started(folder: Path, *line: str) -> subprocess.Popen[str]:
    """The command in a process of its own that listens to Ctrl-C."""
    return subprocess.Popen(
        [sys.executable, "-m", "planner", *line],
        cwd=folder,
        env={**os.environ, "PYTHONPATH": str(ROOT)},
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        preexec_fn=lambda: signal.signal(signal.SIGINT, signal.default_int_handler),
    )


def test_ctrl_c_keeps_the_best_plan_so_far(tmp_path: Path) -> None:
    for name in ("shared_week.toml", "wet_dilution.rig.toml"):
        shutil.copy(EXAMPLES / name, tmp_path)
    with started(tmp_path, "plan", "shared_week.toml", "--seconds", "86400", "-o", "out", "--json") as child:
        assert child.stderr is not None
        for line in child.stderr:
            if "points · cost" in line:
                break
        child.send_signal(signal.SIGINT)
        out, err = child.communicate(timeout=60)
    assert child.returncode == 0, err
    assert json.loads(out)["steps"]
    assert "Traceback" not in err
    assert (tmp_path / "out").is_dir()
