"""Edits of TOML text that leave every other character, comments and order included, as it stood.

Every function takes text and gives new text; `tomllib` confirms that the result says exactly what was meant.
"""

from __future__ import annotations

import copy
import tomllib
from collections.abc import Callable
from typing import Any

import tomlkit

from planner.desk.place import value_at
from planner.desk.toml_spans import Block, Parts, Scan, Value
from planner.errors import PlannerError


class CannotEditError(PlannerError):
    """The way this file is laid out does not let the program make a change without disturbing the rest."""


def written(value: Any) -> str:
    """A value as TOML, tables and lists in one line."""
    if isinstance(value, dict):
        inner = ", ".join(f"{tomlkit.key(name).as_string()} = {written(one)}" for name, one in value.items())
        return f"{{ {inner} }}" if inner else "{}"
    if isinstance(value, (list, tuple)):
        return f"[{', '.join(written(one) for one in value)}]"
    return str(tomlkit.item(value).as_string())


def set_value(text: str, parts: Parts, value: Any) -> str:
    """The text with a value put under a key; tables that are not there yet are made."""

    def on_plain(data: Any) -> None:
        for part in parts[:-1]:
            data = data.setdefault(part, {}) if isinstance(data, dict) else data[part]
        data[parts[-1]] = copy.deepcopy(value)

    return _confirmed(text, _with_value(text, parts, value), on_plain)


def remove(text: str, parts: Parts) -> str:
    """The text without a key, a table or a row of a list."""

    def on_plain(data: Any) -> None:
        del value_at(data, parts[:-1])[parts[-1]]

    def with_emptied(data: Any) -> None:
        """A list of [[rows]] goes with its last row, a table of dotted keys with its last key."""
        on_plain(data)
        holder = parts[:-1]
        while holder and not value_at(data, holder):
            del value_at(data, holder[:-1])[holder[-1]]
            holder = holder[:-1]

    edited = _without(text, Scan(text), parts)
    try:
        return _confirmed(text, edited, on_plain)
    except CannotEditError:
        return _confirmed(text, edited, with_emptied)


def add_row(text: str, parts: Parts, at: int, row: dict[str, Any]) -> str:
    """The text with one more row in the list under ``parts``, at position ``at``; the list is made if need be."""

    def on_plain(data: Any) -> None:
        for part in parts[:-1]:
            data = data.setdefault(part, {}) if isinstance(data, dict) else data[part]
        data.setdefault(parts[-1], []).insert(at, copy.deepcopy(row))

    scan = Scan(text)
    rows = [block for block in scan.inside(parts) if block.row and len(block.parts) == len(parts) + 1]
    value = scan.find(parts)
    if rows or (value is None and len(parts) == 1):
        block = f"[[{_dotted(parts)}]]\n" + "".join(
            f"{tomlkit.key(name).as_string()} = {written(one)}\n" for name, one in row.items()
        )
        edited = _with_block(text, scan, rows, (*parts, at), block)
    elif value is None:
        edited = _with_value(text, parts, [row])
    else:
        edited = _with_item(text, value, at, written(row))
    return _confirmed(text, edited, on_plain)


def appended_rows(text: str, parts: Parts, new: list[dict[str, Any]]) -> str:
    """The text with rows put after the last of the list under ``parts``, all in one go."""

    def on_plain(data: Any) -> None:
        for part in parts[:-1]:
            data = data.setdefault(part, {}) if isinstance(data, dict) else data[part]
        data.setdefault(parts[-1], []).extend(copy.deepcopy(new))

    scan = Scan(text)
    rows = [block for block in scan.inside(parts) if block.row and len(block.parts) == len(parts) + 1]
    value = scan.find(parts)
    if value is None:
        lines = [[f"{tomlkit.key(name).as_string()} = {written(one)}\n" for name, one in row.items()] for row in new]
        block = "\n".join(f"[[{_dotted(parts)}]]\n" + "".join(pairs) for pairs in lines)
        edited = _with_block(text, scan, rows, (*parts, len(rows)), block)
    else:
        edited = _with_item(text, value, len(value.items), ", ".join(written(row) for row in new))
    return _confirmed(text, edited, on_plain)


def move_row(text: str, parts: Parts, to: int) -> str:
    """The text with the row under ``parts`` moved to position ``to`` of its list; comments inside it go with it."""
    at = parts[-1]
    assert isinstance(at, int)

    def on_plain(data: Any) -> None:
        for part in parts[:-1]:
            data = data[part]
        data.insert(to, data.pop(at))

    scan = Scan(text)
    blocks = scan.inside(parts)
    if blocks:
        piece = "".join(text[block.start : block.end] for block in blocks)
        left = _without(text, scan, parts)
        scan = Scan(left)
        rows = [block for block in scan.inside(parts[:-1]) if block.row and len(block.parts) == len(parts)]
        return _confirmed(text, _with_block(left, scan, rows, (*parts[:-1], to), piece.rstrip() + "\n"), on_plain)
    rows_value = scan.find(parts[:-1])
    assert rows_value is not None
    moved = rows_value.items[at][2]
    left = _without_item(text, rows_value, at)
    again = Scan(left).find(parts[:-1])
    assert again is not None
    return _confirmed(text, _with_item(left, again, to, text[moved.start : moved.end]), on_plain)


def _confirmed(text: str, edited: str, on_plain: Callable[[Any], None]) -> str:
    wanted = tomllib.loads(text)
    on_plain(wanted)
    try:
        fits = tomllib.loads(edited) == wanted
    except tomllib.TOMLDecodeError:
        fits = False
    if not fits:
        raise CannotEditError("This file's layout does not let this change be made here: make it with a text editor.")
    return edited


def _dotted(parts: Parts) -> str:
    return ".".join(tomlkit.key(part).as_string() for part in parts if isinstance(part, str))


def _with_value(text: str, parts: Parts, value: Any) -> str:
    scan = Scan(text)
    if (found := scan.find(parts)) is not None:
        return text[: found.start] + written(value) + text[found.end :]
    if scan.inside(parts):
        raise CannotEditError("A table with a heading cannot become a value here: use a text editor.")
    key, holder = tomlkit.key(str(parts[-1])).as_string(), parts[:-1]
    if (block := scan.block(holder)) is not None:
        return _with_line(text, block, f"{key} = {written(value)}\n")
    if (table := scan.find(holder)) is not None:
        return _with_pair(text, table, f"{key} = {written(value)}")
    if any(isinstance(part, int) for part in holder):
        return _with_value(text, holder, {parts[-1]: value})
    for block in scan.blocks:  # written with dotted keys: bath.lines.reserve = …
        depth = len(block.parts)
        for line in block.lines:
            if (*block.parts, *line.keys)[: len(holder)] == holder and depth < len(holder):
                return _with_line(text, block, f"{_dotted((*holder[depth:], parts[-1]))} = {written(value)}\n")
    near = scan.inside(holder[:-1]) if len(holder) > 1 else []
    end = near[-1].end if near else len(text)
    return _joined(text[:end], f"[{_dotted(holder)}]\n{key} = {written(value)}\n", text[end:])


def _joined(before: str, block: str, after: str) -> str:
    """The pieces with a blank line between them."""
    if before and not before.endswith("\n"):
        before += "\n"
    if before and not before.endswith("\n\n"):
        before += "\n"
    return before + block + ("\n" if after and not after.startswith("\n") else "") + after


def _with_line(text: str, block: Block, line: str) -> str:
    at = block.after_keys
    before = text[:at]
    return before + ("" if not before or before.endswith("\n") else "\n") + line + text[at:]


def _with_pair(text: str, table: Value, pair: str) -> str:
    if not table.items:
        return text[: table.start] + f"{{ {pair} }}" + text[table.end :]
    at = table.items[-1][2].end
    return f"{text[:at]}, {pair}{text[at:]}"


def _with_block(text: str, scan: Scan, rows: list[Block], parts: Parts, block: str) -> str:
    """The text with the text of one row put where the row of that number begins, or after the last."""
    following = next((row for row in rows if row.parts == parts), None)
    if following is not None:
        at = following.start
    elif rows:
        at = max(one.end for one in scan.inside(rows[-1].parts))
    else:
        at = len(text)
    return _joined(text[:at], block, text[at:])


def _with_item(text: str, rows: Value, at: int, item: str) -> str:
    if not rows.items:
        return text[: rows.start] + f"[{item}]" + text[rows.end :]
    first = rows.items[0][1]
    broken = "\n" in text[rows.start : first]
    indent = text[text.rfind("\n", 0, first) + 1 : first] if broken else ""
    gap = f",\n{indent}" if broken else ", "
    if at < len(rows.items):
        place = rows.items[at][1]
        return text[:place] + item + gap + text[place:]
    end = rows.items[-1][2].end
    comma = text[end : rows.end].lstrip().startswith(",")
    if not broken or not comma:
        return text[:end] + gap + item + text[end:]
    line_end = text.find("\n", end)
    return f"{text[: line_end + 1]}{indent}{item},{text[line_end:]}"


def _without(text: str, scan: Scan, parts: Parts) -> str:
    blocks = scan.inside(parts)
    if blocks:
        for block in reversed(blocks):
            text = text[: block.start] + text[block.end :]
        return text
    lines = scan.lines(parts)
    if lines:
        for line in reversed(lines):
            text = text[: line.start] + text[line.end :]
        return text
    holder = scan.find(parts[:-1])
    if holder is None:
        raise CannotEditError("There is nothing of that name to take out.")
    at = next(at for at, (keys, _, _) in enumerate(holder.items) if keys == parts[-1:])
    return _without_item(text, holder, at)


def _without_item(text: str, holder: Value, at: int) -> str:
    start, end = holder.items[at][1], holder.items[at][2].end
    line_start = text.rfind("\n", 0, start) + 1
    line_end = text.find("\n", end)
    rest = text[end:line_end].split("#")[0].strip() if line_end >= 0 else "x"
    alone = holder.start < line_start and not text[line_start:start].strip() and rest in ("", ",")
    if alone and line_end < holder.end:
        return text[:line_start] + text[line_end + 1 :]
    if at + 1 < len(holder.items):
        return text[:start] + text[holder.items[at + 1][1] :]
    if at:
        return text[: holder.items[at - 1][2].end] + text[end:]
    return text[:start].rstrip(" ") + text[end : holder.end].lstrip(", ") + text[holder.end :]
