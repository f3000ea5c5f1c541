"""A place with an outline at the left and the form of the table under its cursor at the right."""

from __future__ import annotations

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.containers import Horizontal
from textual.widgets import DataTable

from planner.desk.form import TableForm
from planner.desk.outline import Node, NodeKind, outline
from planner.desk.place import Place, Role
from planner.desk.session import Session
from planner.screens.asked import Asked
from planner.screens.field_sheet import FieldSheet
from planner.screens.looks import message_style
from planner.screens.row_table import RowTable

WIDTH = 25


class Outline(RowTable):
    """The tables of a file."""


class OutlinePlace(Horizontal):
    """Week, rig or samples: every table of the file, and its form."""

    DEFAULT_CSS = f"""
    OutlinePlace {{ height: 1fr; }}
    OutlinePlace Outline {{ width: {WIDTH}; height: 1fr; border-right: tall $panel; }}
    OutlinePlace FieldSheet {{ width: 1fr; }}
    """

    HELP = (
        "At the left are the tables of the file, at the right the values of the table under the cursor. Tab goes "
        "from one side to the other; Enter in the outline goes to the values. A number behind a line counts what "
        "is wrong there.\n\n"
        "a adds a row to a list, or puts in an optional table that says (none); c copies a row; d deletes it; ⇧↑ "
        "and ⇧↓ move it. Everything can be undone with u."
    )

    def __init__(
        self, session: Session, role: Role, name: str, *, only: str = "", without: tuple[str, ...] = ()
    ) -> None:
        super().__init__(id=name)
        self.session = session
        self._role: Role = role
        self._only = only
        self._without = without
        self._outlined: tuple[Node, ...] = ()
        self._opened: Place | None = None

    def compose(self) -> ComposeResult:
        """The outline, and the form."""
        yield Outline()
        yield FieldSheet()

    def on_mount(self) -> None:
        """Fill the outline."""
        self.refresh_place()

    @property
    def tree_table(self) -> Outline:
        """The outline."""
        return self.query_one(Outline)

    @property
    def sheet(self) -> FieldSheet:
        """The form."""
        return self.query_one(FieldSheet)

    @property
    def node(self) -> Node | None:
        """The line under the cursor."""
        at = self.tree_table.cursor_row
        return self._outlined[at] if 0 <= at < len(self._outlined) else None

    def focus_place(self) -> None:
        """Take the focus; a list of its own begins at its first row."""
        self.tree_table.focus()
        if self._only and self.tree_table.cursor_row <= 0 and len(self._outlined) > 1:
            self.tree_table.move_cursor(row=1)
            self._show()

    def refresh_place(self) -> None:
        """Show the file as it stands; the cursor stays where it was."""
        if not self.is_mounted:
            return
        was = self.node
        at = self.tree_table.cursor_row
        self._outlined = outline(self.session.document, self._role, self._only, self._without)
        places = [node.place for node in self._outlined]
        row = places.index(was.place) if was is not None and was.place in places else at
        with self.app.batch_update():
            self.tree_table.fill([("", WIDTH - 4)], [[self._title(node)] for node in self._outlined], row)
        self._show()
        self.sheet.refresh_form()

    def open(self, place: Place) -> None:
        """Put the cursor on a table."""
        for at, node in enumerate(self._outlined):
            if node.place == place:
                self.tree_table.move_cursor(row=at)
                self._show()

    def sample_name(self) -> str:
        """Name of the sample under the cursor, nothing elsewhere."""
        node = self.node
        if node is None or node.place.parts[:1] != ("samples",) or len(node.place.parts) < 2:
            return ""
        return str(self.session.document.get(Place(node.place.role, (*node.place.parts[:2], "name"))) or "")

    def _title(self, node: Node) -> Text:
        theme = self.app.theme
        text = Text(
            "  " * node.depth + node.title, message_style(theme, "quiet" if node.kind is NodeKind.ABSENT else "")
        )
        if node.problems:
            text.truncate(WIDTH - 8, overflow="ellipsis")
            text.append(f" ✗{node.problems}", message_style(theme, "bad"))
        else:
            text.truncate(WIDTH - 4, overflow="ellipsis")
        return text

    def _show(self) -> None:
        node = self.node
        place = None if node is None or node.kind in (NodeKind.ROWS, NodeKind.ABSENT) else node.place
        if place != self._opened or place is None:
            self._opened = place
            self.sheet.show(None if place is None else TableForm(self.session, place), _about(node))

    @on(DataTable.RowHighlighted, "Outline")
    def _highlighted(self, event: DataTable.RowHighlighted) -> None:
        event.stop()
        self._show()

    @on(DataTable.RowSelected, "Outline")
    def _selected(self, event: DataTable.RowSelected) -> None:
        event.stop()
        if self._opened is not None:
            self.sheet.lines.focus()
        else:
            self.post_message(Asked("add"))

    # What keys do here

    def do_add(self) -> None:
        """Add to the list under the cursor, or put in the table that is left out."""
        node = self.node
        if node is None:
            return
        if node.kind is NodeKind.ABSENT:
            self.session.add_table(node.place)
            made = node.place
        elif node.kind is NodeKind.ROWS:
            made = self.session.add(node.place)
        elif node.kind is NodeKind.ROW:
            assert isinstance(node.place.last, int)
            made = self.session.add(node.place.above, node.place.last + 1)
        else:
            self.app.notify("Rows are added to lists: move to one of them.", markup=False)
            return
        self._made(made)

    def do_copy(self) -> None:
        """Copy the row under the cursor."""
        node = self.node
        if node is not None and node.kind is NodeKind.ROW:
            self._made(self.session.copy(node.place))

    def do_delete(self) -> None:
        """Delete the row, or the optional table, under the cursor."""
        node = self.node
        if node is not None and (node.kind is NodeKind.ROW or (node.kind is NodeKind.TABLE and node.optional)):
            self.session.delete(node.place)
            self.post_message(FieldSheet.Committed("", "", usable=True))

    def do_row_up(self) -> None:
        """Move the row up."""
        self._move(-1)

    def do_row_down(self) -> None:
        """Move the row down."""
        self._move(1)

    def _move(self, by: int) -> None:
        node = self.node
        if node is not None and node.kind is NodeKind.ROW:
            self._made(self.session.move(node.place, by), focus=False)

    def _made(self, place: Place, *, focus: bool = True) -> None:
        self.refresh_place()
        self.open(place)
        if focus:
            self.sheet.lines.focus()
            self.sheet.to_first_problem()
        self.post_message(FieldSheet.Committed("", "", usable=True))


def _about(node: Node | None) -> str:
    """What a line without values is for, and how to fill it."""
    if node is None or node.kind not in (NodeKind.ABSENT, NodeKind.ROWS):
        return ""
    name = str(node.place.last).replace("_", " ")
    does = "puts this table in" if node.kind is NodeKind.ABSENT else "adds a row"
    return f"{name}: {node.help}. Enter or a {does}."
