"""The optional tables of a rig file: read, refused, shown in the schema; files without them are as they were."""

from __future__ import annotations

from typing import Any

import pytest

from planner.errors import InputError
from planner.files import Rig, parse_rig
from planner.files.model import key_of
from planner.units import example, parse_amount
from tests.builders import rig, rig_text

SECTION: dict[str, Any] = {
    "material": "NbTi A", "area": "0.25 mm^2", "peak_field": "0.09 T/A", "temperature": "4.2 K",
}  # fmt: skip
CHAIN = [{"what": "fill", "time": "4 h"}]


def test_units_are_read_into_what_the_names_say() -> None:
    measured = [{"field": "0.5 mT", "axial": "2 m"}]
    found = rig({
        "magnet.conductor": [{**SECTION, "material": "Nb3Sn strand", "strain": "-0.3 %"}],
        "magnet.winding": {"mean_radius": "80 mm", "length": "0.25 m", "measured": measured},
        "cooldown": {"copper": "12 kg", "precool": "nitrogen", "nitrogen_fill": "3000 mL", "chain": CHAIN},
    })  # fmt: skip
    section, winding = found.magnet.conductor[0], found.magnet.winding
    assert (section.area_m2, section.peak_field_T_per_A, section.strain_percent) == pytest.approx((0.25e-6, 0.09, -0.3))
    assert winding is not None
    assert (winding.mean_radius_m, winding.length_m, winding.measured[0].field_T) == pytest.approx((0.08, 0.25, 5e-4))
    assert found.cooldown is not None
    assert (found.cooldown.copper_kg, found.cooldown.nitrogen_fill_L) == pytest.approx((12, 3))
    assert Rig.model_validate_json(found.model_dump_json(by_alias=True)) == found


def test_a_file_without_the_tables_is_read_as_before() -> None:
    found = rig()
    assert (found.magnet.conductor, found.magnet.winding, found.magnet.lambda_field_T, found.cooldown) == (
        (), None, None, None,
    )  # fmt: skip


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        ({"magnet.conductor": [{**SECTION, "material": "NbTI A"}]}, "conductor[0].material"),
        ({"magnet.conductor": [{**SECTION, "area": "0.25 mm"}]}, "is not a unit of this kind"),
        ({"magnet.conductor": [{**SECTION, "temperature": "1.5 K"}]}, "from 1.8 K up"),
        ({"magnet.conductor": [{**SECTION, "strain": "-0.1 %"}]}, "only Nb3Sn is given with a strain"),
        ({"magnet.conductor": [SECTION, SECTION]}, "a name of its own"),
        ({"magnet.winding": {"mean_radius": "80 mm"}}, "mean_radius and length together"),
        ({"magnet.winding": {}}, "or measured distances"),
        ({"magnet.winding": {"measured": [{"field": "0.5 mT"}]}}, "expected axial, across, or both"),
        ({"magnet.lambda_field": "9 T"}, "expected more than rated_field"),
        ({"magnet.lambda_field": "11 T"}, "needs 110 A, the supply gives 100 A"),
        ({"magnet.lambda_temperature": "2.2 K"}, "lambda_field: is missing"),
        (
            {"magnet.lambda_field": "11 T", "magnet.supply.max_current": "120 A",
             "magnet.lambda_table": [{"to": "10.5 T", "rate": "0.03 T/min"}]},
            "ends at 10.5 T, below lambda_field",
        ),
        (
            {"magnet.lambda_field": "11 T", "magnet.supply.max_current": "120 A",
             "magnet.lambda_table": [{"to": "9 T", "rate": "0.03 T/min"}]},
            "must begin above rated_field",
        ),
        ({"cooldown": {"chain": CHAIN}}, "expected the mass of copper"),
        ({"cooldown": {"copper": "1 kg", "chain": []}}, "cooldown.chain"),
        ({"cooldown": {"copper": "1 kg", "chain": CHAIN, "nitrogen_fill": "3 L"}}, 'only with precool = "nitrogen"'),
        ({"cooldown": {"copper": "-1 kg", "chain": CHAIN}}, "at least 0"),
        ({"cooldown": {"cooper": "1 kg", "chain": CHAIN}}, 'did you mean "copper"'),
    ],
)  # fmt: skip
def test_what_cannot_be_meant_is_refused(changes: dict[str, Any], says: str) -> None:
    with pytest.raises(InputError) as caught:
        parse_rig(rig_text(changes))
    assert says in str(caught.value)


@pytest.mark.parametrize(
    ("attribute", "key"),
    [("area_m2", "area"), ("length_m", "length"), ("copper_kg", "copper"), ("density_per_m2", "density")],
)
def test_the_key_has_no_unit(attribute: str, key: str) -> None:
    assert key_of(attribute) == key


@pytest.mark.parametrize(("unit", "inside"), [("m", 0.24), ("m**2", 0.3e-6), ("kg", 40), ("rad", 0.5235988)])
def test_the_examples_of_the_units_are_read_in_them(unit: str, inside: float) -> None:
    assert parse_amount(example(unit), unit) == pytest.approx(inside, rel=1e-6)


def test_the_schema_shows_units_and_examples() -> None:
    tables = Rig.model_json_schema()["$defs"]
    assert tables["Conductor"]["properties"]["area"]["unit"] == "mm^2"
    assert tables["Cooldown"]["properties"]["copper"]["examples"] == ["40 kg"]
    assert tables["Winding"]["properties"]["length"]["anyOf"][0]["unit"] == "mm"
    assert "lambda_field" in tables["Magnet"]["properties"]
