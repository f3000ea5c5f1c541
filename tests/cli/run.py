"""Runs the command line inside this process, in a folder of its own, and remembers what it left there."""

from __future__ import annotations

import os
from dataclasses import dataclass
from pathlib import Path

from click.testing import CliRunner

from planner.cli import main


@dataclass(frozen=True)
class Ran:
    """What a command printed, how it ended, and the files in its folder before and after."""

    status: int
    out: str
    err: str
    before: dict[str, bytes]
    after: dict[str, bytes]

    @property
    def lines(self) -> list[str]:
        """What it said on stderr, line by line."""
        return self.err.splitlines()


def contents(folder: Path) -> dict[str, bytes]:
    """Every file under a folder with its bytes."""
    return {str(path.relative_to(folder)): path.read_bytes() for path in sorted(folder.rglob("*")) if path.is_file()}


def run(folder: Path, *args: str, answers: str | bytes | None = None) -> Ran:
    """Run ``fridgeweek ARGS`` in a folder; anything that is no orderly exit is raised."""
    before, here = contents(folder), Path.cwd()
    os.chdir(folder)
    try:
        result = CliRunner().invoke(main, list(args), input=answers, prog_name="fridgeweek")
    finally:
        os.chdir(here)
    if result.exception is not None and not isinstance(result.exception, SystemExit):
        raise result.exception
    return Ran(result.exit_code, result.stdout, result.stderr, before, contents(folder))


def put(folder: Path, **files: str | bytes) -> None:
    """Write files; "week" and "rig" stand for the names that weeks of the tests use."""
    names = {"week": "week.toml", "rig": "round.rig.toml"}
    for name, content in files.items():
        path = folder / names.get(name, name)
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
