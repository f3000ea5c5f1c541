"""The place of the findings: everything the checks say, most serious first; Enter jumps to the step."""

from __future__ import annotations

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.containers import Vertical, VerticalScroll
from textual.events import Resize
from textual.widgets import DataTable, Static

from planner.desk.session import Session
from planner.desk.telling import finding_words, step_at
from planner.desk.wording import clean, day_time
from planner.errors import Problem
from planner.plan import Finding, Kind
from planner.screens.asked import Asked
from planner.screens.looks import message_style
from planner.screens.row_table import RowTable

EXPLAINED = {
    Kind.STOP: "a physical limit or the maker's, never waived: no plan that breaks it leaves as a sheet to be run",
    Kind.POLICY: "a rule of the site: a named role may waive it",
    Kind.WARN: "to be looked at before the week begins",
    Kind.NOTE: "to be known",
}


class FindingTable(RowTable):
    """The findings."""


class FindingsPlace(Vertical):
    """What the checks say of the week as it stands, and of the plan."""

    DEFAULT_CSS = """
    FindingsPlace FindingTable { height: 3fr; }
    FindingsPlace .told { height: 2fr; border-top: tall $panel; padding: 0 1; }
    """

    HELP = (
        "First what is wrong with the files, then what the checks say of the week as it stands, and of the plan "
        "judged by the week as it stands: after an edit the plan may break a limit that it kept before.\n\n"
        "STOP: a physical limit or the maker's, never waived. POLICY: a rule of the site. WARN and NOTE: to be "
        "looked at, to be known. Enter goes to the step or to the target."
    )

    def __init__(self, session: Session, name: str) -> None:
        super().__init__(id=name)
        self.session = session
        self._items: list[Problem | Finding] = []

    def compose(self) -> ComposeResult:
        """The list, and the one under the cursor in full."""
        yield FindingTable(header=True)
        with VerticalScroll(classes="told", can_focus=False):
            yield Static(markup=False)

    def on_mount(self) -> None:
        """Fill the list."""
        self.refresh_place()

    @property
    def table(self) -> FindingTable:
        """The list."""
        return self.query_one(FindingTable)

    @property
    def item(self) -> Problem | Finding | None:
        """What is under the cursor."""
        at = self.table.cursor_row
        return self._items[at] if 0 <= at < len(self._items) else None

    def focus_place(self) -> None:
        """Take the focus."""
        self.table.focus()

    def refresh_place(self) -> None:
        """Show what is found as things stand."""
        if not self.is_mounted:
            return
        table, at = self.table, self.table.cursor_row
        self._items = [*self.session.document.problems, *self.session.findings]
        columns = [("kind", 7), ("when", 11), ("step", 5), ("what", max(20, self.size.width - 33))]
        with self.app.batch_update():
            table.fill(columns, [self._cells(item) for item in self._items], at)
        self._tell()

    def _cells(self, item: Problem | Finding) -> list[Text]:
        theme = self.app.theme
        if isinstance(item, Problem):
            what = self._fitting(clean(self.session.document.words(item)))
            return [Text("FILE", message_style(theme, "bad")), Text(""), Text(""), what]
        request = self.session.document.request
        plan = self.session.plan
        clock = plan.clock if plan is not None else request.week.clock if request is not None else None
        when = day_time(clock, item.at_s) if clock is not None and item.at_s is not None else ""
        kind = {Kind.STOP: "bad", Kind.POLICY: "bad", Kind.WARN: "warn"}.get(item.kind, "quiet")
        about = f"{clean(item.subject)}: " if item.subject else ""
        return [
            Text(str(item.kind).upper(), message_style(theme, kind)),
            Text(when),
            Text("" if item.step is None else str(item.step)),
            self._fitting(f"{clean(item.rule)} · {about}{clean(item.text)}"),
        ]

    def _fitting(self, told: str) -> Text:
        text = Text(told)
        text.truncate(max(20, self.size.width - 33), overflow="ellipsis")
        return text

    def _tell(self) -> None:
        theme = self.app.theme
        item = self.item
        text = Text()
        if item is None:
            text.append("Nothing is found: the files can be read, and no check has anything to say.")
        elif isinstance(item, Problem):
            text.append("The file must be mended before the week can be planned.\n", message_style(theme, "bad"))
            text.append(clean(self.session.document.words(item)))
            text.append(f"\nin the file: {item.where}" if item.where else "", message_style(theme, "quiet"))
        else:
            text.append(f"{str(item.kind).upper()}: {EXPLAINED[item.kind]}\n", message_style(theme, "strong"))
            plan, request = self.session.plan, self.session.document.request
            clock = plan.clock if plan is not None else request.week.clock if request is not None else None
            text.append(finding_words(item, clock))
            if item.source:
                text.append(f"\nlimit from {clean(item.source)}", message_style(theme, "quiet"))
        self.query_one(".told Static", Static).update(text)

    @on(DataTable.RowHighlighted, "FindingTable")
    def _highlighted(self, event: DataTable.RowHighlighted) -> None:
        event.stop()
        self._tell()

    @on(DataTable.RowSelected, "FindingTable")
    def _selected(self, event: DataTable.RowSelected) -> None:
        event.stop()
        self.post_message(Asked("jump"))

    def on_resize(self, _event: Resize) -> None:
        """Fit the columns."""
        self.refresh_place()

    def step(self) -> int | None:
        """Position in the plan of the step that the finding under the cursor is about."""
        item, plan = self.item, self.session.plan
        return step_at(plan, item) if isinstance(item, Finding) and plan is not None else None
