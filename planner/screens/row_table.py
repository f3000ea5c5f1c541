"""A table of rows: one row has the cursor, cells are `Text` and are changed in place, so that the view stays."""

from __future__ import annotations

from collections.abc import Sequence
from typing import ClassVar

from rich.text import Text
from textual.binding import Binding, BindingType
from textual.coordinate import Coordinate
from textual.widgets import DataTable


class RowTable(DataTable[Text]):
    """Rows under a cursor. Home and End go to the first and the last."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("home", "end_row(False)", "first"),
        Binding("end", "end_row(True)", "last"),
    ]

    def __init__(self, *, header: bool = False, padding: int = 1) -> None:
        super().__init__(cursor_type="row", show_header=header, cell_padding=padding)

    def action_end_row(self, last: bool) -> None:
        """Put the cursor on the first or the last row."""
        self.move_cursor(row=self.row_count - 1 if last else 0)

    def fill(self, columns: Sequence[tuple[str, int]], rows: Sequence[Sequence[Text]], row: int) -> None:
        """Show these rows under these columns (title, width), the cursor on ``row``."""
        shape = [(column.label.plain, column.width) for column in self.ordered_columns]
        if shape != list(columns) or self.row_count != len(rows):
            self.clear(columns=True)
            for title, width in columns:
                self.add_column(Text(title), width=width)
            self.add_rows(rows)
        else:
            for at, cells in enumerate(rows):
                for column, cell in enumerate(cells):
                    self.update_cell_at(Coordinate(at, column), cell)
        self.move_cursor(row=max(0, min(row, len(rows) - 1)))
