"""Forms: every key of the files is there, explained, and takes what its own example says."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.desk.fields import Field, FieldKind, fields_of, inner_of, model_at
from planner.desk.form import TableForm, target_rows
from planner.desk.form_grid import ADD, GridForm
from planner.desk.form_sheet import WRITE, SheetForm
from planner.desk.grid import Grid, targets
from planner.desk.outline import NodeKind, outline
from planner.desk.place import Place
from planner.desk.values import explain, shown, wanted
from planner.files import Rig, Week
from planner.files.model import Table, key_of
from planner.files.targets import TARGET_KINDS
from tests.desk.sessions import document_in, session_in


def _models() -> list[type[Table]]:
    found: list[type[Table]] = []
    left: list[type[Table]] = [Week, Rig, *TARGET_KINDS.values()]
    while left:
        model = left.pop()
        if model not in found:
            found.append(model)
            left += [inner.model for inner in inner_of(model)]
    return found


FIELDS = [(model, field) for model in _models() for field in fields_of(model)]


def _field(kind: str, key: str) -> Field:
    return next(one for one in fields_of(TARGET_KINDS[kind]) if ".".join(map(str, one.parts)) == key)


@pytest.mark.parametrize("model", _models(), ids=lambda model: model.__name__)
def test_every_key_of_every_table_can_be_edited(model: type[Table]) -> None:
    shown_keys = {field.parts[0] for field in fields_of(model)} | {inner.key for inner in inner_of(model)}
    keys = {info.alias or key_of(name) for name, info in model.model_fields.items()}
    hidden = {"format", "kind", "targets"} if model in (Week, Rig) else set()
    assert keys - shown_keys - hidden == set()


def test_every_key_is_explained() -> None:
    """A key that fails here wants a `description` in its model, or a sentence in `planner/desk/explained.py`."""
    assert [(model.__name__, field.key) for model, field in FIELDS if not field.help] == []
    assert [(model.__name__, one.key) for model in _models() for one in inner_of(model) if not one.help] == []


@pytest.mark.parametrize(("model", "field"), FIELDS, ids=lambda one: getattr(one, "key", ""))
def test_a_field_takes_its_choices_and_every_quantity_its_example(model: type[Table], field: Field) -> None:
    for text in field.choices:
        assert explain(field, text).usable
    if field.kind in (FieldKind.QUANTITY, FieldKind.FILLING, FieldKind.QUANTITIES, FieldKind.WHEN, FieldKind.HOURS):
        found = [explain(field, text) for text in field.examples]
        assert found
        bounded = {"within", "strain"}
        assert all(one.usable for one in found) or field.key in bounded, (model.__name__, found)
    if field.required:
        assert not explain(field, " ").usable
    else:
        assert explain(field, "").usable


@pytest.mark.parametrize(
    ("kind", "key", "text", "value"),
    [
        ("hold", "filling", "1/3", "1/3"),
        ("hold", "filling", "2", 2),
        ("hold", "filling", "2.5", 2.5),
        ("hold", "filling", "-2", -2),
        ("field sweep", "filling", "2/5 to 1/3", "2/5 to 1/3"),
        ("field sweep", "field", "-1 T to 1 T", "-1 T to 1 T"),
        ("hold", "field", " 12 T ", "12 T"),
        ("hold", "temperature", "≤ 50 mK", "≤ 50 mK"),
        ("hold", "must", "Yes", True),
        ("hold", "priority", "4", 4),
        ("hold", "coil", "p", "persistent"),
        ("hold", "gates", "top -0.5 V; back = 1 V", {"top": "-0.5 V", "back": "1 V"}),
        ("hold", "hours", "Mon-Fri 08:30-18:00; daily 20:00–07:00",
         [{"days": "Mon-Fri", "from": "08:30", "to": "18:00"}, {"days": "daily", "from": "20:00", "to": "07:00"}]),
        ("hold", "windows", "Tue 20:00 to Wed 06:00", [{"from": "Tue 20:00", "to": "Wed 06:00"}]),
        ("hold", "after", "A, B", ["A", "B"]),
        ("hold", "lockin.time_constant", "300 ms", "300 ms"),
        ("temperature series", "temperatures", "15, 30 mK, 0.3 K", ["15 mK", "30 mK", "0.3 K"]),
        ("map", "fillings", "1/3, 2, 2.5", ["1/3", 2, 2.5]),
    ],
)  # fmt: skip
def test_text_becomes_the_value_of_the_file(kind: str, key: str, text: str, value: object) -> None:
    found = explain(_field(kind, key), text)
    assert found.usable, found.message
    assert found.value == value
    assert type(found.value) is type(value)
    assert explain(_field(kind, key), shown(found.value)).value == value


@pytest.mark.parametrize(
    ("kind", "key", "text", "said"),
    [
        ("hold", "field", "12", 'for example "12 T"'),
        ("hold", "field", "12 t", "capital T"),
        ("hold", "duration", "90 m", "minutes are written min"),
        ("hold", "duration", "3 h 20 min", 'write "200 min"'),
        ("hold", "duration", "-3 min", "must be more than 0"),
        ("hold", "filling", "0", "not zero"),
        ("hold", "filling", "third", 'expected a filling such as "1/3"'),
        ("hold", "priority", "7", "at most 5"),
        ("hold", "priority", "3.5", "whole number"),
        ("hold", "must", "perhaps", "yes or no"),
        ("hold", "coil", "warm", "one of driven, persistent, either"),
        ("hold", "hours", "whenever", "Mon-Fri 08:30-18:00"),
        ("hold", "windows", "Tuesday night", "Tue 20:00 to Wed 06:00"),
        ("hold", "gates", "top", "a name and a quantity"),
        ("map", "points", "1", "at least 2"),
        ("temperature series", "temperatures", "15, 30", "unit is missing"),
        ("hold", "name", "", "needed"),
    ],
)
def test_a_text_that_is_not_usable_is_answered_with_what_is_wanted(kind: str, key: str, text: str, said: str) -> None:
    found = explain(_field(kind, key), text)
    assert not found.usable
    assert said in found.message


@settings(max_examples=300, deadline=None)
@given(
    st.sampled_from(FIELDS),
    st.one_of(st.text(max_size=20), st.from_regex(r"[-+\d.eE/ ,;:ToTAKmn%≤]{1,16}", fullmatch=True)),
)
def test_any_text_is_either_usable_or_answered(chosen: tuple[type[Table], Field], text: str) -> None:
    found = explain(chosen[1], text)
    assert found.usable or found.message
    if found.usable and found.value is not None:
        again = explain(chosen[1], shown(found.value))
        assert again.usable
        assert again.value == found.value


def test_a_meaning_is_said_where_it_says_more_than_the_text() -> None:
    assert explain(_field("hold", "duration"), "90 min").message == "= 1 h 30 min"
    assert explain(_field("hold", "field"), "500 mT").message == ""
    assert explain(_field("hold", "lockin.time_constant"), "300 ms").message == ""
    assert explain(_field("hold", "field"), "12 T").message == ""
    assert explain(_field("field sweep", "rate"), "5 mT/s").message == "= 0.3 T/min"
    assert wanted(_field("hold", "field")) == "a number with its unit, such as 12 T"


def test_models_are_found_at_their_places(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    found = {
        where: getattr(model_at(Place.of("week", where), document.data("week")), "__name__", None)
        for where in ("", "present", "samples[0]", "samples[0].gates[0]", "targets[1]", "targets[4]", "title", "none")
    }
    assert list(found.values()) == ["Week", "Present", "Sample", "Gate", "FieldSweep", "TemperatureSeries", None, None]


# On this rig. Fields by B = n h / (e ν) with h/e = 4.135667696e-15 T m² (CODATA 2018, exact): n = 1.1e15 m⁻².


def test_beside_a_filling_stands_the_field_it_means_and_whether_it_is_reached(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    form = TableForm(session, Place.of("week", "targets[4]"))  # ν = 2/3, density known to 2 %
    row = next(row for row in form.rows() if row.key == "filling")
    assert row.means == "6.824 T (6.687 … 6.960)"
    assert form.explain("filling", "1/3").message.startswith("not reached: ν = 1/3 lies at 13.648 T")
    assert form.explain("filling", "0.375").message.endswith("may pass 12 T: cut there")
    assert form.commit("filling", "1/3").usable  # it may be asked for all the same
    assert next(row for row in form.rows() if row.key == "filling").means.startswith("✗ ν = 1/3")
    assert not target_rows(session)[4].reached
    session.set(Place.of("week", "samples[0].density"), "0.8e11 cm^-2")
    assert target_rows(session)[4].means == "9.926 T (9.727 … 10.124)"
    assert target_rows(session)[4].reached


def test_a_gate_that_is_held_moves_the_field_and_one_that_is_swept_does_not(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    form = TableForm(session, Place.of("week", "targets[7]"))  # a hold at 2/3; 0.4e15 m⁻²/V on the gate
    assert form.commit("gates", "top 0.5 V").usable
    row = next(row for row in form.rows() if row.key == "filling")
    assert row.means.startswith("8.065 T")  # (1.1 + 0.2)e15 h/e · 3/2
    swept = TableForm(session, Place.of("week", "targets[5]"))
    assert next(row for row in swept.rows() if row.key == "filling").means.startswith("4.549 T")


def test_a_temperature_beyond_the_stage_is_said(tmp_path: Path) -> None:
    form = TableForm(session_in(tmp_path), Place.of("week", "targets[7]"))
    assert form.explain("temperature", "2 K").message.startswith("not reached: 2")
    assert form.explain("temperature", "≤ 50 mK").message == "base, 15 mK"


def test_names_that_must_exist_are_offered_and_checked(tmp_path: Path) -> None:
    form = TableForm(session_in(tmp_path), Place.of("week", "targets[5]"))
    rows = {row.key: row for row in form.rows()}
    assert rows["gate"].choices == ("top",)
    assert rows["sample"].choices == ("H1",)
    assert "Survey" in rows["after"].choices
    assert rows["name"].text not in rows["after"].choices
    assert not form.commit("gate", "side").usable
    assert form.commit("after", "Survey, Low-field Hall").usable
    assert form.commit("after", "Two fifths, slowly").usable
    rows = {row.key: row for row in form.rows()}
    assert rows["after"].text == "Two fifths, slowly;"
    assert form.explain("after", "Two fifths, slowly; Survey").value == ["Two fifths, slowly", "Survey"]
    assert form.commit("after", rows["after"].text).usable


def test_a_key_that_does_not_belong_can_be_taken_out(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    form = TableForm(session, Place.of("week", "targets[7]"))
    assert form.commit("kind", "map").usable
    strange = [row for row in form.rows() if row.key == "duration"]
    assert strange
    assert strange[0].problem.startswith("unknown here")
    assert not form.commit("duration", "3 h").usable
    assert form.commit("duration", "").usable
    assert "duration" not in session.document.data("week")["targets"][7]


def test_emptying_the_last_value_of_a_small_table_takes_it_out(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    form = TableForm(session, Place.of("week", "targets[2]"))
    assert form.commit("lockin.time_constant", "1 s").usable
    assert session.document.data("week")["targets"][2]["lockin"] == {"time_constant": "1 s"}
    form.commit("lockin.time_constant", "")
    assert "lockin" not in session.document.data("week")["targets"][2]


def test_the_outline_lists_every_table_and_what_is_left_out(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    nodes = {node.place.where: node for node in outline(document, "rig")}
    assert nodes["magnet.ramp_table[1]"].title == "10 T, 0.14 T/min"
    assert nodes["cooler"].kind is NodeKind.ABSENT
    assert nodes["magnet.switch"].optional
    assert not nodes["magnet.supply"].optional
    document.set(Place.of("rig", "magnet.ramp_table[1].rate"), "fast")
    nodes = {node.place.where: node for node in outline(document, "rig")}
    assert [nodes[where].problems for where in ("magnet", "magnet.ramp_table", "magnet.ramp_table[1]", "bath")] == [
        1, 1, 1, 0,
    ]  # fmt: skip
    week = outline(document, "week", without=("samples",))
    assert not any(node.place.parts[:1] in (("samples",), ("targets",)) for node in week)
    assert [node.title for node in outline(document, "week", only="samples")] == [
        "samples (1)",
        "H1",
        "gates (1)",
        "top",
    ]


def test_fillings_times_temperatures(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    start = session.document.texts
    form = GridForm(session, "H1")
    assert not form.commit(ADD, "").usable
    assert form.explain("fillings", "1, 1/3").message == (
        "4.549 T (4.458 … 4.640); ✗ ν = 1/3 lies at 13.648 T; this rig reaches 12 T"
    )
    for key, text in {"fillings": "1, 2/3", "temperatures": "base, ≤ 50 mK, 0.2 K", "priority": "5"}.items():
        assert form.commit(key, text).usable
    assert not form.commit("fillings", "1, x").usable
    assert not form.commit("temperatures", "50").usable
    assert not form.commit("pattern", "{sampel}").usable
    assert form.commit(ADD, "").message == "added 6 targets"
    rows = session.document.data("week")["targets"][8:]
    assert [row["name"] for row in rows[:3]] == ["H1 ν 1 at base", "H1 ν 1 at ≤ 50 mK", "H1 ν 1 at 0.2 K"]
    assert rows[0] == {
        "name": "H1 ν 1 at base", "kind": "hold", "sample": "H1", "filling": 1, "temperature": "base",
        "duration": "20 min", "priority": 5,
    }  # fmt: skip
    assert session.document.problems == ()
    assert session.undo() == "add 6 targets"
    assert session.document.texts == start


def test_names_of_a_grid_stay_apart(tmp_path: Path) -> None:
    document = document_in(tmp_path)
    rows = targets(document, Grid("H1", "1, 2", "base, 50 mK", pattern="Survey"))
    assert [row["name"] for row in rows] == ["Survey 2", "Survey 3", "Survey 4", "Survey 5"]
    with pytest.raises(ValueError, match="H9"):
        targets(document, Grid("H1", "1", pattern="{H9}"))


def test_the_form_of_the_sheet(tmp_path: Path) -> None:
    session = session_in(tmp_path)
    form = SheetForm(session)
    assert form.rows()[0].shown == "sheets"
    assert form.commit(WRITE, "").message == "There is no plan yet: solve first."
    for name in session.formats():
        assert form.commit(name, "no").usable
    assert form.commit(WRITE, "").message == "No format is chosen."
    assert not form.commit("review", "perhaps").usable
    assert not form.commit("folder", " ").usable
    assert form.commit("folder", "elsewhere").usable
    assert form.folder == tmp_path / "elsewhere"
