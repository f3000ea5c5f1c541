"""Names and times that must agree across a week file, judged on the raw data so that every problem shows at once."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import datetime
from difflib import get_close_matches
from itertools import islice
from typing import Any

from planner.clock import Clock, localise, zone
from planner.errors import Problem
from planner.files.hours import read_datetime
from planner.files.limits import MOST_PROBLEMS

_MOST_COMPARED = 200


def nearest(name: str, known: list[str]) -> str:
    """A hint that offers the nearest known name, or lists them."""
    known = [one for one in known if one]
    close = get_close_matches(name[:200], known[:_MOST_COMPARED], n=1, cutoff=0.6)
    if close:
        return f'did you mean "{close[0]}"?'
    return "known: " + ", ".join(known[:12]) if known else ""


def _tables(data: Any, key: str) -> list[tuple[int, dict[str, Any]]]:
    rows = data.get(key) if isinstance(data, dict) else None
    return [(at, row) for at, row in enumerate(rows) if isinstance(row, dict)] if isinstance(rows, list) else []


def _names(data: Any, key: str) -> list[str]:
    return [row["name"] for _, row in _tables(data, key) if isinstance(row.get("name"), str)]


def _texts(value: Any) -> list[str]:
    return [item for item in value if isinstance(item, str)] if isinstance(value, list) else []


def reference_problems(data: dict[str, Any], file: str, most: int = MOST_PROBLEMS) -> list[Problem]:
    """Every disagreement between the parts of a week file; of very many the first ``most``."""
    rules = (_twice, _unknown, _gates, _circles, _times)
    return list(islice((problem for rule in rules for problem in rule(data, file)), most))


def _twice(data: dict[str, Any], file: str) -> Iterator[Problem]:
    for key, field in [
        ("users", "name"),
        ("users", "letter"),
        ("samples", "name"),
        ("targets", "name"),
        ("people", "name"),
    ]:
        seen: set[str] = set()
        for at, row in _tables(data, key):
            name = row.get(field)
            if isinstance(name, str) and name in seen:
                yield Problem(file, f"{key}[{at}].{field}", f'"{name}"', "this name is taken already")
            elif isinstance(name, str):
                seen.add(name)
    for at, row in _tables(data, "samples"):
        names = _names(row, "gates")
        for name in dict.fromkeys(name for place, name in enumerate(names) if name in names[:place]):
            yield Problem(file, f"samples[{at}].gates", f'"{name}"', "this name is taken already")


def _unknown(data: dict[str, Any], file: str) -> Iterator[Problem]:
    users, samples, targets = (dict.fromkeys(_names(data, key)) for key in ("users", "samples", "targets"))
    for key, field, known, what in [
        ("samples", "user", users, "a user of this file"),
        ("targets", "user", users, "a user of this file"),
        ("targets", "sample", samples, "a sample of this file"),
    ]:
        for at, row in _tables(data, key):
            name = row.get(field)
            if isinstance(name, str) and name not in known:
                yield Problem(file, f"{key}[{at}].{field}", f'"{name}"', f"expected {what}", nearest(name, list(known)))
    told = 0
    for at, row in _tables(data, "targets"):
        for field in ("after", "before"):
            for name in _texts(row.get(field)):
                if name not in targets:
                    told += 1
                    hint = nearest(name, list(targets)) if told <= MOST_PROBLEMS else ""
                    yield Problem(file, f"targets[{at}].{field}", f'"{name}"', "expected a target of this file", hint)


def _gates(data: dict[str, Any], file: str) -> Iterator[Problem]:
    gates = {str(row.get("name")): _names(row, "gates") for _, row in _tables(data, "samples")}
    for at, row in _tables(data, "targets"):
        known = gates.get(str(row.get("sample")))
        if known is None:
            continue
        held = row["gates"] if isinstance(row.get("gates"), dict) else {}
        used = [(f"gates.{name}", name) for name in held]
        used += [(field, row[field]) for field in ("gate", "second_gate") if isinstance(row.get(field), str)]
        for place, name in used:
            if name not in known:
                expected = f'expected a gate of sample "{row["sample"]}"'
                yield Problem(file, f"targets[{at}].{place}", f'"{name}"', expected, nearest(name, known))
    present = data.get("present")
    at_start = present.get("gates") if isinstance(present, dict) else None
    all_gates = [f"{sample}/{gate}" for sample, names in gates.items() for gate in names]
    for name in at_start if isinstance(at_start, dict) else {}:
        if name not in all_gates:
            yield Problem(file, "present.gates", f'"{name}"', 'expected "sample/gate"', nearest(name, all_gates))


def _circles(data: dict[str, Any], file: str) -> Iterator[Problem]:
    later: dict[str, set[str]] = {name: set() for name in _names(data, "targets")}
    for _, row in _tables(data, "targets"):
        name = row.get("name")
        if not isinstance(name, str):
            continue
        for other in _texts(row.get("after")):
            later.setdefault(other, set()).add(name)
        later[name].update(_texts(row.get("before")))
    circle = _circle(later)
    if circle:
        names = " → ".join(f'"{name}"' for name in [*circle, circle[0]])
        expected = "`after` and `before` go round in a circle, so none of these can be first"
        yield Problem(file, "targets", names, expected)


def _circle(later: dict[str, set[str]]) -> list[str]:
    """Names that follow one another round a circle, the first found; empty where there is none."""
    left = {name: set(others) for name, others in later.items()}
    while free := [name for name, others in left.items() if not others & left.keys()]:
        for name in free:
            del left[name]
    if not left:
        return []
    path = [next(iter(left))]
    while True:  # every name left has a follower that is left
        follower = min(left[path[-1]] & left.keys())
        if follower in path:
            return path[path.index(follower) :]
        path.append(follower)


def _clock(data: dict[str, Any], file: str) -> tuple[Clock | None, list[Problem]]:
    problems: list[Problem] = []
    try:
        where = zone(str(data.get("zone")))
    except ValueError:
        return None, []
    moments: dict[str, datetime] = {}
    for key in ("start", "end"):
        try:
            written = read_datetime(data.get(key))
        except ValueError:
            continue  # the missing or mistyped key is reported by the model
        try:
            moments[key] = localise(written, where)
        except ValueError as error:
            problems.append(Problem(file, key, str(data[key]), str(error)))
    if "start" not in moments:
        return None, problems
    clock = Clock(moments["start"])
    if "end" in moments:
        length = clock.second(moments["end"])
        if length <= 0:
            problems.append(Problem(file, "end", str(data["end"]), f"must be after the start, {data['start']}"))
        elif length > 70 * 86400:
            problems.append(Problem(file, "end", str(data["end"]), "a plan spans ten weeks at most"))
    return clock, problems


def _times(data: dict[str, Any], file: str) -> Iterator[Problem]:
    clock, problems = _clock(data, file)
    yield from problems
    if clock is None:
        return
    slots: list[tuple[int, int, str]] = []
    for place, row in _spans(data):
        read = _span(clock, row)
        if isinstance(read, list):
            yield Problem(file, place, f"{row['from']} to {row['to']}", *read)
        elif read and place.startswith("users"):
            slots.append((*read, place))
    slots.sort()
    for at, (_, finish, place) in enumerate(slots):
        for later in range(at + 1, len(slots)):
            begin, _, other = slots[later]
            if begin >= finish:
                break
            yield Problem(file, other, "", f"overlaps {place}; the magnet can be promised once only")
    helium = data.get("helium")
    for at, row in _tables(helium, "deliveries"):
        written = row.get("at")
        if not isinstance(written, (datetime, str)):
            continue  # the missing or mistyped key is reported by the model
        try:
            clock.read(written)
        except ValueError as error:
            yield Problem(file, f"helium.deliveries[{at}].at", str(written), str(error))


def _spans(data: dict[str, Any]) -> Iterator[tuple[str, dict[str, Any]]]:
    for at, row in _tables(data, "quiet"):
        yield f"quiet[{at}]", row
    for key, inner in (("users", "slots"), ("people", "away"), ("targets", "windows")):
        for at, row in _tables(data, key):
            for place, span in _tables(row, inner):
                yield f"{key}[{at}].{inner}[{place}]", span


def _span(clock: Clock, row: dict[str, Any]) -> tuple[int, int] | list[str] | None:
    """Begin and finish in seconds; or what was expected, with a hint; or nothing where the model has a say first."""
    ends = []
    for key in ("from", "to"):
        written = row.get(key)
        if not isinstance(written, (datetime, str)):
            return None  # the missing or mistyped key is reported by the model
        try:
            ends.append(clock.second(clock.read(written)))
        except ValueError as error:
            return [str(error)]
    if ends[1] <= ends[0]:
        hint = "a weekday alone is its first one from the week's start on"
        return ["must end after it begins", hint if isinstance(row["from"], str) else ""]
    return ends[0], ends[1]
