"""Rules of the house: late imports, docstrings, sizes. The floors themselves are import-linter's (pyproject.toml)."""

from __future__ import annotations

import ast
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import planner

HOUSE = Path(planner.__file__).parent
MODULES = sorted(HOUSE.rglob("*.py"))
MOST_LINES, MOST_FUNCTION_LINES = 450, 70
HEAVY = ("ortools", "numba", "matplotlib", "textual", "pandas", "rich", "click", "jinja2")


def name_of(path: Path) -> str:
    return str(path.relative_to(HOUSE.parent))


def loaded_by(*imported: str) -> set[str]:
    """Top-level packages in memory after importing the modules in a fresh interpreter."""
    code = f"import sys, {', '.join(imported)}; print(*sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True, timeout=60)
    return {module.split(".")[0] for module in done.stdout.split()}


def test_the_lower_floors_load_nothing_heavy() -> None:
    lower = ("planner.files", "planner.moves", "planner.takes", "planner.checks", "planner.calendars")
    assert loaded_by(*lower).isdisjoint(HEAVY)


def test_the_plan_loads_pandas_and_pydantic_only_when_asked() -> None:
    assert loaded_by("planner.plan").isdisjoint((*HEAVY, "pydantic", "pint", "numpy"))


def test_units_load_pint_only_for_the_first_quantity() -> None:
    assert loaded_by("planner.units", "planner.clock", "planner.calendars").isdisjoint((*HEAVY, "pint"))


def test_the_test_sees_what_is_loaded() -> None:
    assert {"planner", "pandas"} <= loaded_by("planner.plan.table")


def _public(nodes: list[ast.stmt], inside: str = "") -> Iterator[tuple[str, ast.AST]]:
    """Public classes and functions, and the public methods of public classes."""
    for node in nodes:
        if isinstance(node, (ast.ClassDef, ast.FunctionDef, ast.AsyncFunctionDef)) and not node.name.startswith("_"):
            yield f"{inside}{node.name}", node
            if isinstance(node, ast.ClassDef):
                yield from _public(node.body, f"{inside}{node.name}.")


def _is_override(node: ast.AST) -> bool:
    decorators = getattr(node, "decorator_list", [])
    return any(isinstance(each, ast.Name) and each.id in ("override", "overload") for each in decorators)


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_everything_public_says_what_it_is_for(path: Path) -> None:
    tree = ast.parse(path.read_text(encoding="utf-8"))
    if tree.body:
        assert ast.get_docstring(tree), "the module has no docstring"
    silent = [
        name
        for name, node in _public(tree.body)
        if not _is_override(node) and not ast.get_docstring(node)  # type: ignore[arg-type]
    ]
    assert silent == []


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_modules_and_functions_stay_small(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert len(text.splitlines()) <= MOST_LINES
    functions = [
        node for node in ast.walk(ast.parse(text)) if isinstance(node, (ast.FunctionDef, ast.AsyncFunctionDef))
    ]
    lengths = {node.name: (node.end_lineno or node.lineno) - node.lineno + 1 for node in functions}
    assert {name: length for name, length in lengths.items() if length > MOST_FUNCTION_LINES} == {}


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_no_module_is_a_drawer_for_odds_and_ends(path: Path) -> None:
    assert path.stem not in {"utils", "util", "helpers", "helper", "common", "misc"}
