"""The place of the targets: all of them in a table, the form of the one under the cursor below."""

from __future__ import annotations

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.containers import Vertical
from textual.events import Resize
from textual.widgets import DataTable

from planner.desk.form import TableForm, TargetRow, target_rows
from planner.desk.place import Place
from planner.desk.session import Session
from planner.screens.field_sheet import FieldSheet
from planner.screens.looks import message_style
from planner.screens.row_table import RowTable

TARGETS = Place("week", ("targets",))


NO_TARGETS = "No targets yet. a adds one; n turns a list of fillings × temperatures into targets at once."


class TargetTable(RowTable):
    """The targets."""


class TargetsPlace(Vertical):
    """What is to be measured, and the field each target means on this rig today."""

    DEFAULT_CSS = """
    TargetsPlace TargetTable { height: 2fr; }
    TargetsPlace FieldSheet { height: 3fr; border-top: tall $panel; }
    """

    HELP = (
        "One line a target: what it asks for, and the field that means today, with the interval that the "
        "density's error leaves. ✗ marks what this rig cannot do, or what is wrong. ! marks a target that must "
        "be done.\n\n"
        "Enter goes to the values of the target, Esc or Tab back. a adds a target, c copies one, d deletes it, "
        "⇧↑ and ⇧↓ move it. n turns a list of fillings × temperatures into targets at once."
    )

    def __init__(self, session: Session, name: str) -> None:
        super().__init__(id=name)
        self.session = session
        self._rows: list[TargetRow] = []
        self._opened: tuple[Place, str] | None = None
        self._widths: dict[str, int] = {}

    def compose(self) -> ComposeResult:
        """The table, and the form."""
        yield TargetTable(header=True, padding=0)
        yield FieldSheet()

    def on_mount(self) -> None:
        """Fill the table."""
        self.refresh_place()

    @property
    def table(self) -> TargetTable:
        """The targets."""
        return self.query_one(TargetTable)

    @property
    def sheet(self) -> FieldSheet:
        """The form."""
        return self.query_one(FieldSheet)

    @property
    def row(self) -> TargetRow | None:
        """The target under the cursor."""
        at = self.table.cursor_row
        return self._rows[at] if 0 <= at < len(self._rows) else None

    def focus_place(self) -> None:
        """Take the focus."""
        self.table.focus()

    def refresh_place(self) -> None:
        """Show the targets as they stand."""
        if not self.is_mounted:
            return
        table, at = self.table, self.table.cursor_row
        self._rows = target_rows(self.session)
        self._widths = self._columns()
        with self.app.batch_update():
            table.fill(list(self._widths.items()), [self._cells(row) for row in self._rows], at)
        self._show()
        self.sheet.refresh_form()

    def open(self, place: Place) -> None:
        """Put the cursor on a target."""
        if place.within(TARGETS) and len(place.parts) > 1 and isinstance(place.parts[1], int):
            self.table.move_cursor(row=place.parts[1])
            self._show()

    def sample_name(self) -> str:
        """Name of the sample of the target under the cursor."""
        return self.row.sample if self.row is not None else ""

    def _columns(self) -> dict[str, int]:
        """Columns that share the width; the kind stands in the form as well and is left out where room is short."""
        whole = max(60, self.size.width - 1)
        narrow = {"": 2, "kind": 13, "sample": 8, "stage": 9, "p": 2}
        if whole < 100:
            del narrow["kind"]
        left = whole - sum(narrow.values())
        wide = {"target": left * 2 // 5, "asks": left // 5, "means on this rig now": left - left * 2 // 5 - left // 5}
        names = ("", "target", "kind", "sample", "asks", "means on this rig now", "stage", "p")
        return {name: (narrow | wide)[name] for name in names if name in narrow | wide}

    def _cells(self, row: TargetRow) -> list[Text]:
        theme = self.app.theme
        wrong = bool(row.problems) or not row.reached
        bad = message_style(theme, "bad")
        cells = {
            "": Text("✗", bad) if wrong else Text("!" if row.must else " "),
            "target": Text(row.name),
            "kind": Text(row.kind),
            "sample": Text(row.sample),
            "asks": Text(row.asks),
            "means on this rig now": Text("; ".join(row.problems) or row.means, bad if wrong else ""),
            "stage": Text(row.stage),
            "p": Text(row.priority),
        }
        for name, width in self._widths.items():
            cells[name].truncate(width - 1, overflow="ellipsis")
        return [cells[name] for name in self._widths]

    def _show(self) -> None:
        row = self.row
        wanted = None if row is None else (row.place, row.kind)
        if wanted != self._opened or wanted is None:
            self._opened = wanted
            self.sheet.show(None if row is None else TableForm(self.session, row.place), NO_TARGETS)

    @on(DataTable.RowHighlighted, "TargetTable")
    def _highlighted(self, event: DataTable.RowHighlighted) -> None:
        event.stop()
        self._show()

    @on(DataTable.RowSelected, "TargetTable")
    def _selected(self, event: DataTable.RowSelected) -> None:
        event.stop()
        if self.row is not None:
            self.sheet.lines.focus()

    def on_resize(self, _event: Resize) -> None:
        """Fit the columns."""
        self.refresh_place()

    # What keys do here

    def do_add(self) -> None:
        """Add a target behind the one under the cursor."""
        row = self.row
        at = None
        if row is not None and isinstance(row.place.last, int):
            at = row.place.last + 1
        self._made(self.session.add(TARGETS, at))

    def do_copy(self) -> None:
        """Copy the target under the cursor."""
        if self.row is not None:
            self._made(self.session.copy(self.row.place), focus=False)

    def do_delete(self) -> None:
        """Delete the target under the cursor."""
        if self.row is not None:
            self.session.delete(self.row.place)
            self.post_message(FieldSheet.Committed("", "", usable=True))

    def do_row_up(self) -> None:
        """Move the target up."""
        self._move(-1)

    def do_row_down(self) -> None:
        """Move the target down."""
        self._move(1)

    def _move(self, by: int) -> None:
        if self.row is not None:
            self._made(self.session.move(self.row.place, by), focus=False)

    def _made(self, place: Place, *, focus: bool = True) -> None:
        self.refresh_place()
        self.open(place)
        if focus:
            self.sheet.lines.focus()
            self.sheet.to_first_problem()
        self.post_message(FieldSheet.Committed("", "", usable=True))
