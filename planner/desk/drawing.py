"""Lanes drawn into text cells: a pure function of lanes, width, window of time and cursor.

A row is a tuple of runs; a run is text with the name of its look, which a screen turns into a style. Nothing is told by
the look alone: bars have letters and patterns, levels below a line are marked, negative fields are hatched.
"""

from __future__ import annotations

import math
from bisect import bisect_left, bisect_right
from dataclasses import dataclass
from datetime import time, timedelta
from itertools import groupby

from planner.clock import WEEKDAYS, Clock
from planner.desk.lanes import Bar, BarLane, CurveLane, Lanes
from planner.desk.wording import kelvin, tesla

GUTTER = 16
EIGHTHS = " ▁▂▃▄▅▆▇█"
PARTS = " ▏▎▍▌▋▊▉█"
FILLS = {"move": "╌", "staffed": "░", "attended": "█", "service": "█", "driven": "d", "persistent": "P"}
USER_FILLS = "█▓▒░▞▚▤▥"


@dataclass(frozen=True, slots=True)
class Run:
    """Text of one look. ``cursor``: it lies in the column of the step under the cursor."""

    text: str
    look: str
    cursor: bool = False


Row = tuple[Run, ...]
Cell = tuple[str, str]


@dataclass(frozen=True, slots=True)
class Window:
    """The stretch of time that is shown."""

    start_s: float
    end_s: float

    def around(self, second: float, factor: float, horizon_s: int) -> Window:
        """Zoomed by a factor about an instant, kept inside the week; never less than ten minutes."""
        length = min(max((self.end_s - self.start_s) * factor, 600.0), float(horizon_s))
        share = (second - self.start_s) / (self.end_s - self.start_s)
        share = share if 0 <= share <= 1 else 0.5
        return Window(second - share * length, second + (1 - share) * length).inside(horizon_s)

    def inside(self, horizon_s: int) -> Window:
        """Shifted so that it lies inside the week."""
        length = min(self.end_s - self.start_s, float(horizon_s))
        start = min(max(self.start_s, 0.0), horizon_s - length)
        return Window(start, start + length)

    def showing(self, start_s: float, end_s: float, horizon_s: int) -> Window:
        """Shifted so that a step can be seen; as it is, if it can be already."""
        length = self.end_s - self.start_s
        if start_s >= self.start_s and min(end_s, start_s + length / 8) <= self.end_s:
            return self
        return Window(start_s - length / 4, start_s + 3 * length / 4).inside(horizon_s)


def heights(lanes: Lanes, rows: int) -> dict[str, int]:
    """How many rows each lane gets: bars one, curves what is left, helium and field first."""
    names = [lane.name for lane in lanes.lanes]
    curves = [lane.name for lane in lanes.lanes if isinstance(lane, CurveLane)]
    given = dict.fromkeys(names, 1)
    left = rows - 3 - len(names)
    order = [name for name in ("helium", "field", "helium", "field", "stage") if name in curves]
    at = 0
    while left > 0 and order:
        name = order[at % len(order)]
        if given[name] < 8:
            given[name] += 1
        elif all(given[other] >= 8 for other in order):
            break
        left -= 1
        at += 1
    return given


def draw(lanes: Lanes, width: int, rows: int, window: Window, at: int | None = None) -> list[Row]:
    """The lanes, with two rows of ruler and one of cursor above them.

    Parameters
    ----------
    width, rows
        Cells in all, the names at the left included.
    window
        The time shown.
    at
        Position of the step under the cursor in the plan.
    """
    columns = max(8, width - GUTTER)
    grid = Grid(window, columns, lanes.plan.clock)
    step = lanes.plan.steps[at] if at is not None and at < len(lanes.plan.steps) else None
    marked = grid.span(step.start_s, step.end_s) if step is not None else range(0)
    second = step.start_s if step is not None else window.start_s
    drawn = [*_ruler(grid, marked)]
    given = heights(lanes, rows)
    for lane in lanes.lanes:
        if isinstance(lane, BarLane):
            cells = [bar_cells(lane, grid)]
            names = [lane.name]
        else:
            cells = curve_cells(lane, grid, given[lane.name])
            names = _names(lane, given[lane.name], second)
        drawn += [_row(name, line, marked) for name, line in zip(names, cells, strict=True)]
    return drawn


@dataclass(frozen=True, slots=True)
class Grid:
    """Columns of equal time."""

    window: Window
    columns: int
    clock: Clock

    @property
    def cell_s(self) -> float:
        """Seconds a column."""
        return (self.window.end_s - self.window.start_s) / self.columns

    def column(self, second: float) -> float:
        """Where an instant lies, in columns."""
        return (second - self.window.start_s) / self.cell_s

    def span(self, start_s: float, end_s: float) -> range:
        """The columns that a stretch touches, one at least where it lies in the window."""
        first, last = self.column(start_s), self.column(end_s)
        if last < 0 or first >= self.columns:
            return range(0)
        low = max(0, math.floor(first + 1e-9))
        return range(low, min(self.columns, max(low + 1, math.ceil(last - 1e-9))))


def _row(name: str, cells: list[Cell], marked: range) -> Row:
    runs = [Run(f"{name[: GUTTER - 2]:<{GUTTER - 1}}│", "name")]
    keyed = [(look, place in marked, sign) for place, (sign, look) in enumerate(cells)]
    for (look, cursor), group in groupby(keyed, key=lambda cell: cell[:2]):
        runs.append(Run("".join(sign for _, _, sign in group), look, cursor))
    return tuple(runs)


def _ruler(grid: Grid, marked: range) -> list[Row]:
    days: list[Cell] = [(" ", "ruler")] * grid.columns
    hours: list[Cell] = [(" ", "ruler")] * grid.columns
    shown_h = grid.cell_s * grid.columns / 3600
    every = next((hours for hours in (1, 2, 3, 6, 12, 24) if grid.columns / (shown_h / hours) >= 4), 24)
    first = grid.clock.moment(grid.window.start_s)
    day = first - timedelta(days=1)
    ends = 0
    while grid.clock.second(day) <= grid.window.end_s + 86400:
        for hour in range(0, 24, every):
            place = math.floor(grid.column(grid.clock.second(grid.clock.wall(day, time(hour)))) + 1e-9)
            if 0 <= place < grid.columns:
                _put(hours, place, f"{hour:02d}" if grid.columns > place + 1 else "", "ruler")
            if hour == 0 and place < grid.columns:
                at = max(place, 0)
                name = f"{WEEKDAYS[day.weekday()]} {day.day}"
                midnight_s = grid.clock.second(grid.clock.wall(day + timedelta(days=1), time(0)))
                room = min(grid.column(midnight_s), grid.columns) - at
                if at >= ends and room > len(name):
                    _put(days, at, f"│{name}" if place >= 0 else f" {name}", "day")
                    ends = at + len(name) + 1
                elif place >= 0:
                    _put(days, at, "│", "day")
        day += timedelta(days=1)
    pointer: list[Cell] = [("▼" if place in marked else "─", "cursor" if place in marked else "rule")
                           for place in range(grid.columns)]  # fmt: skip
    return [_row("", days, range(0)), _row("", hours, range(0)), _row("step", pointer, range(0))]


def _put(cells: list[Cell], place: int, text: str, look: str) -> None:
    for at, sign in enumerate(text, place):
        if 0 <= at < len(cells):
            cells[at] = (sign, look)


def bar_cells(lane: BarLane, grid: Grid) -> list[Cell]:
    """One row of bars. In each cell the bar that covers most of it is drawn, its edges in eighths."""
    cells: list[Cell] = [(" ", "empty")] * grid.columns
    best = [0.0] * grid.columns
    shares: dict[tuple[int, str], float] = {}
    for bar in lane.bars:
        for place in grid.span(bar.start_s, bar.end_s):
            begin = max(grid.column(bar.start_s), place) - place
            finish = min(grid.column(bar.end_s), place + 1) - place
            if (key := (place, bar.look)) in shares:
                shares[key] += max(0.0, finish - begin)
                share = min(1.0, shares[key])
                begin, finish = (0.0, share) if begin > 0 and finish < 1 and share < 1 else (begin, finish)
                whole = share > 0.94
            else:
                share = shares[key] = max(0.0, finish - begin)
                whole = share > 0.94
            over = bar.look not in ("staffed", "move")
            if share >= best[place] or (over and cells[place][1] in ("staffed", "move")):
                cells[place] = _bar_sign(bar, begin, finish, whole=whole)
                best[place] = share if over else share / 4
    _letters(lane, grid, cells)
    return cells


def _bar_sign(bar: Bar, begin: float, finish: float, *, whole: bool) -> Cell:
    if whole or bar.look in ("move", "staffed", "driven", "persistent"):
        return _fill(bar), bar.look
    eighths = max(1, min(7, round(8 * (finish - begin))))
    if finish > 0.94 and begin > 0.06:  # it begins inside the cell: the empty part is drawn, in reverse
        return PARTS[8 - eighths], f"{bar.look} reverse"
    return PARTS[eighths], bar.look


def _fill(bar: Bar) -> str:
    if bar.look.startswith("user-"):
        return USER_FILLS[int(bar.look[5:]) % len(USER_FILLS)]
    return FILLS.get(bar.look, "█")


def _letters(lane: BarLane, grid: Grid, cells: list[Cell]) -> None:
    """The letter on each bar that is long enough, and again every twelve cells."""
    for bar in lane.bars:
        if not bar.letter or bar.look in ("driven", "persistent"):
            continue
        own = [place for place in grid.span(bar.start_s, bar.end_s) if cells[place][1].split()[0] == bar.look]
        for place in own[len(own) > 2 :: 12] if own else []:
            neighbours = [cells[near] for near in range(max(0, place - 2), place)]
            if (bar.letter, f"{bar.look} letter") not in neighbours:
                cells[place] = (bar.letter, f"{bar.look} letter")


def curve_cells(lane: CurveLane, grid: Grid, rows: int) -> list[list[Cell]]:
    """A curve as filled area over ``rows`` rows of eighths, top row first, its lines across it."""
    values = [_value(lane, grid, place) for place in range(grid.columns)]
    drawn = []
    for row in range(rows - 1, -1, -1):
        line: list[Cell] = []
        lines = [one for one in lane.lines if row <= _share(lane, one.value) * rows < row + 1]
        for value in values:
            if value is None:
                line.append((" ", "empty"))
                continue
            filled = _share(lane, abs(value)) * rows - row
            below = any(value < one.value for one in lane.lines)
            line.append(_curve_sign(lane, filled, value, lines=bool(lines), below=below))
        drawn.append(line)
    return drawn


def _curve_sign(lane: CurveLane, filled: float, value: float, *, lines: bool, below: bool) -> Cell:
    look = f"{lane.name} low" if below and lane.lines else lane.name
    if lines and filled >= 1:
        return "─", f"{look} reverse"
    if filled <= 0:
        return ("─", "line") if lines else (" ", "empty")
    if value < 0:
        return ("▒" if filled >= 0.5 else "░"), f"{lane.name} negative"
    return EIGHTHS[max(1, min(8, round(8 * filled)))], look


def _share(lane: CurveLane, value: float) -> float:
    if lane.log:
        value, low, high = (math.log(max(one, 1e-12)) for one in (value, lane.low, lane.high))
    else:
        low, high = lane.low, lane.high
    return min(1.0, max(0.0, (value - low) / (high - low)))


def _value(lane: CurveLane, grid: Grid, place: int) -> float | None:
    """The value that stands for a column: the largest in size, or the smallest."""
    begin = grid.window.start_s + place * grid.cell_s
    finish = begin + grid.cell_s
    points = lane.points
    if not points or finish < points[0][0] or begin > points[-1][0]:
        return None
    found = [one for one in (value_at(lane, begin), value_at(lane, finish - 1e-6)) if one is not None]
    low, high = _between(lane, begin, finish)
    found += [value for _, value in points[low:high]]
    if not found:
        return None
    return min(found) if lane.pick == "smallest" else max(found, key=abs)


def _between(lane: CurveLane, begin: float, finish: float) -> tuple[int, int]:
    return (
        bisect_left(lane.points, begin, key=lambda point: point[0]),
        bisect_right(lane.points, finish - 1e-6, key=lambda point: point[0]),
    )


def value_at(lane: CurveLane, second: float) -> float | None:
    """The value at an instant, straight between the points; None outside them."""
    points = lane.points
    if not points or not points[0][0] <= second <= points[-1][0]:
        return None
    at = bisect_right(points, second, key=lambda point: point[0])
    if at >= len(points):
        return points[-1][1]
    (x0, y0), (x1, y1) = points[at - 1], points[at]
    return y0 if x1 == x0 else y0 + (second - x0) * (y1 - y0) / (x1 - x0)


def _names(lane: CurveLane, rows: int, second: float) -> list[str]:
    """The names at the left of a curve: itself with its value under the cursor, then its lines where they lie."""
    value = value_at(lane, second)
    said = "" if value is None else _value_said(lane.unit, value)
    names = [""] * rows
    names[0] = f"{lane.name} {said}".strip()
    for one in sorted(lane.lines, key=lambda one: -one.value):
        row = rows - 1 - min(rows - 1, math.floor(_share(lane, one.value) * rows))
        text = f" {one.name} {one.value:.0f}"
        if names[row] == "":
            names[row] = text
        elif row and len(names[row]) + 3 <= GUTTER - 2 and names[row].startswith(" "):
            names[row] += f" {one.value:.0f}"
    return names


def _value_said(unit: str, value: float) -> str:
    if unit == "T":
        return tesla(value)
    return kelvin(value) if unit == "K" else f"{value:.0f} {unit}"
