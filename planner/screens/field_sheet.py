"""A form on the screen: lines of label, value and meaning; one of them at a time is typed into."""

from __future__ import annotations

from collections.abc import Sequence
from typing import ClassVar

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import Horizontal, Vertical
from textual.events import Resize
from textual.message import Message
from textual.widgets import DataTable, Input, Label, Static

from planner.desk.form import Form, FormRow
from planner.screens.looks import message_style
from planner.screens.row_table import RowTable


class Entry(Input):
    """The line that is typed into. Up and down go through the choices, where there are any."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape", "leave", "leave it"),
        Binding("up", "choose(-1)", "before"),
        Binding("down", "choose(1)", "next"),
        Binding("tab", "take_and_next", "take it, next"),
        Binding("shift+tab", "leave", "leave it"),
    ]

    class Left(Message):
        """Nothing is to be changed."""

    class Onward(Message):
        """The text is to be taken, and the next line typed into."""

    choices: tuple[str, ...] = ()

    def action_leave(self) -> None:
        """Leave the line as it was."""
        self.post_message(self.Left())

    def action_take_and_next(self) -> None:
        """Take the text and go on."""
        self.post_message(self.Onward())

    def action_choose(self, by: int) -> None:
        """The choice before or after the one that stands there."""
        if self.choices:
            at = self.choices.index(self.value) + by if self.value in self.choices else 0
            self.value = self.choices[at % len(self.choices)]
            self.cursor_position = len(self.value)


class Lines(RowTable):
    """The lines of a form."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("space", "turn", "turn"),
        Binding("backspace", "empty", "empty"),
    ]

    class Turn(Message):
        """The next choice of the line is wanted."""

    class Empty(Message):
        """The line is to be emptied."""

    def action_turn(self) -> None:
        """Take the next choice."""
        self.post_message(self.Turn())

    def action_empty(self) -> None:
        """Empty the line."""
        self.post_message(self.Empty())


class FieldSheet(Vertical):
    """A form. Enter types into the line under the cursor; the meaning of what is typed stands below at once."""

    DEFAULT_CSS = """
    FieldSheet { height: 1fr; }
    FieldSheet Lines { height: 1fr; }
    FieldSheet .entry { height: 1; display: none; background: $panel; }
    FieldSheet.typing .entry { display: block; }
    FieldSheet .entry Label { width: auto; padding: 0 1 0 1; text-style: bold; }
    FieldSheet Entry { width: 1fr; height: 1; padding: 0; background: $panel; }
    FieldSheet .told { height: 3; color: $foreground; padding: 0 1; }
    """

    HELP = (
        "Each line is one value of the file. The middle column is what stands there; in brackets, what holds "
        "where it is left out. At the right stands what it means on this rig, or what is wrong.\n\n"
        "Enter: type into the line. Enter again takes it; Tab takes it and goes on to the next; Esc leaves it as "
        "it was. Quantities have their unit: 12 T, 0.3 T/min, 42 mK, 90 min, 1.1e11 cm^-2. Fillings are "
        "integers, fractions or decimals: 2, 1/3, 2.5.\n"
        "Space: the next choice. Backspace: empty the line, which leaves the key out of the file.\n"
        "While typing, ↑ and ↓ go through the choices."
    )

    class Committed(Message):
        """A line has been changed, or what was typed is not usable."""

        def __init__(self, key: str, message: str, *, usable: bool) -> None:
            self.key = key
            self.message = message
            self.usable = usable
            super().__init__()

    class Act(Message):
        """A line that does something was chosen; whoever holds the form does it."""

        def __init__(self, key: str) -> None:
            self.key = key
            super().__init__()

    def __init__(self, form: Form | None = None) -> None:
        super().__init__()
        self.form = form
        self._about = ""
        self._rows: Sequence[FormRow] = ()
        self._typed: FormRow | None = None

    def compose(self) -> ComposeResult:
        """Lines, the line typed into, what is told of it."""
        yield Lines()
        with Horizontal(classes="entry"):
            yield Label("")
            yield Entry(select_on_focus=True, compact=True)
        yield Static(classes="told", markup=False)

    def on_mount(self) -> None:
        """Show the form."""
        self.query_one(Entry).cursor_blink = False
        self.refresh_form()

    @property
    def lines(self) -> Lines:
        """The table of lines."""
        return self.query_one(Lines)

    @property
    def typing(self) -> bool:
        """Whether a line is being typed into."""
        return self._typed is not None

    @property
    def row(self) -> FormRow | None:
        """The line under the cursor."""
        at = self.lines.cursor_row
        return self._rows[at] if 0 <= at < len(self._rows) else None

    def show(self, form: Form | None, about: str = "") -> None:
        """Show another form; where there is none, what is to be said instead."""
        self._close()
        self.form = form
        self._about = about
        self.refresh_form(start=True)

    def to_first_problem(self) -> None:
        """Put the cursor on the first line with which something is wrong."""
        for at, row in enumerate(self._rows):
            if row.problem:
                self.lines.move_cursor(row=at)
                return

    def refresh_form(self, *, start: bool = False) -> None:
        """Show the form as it stands now; the cursor stays on its line."""
        if not self.is_mounted:
            return
        was = None if start else self.row
        self._rows = self.form.rows() if self.form is not None else ()
        keys = [row.key for row in self._rows]
        at = keys.index(was.key) if was is not None and was.key in keys else 0
        columns = [("", width) for width in self._widths()]
        with self.app.batch_update():
            self.lines.fill(columns, [self._cells(row) for row in self._rows], at)
        self._tell()

    def _widths(self) -> tuple[int, int, int]:
        """Label, value, meaning: what they need, and where that is too much, a fair share."""
        whole = max(40, self.size.width - 7)
        label = min(24, max((len(row.label) for row in self._rows), default=12) + 1, whole * 2 // 5)
        left = whole - label
        needs = max((len(row.shown) for row in self._rows), default=0) + 1
        says = max((len(row.problem or row.means) for row in self._rows), default=0) + 2
        value = max(min(needs, left - says), min(needs, left // 2), 10)
        return label, value, max(8, left - value)

    def _cells(self, row: FormRow) -> tuple[Text, Text, Text]:
        theme = self.app.theme
        label = Text(row.label, message_style(theme, "strong" if row.act else ""))
        value = Text(row.shown, message_style(theme, "quiet" if row.shown.startswith("(") and not row.text else ""))
        kind = "bad" if row.problem or row.means.startswith("✗") else "good"
        means = Text(f"✗ {row.problem}" if row.problem else row.means, message_style(theme, kind))
        for text, width in zip((label, value, means), self._widths(), strict=True):
            text.truncate(width, overflow="ellipsis")
        return label, value, means

    def _tell(self) -> None:
        """Below the lines: what the one under the cursor is for, and what is wrong or wanted."""
        row = self.row
        told = self.query_one(".told", Static)
        theme = self.app.theme
        if row is None:
            told.update(self._about, layout=False)
            return
        first = self._first_line(f"{row.label}: {row.help}" if row.help else row.label)
        if row.problem or row.means.startswith("✗"):
            second = Text(row.problem or row.means[2:], message_style(theme, "bad"))
            if row.problem and row.wanted:
                second.append(f"  {row.wanted}", message_style(theme, "quiet"))
        else:
            second = Text(f"{row.means}  " if row.means else "", message_style(theme, "good"))
            second.append(row.wanted, message_style(theme, "quiet"))
        told.update(Text("\n").join((first, second)), layout=False)

    def _first_line(self, text: str) -> Text:
        first = Text(text, message_style(self.app.theme, "quiet"))
        first.truncate(max(20, self.size.width - 3), overflow="ellipsis")
        return first

    # Typing

    def type_into(self) -> None:
        """Begin to type into the line under the cursor; a line that does something does it."""
        row = self.row
        if row is None or self.form is None:
            return
        if row.act:
            self.post_message(self.Act(row.key))
            return
        self._typed = row
        entry = self.query_one(Entry)
        self.query_one(".entry Label", Label).update(Text(row.label))
        entry.choices = row.choices
        entry.value = row.text
        self.add_class("typing")
        entry.focus()
        self._explain(row.text)

    def _explain(self, text: str) -> None:
        if self._typed is None or self.form is None:
            return
        found = self.form.explain(self._typed.key, text)
        theme = self.app.theme
        choices = self._typed.choices
        first = self._first_line(self._typed.help)
        wanted = f"↑↓ {', '.join(choices)}" if choices else self._typed.wanted
        if found.usable:
            second = Text("✓ ", message_style(theme, "good")).append(found.message, message_style(theme, "good"))
            if not found.message:
                second.append(wanted, message_style(theme, "quiet"))
        else:
            second = Text(f"✗ {found.message}", message_style(theme, "bad"))
        self.query_one(".told", Static).update(Text("\n").join((first, second)), layout=False)

    def _close(self) -> None:
        if self._typed is not None:
            self._typed = None
            self.remove_class("typing")
            if self.query_one(Entry).has_focus:
                self.lines.focus()

    def _take(self, *, onward: bool) -> None:
        row, entry = self._typed, self.query_one(Entry)
        if row is None or self.form is None:
            return
        if entry.value == row.text and not row.problem:
            self._close()
            self._tell()
        else:
            found = self.form.commit(row.key, entry.value)
            if not found.usable:
                self._explain(entry.value)
                self.app.bell()
                return
            self._close()
            self._after(row.key, "", usable=True)
        at = self.lines.cursor_row + 1
        if at < len(self._rows):
            self.lines.move_cursor(row=at)
            if onward and not self._rows[at].act:
                self.type_into()

    def _after(self, key: str, message: str, *, usable: bool) -> None:
        self.refresh_form()
        self.post_message(self.Committed(key, message, usable=usable))

    def _commit(self, text: str) -> None:
        row = self.row
        if row is None or row.act or self.form is None:
            return
        found = self.form.commit(row.key, text)
        self._after(row.key, "" if found.usable else found.message, usable=found.usable)

    # Messages

    @on(DataTable.RowSelected)
    def _selected(self, event: DataTable.RowSelected) -> None:
        event.stop()
        self.type_into()

    @on(DataTable.RowHighlighted)
    def _highlighted(self, event: DataTable.RowHighlighted) -> None:
        event.stop()
        if not self.typing:
            self._tell()

    @on(Lines.Turn)
    def _turn(self, event: Lines.Turn) -> None:
        event.stop()
        row = self.row
        if row is not None and row.choices:
            at = row.choices.index(row.text) + 1 if row.text in row.choices else 0
            self._commit(row.choices[at % len(row.choices)])

    @on(Lines.Empty)
    def _empty(self, event: Lines.Empty) -> None:
        event.stop()
        row = self.row
        if row is not None and row.text:
            self._commit("")

    @on(Input.Changed)
    def _changed(self, event: Input.Changed) -> None:
        event.stop()
        self._explain(event.value)

    @on(Input.Submitted)
    def _submitted(self, event: Input.Submitted) -> None:
        event.stop()
        self._take(onward=False)

    @on(Entry.Onward)
    def _onward(self, event: Entry.Onward) -> None:
        event.stop()
        self._take(onward=True)

    @on(Entry.Left)
    def _left(self, event: Entry.Left) -> None:
        event.stop()
        self._close()
        self._tell()

    def on_resize(self, _event: Resize) -> None:
        """Fit the columns."""
        self.refresh_form()
