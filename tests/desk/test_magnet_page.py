"""A magnet along its field: by hand from round numbers, against published figures, and what is not known."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import pytest

from planner.desk.magnet_figure import magnet_svg
from planner.desk.magnet_page import magnet_page, rate_at_T_per_s
from planner.errors import OutOfRangeError
from planner.files import Rig, read_rig
from tests.builders import rig

EXAMPLES = Path(__file__).parents[2] / "example_plans"
SECTION: dict[str, Any] = {
    "name": "coil", "material": "NbTi A", "area": "0.25 mm^2", "peak_field": "0.09 T/A", "temperature": "4.2 K",
}  # fmt: skip
LAMBDA: dict[str, Any] = {
    "magnet.supply.max_current": "120 A",
    "magnet.lambda_field": "11 T",
    "magnet.lambda_table": [{"to": "11 T", "rate": "0.03 T/min"}],
    "magnet.lambda_temperature": "2.2 K",
}

BARE_LAMBDA = {key: LAMBDA[key] for key in ("magnet.supply.max_current", "magnet.lambda_field")}


def wired(**changes: Any) -> Rig:
    """The round-number rig (0.1 T/A, 10 H, 10 T, 5 mohm) with one section, rated 9 T: 90 A."""
    return rig({"magnet.rated_field": "9 T", "magnet.conductor": [{**SECTION, **changes}]})


def test_fraction_and_margin_of_a_known_load_line() -> None:
    """NbTi after L. Bottura, IEEE Trans. Appl. Supercond. 10, 1054 (2000), parameters from memory, solved by scipy."""
    (section,) = magnet_page(wired()).sections
    assert section.short_sample_A == pytest.approx(109.784, rel=1e-4)
    assert section.fraction == pytest.approx(0.8198, rel=1e-4)
    assert section.margin_K == pytest.approx(5.31945 - 4.2, rel=1e-4)
    assert section.peak_T == pytest.approx(0.09 * 90)


def test_voltages_by_hand() -> None:
    """L·dI/dt ± along the table: 0.3 T/min is 0.05 A/s, 0.5 V in 10 H; 60 A through 5 mohm take 0.3 V."""
    rows = {row.field_T: row for row in magnet_page(rig()).rows}
    assert rows[6.0].up_V == pytest.approx(0.5 + 0.3)
    assert rows[6.0].down_V == pytest.approx(-0.5 + 0.3)
    assert rows[7.0].up_V == pytest.approx(10 * 0.12 / 60 / 0.1 + 0.35)
    assert rows[10.0].current_A == pytest.approx(100)


def test_an_edge_belongs_to_the_lower_row_and_beyond_the_tables_there_is_no_rate() -> None:
    magnet = rig().magnet
    assert rate_at_T_per_s(magnet, 6.0) == pytest.approx(0.005)
    assert rate_at_T_per_s(magnet, 6.001) == pytest.approx(0.002)
    assert rate_at_T_per_s(magnet, 10.5) is None


def test_a_quench_by_published_figures() -> None:
    """10 H at 100 A store 50 kJ; 2563.7 J/L and 749.6 from liquid to gas at 20 °C: CoolProp's equation of state."""
    (quench,) = magnet_page(rig({"room": {"volume": "100 m^3"}})).quenches
    assert quench.energy_J == pytest.approx(50e3)
    assert quench.liquid_L == pytest.approx(50e3 / 2563.7, rel=0.01)
    assert quench.gas_m3 == pytest.approx(50e3 / 2563.7 * 0.7496, rel=0.01)
    assert quench.oxygen_displaced == pytest.approx(0.21 * (1 - 0.0146 * 10), rel=0.01)  # mass balance, 14.6 m3 in 100
    assert quench.oxygen_mixed is not None
    assert quench.oxygen_mixed > quench.oxygen_displaced


def test_a_quench_cannot_boil_off_more_than_the_bath_holds() -> None:
    (quench,) = magnet_page(rig({"magnet.inductance": "200 H", "room": {"volume": "50 m^3"}})).quenches
    assert quench.liquid_L == 100  # the bath; the energy would evaporate four times as much
    assert quench.oxygen_displaced == 0.0  # 75 m3 of gas fill the room


def test_stray_field_by_the_dipole() -> None:
    """Dipole of 80 mm by 250 mm at 14 T: 0.5 mT at 2.98492 m and 2.36913 m, by magnetostatics."""
    winding = {"mean_radius": "80 mm", "length": "250 mm"}
    changes = {
        "magnet.rated_field": "14 T", "magnet.supply.max_current": "140 A", "magnet.winding": winding,
        "magnet.ramp_table": [{"to": "14 T", "rate": "0.1 T/min"}],
    }  # fmt: skip
    first, *_ = magnet_page(rig(changes)).stray
    assert first.field_T == 0.5e-3
    assert first.axial_m == pytest.approx(2.98492, rel=1e-5)
    assert first.across_m == pytest.approx(2.36913, rel=1e-5)
    assert [row.field_T for row in magnet_page(rig(changes)).stray] == [0.5e-3, 0.9e-3, 3e-3]


def test_too_near_for_a_dipole_is_not_said() -> None:
    page = magnet_page(rig({"magnet.winding": {"mean_radius": "20 mm", "length": "900 mm"}}))
    assert page.stray[-1].across_m is None
    assert any("too near to be a dipole" in text for text in page.missing)


def test_measured_distances_come_first_and_a_shield_leaves_only_them() -> None:
    measured = [{"field": "0.5 mT", "axial": "1.9 m"}, {"field": "1 mT", "across": "1.1 m"}]
    winding = {"mean_radius": "80 mm", "length": "250 mm", "measured": measured}
    rows = magnet_page(rig({"magnet.winding": winding})).stray
    assert [(row.field_T, row.source) for row in rows] == [
        (0.5e-3, "measured"), (0.9e-3, "dipole"), (1e-3, "measured"), (3e-3, "dipole"),
    ]  # fmt: skip
    shielded = magnet_page(rig({"magnet.winding": {**winding, "shielded": True}}))
    assert {row.source for row in shielded.stray} == {"measured"}
    bare = magnet_page(rig({"magnet.winding": {"mean_radius": "80 mm", "length": "250 mm", "shielded": True}}))
    assert bare.stray == ()
    assert any("shielded magnet is no dipole" in text for text in bare.missing)


def test_below_the_lambda_point_the_coil_is_colder() -> None:
    page = magnet_page(rig({**LAMBDA, "magnet.conductor": [{**SECTION, "peak_field": "0.08 T/A"}]}))
    assert page.rows[-1].below_lambda
    assert page.rows[-1].rate_T_per_s == pytest.approx(0.03 / 60)
    assert [(part.field_T, part.temperature_K) for part in page.sections] == [(10.0, 4.2), (11.0, 2.2)]
    assert page.sections[1].fraction < page.sections[0].fraction
    assert [quench.field_T for quench in page.quenches] == [10.0, 11.0]


def test_what_the_file_does_not_hold_is_said() -> None:
    page = magnet_page(rig({**BARE_LAMBDA, "room": {}}))
    text = "\n".join(page.missing)
    for part in ("[[magnet.conductor]]", "[magnet.winding]", "room.volume", "lambda_table"):
        assert part in text
    assert all(row.fraction is None and row.margin_K is None for row in page.rows)
    assert page.rows[-1].up_V is None
    missing = magnet_page(rig({**BARE_LAMBDA, "magnet.conductor": [SECTION]})).missing
    assert any("lambda_temperature" in text for text in missing)


def test_a_supply_too_weak_for_its_table_and_a_wire_too_thin_are_told() -> None:
    page = magnet_page(rig({"magnet.supply.max_voltage": "0.7 V"}))
    assert any("asks for more than the supply's 0.7 V" in text for text in page.words)
    thin = magnet_page(wired(area="0.05 mm^2"))
    assert thin.sections[0].fraction > 1
    assert thin.rows[-1].margin_K is None
    assert any("beyond its critical surface" in text for text in thin.words)
    with pytest.raises(OutOfRangeError, match="below 1 T"):
        magnet_page(wired(area="0.0001 mm^2"))


def test_the_smallest_margin_is_told_only_where_every_section_has_one() -> None:
    rows = magnet_page(read_rig(EXAMPLES / "wet_dilution.rig.toml")[0]).rows
    assert rows[0].margin_K is None  # the outer section is below 1 T
    assert all(row.margin_K is not None and row.margin_K > 0 for row in rows[1:])


@pytest.mark.parametrize("name", ["wet_dilution", "dry_insert"])
def test_the_demo_magnets_work_at_a_sound_fraction(name: str) -> None:
    page = magnet_page(read_rig(EXAMPLES / f"{name}.rig.toml")[0])
    for section in page.sections:
        assert 0.6 < section.fraction < 0.85
    assert max(part.fraction for part in page.sections if part.field_T == page.rated_T) > 0.7
    assert all(row.up_V is not None and row.up_V < page.max_V for row in page.rows)


def test_margin_falls_and_fraction_rises_with_field() -> None:
    rows = magnet_page(wired()).rows
    fractions = [row.fraction or 0.0 for row in rows]
    margins = [row.margin_K for row in rows if row.margin_K is not None]
    assert fractions == sorted(fractions)
    assert margins == sorted(margins, reverse=True)
    assert len(margins) > 5


def test_the_figure_has_the_same_bytes_every_time_and_no_colour() -> None:
    for which in (read_rig(EXAMPLES / "wet_dilution.rig.toml")[0], rig()):
        page = magnet_page(which)
        svg = magnet_svg(which, page)
        assert svg == magnet_svg(which, page)
        colours = set(re.findall(r"#([0-9a-f]{6})", svg))
        assert {colour for colour in colours if len({colour[0:2], colour[2:4], colour[4:6]}) > 1} == set()
        assert svg.startswith("<svg")
        assert svg.rstrip().endswith("</svg>")


def test_the_frame_has_units_in_its_names() -> None:
    frame = magnet_page(rig()).frame()
    assert {"field_T", "current_A", "rate_T_per_s", "up_V", "down_V", "fraction", "margin_K"} <= set(frame.columns)
