"""Where everything stands in a TOML text: tables, keys, values, rows of lists, as spans of characters.

Only for text that `tomllib` has accepted: the scanner finds places, it does not judge.
"""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass, field

from planner.desk.place import Part

Parts = tuple[Part, ...]

_BARE = re.compile(r"[A-Za-z0-9_-]+")
_ATOM = re.compile(r"[^,\]}#\n]+")
_SPACE = re.compile(r"(?:[ \t\r\n]+|#[^\n]*)*")


@dataclass(frozen=True, slots=True)
class Value:
    """A value with what it holds: pairs of key parts and value for an inline table, row numbers for a list."""

    kind: str
    start: int
    end: int
    items: tuple[tuple[Parts, int, Value], ...] = ()

    def find(self, parts: Parts) -> Value | None:
        """The value under these parts, itself where there are none."""
        if not parts:
            return self
        for keys, _, value in self.items:
            if parts[: len(keys)] == keys and (found := value.find(parts[len(keys) :])) is not None:
                return found
        return None


@dataclass(frozen=True, slots=True)
class Line:
    """One `key = value` of a table: its keys below the table, and the whole lines it takes, end of line included."""

    keys: Parts
    start: int
    end: int
    value: Value


@dataclass(slots=True)
class Block:
    """A table: from the comments right above its header to where the next one begins. The first has no header.

    ``body`` is where its header's line ends.
    """

    parts: Parts
    row: bool
    start: int
    body: int
    end: int = 0
    lines: list[Line] = field(default_factory=list)

    @property
    def after_keys(self) -> int:
        """Where a new key would be written."""
        return self.lines[-1].end if self.lines else self.body


class Scan:
    """The blocks of a text."""

    def __init__(self, text: str) -> None:
        self._text = text
        self._counts: dict[Parts, int] = {}
        self.blocks = [Block((), False, 0, 0)]
        self._read()

    def find(self, parts: Parts) -> Value | None:
        """The value written under these parts; None where there is none, or where it is a table with a header."""
        for block in self.blocks:
            depth = len(block.parts)
            if parts[:depth] != block.parts:
                continue
            for line in block.lines:
                keys = parts[depth : depth + len(line.keys)]
                if keys == line.keys and (found := line.value.find(parts[depth + len(keys) :])) is not None:
                    return found
        return None

    def lines(self, parts: Parts) -> list[Line]:
        """The lines at this place or below it, in the order of the text: several where keys are dotted."""
        depth = len(parts)
        return [one for block in self.blocks for one in block.lines if (*block.parts, *one.keys)[:depth] == parts]

    def block(self, parts: Parts) -> Block | None:
        """The table with a header of its own at this place; the first block for no parts."""
        return next((block for block in self.blocks if block.parts == parts), None)

    def inside(self, parts: Parts) -> list[Block]:
        """The tables with a header at this place or below it, in the order of the text."""
        return [block for block in self.blocks if block.parts[: len(parts)] == parts]

    def _read(self) -> None:
        at, comments = 0, None
        while at < len(self._text):
            end = self._line_end(at)
            stripped = self._text[at:end].strip()
            if stripped.startswith("["):
                self._header(at if comments is None else comments, at, end)
                comments = None
            elif stripped.startswith("#"):
                comments = at if comments is None else comments
            elif stripped:
                end = self._pair(at)
                comments = None
            else:
                comments = None
            at = end
        self.blocks[-1].end = len(self._text)

    def _line_end(self, at: int) -> int:
        found = self._text.find("\n", at)
        return len(self._text) if found < 0 else found + 1

    def _header(self, start: int, at: int, end: int) -> None:
        row = self._text[at:end].lstrip().startswith("[[")
        keys, _ = self._keys(self._text.index("[", at) + (2 if row else 1))
        parts: Parts = ()
        for key in keys[:-1]:
            parts = (*parts, key)
            if parts in self._counts:
                parts = (*parts, self._counts[parts] - 1)
        parts = (*parts, keys[-1])
        if row:
            self._counts[parts] = self._counts.get(parts, 0) + 1
            parts = (*parts, self._counts[parts] - 1)
        self.blocks[-1].end = start
        self.blocks.append(Block(parts, row, start, end))

    def _pair(self, at: int) -> int:
        keys, after = self._keys(at)
        value = self._value(self._skip(self._text.index("=", after) + 1))
        end = self._line_end(value.end)
        self.blocks[-1].lines.append(Line(keys, at, end, value))
        return end

    def _keys(self, at: int) -> tuple[Parts, int]:
        keys: list[Part] = []
        while True:
            at = self._skip(at)
            if self._text[at] in "\"'":
                end = self._string_end(at)
                keys.append(tomllib.loads(f"x = {self._text[at:end]}")["x"])
            else:
                match = _BARE.match(self._text, at)
                assert match is not None
                keys.append(match[0])
                end = match.end()
            at = self._skip(end)
            if self._text[at] != ".":
                return tuple(keys), at
            at += 1

    def _skip(self, at: int) -> int:
        match = _SPACE.match(self._text, at)
        return match.end() if match else at

    def _string_end(self, at: int) -> int:
        quote = self._text[at]
        whole = quote * 3 if self._text.startswith(quote * 3, at) else quote
        place = at + len(whole)
        while not self._text.startswith(whole, place):
            place += 2 if quote == '"' and self._text[place] == "\\" else 1
        end = place + len(whole)
        while len(whole) == 3 and end < len(self._text) and self._text[end] == quote and end - place < 5:
            end += 1  # up to two quotes may stand before the closing three
        return end

    def _value(self, at: int) -> Value:
        sign = self._text[at]
        if sign in "\"'":
            return Value("atom", at, self._string_end(at))
        if sign == "[":
            return self._holder("list", at, "]")
        if sign == "{":
            return self._holder("table", at, "}")
        match = _ATOM.match(self._text, at)
        assert match is not None
        return Value("atom", at, at + len(match[0].rstrip()))

    def _holder(self, kind: str, at: int, closing: str) -> Value:
        items: list[tuple[Parts, int, Value]] = []
        place = self._skip(at + 1)
        while self._text[place] != closing:
            begin = place
            keys: Parts = (len(items),)
            if kind == "table":
                keys, place = self._keys(place)
                place = self._skip(self._text.index("=", place) + 1)
            value = self._value(place)
            items.append((keys, begin, value))
            place = self._skip(value.end)
            if self._text[place] == ",":
                place = self._skip(place + 1)
        return Value(kind, at, place + 1, tuple(items))
