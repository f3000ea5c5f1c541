"""The texts of a week file and its rig file: reading them, and writing a file in one go."""

from __future__ import annotations

import os
import tempfile
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from planner.errors import InputError, Problem
from planner.files import reading


@dataclass(frozen=True, slots=True)
class Texts:
    """Both texts. ``rig_path`` is empty where the week names no rig file that can be read."""

    week: str
    rig_path: str
    rig: str

    def files(self, week_path: Path) -> list[tuple[Path, str]]:
        """Path and text of each file there is."""
        found = [(week_path, self.week)]
        return [*found, (Path(self.rig_path), self.rig)] if self.rig_path else found


def read_texts(week_path: Path) -> Texts:
    """The texts of a week file and the rig file it names.

    Raises
    ------
    InputError
        If the week file cannot be read or is no TOML. A rig file that cannot be read gives an empty text.
    """
    week = text_of(week_path)
    plain(week, week_path.name)
    try:
        path, rig = rig_text_of(week_path, week)
    except InputError:
        return Texts(week, "", "")
    return Texts(week, str(path), rig)


def rig_text_of(week_path: Path, week: str) -> tuple[Path, str]:
    """Path and text of the rig file that a week's text names; raises InputError where it cannot be read."""
    path = reading.rig_path(plain(week, week_path.name), week_path)
    text = text_of(path)
    plain(text, path.name)
    return path, text


def text_of(path: Path) -> str:
    """The text of a file without a byte-order mark; raises InputError where it cannot be read."""
    return reading.text_of(path).removeprefix("\ufeff")


def plain(text: str, name: str) -> dict[str, Any]:
    """The content of TOML text; raises InputError where it is none."""
    try:
        return tomllib.loads(text)
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        raise InputError([Problem(name, "", "", f"not valid TOML: {error}")]) from None


def atomic_write(path: Path, content: bytes) -> None:
    """Write a file so that it is, at every instant, the old one or the new one; its permissions stay.

    Raises
    ------
    OSError
        If it cannot be written; the old file is then as it was.
    """
    path = path.resolve()
    path.parent.mkdir(parents=True, exist_ok=True)
    handle, name = tempfile.mkstemp(prefix=f".{path.name}.", suffix=".part", dir=path.parent)
    part = Path(name)
    try:
        with os.fdopen(handle, "wb") as out:
            out.write(content)
            out.flush()
            os.fsync(out.fileno())
        if path.exists():
            part.chmod(path.stat().st_mode & 0o7777)
        else:
            part.chmod(0o644)
        part.replace(path)
    except OSError:
        part.unlink(missing_ok=True)
        raise
