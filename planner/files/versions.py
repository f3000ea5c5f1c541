"""File format versions: old files are brought up to date step by step before they are read."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any, Literal

from planner.errors import InputError, Problem
from planner.files.rig import RIG_FORMAT
from planner.files.week import WEEK_FORMAT

Data = dict[str, Any]
Migration = Callable[[Data], Data]

CURRENT: dict[Literal["week", "rig"], int] = {"week": WEEK_FORMAT, "rig": RIG_FORMAT}

MIGRATIONS: dict[tuple[str, int], Migration] = {}
"""From a kind of file and its format to the function that makes the next format of it."""


def migrate(
    data: Data,
    kind: Literal["week", "rig"],
    file: str,
    *,
    current: int | None = None,
    migrations: Mapping[tuple[str, int], Migration] = MIGRATIONS,
) -> Data:
    """The same content in the current format.

    Parameters
    ----------
    data
        A file as TOML gives it; not changed.
    current, migrations
        The format wanted and the steps that lead there; by default the program's own.

    Raises
    ------
    InputError
        If ``format`` is missing, no whole number, newer than this program, or so old that no step leads from it.
    """
    wanted = CURRENT[kind] if current is None else current
    found = data.get("format")
    if isinstance(found, bool) or not isinstance(found, int):
        value = "" if found is None else repr(found)
        raise InputError([Problem(file, "format", value, f"expected the file format version, format = {wanted}")])
    if found > wanted:
        expected = f"this program reads formats up to {wanted}"
        raise InputError([Problem(file, "format", str(found), expected, "the file was made for a newer version")])
    while found < wanted:
        step = migrations.get((kind, found))
        if step is None:
            raise InputError([Problem(file, "format", str(found), "no way is known to bring this format up to date")])
        found += 1
        data = {**step(data), "format": found}
    return data
