"""The place of the sheets: cautions, where to write what, and what came of it."""

from __future__ import annotations

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.containers import Vertical, VerticalScroll
from textual.widgets import Static

from planner.desk.form_sheet import WRITE, SheetForm
from planner.desk.session import Session
from planner.desk.values import Explained
from planner.runsheet.cautions import cautions_of
from planner.screens.field_sheet import FieldSheet
from planner.screens.looks import message_style


class SheetPlace(Vertical):
    """Write the run sheet for whoever is on shift."""

    DEFAULT_CSS = """
    SheetPlace .cautions { height: auto; max-height: 8; padding: 0 1; background: $panel; }
    SheetPlace FieldSheet { height: 9; }
    SheetPlace .came { height: 1fr; padding: 0 1; border-top: tall $panel; }
    """

    HELP = (
        "The sheets of the plan: html to print, csv for spreadsheets, json the plan itself. A plan that breaks a "
        "limit is not written as a sheet to be run; a review copy can be, and is marked so on every page.\n\n"
        "Enter changes a line, Space turns yes into no, w (or Enter on the last line) writes."
    )

    def __init__(self, session: Session, name: str) -> None:
        super().__init__(id=name)
        self.session = session
        self.form = SheetForm(session)

    def compose(self) -> ComposeResult:
        """Cautions, the form, what came of it."""
        yield Static(classes="cautions", markup=False)
        yield FieldSheet(self.form)
        with VerticalScroll(classes="came", can_focus=False):
            yield Static(markup=False)

    def on_mount(self) -> None:
        """Show the cautions."""
        self.refresh_place()

    @property
    def sheet(self) -> FieldSheet:
        """The form."""
        return self.query_one(FieldSheet)

    def focus_place(self) -> None:
        """Take the focus."""
        self.sheet.lines.focus()

    def refresh_place(self) -> None:
        """Show how things stand."""
        if not self.is_mounted:
            return
        theme = self.app.theme
        rig = self.session.document.rig
        text = Text()
        if rig is not None:
            for caution in cautions_of(rig):
                if caution.about in ("Planning aid", "Oxygen"):
                    text.append(f"{caution.about}: ", message_style(theme, "warn")).append(f"{caution.text}\n")
        text.rstrip()
        self.query_one(".cautions", Static).update(text)
        self.sheet.refresh_form()
        came = Text("\n".join(self.form.told))
        if self.form.told[:1] == ("Not written.",):
            came.stylize(message_style(theme, "bad"))
        self.query_one(".came Static", Static).update(came)

    @on(FieldSheet.Act)
    def _act(self, event: FieldSheet.Act) -> None:
        event.stop()
        self.do_write()

    def do_write(self) -> None:
        """Write the sheets, beside the screen: figures take a second or two."""
        self.form.told = ("Writing …",)
        self.refresh_place()
        self.run_worker(self._write, thread=True, exclusive=True)

    def _write(self) -> None:
        done = self.form.commit(WRITE, "")
        self.app.call_from_thread(self._wrote, done)

    def _wrote(self, done: Explained) -> None:
        self.refresh_place()
        self.app.notify(done.message, severity="information" if done.usable else "warning", markup=False)
