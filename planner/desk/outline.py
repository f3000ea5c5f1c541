"""The tables of a week or rig file as an outline: what can be opened, added to, copied and taken out."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import Any

from planner.desk.document import Document
from planner.desk.fields import Inner, inner_of, model_at
from planner.desk.place import Place, Role
from planner.desk.values import shown
from planner.desk.wording import clean
from planner.files.model import Table


class NodeKind(StrEnum):
    """What a line of an outline stands for."""

    TABLE = "table"
    ROWS = "rows"
    ROW = "row"
    ABSENT = "absent"


@dataclass(frozen=True, slots=True)
class Node:
    """One line: a table, a list of rows, a row, or an optional table that is left out."""

    place: Place
    title: str
    depth: int
    kind: NodeKind
    optional: bool
    help: str
    problems: int


def outline(document: Document, role: Role, only: str = "", without: tuple[str, ...] = ()) -> tuple[Node, ...]:
    """The outline of a file, or of its list ``only``; the lists ``without`` have a page of their own."""
    root = Place(role)
    model = model_at(root, document.data(role))
    assert model is not None
    if only:
        inner = next(one for one in inner_of(model) if one.key == only)
        return tuple(_listed(document, root / only, inner, 0))
    own = [one for one in inner_of(model) if one.key not in without]
    below = [root / key for key in (*(one.key for one in inner_of(model)), "targets")]
    at_root = sum(not any(document.place_of(one).within(place) for place in below) for one in _of(document, role))
    head = Node(root, "in general", 0, NodeKind.TABLE, False, "what belongs to the whole file", at_root)
    return (head, *(node for one in own for node in _node(document, root / one.key, one, 0)))


def _of(document: Document, role: Role) -> list[Any]:
    return [one for one in document.problems if document.place_of(one).role == role]


def _node(document: Document, place: Place, inner: Inner, depth: int) -> list[Node]:
    if inner.many:
        return _listed(document, place, inner, depth)
    value = document.get(place)
    title = inner.key.replace("_", " ")
    if not isinstance(value, dict):
        return [
            Node(place, f"{title} (none)", depth, NodeKind.ABSENT, inner.optional, inner.help, _count(document, place))
        ]
    head = Node(place, title, depth, NodeKind.TABLE, inner.optional, inner.help, _count(document, place))
    return [head, *_inside(document, place, inner.model, depth + 1)]


def _inside(document: Document, place: Place, model: type[Table], depth: int) -> list[Node]:
    return [node for one in inner_of(model) for node in _node(document, place / one.key, one, depth)]


def _listed(document: Document, place: Place, inner: Inner, depth: int) -> list[Node]:
    rows = document.get(place)
    rows = rows if isinstance(rows, list) else []
    title = f"{inner.key.replace('_', ' ')} ({len(rows) or 'none'})"
    found = [Node(place, title, depth, NodeKind.ROWS, inner.optional, inner.help, _count(document, place))]
    for at, row in enumerate(rows):
        here = place / at
        problems = _count(document, here)
        found.append(Node(here, row_title(row, at), depth + 1, NodeKind.ROW, True, inner.help, problems))
        found += _inside(document, here, inner.model, depth + 2)
    return found


def row_title(row: Any, at: int) -> str:
    """A row in a few words: its name, or its first values."""
    if not isinstance(row, dict):
        return f"{at + 1}"
    if row.get("name"):
        letter = f"{row['letter']} · " if row.get("letter") else ""
        return clean(f"{letter}{row['name']}")
    values = [shown(value) for value in row.values() if not isinstance(value, (dict, list))]
    return clean(", ".join(values[:2])) or f"row {at + 1}"


def _count(document: Document, place: Place) -> int:
    return len(document.problems_at(place))
