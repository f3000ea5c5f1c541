"""JSON Schema tells the unit of every quantity; a model dumped and read again keeps its text."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

import pytest

from planner.files import Rig, Week, parse_rig, parse_week
from planner.files.model import Table, key_of
from planner.files.targets import TARGET_KINDS
from tests.builders import Changes, rig_text, week_text

SWEEP: Changes = {"gate": "top", "sweep": "-500 mV to 0.5 V", "points": 5, "dwell": "2 s"}
NIGHT: Changes = {"from": "Tue 20:00", "to": "Wed 06:00"}
ONE_OF_EACH: list[Changes] = [
    {"name": "hold", "kind": "hold", "filling": "2/3", "duration": "90 min", "temperature": "≤ 42 mK"},
    {"name": "sweep", "kind": "field sweep", "filling": "2/5 to 1/3", "rate": "26 mT/min"},
    {"name": "window", "kind": "field sweep", "filling": 2.5, "width": "300 mT", "direction": "up"},
    {"name": "gate", "kind": "gate sweep", "field": "1 T", "gates": {"back": "-0.25 V"}, **SWEEP},
    {"name": "series", "kind": "temperature series", "field": "1 T", "temperatures": ["42 mK"], "duration": "1 h"},
    {"name": "map", "kind": "map", "fillings": ["1/3", 2], **SWEEP},
    {"name": "other", "kind": "other work", "what": "LED", "duration": "600 s", "windows": [NIGHT]},
]


def tables(schema: dict[str, Any]) -> Iterator[tuple[str, str, dict[str, Any]]]:
    for name, table in [("", schema), *schema["$defs"].items()]:
        for key, shown in table.get("properties", {}).items():
            yield name, key, shown


def units_of(shown: Any) -> list[str]:
    if isinstance(shown, dict):
        return [
            *([shown["unit"]] if "unit" in shown else []),
            *(u for inner in shown.values() for u in units_of(inner)),
        ]
    return [unit for inner in shown for unit in units_of(inner)] if isinstance(shown, list) else []


UNIT_SUFFIXES = {
    "T": "T", "T_per_s": "T/min", "T_per_A": "T/A", "A": "A", "A_per_s": "A/min", "V": "V", "V_per_s": "mV/s",
    "H": "H", "ohm": "mohm", "s": "min", "L": "L", "L_per_s": "L/h", "L_per_s_A": "L/h/A", "L_per_T": "L/T",
    "per_m2": "cm^-2", "per_m2_V": "cm^-2/V", "m3": "m^3", "percent": "%",
}  # fmt: skip


def attributes(model: type[Table], seen: set[type[Table]]) -> Iterator[tuple[type[Table], str]]:
    if model in seen:
        return
    seen.add(model)
    for name, field in model.model_fields.items():
        yield model, name
        stack = [field.annotation]
        while stack:
            annotation = stack.pop()
            if isinstance(annotation, type) and issubclass(annotation, Table):
                yield from attributes(annotation, seen)
            stack += getattr(annotation, "__args__", ())


@pytest.mark.parametrize("root", [Week, Rig])
def test_every_attribute_that_ends_in_a_unit_shows_it_in_the_schema(root: type[Table]) -> None:
    schema = root.model_json_schema()
    shown = {(table or root.__name__, key): units_of(property_) for table, key, property_ in tables(schema)}
    checked = 0
    for model, name in attributes(root, set()):
        suffix = next((s for s in sorted(UNIT_SUFFIXES, key=len, reverse=True) if name.endswith(f"_{s}")), None)
        if suffix is None:
            continue
        assert set(shown[model.__name__, key_of(name)]) == {UNIT_SUFFIXES[suffix]}, (model, name)
        checked += 1
    assert checked > 10


def test_limits_and_words_are_in_the_schema() -> None:
    schema = Week.model_json_schema()["$defs"]
    share = schema["Sample"]["properties"]["density_error"]
    assert share["limits"] == {"minimum": "0 percent", "maximum": "50 percent"}
    assert "base" in schema["Present"]["properties"]["temperature"]["examples"]


def test_keys_in_the_schema_are_those_of_the_file() -> None:
    keys = [key for _, key, _ in [*tables(Week.model_json_schema()), *tables(Rig.model_json_schema())]]
    assert {"rated_field", "from", "duration", "level"} <= set(keys)
    assert not [key for key in keys if re.search(r"_(T|K|s|A|V|L|per_s|percent)$", key)]


def test_every_kind_of_target_is_in_the_schema() -> None:
    items = Week.model_json_schema()["properties"]["targets"]["items"]
    assert set(items["discriminator"]["mapping"]) == set(TARGET_KINDS)
    assert {target["kind"] for target in ONE_OF_EACH} == set(TARGET_KINDS)


def test_a_week_dumped_and_read_again_is_the_same_text_for_text() -> None:
    week = parse_week(week_text({"present.temperature": "42 mK", "quiet": [{"name": "q", **NIGHT}]}, ONE_OF_EACH))
    dumped = week.model_dump(by_alias=True)
    again = Week.model_validate(dumped)
    assert again == week
    assert again.model_dump(by_alias=True) == dumped
    assert dumped["present"]["temperature"] == "42 mK"
    assert dumped["samples"][0]["density"] == "2e11 cm^-2"
    targets = {target["name"]: target for target in dumped["targets"]}
    assert targets["hold"]["filling"] == "2/3"
    assert targets["hold"]["temperature"] == "≤ 42 mK"
    assert targets["hold"]["duration"] == "90 min"
    assert targets["sweep"]["filling"] == "2/5 to 1/3"
    assert targets["sweep"]["rate"] == "26 mT/min"
    assert targets["gate"]["sweep"] == "-500 mV to 0.5 V"
    assert targets["gate"]["gates"] == {"back": "-0.25 V"}
    assert targets["series"]["temperatures"] == ("42 mK",)
    assert [str(filling) for filling in targets["map"]["fillings"]] == ["1/3", "2"]


def test_a_rig_dumped_as_json_and_read_again_is_the_same() -> None:
    rig = parse_rig(rig_text({"policies": {"together": ["field"]}}))
    text = rig.model_dump_json(by_alias=True)
    assert '"rate":"0.3 T/min"' in text
    assert Rig.model_validate_json(text) == rig


def test_a_week_dumped_as_json_and_read_again_is_the_same() -> None:
    week = parse_week(week_text(None, ONE_OF_EACH))
    assert Week.model_validate_json(week.model_dump_json(by_alias=True)) == week
