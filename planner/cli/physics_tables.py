"""How the pages of `planner.cli.physics_commands` look in a terminal: tables, and below them what is to be known."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from rich.table import Table
from rich.text import Text

from planner.cli.output import console as console_of
from planner.report.wording import kelvin, plain, rounded

if TYPE_CHECKING:
    from rich.console import Console

    from planner.desk.cooldown_page import Bounds, CooldownPage
    from planner.desk.density_page import DensityPage, DensityValue
    from planner.desk.field_page import FieldPage, FillingRow
    from planner.desk.magnet_page import MagnetPage


def _table(*columns: str) -> Table:
    table = Table(box=None, padding=(0, 1, 0, 0), show_edge=False, header_style="bold")
    for place, name in enumerate(columns):
        table.add_column(name, no_wrap=True, justify="left" if place == 0 else "right")
    return table


def _says(console: Console, words: Iterable[str]) -> None:
    for text in words:
        line = Table.grid(padding=(0, 1, 0, 0))
        line.add_row(Text("·"), plain(text))
        console.print(line)


def _fixed(value: float | None, decimals: int) -> str:
    return "–" if value is None else f"{value:.{decimals}f}".replace("-", "−")


def _density(per_m2: float) -> str:
    return f"{per_m2 / 1e15:.4g}e11 cm^-2".replace("-", "−", 1) if per_m2 < 0 else f"{per_m2 / 1e15:.4g}e11 cm^-2"


def print_field(page: FieldPage) -> None:
    """Print fillings and their fields; offers and notes below the table."""
    console = console_of()
    spread = f" ± {_density(page.uncertainty_per_m2)}" if page.uncertainty_per_m2 else ""
    console.print(plain(f"density {_density(page.density_per_m2)}{spread}", "bold"))
    if page.rated_T is not None:
        beyond = "" if page.lambda_T is None else f", {page.lambda_T:g} T below the lambda point"
        console.print(plain(f"rated {page.rated_T:g} T{beyond}"))
    if page.tilt_deg:
        console.print(plain(f"tilt {page.tilt_deg:.4g}°: fields are perpendicular, total is what the magnet makes"))
    names = ["ν", "field/T", *(["total/T"] if page.tilt_deg else []), *(["from–to/T"] if spread else [])]
    table = _table(*names, "reach", "Rxy/Ω", "gap≈", "seen below", "tilt ≤")
    for row in page.rows:
        table.add_row(*_cells(row, page))
    console.print(table)
    for row in page.rows:
        if row.offers:
            _says(console, [f"instead of {row.name}: {'; '.join(offer.text for offer in row.offers)}"])
    _says(console, [f"ν = {row.name}: {note}" for row in page.rows for note in row.notes])
    if any(_too_cold(row, page) for row in page.rows):
        _says(console, [f"! colder than this stage's base, {kelvin(page.base_K or 0.0)}"])
    _says(console, page.words)


def _too_cold(row: FillingRow, page: FieldPage) -> bool:
    return row.resolve_K is not None and page.base_K is not None and row.resolve_K < page.base_K


def _cells(row: FillingRow, page: FieldPage) -> list[str]:
    tilts = [f"{tilt:.0f}°" for tilt in map(_down, (row.tilt_deg, row.lambda_tilt_deg)) if tilt is not None]
    seen = "–"
    if row.resolve_K is not None:
        seen = kelvin(row.resolve_K) + (" !" if _too_cold(row, page) else "")
    return [
        row.name,
        _fixed(row.field_T, 3),
        *([_fixed(row.total_T, 3)] if page.tilt_deg else []),
        *([f"{_fixed(row.low_T, 2)}–{_fixed(row.high_T, 2)}"] if page.uncertainty_per_m2 else []),
        str(row.reach),
        _fixed(row.plateau_ohm, 1),
        "–" if row.gap_K is None else kelvin(row.gap_K),
        seen,
        " / ".join(tilts) or "–",
    ]


def _down(tilt_deg: float | None) -> float | None:
    """Whole degrees, rounded down: the tilt shown is in reach."""
    return None if tilt_deg is None else float(int(tilt_deg + 1e-9))


def print_density(page: DensityPage) -> None:
    """Print the density by each way and what to put into a week file."""
    console = console_of()
    table = _table("by", "n/(1e11 cm^-2)", "± (95 %)", "", "field/T", "points")
    if page.hall is not None and page.hall_fit is not None:
        fit = page.hall_fit
        table.add_row("Hall slope", *_value(page.hall), f"to {fit.largest_T:.3g}", str(fit.points))
    if page.oscillations is not None and page.oscillation_fit is not None:
        wave = page.oscillation_fit
        name = f"period in 1/B, {wave.cycles:.0f} cycles"
        table.add_row(name, *_value(page.oscillations), f"{wave.low_T:.3g}–{wave.high_T:.3g}", str(wave.points))
    table.add_row(Text("plan with", "bold"), *_value(page.best), "", "")
    console.print(table)
    if page.agree:
        console.print(Text("The two ways agree."))
    _says(console, page.words)
    console.print(Text("In a week file:", "bold"))
    # Rounded up: the interval written is never narrower than the one found.
    share = max(0.01, -(-page.best.percent * 100 // 1) / 100)
    console.print(Text(f'density = "{abs(page.best.density_per_m2) / 1e15:.5g}e11 cm^-2"'))
    console.print(Text(f'density_error = "{share:.2f} %"'))
    console.print(Text(f'carriers = "{page.carriers}"'))


def _value(value: DensityValue) -> tuple[str, str, str]:
    return (
        _fixed(value.density_per_m2 / 1e15, 4),
        _fixed(value.uncertainty_per_m2 / 1e15, 4),
        f"{value.percent:.2f} %",
    )


def print_magnet(page: MagnetPage) -> None:
    """Print the magnet along its field, its sections, a quench, the stray field, what is missing, cautions."""
    console = console_of()
    console.print(plain(page.name, "bold"))
    table = _table("field/T", "I/A", "fastest/(T/min)", "up/V", "down/V", "fraction", "margin/K")
    for row in page.rows:
        table.add_row(
            f"{row.field_T:g}{' λ' if row.below_lambda else ''}", _fixed(row.current_A, 2),
            "–" if row.rate_T_per_s is None else rounded(60 * row.rate_T_per_s), _fixed(row.up_V, 3),
            _fixed(row.down_V, 3), "–" if row.fraction is None else f"{row.fraction:.1%}", _fixed(row.margin_K, 2),
        )  # fmt: skip
    console.print(table)
    if page.sections:
        console.print()
        sections = _table("section", "at/T", "peak/T", "coil/K", "short sample/A", "fraction", "margin/K")
        for part in page.sections:
            sections.add_row(
                plain(part.section), f"{part.field_T:g}", _fixed(part.peak_T, 2), f"{part.temperature_K:g}",
                _fixed(part.short_sample_A, 1), f"{part.fraction:.1%}", _fixed(part.margin_K, 2),
            )  # fmt: skip
        console.print(sections)
    console.print()
    _print_quenches(console, page)
    if page.stray:
        console.print()
        stray = _table("stray field/mT", "axis/m", "across/m", "by")
        stray.add_column("", overflow="fold")
        for line in page.stray:
            ways = (_fixed(line.axial_m, 2), _fixed(line.across_m, 2))
            stray.add_row(f"{1e3 * line.field_T:g}", *ways, line.source, line.meaning)
        console.print(stray)
    console.print()
    _says(console, [*(f"Not known here – {text}." for text in page.missing), *page.words, *page.cautions])


def _print_quenches(console: Console, page: MagnetPage) -> None:
    table = _table("quench at/T", "energy/kJ", "liquid ≤/L", "gas ≤/m³", "oxygen/%")
    for each in page.quenches:
        oxygen = "–"
        if each.oxygen_displaced is not None and each.oxygen_mixed is not None:
            oxygen = f"{100 * each.oxygen_displaced:.1f} to {100 * each.oxygen_mixed:.1f}"
        table.add_row(
            f"{each.field_T:g}",
            _fixed(each.energy_J / 1e3, 1),
            _fixed(each.liquid_L, 1),
            _fixed(each.gas_m3, 1),
            oxygen,
        )
    console.print(table)
    if page.room_m3 is not None:
        console.print(plain(f"in a room of {page.room_m3:g} m³"))


def print_cooldown(page: CooldownPage) -> None:
    """Print what a cooldown takes, part by part, and the days."""
    console = console_of()
    console.print(plain(f"{page.name}: from 300 K", "bold"))
    table = _table("metal", "mass/kg", "heat/MJ", "nitrogen/L", "helium/L")
    for row in page.metals:
        table.add_row(
            row.metal, f"{row.mass_kg:g}", _fixed(row.heat_J / 1e6, 2), _span(row.nitrogen), _span(row.helium)
        )
    console.print(table)
    console.print()
    totals = _table("in all", "least", "most")
    for name, bounds in (
        ("nitrogen", page.nitrogen),
        ("helium into the bath", page.in_bath),
        ("helium from the dewar", page.from_dewar),
        ("helium into the bath without nitrogen", page.unprecooled),
    ):
        if bounds is not None:
            totals.add_row(name, f"{bounds.least_L:.0f} L", f"{bounds.most_L:.0f} L")
    if totals.row_count:
        console.print(totals)
        console.print()
    chain = _table("part", "hours")
    for what, hours in page.chain:
        chain.add_row(plain(what), f"{hours:g}")
    chain.add_row(Text("in all, at least", "bold"), f"{page.hours:g}")
    console.print(chain)
    if page.helium_after_h is not None:
        console.print(plain(f"helium is needed {page.helium_after_h:g} h after the beginning"))
    if page.order is not None:
        console.print()
        days = _table("day", "")
        named = [("order helium by", page.order.order), ("helium delivered by", page.order.delivered)]
        for name, day in (*named, ("begin by", page.order.begins), ("cold for", page.order.ready)):
            if day is not None:
                days.add_row(name, f"{day:%a %Y-%m-%d}")
        console.print(days)
    console.print()
    _says(console, page.words)


def _span(bounds: Bounds | None) -> str:
    return "–" if bounds is None else f"{bounds.least_L:.1f} to {bounds.most_L:.1f}"
