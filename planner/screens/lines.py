"""The lines at the edges of the screen: what is open, the places, how the solve stands, the keys."""

from __future__ import annotations

from rich.text import Text
from textual.events import Click
from textual.widgets import Static

from planner.desk.session import Session
from planner.desk.solving import Snapshot, SolveState
from planner.desk.telling import progress_words, score_words
from planner.desk.wording import clean
from planner.screens.actions import PLACE_KEYS, PLACES, TITLES, here, shown_key
from planner.screens.asked import Asked
from planner.screens.looks import message_style

_ONE_LINE = "{name} {{ height: 1; background: {back}; padding: 0 1; text-wrap: nowrap; text-overflow: ellipsis; }}"


class TopLine(Static):
    """The week, its files, and whether all is saved."""

    DEFAULT_CSS = _ONE_LINE.format(name="TopLine", back="$panel")

    def show(self, session: Session) -> None:
        """Say what is open."""
        theme = self.app.theme
        document = session.document
        title = clean(str(document.data("week").get("title", ""))) or "a week"
        ends = Text()
        if count := len(document.problems):
            ends.append(f"  ✗{count} to mend: F7", message_style(theme, "bad"))
        if document.changed:
            ends.append("  not saved", message_style(theme, "warn"))
        text = Text(title)
        text.truncate(max(20, self.app.size.width - 40), overflow="ellipsis")
        text.stylize(message_style(theme, "strong"))
        names = Text(f"  {document.name('week')} · {document.name('rig')}", message_style(theme, "quiet"))
        names.truncate(max(0, self.app.size.width - 2 - text.cell_len - ends.cell_len), overflow="ellipsis")
        text.append_text(names).append_text(ends)
        self.update(text, layout=False)


class PlacesLine(Static):
    """The places, with their keys."""

    DEFAULT_CSS = _ONE_LINE.format(name="PlacesLine", back="$surface")

    def show(self, place: str) -> None:
        """Mark the place one is in."""
        theme = self.app.theme
        text = Text(no_wrap=True)
        self._spans: list[tuple[int, int, str]] = []
        for name in PLACES:
            start = text.cell_len
            text.append(f"{shown_key(PLACE_KEYS[name])} ", message_style(theme, "quiet"))
            text.append(f"[{TITLES[name]}]" if name == place else TITLES[name], "bold reverse" if name == place else "")
            self._spans.append((start, text.cell_len, name))
            text.append("  ")
        self.update(text, layout=False)

    def on_click(self, event: Click) -> None:
        """Go to the place that was clicked."""
        for start, end, name in self._spans:
            if start <= event.x - 1 < end:
                self.post_message(Asked(f"place_{name}"))


class SolveLine(Static):
    """How the solve stands; afterwards, what the plan is worth."""

    DEFAULT_CSS = _ONE_LINE.format(name="SolveLine", back="$surface")

    HELP = (
        "While a solve runs: its seconds, the points of the best plan so far and the most any plan can have, its "
        "cost in hours and the least that is proven, and the gap between them."
    )

    def show(self, session: Session, snapshot: Snapshot | None, message: str = "") -> None:
        """Say how it stands."""
        theme = self.app.theme
        text = Text(no_wrap=True, overflow="ellipsis")
        running = snapshot is not None and snapshot.state in (SolveState.RUNNING, SolveState.STOPPING)
        if snapshot is not None and running:
            word = "stopping" if snapshot.state is SolveState.STOPPING else "solving"
            text.append(f"{word} ", message_style(theme, "warn"))
            text.append(progress_words(snapshot.progress, snapshot.elapsed_s))
            text.append(" · F10 stops", message_style(theme, "quiet"))
        elif message:
            text.append(message)
        elif session.plan is not None:
            if session.plan_is_current:
                text.append("plan · ")
            else:
                text.append("plan, older than the last edits · ", message_style(theme, "warn"))
            text.append(score_words(session.plan.score))
            text.append(_counted(session), message_style(theme, "quiet"))
        else:
            text.append("no plan yet", message_style(theme, "quiet"))
            mend = session.document.problems
            text.append(" · mend the files first: F7" if mend else " · F9 solves the week as it stands")
            text.append(_counted(session), message_style(theme, "quiet"))
        self.update(text, layout=False)


def _counted(session: Session) -> str:
    counts: dict[str, int] = {}
    for finding in session.findings:
        counts[str(finding.kind)] = counts.get(str(finding.kind), 0) + 1
    return "".join(f" · {count} {kind}" for kind, count in counts.items() if kind != "note")


class KeysLine(Static):
    """The keys that work where one is."""

    DEFAULT_CSS = _ONE_LINE.format(name="KeysLine", back="$panel")

    def show(self, place: str, mode: str, *, solving: bool) -> None:
        """Say which keys work; ``mode`` is "typing", "lines" (of a form) or "" elsewhere."""
        theme = self.app.theme
        idle = "solve" if solving else "stop"
        if mode == "typing":
            pairs = [("Enter", "take it"), ("Tab", "take it, next line"), ("Esc", "leave it"), ("↑↓", "choices"),
                     ("F1", "help")]  # fmt: skip
        else:
            pairs = [(action.key, action.short) for action in here(place) if action.weight and action.name != idle]
            if mode == "lines":
                pairs = [("Enter", "type"), ("Space", "turn"), ("Tab", "other side"), *pairs]
        text = Text(no_wrap=True)
        for key, told in pairs:
            if text.cell_len + len(key) + 1 + len(told) > self.app.size.width - 2:
                continue
            text.append(key, message_style(theme, "strong"))
            text.append(f" {told}  ", message_style(theme, "quiet"))
        text.rstrip()
        self.update(text, layout=False)
