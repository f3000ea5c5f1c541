"""What a rig file needs to know of the helium bath, or of the cooler in its place."""

from __future__ import annotations

from collections.abc import Generator
from typing import Any

from planner.desk.asking import MEASURED, Parts, Question, Script, count, value
from planner.desk.offers import between, number, tidy
from planner.files.rig import Bath, Cooler, LevelPoint, Lines, Losses, Transfer


def bath_script() -> Script:
    """Every question for the table [bath]."""
    at: Parts = ("bath",)
    error = yield value(
        Bath,
        (*at, "gauge_error"),
        "Error of the level gauge",
        "Every verdict is on the reading less this.",
        "2 %",
        mark=MEASURED,
    )
    lowest, highest = yield from _calibration()
    yield from _lines(lowest - number(error, "percent"))
    yield from _losses()
    yield from _transfer(highest)


def _calibration() -> Generator[Question, Any, tuple[float, float]]:
    """The rows of the gauge's table; gives its lowest and its highest level in percent."""
    at: Parts = ("bath", "calibration")
    why = "Losses act on litres, the gauge reads per cent."
    rows = yield count(at, "Rows of the gauge's calibration", why, 3, 2, 50)
    level, volume, levels = -1.0, -1.0, []
    for row in range(rows):
        which = f"Row {row + 1} of {rows}"
        percent, litres = _next_point(level, volume, rows - row)
        why = "As the gauge reads it, lowest first."
        given = yield value(LevelPoint, (*at, row, "level"), f"{which}: level", why, percent, mark=MEASURED)
        level = number(given, "percent")
        why = "Measured when the bath was filled."
        given = yield value(LevelPoint, (*at, row, "volume"), f"{which}: litres in it", why, litres, mark=MEASURED)
        volume = number(given, "L")
        levels.append(level)
    return levels[0], levels[-1]


def _next_point(level: float, volume: float, left: int) -> tuple[str, str]:
    """What to offer after a level and a volume, with so many rows left; both are negative before the first."""
    full_L = max(72.0, 1.5 * volume)
    if level < 0:
        return "0 %", "0 L"
    if left == 1:
        return "100 %", f"{tidy(full_L)} L"
    return f"{between(level, 100, left - 1)} %", f"{between(volume, full_L, left - 1)} L"


def _lines(least: float) -> Script:
    at: Parts = ("bath", "lines")
    above = 100.0
    for key, ask, why, offer in (
        ("start_ramp", "Level to start a ramp", "No ramp to a higher field begins below it.", 50),
        ("at_field", "Level at which the run-down must begin", "There is then enough helium to come down.", 42),
        ("coil_top", "Level at the top of the coil", "There is never current in the coil below it.", 30),
        ("reserve", "Lowest level of all", "Below it the rig begins to warm.", 20),
    ):
        given = yield value(Lines, (*at, key), ask, why, f"{tidy(min(above, max(offer, least)))} %")
        above = number(given, "percent")


def _losses() -> Script:
    at: Parts = ("bath", "losses")
    for key, ask, why, offer in (
        ("static", "Boil-off at rest", "It runs every hour of the week; take your own of the last days.", "0.40 L/h"),
        ("switch_open", "More with the coil driven", "The switch heater burns helium while it is on.", "0.26 L/h"),
        ("leads", "More per ampere in the leads", "Current in the leads warms the bath.", "0.002 L/h/A"),
        ("moving", "Lost per tesla of field change", "Ramps heat the coil and its former.", "0.08 L/T"),
    ):
        yield value(Losses, (*at, key), ask, why, offer, mark=MEASURED)


def _transfer(full: float) -> Script:
    at: Parts = ("bath", "transfer")
    for key, ask, why, offer in (
        ("rate", "Rate of a transfer into the bath", "It says how long people are busy.", "60 L/h"),
        ("efficiency", "Share of the drawn liquid that arrives", "The stock is counted in what is drawn.", "80 %"),
        ("line_cooling", "Cooling the transfer line", "Time before liquid comes.", "20 min"),
        ("line_loss", "Litres lost in cooling the line", "Why small transfers are dear.", "2 L"),
        ("fill_to", "Full at", "A transfer ends there.", f"{tidy(min(98.0, full))} %"),
        ("least_pour", "Least worth transferring", "No plan cools a line for less.", "8 L"),
        ("people", "People at a transfer", "A plan transfers only when so many are there.", "2"),
        ("training", "What they must be trained for", "The roster of a week names it.", "transfer"),
        ("coil", "What the coil must be meanwhile", "Some sites transfer only at zero field.", "zero"),
        ("hours", "Hours in which it is done", "Left out, any staffed hour will do.", "Mon-Fri 09:00-16:00"),
    ):
        yield value(Transfer, (*at, key), ask, why, offer, mark=MEASURED if key in ("rate", "efficiency") else "")


def cooler_script() -> Script:
    """Every question for the table [cooler]."""
    yield value(Cooler, ("cooler", "name"), "Name of the cooler", "The sheet prints it.", "two-stage cold head")
