"""Small screens on top: help, a question with a few answers, a path, fillings × temperatures."""

from __future__ import annotations

from typing import ClassVar

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.containers import Vertical, VerticalScroll
from textual.screen import ModalScreen
from textual.widgets import Input, OptionList, Static
from textual.widgets.option_list import Option

from planner.desk.form_grid import GridForm
from planner.desk.session import Session
from planner.screens.field_sheet import FieldSheet

BOX = """
{name} {{ align: center middle; background: $background 60%; }}
{name} > Vertical {{
    width: 90%; max-width: {width}; height: {height}; max-height: 95%;
    border: round $primary; background: $surface; padding: 0 1;
}}
{name} .title {{ text-style: bold; height: auto; margin-bottom: 1; }}
"""


class HelpScreen(ModalScreen[None]):
    """Help for the thing in focus, then the keys of the place."""

    DEFAULT_CSS = BOX.format(name="HelpScreen", width=92, height="auto") + "HelpScreen VerticalScroll { height: auto; }"
    BINDINGS: ClassVar[list[BindingType]] = [Binding("escape,f1,q,enter", "dismiss", "back")]

    def __init__(self, title: str, text: str, keys: list[tuple[str, str]]) -> None:
        super().__init__()
        self._title, self._text, self._keys = title, text, keys

    def compose(self) -> ComposeResult:
        """Text, then keys."""
        with Vertical():
            yield Static(f"{self._title}   (Esc goes back)", classes="title", markup=False)
            with VerticalScroll():
                text = Text(self._text)
                text.append("\n\nKeys here\n", "bold")
                text.append("\n".join(f"{key:12} {told}" for key, told in self._keys))
                yield Static(text, markup=False)

    def on_mount(self) -> None:
        """Let the text be scrolled by keys."""
        self.query_one(VerticalScroll).focus()


class AskScreen(ModalScreen[str]):
    """A question with a few answers; Esc is the last of them."""

    DEFAULT_CSS = (
        BOX.format(name="AskScreen", width=76, height="auto")
        + "AskScreen OptionList { height: auto; border: none; } AskScreen .why { height: auto; margin-bottom: 1; }"
    )
    BINDINGS: ClassVar[list[BindingType]] = [Binding("escape", "last", "back")]

    def __init__(self, question: str, why: str, answers: list[tuple[str, str]]) -> None:
        super().__init__()
        self._question, self._why, self._answers = question, why, answers

    def compose(self) -> ComposeResult:
        """The question, the answers."""
        with Vertical():
            yield Static(self._question, classes="title", markup=False)
            yield Static(self._why, classes="why", markup=False)
            yield OptionList(*(Option(Text(told), id=name) for name, told in self._answers))

    def on_mount(self) -> None:
        """Begin at the first answer."""
        self.query_one(OptionList).focus()

    @on(OptionList.OptionSelected)
    def _chosen(self, event: OptionList.OptionSelected) -> None:
        self.dismiss(str(event.option.id))

    def action_last(self) -> None:
        """The last answer."""
        self.dismiss(self._answers[-1][0])


class PathScreen(ModalScreen[str]):
    """Asks for the path of a week file; empty text goes back."""

    DEFAULT_CSS = (
        BOX.format(name="PathScreen", width=92, height="auto") + "PathScreen Input { border: none; height: 1; }"
    )
    BINDINGS: ClassVar[list[BindingType]] = [Binding("escape", "back", "back")]

    def __init__(self, title: str, path: str) -> None:
        super().__init__()
        self._title, self._path = title, path

    def compose(self) -> ComposeResult:
        """Title and path."""
        with Vertical():
            yield Static(f"{self._title}   (Enter opens it, Esc goes back)", classes="title", markup=False)
            yield Input(self._path, select_on_focus=False)

    def on_mount(self) -> None:
        """Begin to type."""
        entry = self.query_one(Input)
        entry.cursor_blink = False
        entry.focus()

    @on(Input.Submitted)
    def _given(self, event: Input.Submitted) -> None:
        self.dismiss(event.value.strip())

    def action_back(self) -> None:
        """Nothing is to be opened."""
        self.dismiss("")


class GridScreen(ModalScreen[int]):
    """Fillings × temperatures turned into targets at once; dismissed with how many were added."""

    DEFAULT_CSS = BOX.format(name="GridScreen", width=110, height=16)
    BINDINGS: ClassVar[list[BindingType]] = [Binding("escape", "back", "back")]

    def __init__(self, session: Session, sample: str) -> None:
        super().__init__()
        self.form = GridForm(session, sample)

    def compose(self) -> ComposeResult:
        """The questions."""
        with Vertical():
            yield Static(
                "Many targets at once: fillings × temperatures   (Esc goes back)", classes="title", markup=False
            )
            yield FieldSheet(self.form)

    def on_mount(self) -> None:
        """Begin at the first question."""
        self.query_one(FieldSheet).lines.focus()

    @on(FieldSheet.Committed)
    def _committed(self, event: FieldSheet.Committed) -> None:
        event.stop()

    @on(FieldSheet.Act)
    def _add(self, event: FieldSheet.Act) -> None:
        event.stop()
        done = self.form.commit(event.key, "")
        if done.usable:
            self.dismiss(self.form.added)
        else:
            self.app.notify(done.message, severity="warning", markup=False)

    def action_back(self) -> None:
        """Nothing is to be added."""
        self.dismiss(0)
