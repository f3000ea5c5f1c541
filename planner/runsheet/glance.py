"""The week at a glance: one SVG figure that is read in grey. It contains no text from users, only their letters.

The same sheet gives the same bytes: fixed salt, no date, glyphs drawn as paths.
"""

from __future__ import annotations

import io
from datetime import time, timedelta
from typing import TYPE_CHECKING, Any

from planner.plan import CoilMode, Plan, StepKind
from planner.runsheet.levels import gauge_percent, litres_over_time
from planner.runsheet.sheet import Sheet
from planner.runsheet.wording import HOUR_S, WallTimes

if TYPE_CHECKING:
    from matplotlib.axes import Axes

WIDTH_IN, HEIGHT_IN = 10.0, 4.2
# Shade and hatch of the users, in turn.
LOOKS = (
    ("0.35", ""),
    ("0.97", "////"),
    ("0.75", ""),
    ("0.97", "xxxx"),
    ("0.85", "\\\\\\\\"),
    ("0.97", "||||"),
    ("0.75", "----"),
)
STYLE: Any = {
    "svg.hashsalt": "run sheet",
    "svg.fonttype": "path",
    "font.family": "DejaVu Sans",
    "font.size": 7.5,
    "axes.linewidth": 0.6,
    "hatch.linewidth": 0.6,
    "path.simplify": False,
}


def glance_svg(sheet: Sheet) -> str:
    """The figure as an `<svg>` element."""
    import matplotlib as mpl
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure

    with mpl.rc_context():
        mpl.rcdefaults()  # a user's own settings must not change the bytes
        mpl.rcParams.update(STYLE)
        wet = sheet.rig.bath is not None
        letters = _letters(sheet)
        heights = [0.28 * max(1, min(len(letters), 10)), 0.5, 1.5, 1.2, *([1.7] if wet else [])]
        figure = Figure(figsize=(WIDTH_IN, HEIGHT_IN))
        FigureCanvasSVG(figure)
        axes: list[Axes] = list(
            figure.subplots(len(heights), 1, sharex=True, gridspec_kw={"height_ratios": heights, "hspace": 0.12})
        )
        figure.subplots_adjust(left=0.062, right=0.9, top=0.94, bottom=0.05)
        _users(axes[0], sheet, letters)
        _staff(axes[1], sheet)
        _field(axes[2], sheet)
        _temperature(axes[3], sheet.plan)
        if wet:
            _helium(axes[4], sheet)
        _days(axes, sheet.walls, sheet.horizon_s)
        out = io.StringIO()
        figure.savefig(out, format="svg", metadata={"Date": None, "Creator": None, "Format": None, "Type": None})
    text = out.getvalue()
    return text[text.index("<svg") :]


def _letters(sheet: Sheet) -> list[str]:
    present = {sheet.letters.get(step.user, "") for step in sheet.plan.steps if step.kind == StepKind.TAKE}
    letters = sorted(letter for letter in sheet.letters.values() if letter in present)
    return letters or sorted(sheet.letters.values())[:1]


def _h(second: float) -> float:
    return second / HOUR_S


def _users(ax: Axes, sheet: Sheet, letters: list[str]) -> None:
    """One line a user, apart by place, letter, shade and hatch."""
    for place, letter in enumerate(letters):
        bars = [
            (_h(step.start_s), _h(step.seconds))
            for step in sheet.plan.steps
            if step.kind == StepKind.TAKE and sheet.letters.get(step.user) == letter
        ]
        ax.broken_barh(
            bars,
            (place - 0.36, 0.72),
            facecolor=LOOKS[place % len(LOOKS)][0],
            edgecolor="black",
            linewidth=0.35,
            hatch=LOOKS[place % len(LOOKS)][1],
        )
    ax.set_ylim(len(letters) - 0.5, -0.5)
    ax.set_yticks(range(len(letters)), letters, fontweight="bold")
    ax.tick_params(axis="y", length=0)
    _named(ax, "measures")


def _staff(ax: Axes, sheet: Sheet) -> None:
    """Staffed hours as bars; helium transfers and attended steps below them."""
    ax.broken_barh(
        [(_h(a), _h(b - a)) for a, b in sheet.staffed], (1.1, 0.7), facecolor="0.85", edgecolor="0.3", lw=0.4
    )
    attended = [
        (_h(step.start_s), _h(step.seconds)) for step in sheet.plan.steps if step.attended and not step.poured_L
    ]
    ax.broken_barh(attended, (0.15, 0.7), facecolor="black", edgecolor="black", lw=0.3)
    for step in sheet.plan.steps:
        if step.poured_L > 0:
            ax.plot([_h((step.start_s + step.end_s) / 2)], [0.5], marker="v", color="black", mec="white", markersize=7)
    ax.set_ylim(0, 1.95)
    ax.set_yticks([0.5, 1.45], ["attended", "staffed"], fontsize=6)
    ax.tick_params(axis="y", length=0, pad=1)
    _named(ax, "people\n▼ transfer" if any(step.poured_L for step in sheet.plan.steps) else "people")


def _field(ax: Axes, sheet: Sheet) -> None:
    """The field: thick where the coil is persistent, thin where the supply drives it."""
    runs: dict[bool, list[tuple[float, float]]] = {False: [], True: []}
    for start_s, end_s, begin_T, end_T, persistent in field_pieces(sheet.plan):
        runs[persistent] += [(_h(start_s), begin_T), (_h(end_s), end_T), (float("nan"), float("nan"))]
    ax.axhline(0, color="0.6", lw=0.5)
    for persistent, points in runs.items():
        ax.plot(
            [x for x, _ in points], [y for _, y in points], color="black", lw=2.4 if persistent else 0.9,
            solid_capstyle="butt",
        )  # fmt: skip
    rated_T = float(sheet.rig.magnet.rated_field_T)
    fields = [y for points in runs.values() for _, y in points if y == y] or [0.0]
    low = min(0.0, min(fields))
    ax.set_ylim(low - 0.06 * rated_T if low < 0 else -0.04 * rated_T, rated_T * 1.04)
    ax.axhline(rated_T, color="black", lw=0.5, ls=(0, (6, 3)))
    _right(ax, rated_T, "rated")
    ax.set_ylabel("field / T")
    thick = any(points for persistent, points in runs.items() if persistent)
    _named(ax, "thick:\npersistent" if thick else "")


def field_pieces(plan: Plan) -> list[tuple[int, int, float, float, bool]]:
    """The field as straight pieces: (start_s, end_s, from T, to T, persistent)."""
    pieces = []
    for step in plan.steps:
        legs = [leg for leg in step.legs if leg.channel == "coil" and leg.coil is not None]
        for leg in legs:
            if leg.coil:
                before, after = leg.coil
                persistent = before.mode == CoilMode.PERSISTENT
                pieces.append((leg.start_s, leg.end_s, before.field_T[2], after.field_T[2], persistent))
        if not legs and step.seconds:
            coils = step.before.coil, step.after.coil
            persistent = coils[0].mode == CoilMode.PERSISTENT
            pieces.append((step.start_s, step.end_s, coils[0].field_T[2], coils[1].field_T[2], persistent))
    return pieces


def _temperature(ax: Axes, plan: Plan) -> None:
    points: list[tuple[float, float]] = []
    for step in plan.steps:
        points.append((_h(step.start_s), step.before.stage.temperature_K))
        for leg in step.legs:
            if leg.channel == "stage" and leg.stage_K is not None:
                points += [(_h(leg.start_s), leg.stage_K[0]), (_h(leg.end_s), leg.stage_K[1])]
        points.append((_h(step.end_s), step.after.stage.temperature_K))
    kelvins = [kelvin for _, kelvin in points]
    in_mK = max(kelvins) < 1
    scale = 1000.0 if in_mK else 1.0
    ax.plot([x for x, _ in points], [scale * y for _, y in points], color="black", lw=0.9)
    ax.set_yscale("log")
    low, high = scale * min(kelvins), scale * max(kelvins)
    ax.set_ylim(low / 1.6, max(high * 1.6, low * 4))
    _plain_log_ticks(ax, low / 1.6, max(high * 1.6, low * 4))
    ax.set_ylabel("stage / mK" if in_mK else "stage / K")


def _plain_log_ticks(ax: Axes, low: float, high: float) -> None:
    from matplotlib.ticker import FixedFormatter, FixedLocator, NullFormatter

    steps = (1, 2, 5) if high / low < 40 else (1, 3) if high / low < 400 else (1,)
    ticks = [m * 10.0**e for e in range(-4, 5) for m in steps if low <= m * 10.0**e <= high]
    ax.yaxis.set_major_locator(FixedLocator(ticks))
    ax.yaxis.set_major_formatter(FixedFormatter([f"{tick:g}" for tick in ticks]))
    ax.yaxis.set_minor_formatter(NullFormatter())


def _helium(ax: Axes, sheet: Sheet) -> None:
    """What the gauge should read, its error as a grey band, and the rig's lines for the band's lower edge."""
    bath = sheet.rig.bath
    if bath is None:
        return
    points = [
        (_h(at), gauge_percent(sheet.rig, litres) or 0.0) for at, litres in litres_over_time(sheet.plan, sheet.rig)
    ]
    hours, percent = [x for x, _ in points], [y for _, y in points]
    error = float(bath.gauge_error_percent)
    ax.fill_between(hours, [y - error for y in percent], [y + error for y in percent], color="0.8", lw=0)
    ax.plot(hours, percent, color="black", lw=1.0)
    names = {"start ramp": bath.lines.start_ramp_percent, "at field": bath.lines.at_field_percent,
             "coil top": bath.lines.coil_top_percent, "reserve": bath.lines.reserve_percent}  # fmt: skip
    dashes = ((0, (1, 2)), (0, (4, 2)), "-", (0, (6, 2, 1, 2)))
    for (_, line), dash in zip(names.items(), dashes, strict=True):
        ax.axhline(float(line), color="black", lw=0.7, ls=dash)
    low = min([float(bath.lines.reserve_percent), *[y - error for y in percent]])
    ax.set_ylim(max(0.0, low - 6) if low > 0 else low - 4, 104)
    _spread_labels(ax, {name: float(line) for name, line in names.items()}, least_apart=9.5)
    ax.set_ylabel("helium / %")


def _spread_labels(ax: Axes, names: dict[str, float], least_apart: float) -> None:
    """Names at the right of their lines, pushed apart where the lines are close."""
    placed = float("-inf")
    for name, line in sorted(names.items(), key=lambda pair: pair[1]):
        placed = max(line, placed + least_apart)
        _right(ax, placed, f"{name} {line:g} %")


def _right(ax: Axes, y: float, text: str) -> None:
    ax.annotate(text, (1.006, y), xycoords=("axes fraction", "data"), va="center", fontsize=6.5, annotation_clip=False)


def _named(ax: Axes, text: str) -> None:
    ax.text(1.006, 0.5, text, transform=ax.transAxes, va="center", fontsize=6.5)


def _days(axes: list[Axes], walls: WallTimes, horizon_s: int) -> None:
    """Midnights as lines through all lanes, dates above, hours below; by the wall clock, also across its changes."""
    midnights, ticks = [], []
    day = walls.clock.moment(0)
    while day.date() <= walls.clock.moment(horizon_s).date():
        midnights.append((walls.clock.second(walls.clock.wall(day, time(0))), day))
        ticks += [(walls.clock.second(walls.clock.wall(day, time(hour))), hour) for hour in (0, 6, 12, 18)]
        day += timedelta(days=1)
    hours_between = 6 if len(midnights) <= 9 else 12
    ticks = [(at, hour) for at, hour in ticks if 0 <= at <= horizon_s and hour % hours_between == 0]
    if len(midnights) > 16:
        ticks = []
    for ax in axes:
        for at, _ in midnights:
            if 0 <= at <= horizon_s:
                ax.axvline(_h(at), color="0.45", lw=0.6, zorder=0)
        ax.tick_params(axis="x", length=2 if ax is axes[-1] else 0)
        ax.set_xlim(0, _h(horizon_s))
    axes[-1].set_xticks([_h(at) for at, _ in ticks], [f"{hour:02d}" for _, hour in ticks], fontsize=6.5)
    ends_s = [*(at for at, _ in midnights[1:]), horizon_s]
    for (begins_s, day), end_s in zip(midnights, ends_s, strict=True):
        left, right = max(0, begins_s), min(horizon_s, end_s)
        if right - left >= 0.03 * horizon_s:
            name = ("Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun")[day.weekday()]
            label = f"{name} {day.day}" if len(midnights) <= 9 else f"{day.day}"
            axes[0].annotate(
                label, (_h((left + right) / 2), 1.0), xycoords=("data", "axes fraction"), xytext=(0, 3),
                textcoords="offset points", ha="center", va="bottom", fontsize=8, annotation_clip=False,
            )  # fmt: skip
