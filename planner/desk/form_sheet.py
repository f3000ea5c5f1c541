"""The form that writes the sheets: where to, in which formats, for real or as a copy to look at."""

from __future__ import annotations

from pathlib import Path

from planner.desk.form import FormRow
from planner.desk.session import Session
from planner.desk.values import Explained
from planner.errors import PlannerError

WRITE = "write"
FORMAT_HELP = {
    "html": "one page to print or to show, with curves and boxes to tick",
    "csv": "one row a step, for spreadsheets",
    "json": "the plan itself, to be checked, opened or planned again",
}


class SheetForm:
    """The answers, and the line that writes. ``told`` is what came of it: files, or why not."""

    def __init__(self, session: Session) -> None:
        self.session = session
        self.folder = session.sheet_folder()
        self.formats = dict.fromkeys(session.formats(), True)
        self.review = False
        self.told: tuple[str, ...] = ()
        self.written: tuple[Path, ...] = ()

    def rows(self) -> list[FormRow]:
        """Folder, formats, review, and the line that writes."""
        yes_no = ("yes", "no")
        formats = [
            FormRow(
                name, name, _said(on), _said(on), FORMAT_HELP.get(name, ""), help="write this format", choices=yes_no
            )
            for name, on in self.formats.items()
        ]
        label = "▶ write the review copy" if self.review else "▶ write the sheet"
        review = "marked on every page as not to be run; written whatever the checks say"
        return [
            FormRow("folder", "folder", self._folder(), self._folder(), help="beside the week file, or a whole path"),
            *formats,
            FormRow("review", "review copy", _said(self.review), _said(self.review), review, choices=yes_no),
            FormRow(WRITE, label, "", "", self._stands(), act=True),
        ]

    def explain(self, key: str, text: str) -> Explained:
        """Whether an answer is usable."""
        if key == "folder":
            usable = bool(text.strip()) and "\0" not in text
            return Explained(usable, "" if usable else "needed: a folder", text.strip())
        usable = text.strip().lower() in ("yes", "no")
        return Explained(usable, "" if usable else "expected yes or no", text.strip().lower())

    def commit(self, key: str, text: str) -> Explained:
        """Take an answer, or write."""
        if key == WRITE:
            return self.write()
        found = self.explain(key, text)
        if found.usable and key == "folder":
            self.folder = (self.session.document.week_path.parent / Path(found.value).expanduser()).resolve()
        elif found.usable and key == "review":
            self.review = found.value == "yes"
        elif found.usable:
            self.formats[key] = found.value == "yes"
        return found

    def write(self) -> Explained:
        """Write the sheets, or say why not."""
        formats = [name for name, on in self.formats.items() if on]
        self.written = ()
        if not formats:
            self.told = ("Not written.", "No format is chosen.")
            return Explained(False, self.told[1])
        try:
            self.written = self.session.write(self.folder, formats, review=self.review)
        except PlannerError as error:
            self.told = ("Not written.", *str(error).splitlines())
            return Explained(False, self.told[1])
        self.told = ("Written:", *(str(path) for path in self.written))
        return Explained(True, f"wrote {len(self.written)} files to {self.folder}")

    def _folder(self) -> str:
        """The folder from the week file's on, where it lies in it."""
        beside = self.session.document.week_path.parent
        return str(self.folder.relative_to(beside) if self.folder.is_relative_to(beside) else self.folder)

    def _stands(self) -> str:
        if self.session.plan is None:
            return "no plan yet: solve first"
        return "" if self.session.plan_is_current else "the plan is older than the last edits"


def _said(on: bool) -> str:
    return "yes" if on else "no"
