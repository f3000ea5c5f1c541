"""A magnet's load lines against the critical surfaces of its wire, and what goes along with the field: one SVG figure.

Read in grey: sections differ by dashes and letters, never by colour. The same rig gives the same bytes.
"""

from __future__ import annotations

import io
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.desk.magnet_page import MagnetPage, surface_of
from planner.files.hardware import Conductor
from planner.files.rig import Rig
from planner.physics.load_line import LOWEST_T

if TYPE_CHECKING:
    from matplotlib.axes import Axes

STYLE: Any = {
    "svg.hashsalt": "magnet page",
    "svg.fonttype": "path",
    "font.family": "DejaVu Sans",
    "font.size": 8.0,
    "axes.linewidth": 0.7,
    "path.simplify": False,
}
DASHES: tuple[Any, ...] = ("-", (0, (6, 2)), (0, (1.5, 1.5)), (0, (6, 2, 1.5, 2)))
_BARE = {"Date": None, "Creator": None, "Format": None, "Type": None}


def magnet_svg(rig: Rig, page: MagnetPage) -> str:
    """Draw the figure of a rig's magnet.

    Left, current over field on the wire: each section's critical current at its temperature, its load line, the work at
    rated field. Right, along the central field: operating fraction, temperature margin, voltage of the supply. A rig
    without [[magnet.conductor]] gets the voltage alone.
    """
    import matplotlib as mpl
    from matplotlib.backends.backend_svg import FigureCanvasSVG
    from matplotlib.figure import Figure

    with mpl.rc_context():
        mpl.rcdefaults()  # a user's own settings must not change the bytes
        mpl.rcParams.update(STYLE)
        known = bool(rig.magnet.conductor)
        figure = Figure(figsize=(9.0, 4.4) if known else (5.0, 2.6), layout="constrained")
        FigureCanvasSVG(figure)
        if known:
            grid = figure.add_gridspec(3, 2, width_ratios=[1.35, 1.0])
            _load_lines(figure.add_subplot(grid[:, 0]), rig, page)
            axes = [figure.add_subplot(grid[row, 1]) for row in range(3)]
            _along(axes[0], page, "fraction", "operating fraction")
            _along(axes[1], page, "margin_K", "margin / K")
            _voltage(axes[2], rig, page)
            for ax in axes[:2]:
                ax.tick_params(axis="x", labelbottom=False)
        else:
            _voltage(figure.add_subplot(), rig, page)
        out = io.StringIO()
        figure.savefig(out, format="svg", metadata=_BARE)
    text = out.getvalue()
    return text[text.index("<svg") :]


def _load_lines(ax: Axes, rig: Rig, page: MagnetPage) -> None:
    top_A = 1.35 * max(row.short_sample_A for row in page.sections)
    reach_T = 0.0
    for number, conductor in enumerate(rig.magnet.conductor):
        dash, letter = DASHES[number % len(DASHES)], chr(ord("a") + number % 26)
        kappa = float(conductor.peak_field_T_per_A)
        rows = [row for row in page.sections if row.section == conductor.name]
        end_T = max(row.short_sample_A for row in rows) * kappa * 1.15
        reach_T = max(reach_T, end_T)
        for kelvin in sorted({row.temperature_K for row in rows}):
            _surface(ax, conductor, kelvin, 1.3 * end_T, dash)
        ax.plot([0, end_T], [0, end_T / kappa], color="0.45", lw=1.0, ls=dash)
        for row in rows:
            _mark(ax, row.peak_T, row.peak_T / kappa, "o", f"{letter}: {row.fraction:.0%} at {row.field_T:g} T")
            short_T = row.short_sample_A * kappa
            _mark(ax, short_T, row.short_sample_A, "x", f"{letter}: {row.temperature_K:g} K")
    names = ", ".join(f"{chr(ord('a') + at % 26)} {part.material}" for at, part in enumerate(rig.magnet.conductor))
    ax.set_xlim(0, reach_T)
    ax.set_ylim(0, top_A)
    ax.set_xlabel("field on the wire / T")
    ax.set_ylabel("current / A")
    ax.set_title(
        f"critical current (black), load line (grey): ● at work, × short sample\n{names}", fontsize=7, loc="left"
    )
    ax.grid(color="0.9", lw=0.5)


def _mark(ax: Axes, field_T: float, current_A: float, marker: str, text: str) -> None:
    ax.plot([field_T], [current_A], marker=marker, ms=5, color="black", zorder=5)
    ax.annotate(
        text, (field_T, current_A), xytext=(7, -9), textcoords="offset points", fontsize=6.5, zorder=6,
        bbox={"boxstyle": "square,pad=0.1", "facecolor": "white", "edgecolor": "none", "alpha": 0.85},
    )  # fmt: skip


def _surface(ax: Axes, conductor: Conductor, kelvin: float, end_T: float, dash: Any) -> None:
    fields = np.linspace(LOWEST_T, max(end_T, 1.5 * LOWEST_T), 300)
    amperes = float(conductor.area_m2) * np.asarray(surface_of(conductor).critical_A_per_m2(fields, kelvin))
    shown = amperes > 0
    ax.plot(fields[shown], amperes[shown], color="black", lw=1.3, ls=dash)


def _along(ax: Axes, page: MagnetPage, key: str, label: str) -> None:
    """A value along the field; below the lambda point the coil is colder, so its points stand apart."""
    for below_lambda, marker in ((False, "."), (True, "D")):
        rows = [row for row in page.rows if row.below_lambda == below_lambda and getattr(row, key) is not None]
        values = [getattr(row, key) for row in rows]
        ax.plot([row.field_T for row in rows], values, color="black", lw=1.1, marker=marker, ms=4)
    ax.set_ylim(bottom=0)
    _dressed(ax, page, label)


def _voltage(ax: Axes, rig: Rig, page: MagnetPage) -> None:
    """The supply's voltage, with its steps where the ramp table changes the rate."""
    ohm, kappa = float(rig.magnet.supply.lead_resistance_ohm), float(rig.magnet.field_per_current_T_per_A)
    ways: dict[str, tuple[list[float], list[float]]] = {"up": ([], []), "down": ([], [])}
    before_T = 0.0
    for row in page.rows:
        if row.up_V is not None and row.down_V is not None:
            lead_V = (row.field_T - before_T) / kappa * ohm  # the leads take so much less at the row's lower end
            for name, volt in (("up", row.up_V), ("down", row.down_V)):
                ways[name][0].extend((before_T, row.field_T))
                ways[name][1].extend((volt - lead_V, volt))
        before_T = row.field_T
    ax.plot(*ways["up"], color="black", lw=1.1, label="up")
    ax.plot(*ways["down"], color="0.45", lw=1.1, ls=(0, (4, 2)), label="down")
    if max((abs(volt) for volt in ways["up"][1]), default=0.0) > 0.5 * page.max_V:
        ax.axhline(page.max_V, color="black", lw=0.6, ls=(0, (1, 2)))
    ax.axhline(0, color="0.6", lw=0.5)
    ax.legend(frameon=False, fontsize=6.5, ncols=2, loc="best")
    ax.set_xlabel("field / T")
    _dressed(ax, page, "supply / V")


def _dressed(ax: Axes, page: MagnetPage, label: str) -> None:
    ax.axvline(page.rated_T, color="black", lw=0.6, ls=(0, (6, 3)))
    ax.set_xlim(0, 1.03 * max(page.rated_T, page.lambda_T or 0.0))
    ax.set_ylabel(label)
    ax.grid(color="0.9", lw=0.5)
