"""What may import what, and that nothing slow is imported too early: looked at in a process of its own."""

from __future__ import annotations

import pkgutil
import subprocess
import sys
from pathlib import Path

import planner

ROOT = Path(__file__).parents[2]


def _loaded(code: str) -> set[str]:
    script = f"import sys\n{code}\nprint('\\n'.join(sys.modules))"
    done = subprocess.run([sys.executable, "-c", script], cwd=ROOT, capture_output=True, text=True, check=True)
    return set(done.stdout.split())


def _below_the_screens() -> list[str]:
    names = [module.name for module in pkgutil.walk_packages(planner.__path__, "planner.")]
    return [name for name in names if not name.startswith(("planner.screens", "planner.entry", "planner.__main__"))]


def test_nothing_below_the_screens_imports_textual() -> None:
    names = _below_the_screens()
    assert {"planner.desk.session", "planner.desk.drawing", "planner.cli.main"} <= set(names)
    loaded = _loaded("\n".join(f"import {name}" for name in names))
    assert [name for name in loaded if name.split(".")[0] == "textual"] == []


def test_the_command_imports_no_screens_and_no_solver_before_they_are_needed() -> None:
    loaded = {name.split(".")[0] for name in _loaded("import planner.entry")}
    assert loaded & {"textual", "ortools", "matplotlib", "pandas", "pint", "numba", "pydantic", "tomlkit"} == set()


def test_the_desk_opens_a_week_without_the_heavy_libraries() -> None:
    code = "import planner.desk.session, planner.desk.form, planner.desk.drawing, planner.desk.form_sheet"
    loaded = {name.split(".")[0] for name in _loaded(code)}
    assert loaded & {"textual", "ortools", "matplotlib"} == set()
