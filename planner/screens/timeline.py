"""The lanes of a plan on the screen, with a cursor that walks its steps."""

from __future__ import annotations

from rich.segment import Segment
from textual.events import Click, Resize
from textual.message import Message
from textual.reactive import reactive
from textual.strip import Strip
from textual.widget import Widget

from planner.desk.drawing import GUTTER, Row, Window, draw
from planner.desk.lanes import Lanes
from planner.plan import StepKind
from planner.screens.looks import lane_style


class Timeline(Widget, can_focus=True):
    """Lanes over time: what is measured, field, coil, stage, helium, people, services."""

    DEFAULT_CSS = """
    Timeline { height: 3fr; background: $background; }
    """

    HELP = (
        "Time runs to the right. ▼ marks the step under the cursor; the panel below explains it.\n\n"
        "measures: the letter is the user's, each user has a pattern; ╌ is moving, blank is waiting. field: "
        "height is |B|, hatched where it is negative. coil: d driven, P persistent. stage: temperature, "
        "logarithmic. helium: what the gauge should read; the lines are those of the rig plus the gauge's error. "
        "people: ░ staffed, a digit says how many must be there. services: H helium transfer, others by their "
        "first letter.\n\n"
        "← → walk the steps, ↑ ↓ the takes and services, Home and End go to the first and last. + and − show "
        "less or more time, 0 the whole week. f goes to the next step with a finding, g to the target of the "
        "step."
    )

    at: reactive[int] = reactive(0)
    """Position in the plan of the step under the cursor."""

    class Walked(Message):
        """Another step is under the cursor."""

    def __init__(self) -> None:
        super().__init__()
        self.lanes: Lanes | None = None
        self.window = Window(0.0, 86400.0)
        self._drawn: list[Row] = []

    def show(self, lanes: Lanes | None) -> None:
        """Show a plan, the time in which it works."""
        self.lanes = lanes
        if lanes is not None:
            last = min(lanes.horizon_s, lanes.works_until_s + 0.04 * lanes.horizon_s)
            self.window = Window(0.0, float(max(last, 600)))
            self.at = min(self.at, len(lanes.plan.steps) - 1)
        self.redraw()

    def redraw(self) -> None:
        """Draw the lanes anew."""
        if self.lanes is not None and self.size.width:
            self._drawn = draw(self.lanes, self.size.width, self.size.height, self.window, self.at)
        else:
            self._drawn = []
        self.refresh()

    def render_line(self, y: int) -> Strip:
        """One row of cells, every one with a style of its own."""
        theme = self.app.theme
        row = self._drawn[y] if y < len(self._drawn) else ()
        segments = [Segment(run.text, lane_style(run.look, theme, cursor=run.cursor)) for run in row]
        return Strip(segments).adjust_cell_length(self.size.width, lane_style("empty", theme))

    def watch_at(self) -> None:
        """The step under the cursor must be in sight."""
        if self.lanes is not None and self.lanes.plan.steps:
            step = self.lanes.plan.steps[self.at]
            self.window = self.window.showing(step.start_s, step.end_s, self.lanes.horizon_s)
            self.redraw()
            self.post_message(self.Walked())

    def walk(self, by: int, *, takes_only: bool = False) -> None:
        """Go some steps on; only to takes and services if wanted. Steps of no length are passed over."""
        if self.lanes is None:
            return
        steps, at = self.lanes.plan.steps, self.at + by
        kinds = (StepKind.TAKE, StepKind.SERVICE)
        while 0 <= at < len(steps) and (not steps[at].seconds or (takes_only and steps[at].kind not in kinds)):
            at += 1 if by > 0 else -1
        if 0 <= at < len(steps):
            self.at = at

    def zoom(self, factor: float) -> None:
        """Show less or more time around the step under the cursor."""
        if self.lanes is not None:
            step = self.lanes.plan.steps[self.at]
            self.window = self.window.around((step.start_s + step.end_s) / 2, factor, self.lanes.horizon_s)
            self.redraw()

    def whole(self) -> None:
        """Show the whole week."""
        if self.lanes is not None:
            self.window = Window(0.0, float(self.lanes.horizon_s))
            self.redraw()

    def on_click(self, event: Click) -> None:
        """Put the cursor on the step that was clicked."""
        if self.lanes is None or event.x < GUTTER:
            return
        share = (event.x - GUTTER + 0.5) / max(1, self.size.width - GUTTER)
        second = self.window.start_s + share * (self.window.end_s - self.window.start_s)
        for at, step in enumerate(self.lanes.plan.steps):
            if step.start_s <= second < step.end_s:
                self.at = at

    def on_resize(self, _event: Resize) -> None:
        """Draw for the new size."""
        self.redraw()
