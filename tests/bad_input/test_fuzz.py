"""Whatever a file says, reading it gives a week or a rig, or an InputError with its reasons; nothing else comes out.

What can be read can be checked: no rule may stumble over values that the reader let through.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

from hypothesis import given, settings
from hypothesis import strategies as st

from planner.checks import check_week
from planner.errors import InputError
from planner.files import Request, parse_rig, parse_week
from planner.files.reading import fit_problems, source
from tests.builders import rig_text, week_text

EXAMPLES = Path(__file__).parents[2] / "example_plans"
WEEKS = [path.read_text(encoding="utf-8") for path in sorted(EXAMPLES.glob("*_week.toml"))]
RIGS = [path.read_text(encoding="utf-8") for path in sorted(EXAMPLES.glob("*.rig.toml"))]
PIECES = st.sampled_from(
    ["", "\n", '"', "'", "[", "]", "{", "}", "=", ",", ".", "#", "\0", "\ufeff", "nan", "inf", "-", "true", "0x", "1e9",
     "T", "mK", "5 m", "≤ ", " to ", "1/0", "[[targets]]", "[present]", "2031-03-30T02:30:00", "9999-12-31", "\ud7ff"]
)  # fmt: skip


@st.composite
def mutated(draw: st.DrawFn, texts: list[str]) -> str:
    """A text with some stretches cut out, doubled, swapped or replaced."""
    text = draw(st.sampled_from(texts))
    for _ in range(draw(st.integers(1, 4))):
        at = draw(st.integers(0, len(text)))
        end = min(len(text), at + draw(st.integers(0, 40)))
        middle = draw(PIECES | st.just(text[at:end] * 2) | st.just(text[at:end][::-1]) | st.text(max_size=5))
        text = text[:at] + middle + text[end:]
    return text


def read_and_check(week: str, rig: str) -> None:
    """Read both, and check the week where both can be read and fit."""
    read = []
    for parse, text in ((parse_week, week), (parse_rig, rig)):
        try:
            read.append(parse(text))
        except InputError as error:
            told = [str(problem) for problem in error.problems]
            assert told
            assert all(line.isprintable() for line in told)
    if len(read) == 2 and not fit_problems(read[0], read[1], "week"):
        sources = (source("week", "week.toml", week), source("rig", "round.rig.toml", rig))
        check_week(Request(read[0], read[1], sources))


@settings(max_examples=80, deadline=None)
@given(mutated(WEEKS))
def test_mutated_weeks(text: str) -> None:
    read_and_check(text, RIGS[-1])


@settings(max_examples=80, deadline=None)
@given(mutated(RIGS))
def test_mutated_rigs(text: str) -> None:
    read_and_check(WEEKS[1], text)


SCALARS = (
    st.booleans()
    | st.integers(-(2**70), 2**70)
    | st.floats()
    | st.text(max_size=8)
    | st.sampled_from(
        ["1 T", "-1 T", "1e9 T", "1e-9 T", "0 T", "50 mK", "1e8 s", "0.001 s", "90 m", "1 %", "100 %", "60 L"]
    )
    | st.sampled_from(
        ["1 V", "0.1 T/min", "0 T to 1 T", "1/3", "2 to 1", "base", "unknown", "persistent", "hold", "map"]
    )
    | st.sampled_from(
        ["Tue 08:00", "Sun 24:00", "2031-03-04T08:00", "daily", "Mon-Fri", "08:00", "Europe/Lisbon", "S1"]
    )
)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.sampled_from(["name", "from", "to", "a b"]), inner),
    max_leaves=5,
)
TARGETS: list[dict[str, Any]] = [
    {
        "name": "a",
        "kind": "hold",
        "filling": "1",
        "duration": "1 h",
        "temperature": "≤ 50 mK",
        "gates": {"top": "0.1 V"},
    },
    {"name": "b", "kind": "field sweep", "field": "0 T to 1 T", "feature": "20 mT", "after": ["a"]},
    {
        "name": "c",
        "kind": "gate sweep",
        "field": "1 T",
        "gate": "top",
        "sweep": "0 V to 1 V",
        "points": 5,
        "dwell": "1 s",
    },
    {"name": "d", "kind": "map", "filling": "2 to 1", "rungs": 2, "gate": "top", "sweep": "0 V to 1 V", "points": 5},
    {"name": "e", "kind": "temperature series", "field": "1 T", "temperatures": ["50 mK", "0.1 K"], "duration": "1 h"},
    {"name": "f", "kind": "other work", "what": "look", "duration": "1 h", "attended": True},
]
LOCKIN = {"samples.0.lockin": {"time_constant": "100 ms", "poles": 2}, "helium": {"stock": "60 L"}}


def places_of(data: Any, at: tuple[Any, ...] = ()) -> list[tuple[Any, ...]]:
    """Every place in plain data."""
    inner = data.items() if isinstance(data, dict) else enumerate(data) if isinstance(data, list) else ()
    return [place for key, value in inner for place in ((*at, key), *places_of(value, (*at, key)))]


def plain(text: str) -> Any:
    """The builders' text as data; their texts are TOML with one key a line."""
    import tomllib

    return json.loads(json.dumps(tomllib.loads(text), default=str))


WEEK_DATA, RIG_DATA = plain(week_text(LOCKIN, TARGETS)), plain(rig_text())


def toml(value: Any) -> str:
    """A value as TOML."""
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{json.dumps(key)} = {toml(inner)}" for key, inner in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(toml(inner) for inner in value) + "]"
    if isinstance(value, float):
        return repr(value)
    return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")


@st.composite
def changed(draw: st.DrawFn, data: Any) -> str:
    """A file with values of any kind in up to three places."""
    data = json.loads(json.dumps(data))
    for _ in range(draw(st.integers(1, 3))):
        *path, last = draw(st.sampled_from(places_of(data)))
        table = data
        for part in path:
            table = table[part]
        if draw(st.integers(0, 9)):
            table[last] = draw(VALUES)
        else:
            del table[last]
    return "".join(f"{json.dumps(key)} = {toml(value)}\n" for key, value in data.items())


@settings(max_examples=100, deadline=None)
@given(changed(WEEK_DATA))
def test_any_value_anywhere_in_a_week(text: str) -> None:
    read_and_check(text, rig_text())


@settings(max_examples=100, deadline=None)
@given(changed(RIG_DATA))
def test_any_value_anywhere_in_a_rig(text: str) -> None:
    read_and_check(week_text(LOCKIN, TARGETS), text)


def test_the_fuzzed_texts_can_be_read_before_they_are_changed() -> None:
    assert len(parse_week("".join(f"{key} = {toml(value)}\n" for key, value in WEEK_DATA.items())).targets) == len(
        TARGETS
    )
    assert parse_rig("".join(f"{key} = {toml(value)}\n" for key, value in RIG_DATA.items())).name == "Round-number rig"
    for text in WEEKS:
        assert parse_week(text).targets
    for text in RIGS:
        assert parse_rig(text).name
