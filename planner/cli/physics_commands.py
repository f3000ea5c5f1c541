"""The commands that answer from the physics alone: `field`, `density`, `magnet`, `cooldown`. Data goes to stdout."""

from __future__ import annotations

from datetime import date, datetime
from pathlib import Path
from typing import TYPE_CHECKING, Any, Literal

import click

from planner.cli.output import print_json, say
from planner.errors import InputError, Problem

if TYPE_CHECKING:
    from planner.desk.layer import Layer
    from planner.files import Rig

    _FloatType = click.ParamType[float]
else:
    _FloatType = click.ParamType  # releases before 8.2 take no type here


class Quantity(_FloatType):
    """A quantity with its unit, read into a float of ``unit``."""

    def __init__(self, unit: str, *, above: float | None = None, least: float | None = None) -> None:
        self.unit, self.above, self.least = unit, above, least
        self.name = "quantity"

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> float:
        """Read the text; the message says what was expected."""
        from planner.units import In

        if isinstance(value, float):
            return value
        try:
            return float(In(self.unit, above=self.above, least=self.least).parse(value))
        except ValueError as error:
            self.fail(f'"{value}": {error}', param, ctx)


class Angle(Quantity):
    """An angle in degrees or radians."""

    def convert(self, value: Any, param: click.Parameter | None, ctx: click.Context | None) -> float:
        """Read the text; other numbers without dimension are no angles."""
        if isinstance(value, str) and "%" in value:
            self.fail(f'"{value}": expected an angle such as "30 deg"', param, ctx)
        return super().convert(value, param, ctx)


_file = click.Path(path_type=Path)
_json = click.option("--json", "as_json", is_flag=True, help="Print the numbers as JSON.")
_csv = click.option("--csv", "as_csv", is_flag=True, help="Print the table as CSV.")


@click.command()
@click.option("--density", type=Quantity("1/m**2", above=0), help='Sheet density, such as "1.65e11 cm^-2".')
@click.option("--uncertainty", help='Of the density: "5 %", or a density.')
@click.option("--holes", is_flag=True, help="The carriers are holes.")
@click.option("--gate-slope", type=Quantity("1/m**2/V"), help='What a gate adds, such as "0.7e11 cm^-2/V".')
@click.option("--gate-reference", type=Quantity("V"), help="Gate voltage at which the density holds (0 V).")
@click.option("--gate-voltage", type=Quantity("V"), help="Where the gate stands (its reference, or its rest).")
@click.option("--rig", "rig_path", type=_file, help="Rig file: what is in reach.")
@click.option("--week", "week_path", type=_file, help="Week file: rig and sample from there.")
@click.option("--sample", help="Sample of the week.")
@click.option("--gate", help="Gate of the sample that --gate-voltage moves.")
@click.option("--filling", "fillings", multiple=True, help='Fillings, such as "1/3, 2/5"; may be repeated.')
@click.option("--integers", type=click.IntRange(1, 60), default=20, show_default=True, help="List integers up to this.")
@click.option("--tilt", type=Angle("rad"), default=0.0, help='Between field and the layer\'s normal, such as "30 deg".')
@_json
@_csv
def field(fillings: tuple[str, ...], integers: int, tilt: float, as_json: bool, as_csv: bool, **source: Any) -> None:
    """Fields of the fillings of a density, what a rig reaches of them, and what would bring the others in reach."""
    from planner.desk.field_page import default_fillings, field_page

    _one_form(as_json, as_csv)
    layer, rig = _layer(**source)
    asked = _fillings(fillings) if fillings else default_fillings(integers)
    page = field_page(layer, asked, rig, tilt_rad=tilt)
    if as_json:
        print_json(page.data())
    elif as_csv:
        click.echo(page.frame().to_csv(index=False), nl=False)
    else:
        from planner.cli.physics_tables import print_field

        print_field(page)


def _one_form(as_json: bool, as_csv: bool) -> None:
    if as_json and as_csv:
        raise click.UsageError("--json and --csv: one of them")


def _layer(
    density: float | None, uncertainty: str | None, holes: bool, gate_slope: float | None, gate_reference: float | None,
    gate_voltage: float | None, rig_path: Path | None, week_path: Path | None, sample: str | None, gate: str | None,
) -> tuple[Layer, Rig | None]:  # fmt: skip
    """The layer and the rig that the options name."""
    from planner.desk.layer import layer_of_sample, sample_named, typed_layer, with_density
    from planner.files import read_rig, read_week

    if week_path is not None:
        if rig_path is not None or holes or gate_slope is not None or gate_reference is not None:
            raise click.UsageError("--week has its own rig, carriers and gates: leave --rig, --holes, --gate-slope out")
        if (gate is None) != (gate_voltage is None):
            raise click.UsageError("--gate and --gate-voltage go together")
        request = read_week(week_path)
        moved = {} if gate is None or gate_voltage is None else {gate: gate_voltage}
        layer = layer_of_sample(sample_named(request.week, sample), moved)
        return with_density(layer, density, uncertainty), request.rig
    if sample is not None or gate is not None:
        raise click.UsageError("--sample and --gate name something of a week: give --week too")
    if density is None:
        raise click.UsageError('give --density, such as "1.65e11 cm^-2", or --week')
    if gate_slope is None and (gate_reference is not None or gate_voltage is not None):
        raise click.UsageError("--gate-reference and --gate-voltage need --gate-slope")
    layer = typed_layer(density, uncertainty, holes, gate_slope, gate_reference or 0.0, gate_voltage)
    return layer, None if rig_path is None else read_rig(rig_path)[0]


def _fillings(written: tuple[str, ...]) -> list[float]:
    from planner.files.asks import read_filling

    try:
        return [read_filling(part) for text in written for part in text.split(",") if part.strip()]
    except ValueError as error:
        raise click.BadParameter(str(error), param_hint="--filling") from None


@click.command()
@click.argument("trace", type=_file)
@click.option("--low-field", type=Quantity("T", above=0), help="Fit the Hall slope up to here (as far as straight).")
@click.option("--oscillations", help='Look for them in this range of field, such as "0.3 T to 1.5 T".')
@click.option("--states", type=click.IntRange(1, 8), default=2, show_default=True, help="Per level: 2 by spin.")
@click.option("--carriers", type=click.Choice(["electrons", "holes"]), help="What the sample has; else by the sign.")
@click.option("--remanence", type=Quantity("T", above=0), help="Expected error of the recorded field (5 mT).")
@_json
def density(
    trace: Path, low_field: float | None, oscillations: str | None, states: int,
    carriers: Literal["electrons", "holes"] | None, remanence: float | None, as_json: bool,
) -> None:  # fmt: skip
    """Density of a sample from TRACE, a CSV file with columns such as "field (T)", "Rxy (ohm)", "Rxx (ohm)"."""
    from planner.desk.density_page import density_of_trace
    from planner.desk.trace_file import read_trace
    from planner.physics.oscillation_fit import SHIFT_SIGMA_T

    page = density_of_trace(
        read_trace(trace),
        low_field_T=low_field,
        oscillations_T=None if oscillations is None else _range(oscillations),
        degeneracy=states,
        carriers=carriers,
        shift_sigma_T=SHIFT_SIGMA_T if remanence is None else remanence,
    )
    if as_json:
        print_json(page.data())
    else:
        from planner.cli.physics_tables import print_density

        print_density(page)


def _range(text: str) -> tuple[float, float]:
    from planner.files.asks import read_field_range

    try:
        found = read_field_range(text)
    except ValueError as error:
        raise click.BadParameter(f'"{text}": {error}', param_hint="--oscillations") from None
    ends = sorted(abs(end) for end in (found.first, found.last))
    return ends[0], ends[1]


@click.command()
@click.argument("rig_path", metavar="RIG", type=_file)
@click.option("-o", "--output", "figure", type=_file, help="Write the figure here, as SVG.")
@_json
@_csv
def magnet(rig_path: Path, figure: Path | None, as_json: bool, as_csv: bool) -> None:
    """A rig's magnet along its field: operating fraction, margin, charging voltage; a quench; the stray field."""
    from planner.desk.magnet_page import magnet_page
    from planner.files import read_rig

    _one_form(as_json, as_csv)
    if figure is not None and figure.suffix.lower() != ".svg":
        raise click.BadParameter(f'"{figure.name}": expected a name that ends in .svg', param_hint="-o")
    rig = read_rig(rig_path)[0]
    page = magnet_page(rig)
    if figure is not None:
        from planner.desk.magnet_figure import magnet_svg

        _write(figure, magnet_svg(rig, page))
    if as_json:
        print_json(page.data())
    elif as_csv:
        click.echo(page.frame().to_csv(index=False), nl=False)
    else:
        from planner.cli.physics_tables import print_magnet

        print_magnet(page)


@click.command()
@click.argument("rig_path", metavar="RIG", type=_file)
@click.option("--by", help='Day on which the rig is to be cold, such as "2031-03-10": gives the order-by date.')
@click.option("--holiday", "holidays", multiple=True, help="A day that is no working day; may be repeated.")
@_json
def cooldown(rig_path: Path, by: str | None, holidays: tuple[str, ...], as_json: bool) -> None:
    """Helium, nitrogen and hours of a rig's cooldown from 300 K, and by when its helium is ordered."""
    from planner.desk.cooldown_page import cooldown_page
    from planner.files import read_rig

    wanted = None if by is None else _day(by, "--by")
    free = [_day(text, "--holiday") for text in holidays]
    page = cooldown_page(read_rig(rig_path)[0], wanted, free)
    if as_json:
        print_json(page.data())
    else:
        from planner.cli.physics_tables import print_cooldown

        print_cooldown(page)


def _day(text: str, option: str) -> date:
    try:
        day = datetime.strptime(text.strip(), "%Y-%m-%d").date()  # noqa: DTZ007 - a day, without hours or zone
    except ValueError:
        day = None
    if day is None or not 1990 <= day.year <= 2200:
        raise click.BadParameter(f'"{text}": expected a day such as "2031-03-10"', param_hint=option)
    return day


def _write(path: Path, text: str) -> None:
    try:
        path.write_text(text, encoding="utf-8")
    except OSError as error:
        raise InputError([Problem(str(path), "", "", f"cannot be written: {error.strerror}")]) from None
    say(f"wrote {path}")


COMMANDS = (field, density, magnet, cooldown)
"""The commands of this module, in the order of the help."""
