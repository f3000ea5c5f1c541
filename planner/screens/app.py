"""The program on the screen. Nothing is decided here: every key ends in a call of the session."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any, ClassVar

from textual import on
from textual.app import ComposeResult, SystemCommand
from textual.binding import Binding
from textual.containers import VerticalScroll
from textual.events import DescendantFocus
from textual.message import Message
from textual.screen import Screen
from textual.widget import Widget
from textual.widgets import ContentSwitcher

from planner.desk.place import Place
from planner.desk.session import Session
from planner.desk.solving import Snapshot, SolveState
from planner.errors import PlannerError, Problem
from planner.screens.actions import ACTIONS, TITLES, here, shown_key
from planner.screens.asked import Asked
from planner.screens.dialogs import GridScreen, HelpScreen
from planner.screens.field_sheet import Entry, FieldSheet, Lines
from planner.screens.file_actions import FileActions
from planner.screens.findings_place import FindingsPlace
from planner.screens.lines import KeysLine, PlacesLine, SolveLine, TopLine
from planner.screens.looks import LOOKS, next_look
from planner.screens.outline_place import OutlinePlace
from planner.screens.plan_place import PlanPlace
from planner.screens.sheet_place import SheetPlace
from planner.screens.targets_place import TargetsPlace

PlaceWidget = OutlinePlace | TargetsPlace | PlanPlace | FindingsPlace | SheetPlace


class SolveChanged(Message):
    """A solve has something to say; posted from its thread."""


class FridgeweekApp(FileActions):
    """A week of fridge time: its files, its plan, its sheet."""

    TITLE = "fridgeweek"
    NOTIFICATION_TIMEOUT = 4
    CSS = """
    Screen { background: $background; color: $foreground; }
    ContentSwitcher { height: 1fr; }
    ToastRack { dock: top; align: right top; margin-top: 2; }
    DataTable { background: $background; scrollbar-size: 1 1; overflow-x: hidden; }
    VerticalScroll { scrollbar-size: 1 1; }
    DataTable > .datatable--header { background: $surface; color: $foreground; }
    DataTable > .datatable--cursor { background: $panel; color: $foreground; text-style: none; }
    DataTable:focus > .datatable--cursor { background: $primary 40%; color: $foreground; text-style: bold; }
    """
    BINDINGS: ClassVar[list[Any]] = [
        Binding(",".join(action.keys), f"do('{action.name}')", action.short or action.long, show=False)
        for action in ACTIONS.values()
        if action.keys
    ] + [Binding("escape", "back_to_list", "back", show=False)]

    def __init__(self, session: Session) -> None:
        super().__init__(session)
        self.place = "targets"
        self._ticking: Any = None
        for theme in LOOKS.values():
            self.register_theme(theme)
        look = session.remembered.look()
        self.theme = look if look in LOOKS else next(iter(LOOKS))

    def compose(self) -> ComposeResult:
        """The lines at the edges, and the places between them."""
        yield TopLine(markup=False)
        yield PlacesLine(markup=False)
        yield self._places()
        yield SolveLine(markup=False)
        yield KeysLine(markup=False)

    def _places(self) -> ContentSwitcher:
        session = self.session
        return ContentSwitcher(
            OutlinePlace(session, "week", "week", without=("samples",)),
            OutlinePlace(session, "rig", "rig"),
            OutlinePlace(session, "week", "samples", only="samples"),
            TargetsPlace(session, "targets"),
            PlanPlace(session, "plan"),
            FindingsPlace(session, "findings"),
            SheetPlace(session, "sheet"),
            initial="targets",
        )

    def on_mount(self) -> None:
        """Show everything; offer unsaved work of an earlier sitting."""
        self.call_after_refresh(self._begin)

    def _begin(self) -> None:
        self.go(self.place)
        self.offer_draft()

    # Places

    @property
    def here(self) -> PlaceWidget:
        """The place one is in."""
        found = self.query_one(f"#{self.place}")
        assert isinstance(found, PlaceWidget)
        return found

    def go(self, place: str) -> None:
        """Go to a place."""
        self.place = place
        self.query_one(ContentSwitcher).current = place
        self.here.refresh_place()
        self.here.focus_place()
        self.refresh_lines()

    def refresh_lines(self, message: str = "") -> None:
        """Say in the lines at the edges how things stand."""
        if not self.is_running or not self.query(TopLine):
            return
        solve = self.session.solve
        self.query_one(TopLine).show(self.session)
        self.query_one(PlacesLine).show(self.place)
        self.query_one(SolveLine).show(self.session, None if solve is None else solve.snapshot(), message)
        self._show_keys()

    def refresh_all(self) -> None:
        """Show everything as it stands."""
        self.here.refresh_place()
        self.refresh_lines()

    def _show_keys(self) -> None:
        focused = self.focused
        mode = "typing" if isinstance(focused, Entry) else "lines" if isinstance(focused, Lines) else ""
        self.query_one(KeysLine).show(self.place, mode, solving=self.session.solving)

    @on(DescendantFocus)
    def _focus_moved(self) -> None:
        if self.query(KeysLine):
            self._show_keys()

    @on(FieldSheet.Committed)
    def _committed(self, event: FieldSheet.Committed) -> None:
        if event.message:
            self.notify(event.message, severity="information" if event.usable else "warning", markup=False)
        self.refresh_all()

    # Actions

    def check_action(self, action: str, parameters: tuple[object, ...]) -> bool | None:
        """An action can be done where the registry says so."""
        if action == "do" and parameters:
            return self.place in ACTIONS[str(parameters[0])].where
        return True

    def action_do(self, name: str) -> None:
        """Do a named action."""
        self.run_named(name)

    def run_named(self, name: str) -> None:
        """Do a named action, here or in the place one is in; say why where it cannot be done."""
        if name.startswith("place_"):
            self.go(name.removeprefix("place_"))
            return
        own = getattr(self.here, f"do_{name}", None)
        try:
            (own or getattr(self, f"do_{name}"))()
        except PlannerError as error:
            self.notify(str(error), title="Not done", severity="warning", timeout=8, markup=False)
        self.refresh_lines()

    @on(Asked)
    def _asked(self, event: Asked) -> None:
        self.run_named(event.name)

    def action_back_to_list(self) -> None:
        """From the values back to the list they belong to."""
        if isinstance(self.focused, Lines):
            self.here.focus_place()

    def get_system_commands(self, screen: Screen[Any]) -> Iterable[SystemCommand]:  # noqa: ARG002
        """The palette: the registry, and nothing else."""
        for action in here(self.place):
            keys = ", ".join(shown_key(key) for key in action.keys)
            yield SystemCommand(action.long, keys, lambda name=action.name: self.run_named(name))

    def do_help(self) -> None:
        """Help for the thing in focus."""
        keys = [(", ".join(shown_key(key) for key in action.keys), action.long) for action in here(self.place)]
        title, text = TITLES[self.place], self.here.HELP
        node: Any = self.focused
        while isinstance(node, Widget) and node is not self.here:
            if isinstance(node, FieldSheet):
                row = node.row
                title = f"{TITLES[self.place]}: {row.label}" if row is not None else title
                about = f"{row.label}: {row.help}.\nWanted: {row.wanted}.\n\n" if row is not None and row.wanted else ""
                text = f"{about}{node.HELP}"
                break
            node = node.parent
        self.push_screen(HelpScreen(title, text, [pair for pair in keys if pair[0]]))

    def do_panel_up(self) -> None:
        """Read the panel upwards."""
        self.here.query_one(VerticalScroll).scroll_page_up(animate=False)

    def do_panel_down(self) -> None:
        """Read the panel downwards."""
        self.here.query_one(VerticalScroll).scroll_page_down(animate=False)

    def do_undo(self) -> None:
        """Undo the last edit."""
        label = self.session.undo()
        self.refresh_all()
        self.notify(f"Undone: {label}" if label else "Nothing to undo.", timeout=2, markup=False)

    def do_redo(self) -> None:
        """Do an edit again."""
        label = self.session.redo()
        self.refresh_all()
        self.notify(f"Done again: {label}" if label else "Nothing to do again.", timeout=2, markup=False)

    def do_look(self) -> None:
        """The next look."""
        self.theme = next_look(self.theme)
        self.session.remembered.remember(look=self.theme)
        self.refresh_all()

    def do_many(self) -> None:
        """Fillings × temperatures."""
        here = self.here
        sample = here.sample_name() if isinstance(here, (OutlinePlace, TargetsPlace)) else ""
        self.push_screen(GridScreen(self.session, sample), self._many_added)

    def _many_added(self, count: int | None) -> None:
        if count:
            self.go("targets")
            last = len(self.session.document.data("week")["targets"]) - count
            self.query_one(TargetsPlace).open(Place("week", ("targets", last)))
            self.notify(f"Added {count} targets.", markup=False)

    def do_jump(self) -> None:
        """To the step, or the target, of the finding under the cursor."""
        place = self.query_one(FindingsPlace)
        at, item = place.step(), place.item
        if at is not None:
            self.go("plan")
            self.query_one(PlanPlace).go_to(at)
            return
        if item is None:
            return
        document = self.session.document
        where = document.place_of(item) if isinstance(item, Problem) else self.session.place_of(item)
        if where is None:
            self.notify("This is about no single step or row.", markup=False)
            return
        self._open_row(where)

    def do_to_target(self) -> None:
        """To the target of the step under the cursor."""
        plan = self.session.plan
        if plan is None:
            return
        name = plan.steps[self.query_one(PlanPlace).timeline.at].target
        for at, row in enumerate(self.session.document.data("week").get("targets", [])):
            if name and row.get("name") == name:
                self._open_row(Place("week", ("targets", at)))
                return
        self.notify("This step belongs to no target.", markup=False)

    def _open_row(self, where: Place) -> None:
        """The place and the line where a value is edited."""
        first = str(where.parts[0]) if where.parts else ""
        name = where.role if where.role == "rig" or first not in ("targets", "samples") else first
        self.go(name)
        for length in range(len(where.parts), -1, -1):
            place = Place(where.role, where.parts[:length])
            if name == "targets" or isinstance(self.session.document.get(place), dict):
                if isinstance(self.here, (OutlinePlace, TargetsPlace)):
                    self.here.open(place)
                return

    # Solving

    def do_solve(self) -> None:
        """Solve the week in the background; where the files have problems, show those."""
        if self.session.document.problems:
            self.go("findings")
            self.notify("The files must be mended first.", severity="warning", markup=False)
            return
        self.session.start_solve(self._solve_changed)
        if self._ticking is None:
            self._ticking = self.set_interval(0.5, self.refresh_solve)
        self.go("plan")

    def _solve_changed(self) -> None:
        """Called from the solve's thread."""
        self.post_message(SolveChanged())

    def do_stop(self) -> None:
        """Stop with the best so far."""
        if not self.session.solving:
            self.notify("No solve is running.", timeout=2, markup=False)
        self.session.stop_solve()

    @on(SolveChanged)
    def refresh_solve(self) -> None:
        """Show how the solve stands; take its plan when it is done."""
        found = self.session.collect()
        if found is None:
            return
        if found.state in (SolveState.DONE, SolveState.FAILED):
            if self._ticking is not None:
                self._ticking.stop()
                self._ticking = None
            self._solved(found)
        self.refresh_lines()

    def _solved(self, found: Snapshot) -> None:
        if found.error is not None:
            self.notify(str(found.error), title="No plan", severity="warning", timeout=12, markup=False)
        if self.query(PlanPlace):
            self.query_one(PlanPlace).refresh_place()
        self.here.refresh_place()

    async def show_session(self) -> None:
        """Show the week that has been opened."""
        with self.batch_update():
            await self.query_one(ContentSwitcher).remove()
            await self.mount(self._places(), after=self.query_one(PlacesLine))
        self.go("targets")
