"""A week file and its rig file while somebody edits them: values by place, undo, problems, saving."""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from planner.desk import toml_text
from planner.desk.place import Place, Role, value_at
from planner.desk.texts import Texts, atomic_write, read_texts, rig_text_of, text_of
from planner.errors import InputError, PlannerError, Problem
from planner.files import Request, Rig, parse_rig, request_of
from planner.files.reading import parse_week, source

MOST_UNDO = 500


class ChangedOnDiskError(PlannerError):
    """A file is no longer what it was when it was opened; nothing has been written."""

    def __init__(self, names: list[str]) -> None:
        self.names = names
        super().__init__(f"changed on disk since it was opened: {', '.join(names)}")


@dataclass(frozen=True, slots=True)
class Edit:
    """One step of the history: what was done, and the texts before it."""

    label: str
    before: Texts


class Document:
    """The texts of a week and its rig, as they stand after every edit.

    Every edit is one step that `undo` takes back to the very same text. Nothing is written before `save`.
    """

    def __init__(self, week_path: Path, texts: Texts) -> None:
        self.week_path = week_path
        self._texts = texts
        self._on_disk = texts
        self._undo: list[Edit] = []
        self._redo: list[Edit] = []
        self._read()

    @staticmethod
    def open(path: Path | str) -> Document:
        """Open a week file and the rig file it names; problems in either are kept, not raised.

        Raises
        ------
        InputError
            If the week file cannot be read at all or is no TOML.
        """
        week_path = Path(path).expanduser().resolve()
        return Document(week_path, read_texts(week_path))

    @property
    def texts(self) -> Texts:
        """The texts as they stand."""
        return self._texts

    @property
    def saved_texts(self) -> Texts:
        """The texts as they were when last read or written."""
        return self._on_disk

    @property
    def changed(self) -> bool:
        """Whether anything is not saved."""
        return self._texts != self._on_disk

    @property
    def problems(self) -> tuple[Problem, ...]:
        """Everything wrong with either file, as it stands."""
        return self._problems

    @property
    def request(self) -> Request | None:
        """Week and rig, ready to be planned; None while there are problems."""
        return self._request

    @property
    def rig(self) -> Rig | None:
        """The rig, where its file has no problems."""
        return self._rig

    def name(self, role: Role) -> str:
        """The file's name in messages."""
        return self.week_path.name if role == "week" else Path(self._texts.rig_path).name or "rig"

    def data(self, role: Role) -> dict[str, Any]:
        """The plain content of a file. Not to be changed."""
        return self._data[role]

    def get(self, place: Place) -> Any:
        """The value at a place, None where there is none."""
        return value_at(self._data[place.role], place.parts)

    def problems_at(self, place: Place) -> tuple[Problem, ...]:
        """Problems at a place or inside it."""
        return tuple(problem for problem in self._problems if self.place_of(problem).within(place))

    def place_of(self, problem: Problem) -> Place:
        """Where a problem stands."""
        role: Role = "rig" if problem.file == self.name("rig") and problem.file != self.week_path.name else "week"
        return Place.of(role, problem.where)

    def words(self, problem: Problem) -> str:
        """A problem as one would say it: the row's name where it has one, the key, the value, what is wanted."""
        place = self.place_of(problem)
        row = self.get(Place(place.role, place.parts[:2]))
        name = str(row.get("name") or "") if isinstance(row, dict) and len(place.parts) > 1 else ""
        where = Place(place.role, place.parts[2:]).where if name else place.where
        about = " · ".join(part for part in (self.name(place.role), name, where) if part)
        value = f" is {problem.value}" if problem.value else ""
        hint = f" ({problem.hint})" if problem.hint else ""
        return f"{about}{value}: {problem.expected}{hint}"

    # Edits

    def set(self, place: Place, value: Any, label: str = "") -> None:
        """Put a value under a key."""
        if self.get(place) == value and type(self.get(place)) is type(value):
            return
        label = label or f"set {place.where}"
        self._edit(label, place.role, lambda text: toml_text.set_value(text, place.parts, value))

    def clear(self, place: Place) -> None:
        """Leave a key out; nothing happens where it is left out already."""
        if self.get(place) is None:
            return
        small = self.get(place.above)
        if isinstance(small, dict) and len(small) == 1 and place.above.last == "lockin":
            place = place.above
        self._edit(f"clear {place.where}", place.role, lambda text: toml_text.remove(text, place.parts))

    def add_row(self, rows: Place, at: int, row: dict[str, Any]) -> None:
        """Put one more row into a list."""
        self._edit(f"add to {rows.where}", rows.role, lambda text: toml_text.add_row(text, rows.parts, at, row))

    def add_rows(self, rows: Place, new: list[dict[str, Any]], label: str) -> None:
        """Put several rows at the end of a list, as one step."""

        def adding(text: str) -> str:
            there = value_at(tomllib.loads(text), rows.parts) or []
            for at, row in enumerate(new, len(there)):
                text = toml_text.add_row(text, rows.parts, at, row)
            return text

        self._edit(label, rows.role, adding)

    def delete(self, place: Place) -> None:
        """Take a row of a list, or a table, out."""
        self._edit(f"delete {place.where}", place.role, lambda text: toml_text.remove(text, place.parts))

    def move_row(self, row: Place, to: int) -> None:
        """Move a row of a list to another position."""
        self._edit(f"move {row.where}", row.role, lambda text: toml_text.move_row(text, row.parts, to))

    def replace_texts(self, texts: Texts, label: str) -> None:
        """Put other texts in, as one step that can be undone."""
        if texts != self._texts:
            self._push(Edit(label, self._texts))
            self._texts = texts
            self._read()

    def _edit(self, label: str, role: Role, change: Callable[[str], str]) -> None:
        """One step. Raises CannotEditError, and changes nothing, where the file's layout does not allow it."""
        texts = self._texts
        if role == "week":
            new = replace(texts, week=change(texts.week))
            if tomllib.loads(new.week).get("rig") != self._data["week"].get("rig"):
                new = self._with_rig(new)
        else:
            new = replace(texts, rig=change(texts.rig))
        self.replace_texts(new, label)

    def _with_rig(self, texts: Texts) -> Texts:
        """The texts with the rig file that the week now names; its text is read afresh."""
        try:
            path, text = rig_text_of(self.week_path, texts.week)
        except InputError:
            return replace(texts, rig_path="", rig="")
        return replace(texts, rig_path=str(path), rig=text)

    def _push(self, edit: Edit) -> None:
        self._undo.append(edit)
        del self._undo[:-MOST_UNDO]
        self._redo.clear()

    @property
    def undoable(self) -> int:
        """How many steps can be undone."""
        return len(self._undo)

    def undo(self) -> str:
        """Take the last step back; its label, or nothing where there is none."""
        return self._step(self._undo, self._redo)

    def redo(self) -> str:
        """Do again what was undone; its label, or nothing where there is none."""
        return self._step(self._redo, self._undo)

    def _step(self, source: list[Edit], target: list[Edit]) -> str:
        if not source:
            return ""
        edit = source.pop()
        target.append(Edit(edit.label, self._texts))
        self._texts = edit.before
        self._read()
        return edit.label

    # Reading what stands there

    def _read(self) -> None:
        texts = self._texts
        self._data: dict[Role, dict[str, Any]] = {"week": tomllib.loads(texts.week), "rig": {}}
        self._rig: Rig | None = None
        self._request: Request | None = None
        problems: list[Problem] = []
        week = None
        try:
            week = parse_week(texts.week, self.week_path.name)
        except InputError as error:
            problems += error.problems
        try:
            if not texts.rig_path:
                rig_text_of(self.week_path, texts.week)  # says what is wrong with the rig's name
            self._data["rig"] = tomllib.loads(texts.rig)
            self._rig = parse_rig(texts.rig, self.name("rig"))
        except tomllib.TOMLDecodeError as error:
            problems.append(Problem(self.name("rig"), "", "", f"not valid TOML: {error}"))
        except InputError as error:
            problems += error.problems
        if not problems and week is not None and self._rig is not None:
            sources = (source("week", self.week_path.name, texts.week), source("rig", week.rig, texts.rig))
            try:
                self._request = request_of(sources)
            except InputError as error:  # each is well, but they do not fit together
                problems += error.problems
        self._problems = tuple(dict.fromkeys(problems))

    # Saving

    def changed_on_disk(self) -> list[str]:
        """Names of files whose content on disk is not what was last read or written."""
        names = []
        for path, text in self._on_disk.files(self.week_path):
            try:
                same = text_of(path) == text
            except InputError:
                same = False
            if not same:
                names.append(path.name)
        return names

    def save(self, *, overwrite: bool = False) -> tuple[Path, ...]:
        """Write what has changed, each file in one go.

        Returns
        -------
        tuple of Path
            The files written.

        Raises
        ------
        ChangedOnDiskError
            If a file on disk is not what was opened, unless ``overwrite``; nothing is written then.
        InputError
            If a file cannot be written.
        """
        if not overwrite and (names := self.changed_on_disk()):
            raise ChangedOnDiskError(names)
        was = dict(self._on_disk.files(self.week_path))
        todo = [(path, text) for path, text in self._texts.files(self.week_path) if overwrite or was.get(path) != text]
        for path, text in todo:
            try:
                atomic_write(path, text.encode())
            except OSError as error:
                wrong = Problem(path.name, "", "", f"cannot be written: {error.strerror or error}")
                raise InputError([wrong]) from error
        self._on_disk = self._texts
        return tuple(path for path, _ in todo)

    def reload(self) -> None:
        """Take what is on disk now, as one step that can be undone; raises InputError where it cannot be read."""
        texts = read_texts(self.week_path)
        self._on_disk = texts
        self.replace_texts(texts, "reload from disk")
