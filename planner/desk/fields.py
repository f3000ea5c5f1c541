"""What a table of a week or rig file may hold: for each key its kind, unit, example and the sentence that explains it.

Everything is read from the models, so that a form never knows less than the file format.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from functools import cache
from typing import Annotated, Any, Literal, get_args

from pydantic import TypeAdapter
from pydantic.fields import FieldInfo

from planner.desk.explained import sentence
from planner.desk.place import Part, Place, value_at
from planner.desk.wording import plain_amount
from planner.files import Rig, Week
from planner.files.hours import Hours, Span
from planner.files.model import Table, key_of
from planner.files.targets import TARGET_KINDS, LockIn, Target


class FieldKind(StrEnum):
    """How the text of a field becomes a value of the file."""

    QUANTITY = "quantity"
    QUANTITIES = "quantities"
    NAMED_QUANTITIES = "named quantities"
    FILLING = "filling"
    FILLINGS = "fillings"
    WHOLE = "whole number"
    YES_NO = "yes or no"
    CHOICE = "choice"
    CHOICES = "choices"
    TEXT = "text"
    NAMES = "names"
    WHEN = "date and time"
    HOURS = "hours of the week"
    SPANS = "stretches of time"


@dataclass(frozen=True, slots=True)
class Field:
    """One key of a table. ``parts`` lead to it from the table: two where it lies in a small table shown with it."""

    parts: tuple[Part, ...]
    model: type[Table]
    attribute: str
    label: str
    kind: FieldKind
    unit: str
    examples: tuple[str, ...]
    help: str
    required: bool
    default: str
    choices: tuple[str, ...] = ()

    @property
    def key(self) -> str:
        """The key in the file."""
        return str(self.parts[-1])

    @property
    def adapter(self) -> TypeAdapter[Any]:
        """What reads a value of this field."""
        return _adapter(self.model, self.attribute)


@dataclass(frozen=True, slots=True)
class Inner:
    """A table, or a list of tables, inside a table. ``optional`` ones may be left out of the file."""

    key: str
    model: type[Table]
    many: bool
    optional: bool
    help: str


_NOT_IN_FORMS = ("format", "kind", "targets")

# The keys of a target that matter most, in the order in which one thinks of them.
_FIRST = (
    *("name", "kind", "what", "sample", "filling", "field", "fillings", "fields", "rungs", "width"),
    *("temperatures", "temperature", "duration", "gate", "sweep", "points", "dwell"),
    *("second_gate", "second_sweep", "second_points", "rate", "feature", "direction", "coil"),
    *("priority", "must", "attended", "people", "training", "gates", "after", "before"),
)


@cache
def fields_of(model: type[Table]) -> tuple[Field, ...]:
    """The fields that a form shows for a table, in the order of the model."""
    found: list[Field] = []
    for attribute, info in model.model_fields.items():
        key = info.alias or key_of(attribute)
        inner, many = _inner(info.annotation)
        if inner is LockIn:
            found += [_below(key, field) for field in fields_of(LockIn)]
        elif inner is not None and not (many and inner in (Hours, Span)):
            continue
        elif not (model in (Week, Rig) and key in _NOT_IN_FORMS):
            found.append(_field(model, attribute, key, info, inner))
    if issubclass(model, Target):
        found.sort(key=lambda field: _FIRST.index(field.key) if field.key in _FIRST else len(_FIRST))
    return tuple(found)


@cache
def inner_of(model: type[Table]) -> tuple[Inner, ...]:
    """The tables and lists of tables inside a table that have a form of their own."""
    found = []
    for attribute, info in model.model_fields.items():
        inner, many = _inner(info.annotation)
        if inner is None or inner is LockIn or (many and inner in (Hours, Span)):
            continue
        key = info.alias or key_of(attribute)
        found.append(Inner(key, inner, many, not info.is_required(), sentence(model, attribute, info)))
    return tuple(found)


def model_at(place: Place, data: dict[str, Any]) -> type[Table] | None:
    """The model of the table at a place; None where the place is no table the models know."""
    model: type[Table] = Week if place.role == "week" else Rig
    for at, part in enumerate(place.parts):
        if isinstance(part, int):
            if place.parts[0] == "targets" and at == 1:
                model = target_model(value_at(data, place.parts[:2]))
            continue
        inner = next(
            (
                table
                for attribute, info in model.model_fields.items()
                if (info.alias or key_of(attribute)) == part
                for table in [_inner(info.annotation)[0]]
                if table is not None
            ),
            None,
        )
        if inner is None and not (place.role == "week" and part == "targets" and at == 0):
            return None
        model = inner or Target
    return model


def target_model(row: Any) -> type[Target]:
    """The model of a target's kind; what every target has where the kind is not known."""
    kind = row.get("kind") if isinstance(row, dict) else None
    return TARGET_KINDS.get(kind, Target) if isinstance(kind, str) else Target


def _below(key: str, field: Field) -> Field:
    return Field(
        (key, *field.parts),
        field.model,
        field.attribute,
        f"lock-in: {field.label}",
        field.kind,
        field.unit,
        field.examples,
        field.help,
        False,
        field.default,
        field.choices,
    )


def _field(model: type[Table], attribute: str, key: str, info: FieldInfo, inner: type[Table] | None) -> Field:
    shape = _shape(model, key)
    kind = _kind(shape, inner)
    choices: tuple[str, ...] = ()
    if kind in (FieldKind.CHOICE, FieldKind.CHOICES):
        choices = tuple(str(one) for one in _choices(shape))
    if issubclass(model, Target) and key == "kind":
        kind, choices = FieldKind.CHOICE, tuple(TARGET_KINDS)
    return Field(
        parts=(key,),
        model=model,
        attribute=attribute,
        label=key.replace("_", " "),
        kind=kind,
        unit=_unit(shape),
        examples=_EXAMPLES_OF_KEYS.get(
            ("Target" if issubclass(model, Target) else model.__name__, key), _examples(shape, kind)
        ),
        help=sentence(model, attribute, info),
        required=info.is_required(),
        default=_default(model, key, info, shape),
        choices=choices,
    )


def _inner(annotation: Any) -> tuple[type[Table] | None, bool]:
    """The table class in an annotation, and whether there is a list of them."""
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return annotation, False
    for part in get_args(annotation):
        table, many = _inner(part)
        if table is not None and not issubclass(table, Target):
            return table, many or getattr(annotation, "__origin__", None) is tuple
    return None, False


@cache
def _schema(model: type[Table]) -> dict[str, Any]:
    return model.model_json_schema()


def _shape(model: type[Table], key: str) -> dict[str, Any]:
    """The JSON Schema of one key, "or null" taken off."""
    schema = _schema(model)
    shape: dict[str, Any] = schema["properties"][key]
    for one in shape.get("anyOf", ()):
        if one.get("type") != "null":
            return {**shape, **one}
    return shape


def _kind(shape: dict[str, Any], inner: type[Table] | None) -> FieldKind:
    simple = {"boolean": FieldKind.YES_NO, "integer": FieldKind.WHOLE, "object": FieldKind.NAMED_QUANTITIES}
    if inner is not None:
        return FieldKind.HOURS if inner is Hours else FieldKind.SPANS
    if "unit" in shape:
        return FieldKind.QUANTITY
    if "enum" in shape or "const" in shape:
        return FieldKind.CHOICE
    if isinstance(shape.get("type"), list):
        return FieldKind.FILLING
    if shape.get("type") == "array":
        return _list_kind(shape["items"])
    if shape.get("format") == "date-time":
        return FieldKind.WHEN
    return simple.get(str(shape.get("type")), FieldKind.TEXT)


def _list_kind(items: dict[str, Any]) -> FieldKind:
    if "unit" in items:
        return FieldKind.QUANTITIES
    if "enum" in items:
        return FieldKind.CHOICES
    return FieldKind.FILLINGS if isinstance(items.get("type"), list) else FieldKind.NAMES


def _choices(shape: dict[str, Any]) -> list[Any]:
    if "const" in shape:
        return [shape["const"]]
    return list(shape.get("enum") or shape["items"]["enum"])


def _unit(shape: dict[str, Any]) -> str:
    inside = shape.get("items") or shape.get("additionalProperties") or {}
    return str(shape.get("unit") or (inside.get("unit") if isinstance(inside, dict) else "") or "")


_EXAMPLES_OF_KEYS = {
    ("Sample", "density_error"): ("3 %",),
    ("LockIn", "time_constant"): ("300 ms",),
    ("LockIn", "settled"): ("99 %",),
    ("Target", "duration"): ("20 min", "6 h"),
    ("Target", "width"): ("0.3 T",),
    ("Target", "feature"): ("25 mT",),
    ("Bath", "gauge_error"): ("2 %",),
    ("Week", "zone"): ("Europe/Vienna",),
    ("User", "letter"): ("A",),
}

_OWN_EXAMPLES = {
    FieldKind.YES_NO: ("yes", "no"),
    FieldKind.WHOLE: ("3",),
    FieldKind.WHEN: ("2031-03-03 08:30",),
    FieldKind.HOURS: ("Mon-Fri 08:30-18:00; Sat 09:00-12:00",),
    FieldKind.SPANS: ("Tue 20:00 to Wed 06:00",),
    FieldKind.NAMES: ("one name, another name",),
    FieldKind.QUANTITIES: ("15 mK, 50 mK, 0.3 K",),
    FieldKind.NAMED_QUANTITIES: ("top -0.5 V; back 1 V",),
    FieldKind.FILLINGS: ("1/3, 2/5, 1",),
}


def _examples(shape: dict[str, Any], kind: FieldKind) -> tuple[str, ...]:
    if kind in _OWN_EXAMPLES:
        return _OWN_EXAMPLES[kind] if not (kind is FieldKind.QUANTITIES and _unit(shape) == "T") else ("1 T, 2 T",)
    return tuple(str(one) for one in shape.get("examples", ()))


def _default(model: type[Table], key: str, info: FieldInfo, shape: dict[str, Any]) -> str:
    """The value that holds where the key is left out, as text; nothing where there is none."""
    if info.is_required() or info.default is None:
        return ""
    shown = _schema(model)["properties"][key].get("default")
    if isinstance(shown, bool):
        return "yes" if shown else "no"
    if shown in ([], {}, None, ""):
        return ""
    if isinstance(shown, (int, float)) and "unit" in shape:
        return plain_amount(float(shown), _unit(shape))
    if isinstance(shown, dict):
        return str(shown.get("text", ""))
    return ", ".join(sorted(shown)) if isinstance(shown, list) else str(shown)


@cache
def _adapter(model: type[Table], attribute: str) -> TypeAdapter[Any]:
    if issubclass(model, Target) and attribute == "kind":
        kinds: Any = Literal[tuple(TARGET_KINDS)]
        return TypeAdapter(kinds)
    info = model.model_fields[attribute]
    metadata = tuple(info.metadata)
    annotation: Any = Annotated[(info.annotation, *metadata)] if metadata else info.annotation
    return TypeAdapter(annotation)
