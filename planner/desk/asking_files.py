"""A conversation for a new rig or week file, and the file it ends in."""

from __future__ import annotations

import tomllib
from datetime import date
from pathlib import Path
from typing import Any, Literal

from planner.clock import zone
from planner.desk.asking import Asking
from planner.desk.asking_rig import rig_script
from planner.desk.asking_text import amended_text, fresh_text
from planner.desk.asking_week import week_script
from planner.desk.place import Role
from planner.desk.texts import atomic_write
from planner.errors import InputError, Problem
from planner.files import Rig, parse_rig, parse_week
from planner.files.reading import fit_problems, read_rig, rig_of, rig_path, text_of, week_of

_PREAMBLES = {
    "rig": "A rig file: the limits, losses and times of one cryostat. Where a line says that it holds an offer, the "
    "number is invented: put your own there before any plan is run.",
    "week": "A week file: one request for fridge time. More that it may hold (slots, quiet hours, windows, absences) "
    "is listed by: fridgeweek schema",
}


class NewFile:
    """One rig or week file in the making. Nothing is written before `write`.

    Parameters
    ----------
    role
        Which of the two.
    path
        Where it shall be; a week's rig file lies in the same folder or below.
    start
        An existing file of the same role whose values are the offers.
    today, zone_offer
        For a week: the start offered lies after this day; the time zone offered.
    replace
        Whether a file that is there may be replaced.

    Raises
    ------
    InputError
        If the path cannot be written to, the file is there already, ``start`` cannot be used, or there is no rig file
        for a week.
    """

    def __init__(
        self,
        role: Role,
        path: Path,
        *,
        start: Path | None = None,
        today: date | None = None,
        zone_offer: str = "Europe/Vienna",
        replace: bool = False,
    ) -> None:
        self.role: Literal["week", "rig"] = role
        self.path = path
        _check_place(path, replace=replace)
        self._replace = replace
        self._start = None if start is None else text_of(start)
        if self._start is not None and start is not None:
            (parse_rig if role == "rig" else parse_week)(self._start, start.name)
        data = {} if self._start is None else tomllib.loads(self._start.removeprefix("\ufeff"))
        self._rigs: dict[str, Rig] = {}
        if role == "rig":
            self.asking = Asking(rig_script, self._rig_problems, data)
            return
        offer = self._rig_offer(data)
        day = today or date.today()  # noqa: DTZ011 - the day on the wall where the question is asked
        self.asking = Asking(lambda: week_script(self._rig, offer, day, zone_offer), self._week_problems, data)

    def text(self) -> str:
        """The whole file, once everything is answered.

        Raises
        ------
        InputError
            If what would be written cannot be read back; that is never expected.
        """
        content = self._whole(self.asking.content())
        if self._start is None:
            text = fresh_text(content, self.asking.answers, _PREAMBLES[self.role])
        else:
            text = amended_text(self._start, content)
        (parse_rig if self.role == "rig" else parse_week)(text, self.path.name)
        return text

    def write(self) -> Path:
        """Write the file in one go; raises InputError where it cannot be written."""
        text = self.text()
        _check_place(self.path, replace=self._replace)
        try:
            atomic_write(self.path, text.encode())
        except OSError as error:
            raise InputError([Problem(str(self.path), "", "", f"cannot be written: {error.strerror}")]) from error
        return self.path

    def _whole(self, content: dict[str, Any]) -> dict[str, Any]:
        return {"format": 1, "kind": self.role, **content}

    def _rig_problems(self, content: dict[str, Any]) -> list[Problem]:
        try:
            rig_of(self._whole(content), self.path.name)
        except InputError as error:
            return error.problems
        return []

    def _week_problems(self, content: dict[str, Any]) -> list[Problem]:
        try:
            week = week_of(self._whole(content), self.path.name)
            return fit_problems(week, self._rig(week.rig), self.path.name)
        except InputError as error:
            return error.problems

    def _rig(self, written: str) -> Rig:
        if written not in self._rigs:
            self._rigs[written] = read_rig(rig_path({"rig": written}, self.path))[0]
        return self._rigs[written]

    def _rig_offer(self, data: dict[str, Any]) -> str:
        """The rig file to offer: the one the start names, if it is there too, else the first beside the new file."""
        folder = self.path.resolve().parent
        named = data.get("rig")
        found = [named] if isinstance(named, str) else []
        found += sorted(str(path.relative_to(folder)) for path in [*folder.glob("*.toml"), *folder.glob("*/*.toml")])
        for name in found[:200]:
            try:
                self._rig(name)
            except InputError:
                continue
            return name
        hint = "make one first: fridgeweek new rig"
        raise InputError([Problem(str(folder), "", "", "there is no rig file that can be used here or below", hint)])


def zone_named(name: str, otherwise: str) -> str:
    """The name itself where it is a time zone's, else another."""
    try:
        zone(name)
    except ValueError:
        return otherwise
    return name


def _check_place(path: Path, *, replace: bool) -> None:
    """Raise InputError where a new file cannot be put."""
    wrong, hint = "", ""
    try:
        if path.is_dir():
            wrong = "is a folder"
        elif path.exists() and not replace:
            wrong, hint = "is there already", "give another name, or --replace"
        elif not path.resolve().parent.is_dir():
            wrong = "its folder is not there"
    except (OSError, ValueError) as error:
        wrong = f"is no usable path: {str(error)[:200]}"
    if wrong:
        raise InputError([Problem(str(path)[:200], "", "", wrong, hint)])
