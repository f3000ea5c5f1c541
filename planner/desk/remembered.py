"""What is remembered between two openings: the last week file, the look, and work that was not saved.

All of it lies in the user's state folder (XDG Base Directory Specification, version 0.8: ``XDG_STATE_HOME``, by
default ``~/.local/state``).
"""

from __future__ import annotations

import hashlib
import json
import os
from dataclasses import asdict, dataclass
from datetime import UTC, datetime
from importlib import resources
from pathlib import Path
from typing import Any

from planner.desk.document import Document
from planner.desk.texts import Texts, atomic_write

DEMO = ("first_week.toml", "wet_dilution.rig.toml")


@dataclass(frozen=True, slots=True)
class Draft:
    """Unsaved work on a week, and the texts on disk it was made from."""

    week_path: str
    kept_at: str
    texts: Texts
    base: Texts


class Remembered:
    """The state folder. A file in it that cannot be read counts as not there."""

    def __init__(self, folder: Path | None = None) -> None:
        self.folder = state_folder() if folder is None else folder

    def last_week(self) -> Path | None:
        """The week file opened last, if it is still there."""
        path = self._settings().get("week")
        return Path(path) if isinstance(path, str) and Path(path).is_file() else None

    def look(self) -> str:
        """The look chosen last, or nothing."""
        return str(self._settings().get("look", ""))

    def remember(self, **settings: str) -> None:
        """Remember the last week or the look."""
        self._write("settings.json", {**self._settings(), **settings})

    def demo_week(self) -> Path:
        """The small demo week, copied into the state folder the first time."""
        folder = self.folder / "first week"
        for name in DEMO:
            if not (folder / name).exists():
                atomic_write(folder / name, resources.files("planner.desk.demo").joinpath(name).read_bytes())
        return folder / DEMO[0]

    def keep(self, document: Document) -> None:
        """Keep unsaved work, so that it survives a closed terminal; forget it where all is saved."""
        if not document.changed:
            self.forget(document.week_path)
            return
        now = datetime.now(UTC).isoformat(timespec="seconds")
        draft = Draft(str(document.week_path), now, document.texts, document.saved_texts)
        self._write(self._name(document.week_path), asdict(draft))

    def draft(self, week_path: Path) -> Draft | None:
        """Unsaved work on a week, where there is any."""
        found = self._read(self._name(week_path))
        try:
            return Draft(found["week_path"], found["kept_at"], Texts(**found["texts"]), Texts(**found["base"]))
        except (KeyError, TypeError):
            return None

    def forget(self, week_path: Path) -> None:
        """Forget unsaved work on a week."""
        (self.folder / self._name(week_path)).unlink(missing_ok=True)

    def _settings(self) -> dict[str, Any]:
        return self._read("settings.json")

    @staticmethod
    def _name(week_path: Path) -> str:
        return f"draft-{hashlib.sha256(str(week_path.resolve()).encode()).hexdigest()[:16]}.json"

    def _read(self, name: str) -> dict[str, Any]:
        try:
            found = json.loads((self.folder / name).read_text(encoding="utf-8"))
        except (OSError, ValueError):
            return {}
        return found if isinstance(found, dict) else {}

    def _write(self, name: str, data: dict[str, Any]) -> None:
        atomic_write(self.folder / name, json.dumps(data, ensure_ascii=False, indent=1).encode())


def state_folder() -> Path:
    """The program's folder for state, not made by asking."""
    base = os.environ.get("XDG_STATE_HOME", "")
    if not base or not Path(base).is_absolute():  # the specification: relative paths are to be ignored
        local = os.environ.get("LOCALAPPDATA", "") if os.name == "nt" else ""
        base = local or str(Path.home() / ".local" / "state")
    return Path(base) / "fridgeweek"
