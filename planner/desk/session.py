"""One sitting at a week: the document, the plan, the solve in the background, findings, sheets. What a screen calls."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

from planner.desk import grid, rows
from planner.desk.desk import sheet_formats, write_sheets
from planner.desk.document import Document
from planner.desk.place import Place, Role
from planner.desk.remembered import Draft, Remembered
from planner.desk.solving import Effort, Snapshot, Solve, SolveState
from planner.desk.texts import Texts
from planner.errors import InputError, PlannerError, RefusedError
from planner.plan import Finding, Kind, Plan


class Session:
    """Everything that is open. Edits go through here, so that unsaved work is always kept."""

    def __init__(self, document: Document, remembered: Remembered, effort: Effort | None = None) -> None:
        self.document = document
        self.remembered = remembered
        self.effort = effort or Effort()
        self.plan: Plan | None = None
        self.solve: Solve | None = None
        self._judged: tuple[Texts, Plan | None, tuple[Finding, ...]] | None = None
        remembered.remember(week=str(document.week_path))

    @staticmethod
    def begin(week: Path | None, remembered: Remembered | None = None, effort: Effort | None = None) -> Session:
        """Open a week file; without one the last, and where there is none the small demo week.

        Raises
        ------
        InputError
            If the file cannot be read.
        """
        remembered = remembered or Remembered()
        path = week or remembered.last_week() or remembered.demo_week()
        return Session(Document.open(path), remembered, effort)

    # Editing

    def edit(self, change: Callable[[Document], None]) -> None:
        """Make an edit and keep the unsaved work; raises CannotEditError as the document does."""
        change(self.document)
        self.remembered.keep(self.document)

    def set(self, place: Place, value: Any) -> None:
        """Put a value under a key; None leaves the key out."""
        self.edit(lambda document: document.clear(place) if value is None else document.set(place, value))

    def add(self, rows_place: Place, at: int | None = None) -> Place:
        """Put a new row into a list, at the end if no position is given; where it stands."""
        there = self.document.get(rows_place)
        count = len(there) if isinstance(there, list) else 0
        at = count if at is None else min(at, count)
        row = rows.new_row(self.document, rows_place)
        self.edit(lambda document: document.add_row(rows_place, at, row))
        return rows_place / at

    def add_table(self, place: Place) -> None:
        """Put an empty table in where an optional one is left out."""
        self.edit(lambda document: document.set(place, {}))

    def copy(self, row: Place) -> Place:
        """Put a copy of a row behind it; where it stands."""
        made = rows.copied_row(self.document, row)
        assert isinstance(row.last, int)
        at = row.last + 1
        self.edit(lambda document: document.add_row(row.above, at, made))
        return row.above / at

    def delete(self, place: Place) -> None:
        """Take a row or an optional table out."""
        self.edit(lambda document: document.delete(place))

    def move(self, row: Place, by: int) -> Place:
        """Move a row up or down in its list; where it stands then."""
        assert isinstance(row.last, int)
        to = max(0, min(row.last + by, len(self.document.get(row.above)) - 1))
        if to != row.last:
            self.edit(lambda document: document.move_row(row, to))
        return row.above / to

    def add_grid(self, asked: grid.Grid) -> int:
        """Turn fillings × temperatures into targets, as one step; how many."""
        count = 0

        def adding(document: Document) -> None:
            nonlocal count
            count = grid.add(document, asked)

        self.edit(adding)
        return count

    def undo(self) -> str:
        """Take the last edit back; its label, or nothing."""
        label = self.document.undo()
        self.remembered.keep(self.document)
        return label

    def redo(self) -> str:
        """Do an edit again; its label, or nothing."""
        label = self.document.redo()
        self.remembered.keep(self.document)
        return label

    # Saving and unsaved work

    def save(self, *, overwrite: bool = False) -> tuple[Path, ...]:
        """Write what has changed; raises ChangedOnDiskError or InputError as the document does."""
        written = self.document.save(overwrite=overwrite)
        self.remembered.forget(self.document.week_path)
        return written

    def draft(self) -> Draft | None:
        """Unsaved work of an earlier sitting, if it says anything else than the files do."""
        found = self.remembered.draft(self.document.week_path)
        return None if found is None or found.texts == self.document.texts else found

    def take_draft(self, draft: Draft) -> None:
        """Go on with unsaved work, as one step that can be undone."""
        self.edit(lambda document: document.replace_texts(draft.texts, f"unsaved work of {draft.kept_at}"))

    def discard(self) -> None:
        """Forget what is not saved."""
        self.remembered.forget(self.document.week_path)

    def reload(self) -> None:
        """Take what is on disk now."""
        self.edit(lambda document: document.reload())

    # Solving

    @property
    def solving(self) -> bool:
        """Whether a solve runs."""
        return self.solve is not None and self.solve.running

    def start_solve(self, on_change: Callable[[], None] | None = None) -> Solve:
        """Solve the week as it stands, in the background.

        Raises
        ------
        InputError
            If the week or the rig has problems; a solve that runs goes on.
        RefusedError
            If a solve runs already.
        """
        if self.solving:
            raise RefusedError("A solve is running: stop it first.")
        if self.document.request is None:
            raise InputError(list(self.document.problems))
        self.solve = Solve(self.document.request, self.effort, on_change)
        return self.solve

    def collect(self) -> Snapshot | None:
        """How the solve stands; a finished one leaves its plan here.

        Raises
        ------
        BaseException
            Whatever ended the solve that was not said on purpose: a bug must show.
        """
        if self.solve is None:
            return None
        found = self.solve.snapshot()
        if found.state is SolveState.DONE:
            self.plan = found.plan
            self.solve = None
        elif found.error is not None:
            self.solve = None
            if not isinstance(found.error, PlannerError):
                raise found.error
        return found

    def stop_solve(self) -> None:
        """Ask a running solve for the best so far."""
        if self.solve is not None:
            self.solve.stop()

    def leave(self, patience_s: float = 0.5) -> bool:
        """End a running solve; whether it has ended."""
        return True if self.solve is None else self.solve.leave(patience_s)

    # Findings and sheets

    @property
    def plan_is_current(self) -> bool:
        """Whether the plan was made from the texts as they stand."""
        if self.plan is None:
            return False
        texts = self.document.texts
        return (self.plan.source("week").text, self.plan.source("rig").text) == (texts.week, texts.rig)

    @property
    def findings(self) -> tuple[Finding, ...]:
        """What the checks say of the week as it stands, and of the plan judged by the week as it stands."""
        key = (self.document.texts, self.plan)
        if self._judged is None or self._judged[0] != key[0] or self._judged[1] is not key[1]:
            self._judged = (*key, self._judge())
        return self._judged[2]

    def _judge(self) -> tuple[Finding, ...]:
        from planner.checks import check_plan, check_week

        request = self.document.request
        if request is None:
            return self.plan.findings if self.plan is not None else ()
        found = check_week(request)
        if self.plan is not None:
            there = replace(self.plan, sources=request.sources)  # judged by the week and rig as they stand
            found = (*check_plan(request, there), *found)
        kinds = list(Kind)
        return tuple(sorted(dict.fromkeys(found), key=lambda one: kinds.index(one.kind)))

    def sheet_folder(self) -> Path:
        """Where sheets go unless somebody says otherwise."""
        return self.document.week_path.parent / "sheets"

    @staticmethod
    def formats() -> tuple[str, ...]:
        """Names of the sheet formats."""
        return sheet_formats()

    def write(self, folder: Path, formats: Sequence[str], *, review: bool = False) -> tuple[Path, ...]:
        """Write the sheets of the plan.

        Raises
        ------
        RefusedError
            If there is no plan, the week or rig has been edited since it was made, or a limit is broken; a review copy
            is refused only where there is no plan.
        InputError
            If a file cannot be written.
        """
        if self.plan is None:
            raise RefusedError("There is no plan yet: solve first.")
        if not self.plan_is_current and not review:
            raise RefusedError(
                "The week or the rig has been edited since this plan was made. Solve again, or undo the edits."
            )
        return write_sheets(self.plan, folder, tuple(formats), review=review)

    # What stands where

    def place_of(self, finding: Finding) -> Place | None:
        """The target, sample or rig value that a finding is about, where that can be told."""
        names: list[tuple[Role, str]] = [("week", "targets"), ("week", "samples"), ("week", "users")]
        for role, key in names:
            listed = self.document.data(role).get(key)
            for at, row in enumerate(listed if isinstance(listed, list) else []):
                if isinstance(row, dict) and finding.subject and row.get("name") == finding.subject:
                    return Place(role, (key, at))
        return None
