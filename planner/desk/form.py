"""Forms as data: rows of label, value and meaning, and what happens to a text that is typed into one."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Protocol

from planner.desk.fields import Field, FieldKind, fields_of, inner_of, model_at
from planner.desk.place import Place
from planner.desk.reach import Meant, meant
from planner.desk.session import Session
from planner.desk.values import Explained, explain, shown, wanted
from planner.desk.wording import clean

REFERENCES = {"user": "users", "sample": "samples", "after": "targets", "before": "targets"}


@dataclass(frozen=True, slots=True)
class FormRow:
    """One line of a form.

    ``shown`` is the text as it stands, or in brackets what holds where it is left out; ``means`` stands beside it;
    ``problem`` says what is wrong with it. A row that is an ``act`` has no text: choosing it does something.
    """

    key: str
    label: str
    text: str
    shown: str
    means: str = ""
    problem: str = ""
    help: str = ""
    wanted: str = ""
    choices: tuple[str, ...] = ()
    act: bool = False


class Form(Protocol):
    """What a form shows and does."""

    def rows(self) -> Sequence[FormRow]:
        """Its lines, as they stand."""

    def explain(self, key: str, text: str) -> Explained:
        """What a text would mean in a line, or what is wanted there."""

    def commit(self, key: str, text: str) -> Explained:
        """Put a text into a line if it is usable; or do what the line does."""


class TableForm:
    """The form of one table of the week or the rig file."""

    def __init__(self, session: Session, table: Place) -> None:
        self.session = session
        self.table = table

    def rows(self) -> list[FormRow]:
        """A line for each key the table may hold, then those that do not belong there."""
        document = self.session.document
        table = document.get(self.table)
        if not isinstance(table, dict):
            return []
        fields = self._fields()
        known = {field.parts[0] for field in fields} | self._inner_keys()
        strange = [key for key in table if key not in known]
        return [*(self._row(field) for field in fields), *(self._strange(key) for key in strange)]

    def explain(self, key: str, text: str) -> Explained:
        """What a text would mean in a line, on this rig; or what is wanted there."""
        field = self._field(key)
        if field is None:
            return Explained(not text.strip(), "unknown here: leave it empty to take it out")
        choices = self._choices(field)
        if field.kind is FieldKind.NAMES and text.strip() in choices:  # one name, commas in it or not
            return Explained(True, "", [text.strip()])
        found = explain(field, text)
        if not found.usable or not text.strip():
            return found
        if choices and (unknown := _unknown(found.value, choices)):
            return Explained(False, f"{unknown}: expected one of {', '.join(choices)}")
        reach = self._meant(field, found.value)
        if reach is None or not reach.text:
            return found
        return Explained(True, reach.text if reach.reached else f"not reached: {reach.text}", found.value)

    def commit(self, key: str, text: str) -> Explained:
        """Put a text into the file if it is usable; an empty one leaves the key out."""
        found = self.explain(key, text)
        if found.usable:
            field = self._field(key)
            place = self._place(field.parts) if field is not None else self.table / key
            self.session.set(place, found.value if text.strip() else None)
        return found

    def _fields(self) -> tuple[Field, ...]:
        model = model_at(self.table, self.session.document.data(self.table.role))
        return fields_of(model) if model is not None else ()

    def _inner_keys(self) -> set[str]:
        model = model_at(self.table, self.session.document.data(self.table.role))
        skip = {"format", "kind", "targets"} if not self.table.parts else set()
        return {one.key for one in inner_of(model)} | skip if model is not None else skip

    def _field(self, key: str) -> Field | None:
        return next((field for field in self._fields() if _key(field) == key), None)

    def _place(self, parts: tuple[Any, ...]) -> Place:
        return Place(self.table.role, (*self.table.parts, *parts))

    def _row(self, field: Field) -> FormRow:
        document = self.session.document
        place = self._place(field.parts)
        value = document.get(place)
        text = shown(value)
        problems = [one for one in document.problems if document.place_of(one).within(place)]
        problem = "; ".join(f"{one.expected}{f' ({one.hint})' if one.hint else ''}" for one in problems)
        means = ""
        if value is not None and not problems:
            reach = self._meant(field, value)
            if reach is not None and reach.text:
                means = reach.text if reach.reached else f"✗ {reach.text}"
            else:
                means = explain(field, text).message
        left_out = f"({field.default})" if field.default else "(left out)"
        return FormRow(
            key=_key(field),
            label=field.label,
            text=text,
            shown=clean(text) or ("" if field.required else left_out),
            means=means,
            problem=clean(problem),
            help=field.help,
            wanted=wanted(field),
            choices=self._choices(field) or (("yes", "no") if field.kind is FieldKind.YES_NO else field.choices),
        )

    def _strange(self, key: str) -> FormRow:
        text = shown(self.session.document.get(self.table / key))
        return FormRow(
            key,
            key,
            text,
            clean(text),
            problem="unknown here: empty it to take it out",
            help="this key does not belong to this table",
        )

    def _choices(self, field: Field) -> tuple[str, ...]:
        """Names that a reference may hold: users, samples, gates, other targets."""
        document = self.session.document
        if self.table.parts[:1] == ("targets",) and field.key in ("gate", "second_gate"):
            gates = self._sample().get("gates")
            return _names(gates)
        if field.key in REFERENCES and self.table.parts[:1] in (("targets",), ("samples",)):
            own = document.get(self.table / "name")
            return tuple(name for name in _names(document.data("week").get(REFERENCES[field.key])) if name != own)
        return ()

    def _sample(self) -> dict[str, Any]:
        document = self.session.document
        name = document.get(self.table / "sample")
        rows = document.data("week").get("samples")
        found = [row for row in rows if isinstance(row, dict) and row.get("name") == name] if rows else []
        return found[0] if found else {}

    def _meant(self, field: Field, value: Any) -> Meant | None:
        if self.table.role != "week" or self.table.parts[:1] != ("targets",) or len(self.table.parts) != 2:
            return None
        target = self.session.document.get(self.table)
        return meant(self.session.document.rig, self._sample(), target, field.key, value)


@dataclass(frozen=True, slots=True)
class TargetRow:
    """A target in the list of targets. ``means`` is the field it asks for now; ``reached`` whether the rig has it."""

    place: Place
    name: str
    kind: str
    sample: str
    asks: str
    means: str
    reached: bool
    stage: str
    priority: str
    must: bool
    problems: tuple[str, ...]


def target_rows(session: Session) -> list[TargetRow]:
    """All targets, as they stand."""
    targets = session.document.data("week").get("targets")
    return [_target_row(session, at, row) for at, row in enumerate(targets if isinstance(targets, list) else [])]


def _target_row(session: Session, at: int, row: Any) -> TargetRow:
    place = Place("week", ("targets", at))
    row = row if isinstance(row, dict) else {}
    problems = tuple(
        f"{str(session.document.place_of(one).last).replace('_', ' ')} {one.expected}"
        for one in session.document.problems_at(place)
    )
    form = TableForm(session, place)
    asks, reach = [], None
    for key, sign in (("filling", "ν "), ("field", ""), ("fillings", "ν "), ("fields", "")):
        if key in row:
            asks.append(sign + shown(row[key]))
            reach = reach or meant(session.document.rig, form._sample(), row, key, row[key])
    kelvins = row.get("temperatures", row.get("temperature", "base"))
    warm = meant(session.document.rig, {}, row, "temperatures" if "temperatures" in row else "temperature", kelvins)
    reached = (reach is None or reach.reached) and (warm is None or warm.reached)
    told = [one.text for one in (reach, warm) if one is not None and (one is reach or not one.reached)]
    return TargetRow(
        place,
        clean(str(row.get("name", ""))),
        clean(str(row.get("kind", ""))),
        clean(str(row.get("sample", ""))),
        clean(", ".join(asks)),
        clean("; ".join(told)),
        reached,
        clean(shown(kelvins)),
        str(row.get("priority", 3)),
        row.get("must") is True,
        problems,
    )


def _names(rows: Any) -> tuple[str, ...]:
    return tuple(str(row.get("name")) for row in rows if isinstance(row, dict)) if isinstance(rows, list) else ()


def _unknown(value: Any, choices: tuple[str, ...]) -> str:
    values = value if isinstance(value, list) else [value]
    return next((str(one) for one in values if one not in choices), "")


def _key(field: Field) -> str:
    return ".".join(str(part) for part in field.parts)
