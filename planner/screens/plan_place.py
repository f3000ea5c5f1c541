"""The place of the plan: its lanes over time, and below them the step under the cursor, explained."""

from __future__ import annotations

from rich.text import Text
from textual import on
from textual.app import ComposeResult
from textual.containers import Vertical, VerticalScroll
from textual.widgets import Static

from planner.desk.lanes import lanes_of
from planner.desk.session import Session
from planner.desk.telling import finding_words, findings_of, tell
from planner.files import request_of
from planner.plan import Plan
from planner.report.summary import bound_words
from planner.screens.looks import message_style
from planner.screens.timeline import Timeline

NO_PLAN = (
    "No plan yet.\n\n"
    "F9 (or s) solves the week as it stands, in the background: the line below shows the best so far, the bound "
    "that is proven, the gap between them, and the seconds. F10 (or x) stops it with the best so far."
)


class PlanPlace(Vertical):
    """When everything happens, and why it takes so long."""

    DEFAULT_CSS = """
    PlanPlace .told { height: 2fr; border-top: tall $panel; padding: 0 1; }
    PlanPlace .empty { height: 1fr; padding: 1 2; display: none; }
    PlanPlace.none .empty { display: block; }
    PlanPlace.none Timeline, PlanPlace.none .told { display: none; }
    """

    HELP = Timeline.HELP

    def __init__(self, session: Session, name: str) -> None:
        super().__init__(id=name)
        self.session = session
        self._shown: Plan | None = None

    def compose(self) -> ComposeResult:
        """The lanes, the panel; or a word where there is no plan."""
        yield Timeline()
        with VerticalScroll(classes="told", can_focus=False):
            yield Static(markup=False)
        yield Static(NO_PLAN, classes="empty", markup=False)

    def on_mount(self) -> None:
        """Show the plan, if there is one."""
        self.refresh_place()

    @property
    def timeline(self) -> Timeline:
        """The lanes."""
        return self.query_one(Timeline)

    def focus_place(self) -> None:
        """Take the focus."""
        self.timeline.focus()

    def refresh_place(self) -> None:
        """Show the plan as it stands."""
        if not self.is_mounted:
            return
        plan = self.session.plan
        self.set_class(plan is None, "none")
        if plan is not self._shown:
            self._shown = plan
            self.timeline.show(None if plan is None else lanes_of(plan, request_of(plan.sources)))
        self._tell()

    def go_to(self, at: int) -> None:
        """Put the cursor on a step."""
        self.timeline.at = at

    @on(Timeline.Walked)
    def _walked(self, event: Timeline.Walked) -> None:
        event.stop()
        self._tell()

    def _tell(self) -> None:
        plan = self.session.plan
        if plan is None or not plan.steps:
            return
        theme = self.app.theme
        step = plan.steps[self.timeline.at]
        rig = self.timeline.lanes and request_of(plan.sources).rig
        told = tell(plan, step, rig or None, self.session.findings)
        text = Text().append(told.heading, message_style(theme, "strong"))
        if not self.session.plan_is_current:
            text.append("  the week has been edited since: F9 solves again", message_style(theme, "warn"))
        for finding in told.findings:
            kind = "bad" if finding.kind in ("stop", "policy") else "warn"
            text.append(f"\n{str(finding.kind).upper():8}", message_style(theme, kind))
            text.append(finding_words(finding, plan.clock))
        for name, line in told.lines:
            text.append(f"\n{name:8}", message_style(theme, "quiet")).append(line)
        text.append("\nplan    ", message_style(theme, "quiet")).append(bound_words(plan.score))
        for left in plan.left_out:
            text.append("\nleft out", message_style(theme, "warn"))
            text.append(f" {left.take or left.target}: {left.reason}")
        self.query_one(".told Static", Static).update(text)
        self.query_one(".told", VerticalScroll).scroll_home(animate=False)

    # What keys do here

    def do_step_before(self) -> None:
        """One step back."""
        self.timeline.walk(-1)

    def do_step_after(self) -> None:
        """One step on."""
        self.timeline.walk(1)

    def do_take_before(self) -> None:
        """To the take or service before."""
        self.timeline.walk(-1, takes_only=True)

    def do_take_after(self) -> None:
        """To the take or service after."""
        self.timeline.walk(1, takes_only=True)

    def do_first(self) -> None:
        """To the first step."""
        self.timeline.at = 0

    def do_last(self) -> None:
        """To the last step."""
        if self.session.plan is not None:
            self.timeline.at = len(self.session.plan.steps) - 1

    def do_nearer(self) -> None:
        """Less time, finer."""
        self.timeline.zoom(0.5)

    def do_wider(self) -> None:
        """More time."""
        self.timeline.zoom(2.0)

    def do_whole(self) -> None:
        """The whole week."""
        self.timeline.whole()

    def do_next_finding(self) -> None:
        """To the next step with a finding, from the start again after the last."""
        plan = self.session.plan
        if plan is None:
            return
        count = len(plan.steps)
        for at in (place % count for place in range(self.timeline.at + 1, self.timeline.at + 1 + count)):
            if findings_of(plan.steps[at], self.session.findings):
                self.timeline.at = at
                return
        self.app.notify("No step has a finding.", markup=False)
