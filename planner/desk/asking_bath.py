"""What a rig file needs to know of the helium bath, or of the cooler in its place."""

from __future__ import annotations

from planner.desk.asking import MEASURED, Parts, Script, count, value
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
    rows = yield count(
        (*at, "calibration"),
        "Rows of the gauge's calibration",
        "Losses act on litres, the gauge reads per cent.",
        3,
        2,
        50,
    )
    level, volume = -1.0, -1.0
    first = 0.0
    for row in range(rows):
        left = rows - row
        offers = (
            ("0 %", "0 L")
            if row == 0
            else (f"{between(level, 100, left - 1)} %", f"{between(volume, max(72, 1.5 * volume), left - 1)} L")
        )
        if left == 1:
            offers = "100 %" if level < 100 else offers[0], f"{tidy(max(72.0, 1.5 * volume))} L"
        which = f"Row {row + 1} of {rows}"
        level = number(
            (
                yield value(
                    LevelPoint,
                    (*at, "calibration", row, "level"),
                    f"{which}: level",
                    "As the gauge reads it, lowest first.",
                    offers[0],
                    mark=MEASURED,
                )
            ),
            "percent",
        )
        volume = number(
            (
                yield value(
                    LevelPoint,
                    (*at, "calibration", row, "volume"),
                    f"{which}: litres in the bath",
                    "Measured when the bath was filled.",
                    offers[1],
                    mark=MEASURED,
                )
            ),
            "L",
        )
        first = level if row == 0 else first
    yield from _lines(first - number(error, "percent"))
    yield from _losses()
    yield from _transfer(level)


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
