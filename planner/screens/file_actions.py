"""Save, open, leave: what keys do with files, and what is asked before anything could be lost."""

from __future__ import annotations

from pathlib import Path

from textual import work
from textual.app import App

from planner.desk.document import ChangedOnDiskError, Document
from planner.desk.session import Session
from planner.errors import PlannerError
from planner.screens.dialogs import AskScreen, PathScreen


class FileActions(App[None]):
    """The part of the program that asks about files; the places are the other part's."""

    def __init__(self, session: Session) -> None:
        super().__init__()
        self.session = session

    def refresh_all(self) -> None:
        """Show everything as it stands."""
        raise NotImplementedError

    async def show_session(self) -> None:
        """Show the week that has been opened."""
        raise NotImplementedError

    def do_save(self) -> None:
        """Save; ask where a file has changed on disk meanwhile."""
        try:
            self._saved(self.session.save())
        except ChangedOnDiskError as error:
            self._ask_overwrite(error)

    def _saved(self, written: tuple[Path, ...]) -> None:
        names = ", ".join(path.name for path in written)
        self.notify(f"Saved {names}." if names else "Nothing to save.", timeout=3, markup=False)
        self.refresh_all()

    @work
    async def _ask_overwrite(self, error: ChangedOnDiskError) -> None:
        answer = await self.push_screen_wait(
            AskScreen(
                f"{', '.join(error.names)} has changed on disk since it was opened.",
                "Somebody else may have edited it. What is written now replaces what they wrote.",
                [
                    ("write", "write mine over it"),
                    ("reload", "read theirs; mine can be had back with undo"),
                    ("back", "go back, write nothing"),
                ],
            )
        )
        try:
            if answer == "write":
                self._saved(self.session.save(overwrite=True))
            elif answer == "reload":
                self.do_reload()
        except PlannerError as failed:
            self.notify(str(failed), title="Not done", severity="warning", timeout=8, markup=False)

    def do_reload(self) -> None:
        """Read the files from disk again."""
        self.session.reload()
        self.refresh_all()

    @work
    async def offer_draft(self) -> None:
        """Offer the unsaved work that a closed terminal left behind, if there is any."""
        draft = self.session.draft()
        if draft is None:
            return
        changed = draft.base != self.session.document.texts
        why = f"It was kept at {draft.kept_at}."
        if changed:
            why += " The files on disk have changed since: going on with it sets those changes aside until undone."
        answer = await self.push_screen_wait(
            AskScreen(
                "There is unsaved work on this week from an earlier sitting.",
                why,
                [("take", "go on with it"), ("discard", "discard it"), ("later", "leave it for later")],
            )
        )
        if answer == "take":
            self.session.take_draft(draft)
        elif answer == "discard":
            self.session.discard()
        self.refresh_all()

    @work
    async def do_open(self) -> None:
        """Open another week file."""
        path = await self.push_screen_wait(PathScreen("Open a week file", str(self.session.document.week_path)))
        if not path:
            return
        if self.session.document.changed and not await self._may_go("open another week"):
            return
        try:
            document = Document.open(path)
        except PlannerError as error:
            self.notify(str(error), title="Not opened", severity="warning", timeout=8, markup=False)
            return
        self.session.leave()
        self.session = Session(document, self.session.remembered, self.session.effort)
        await self.show_session()
        self.offer_draft()

    async def _may_go(self, what: str) -> bool:
        """Ask what becomes of unsaved work; whether one may go on."""
        answer = await self.push_screen_wait(
            AskScreen(
                f"Not all is saved. Before you {what}:",
                self.session.document.week_path.name,
                [
                    ("save", "save it"),
                    ("keep", "do not save it, keep it for the next opening"),
                    ("discard", "discard it"),
                    ("back", "go back"),
                ],
            )
        )
        if answer == "save":
            try:
                self.session.save()
            except PlannerError as error:
                self.notify(str(error), title="Not saved", severity="warning", timeout=8, markup=False)
                return False
        elif answer == "discard":
            self.session.discard()
        return answer != "back"

    @work
    async def do_leave(self) -> None:
        """Leave; ask about unsaved work first."""
        if not self.session.document.changed or await self._may_go("leave"):
            self.session.stop_solve()
            self.exit()

    async def action_quit(self) -> None:
        """Leave the program, as `do_leave` does."""
        self.do_leave()
