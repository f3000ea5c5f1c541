"""Names and times that must agree across a week file."""

from __future__ import annotations

from typing import Any

import pytest

from planner.errors import InputError, Problem
from planner.files import parse_week
from planner.files.references import nearest
from tests.builders import TOP, Changes, week_text


def problems(changes: Changes | None = None, targets: list[Changes] | None = None) -> list[Problem]:
    try:
        parse_week(week_text(changes, targets), "w.toml")
    except InputError as error:
        return error.problems
    return []


def hold(name: str, **more: Any) -> Changes:
    return {"name": name, "kind": "hold", "field": "1 T", "duration": "1 h", **more}


def test_the_nearest_name_or_the_names_there_are() -> None:
    assert nearest("durration", ["field", "duration"]) == 'did you mean "duration"?'
    assert nearest("xyz", ["field", "duration"]) == "known: field, duration"
    assert nearest("xyz", [""]) == ""
    assert nearest("xyz", [str(number) for number in range(20)]).endswith(" 10, 11")


@pytest.mark.parametrize(
    ("changes", "where", "value"),
    [
        ({"users": [{"name": "U1", "letter": "A"}, {"name": "U1", "letter": "B"}]}, "users[1].name", '"U1"'),
        ({"users": [{"name": "U1", "letter": "A"}, {"name": "U2", "letter": "A"}]}, "users[1].letter", '"A"'),
        ({"people": [{"name": "P"}, {"name": "Q"}, {"name": "P"}]}, "people[2].name", '"P"'),
        ({"samples.0.gates.1": dict(TOP)}, "samples[0].gates", '"top"'),
        ({"samples.0.user": "Nobody"}, "samples[0].user", '"Nobody"'),
        ({"present.gates": {"S1/tip": "0.1 V"}}, "present.gates", '"S1/tip"'),
        ({"present.gates": {"top": "0.1 V"}}, "present.gates", '"top"'),
    ],
)
def test_names_that_do_not_agree(changes: Changes, where: str, value: str) -> None:
    (problem,) = problems(changes)
    assert (problem.file, problem.where, problem.value) == ("w.toml", where, value)


@pytest.mark.parametrize(
    ("more", "where", "hint"),
    [
        ({"user": "U2"}, "targets[1].user", "known: U1"),
        ({"sample": "Sample 1"}, "targets[1].sample", "known: S1"),
        ({"after": ["first_"]}, "targets[1].after", 'did you mean "first"?'),
        ({"before": ["frist"]}, "targets[1].before", 'did you mean "first"?'),
        ({"gates": {"topp": "0.1 V"}}, "targets[1].gates.topp", 'did you mean "top"?'),
    ],
)
def test_a_target_that_refers_to_nothing(more: Changes, where: str, hint: str) -> None:
    (problem,) = problems(None, [hold("first"), hold("second", **more)])
    assert (problem.where, problem.hint) == (where, hint)


def test_swept_gates_must_be_the_samples_too() -> None:
    sweep = {"kind": "gate sweep", "field": "1 T", "sweep": "0 V to 1 V", "points": 5, "dwell": "1 s"}
    second = {"second_gate": "front", "second_sweep": "0 V to 1 V", "second_points": 3}
    found = problems(None, [{"name": "A", "gate": "tip", **sweep, **second}])
    assert [(problem.where, problem.value) for problem in found] == [
        ("targets[0].gate", '"tip"'),
        ("targets[0].second_gate", '"front"'),
    ]


@pytest.mark.parametrize(
    ("targets", "circle"),
    [
        ([hold("A", after=["A"])], '"A" → "A"'),
        ([hold("A", after=["B"]), hold("B", after=["A"])], '"A" → "B" → "A"'),
        ([hold("A", before=["C"]), hold("C", before=["B"]), hold("B", before=["A"])], '"A" → "C" → "B" → "A"'),
        ([hold("A", before=["B"]), hold("B", before=["C"]), hold("C", before=["B"])], '"B" → "C" → "B"'),
    ],
)
def test_a_circle_is_shown_in_its_order_without_what_only_leads_to_it(targets: list[Changes], circle: str) -> None:
    (problem,) = problems(None, targets)
    assert problem.where == "targets"
    assert problem.value == circle


def test_a_chain_and_a_diamond_are_no_circle() -> None:
    assert problems(None, [hold("A", before=["B", "C"]), hold("B"), hold("C"), hold("D", after=["B", "C"])]) == []


def slots(*spans: tuple[str, str]) -> list[Changes]:
    return [{"from": begin, "to": finish} for begin, finish in spans]


def test_the_magnet_is_promised_once_only() -> None:
    users = [
        {"name": "U1", "letter": "A", "slots": slots(("Mon 09:00", "Tue 09:00"), ("Wed 09:00", "Wed 12:00"))},
        {"name": "U2", "letter": "B", "slots": slots(("Tue 09:00", "Tue 12:00"), ("Wed 11:00", "Thu 09:00"))},
    ]
    (problem,) = problems({"users": users})
    assert problem.where == "users[1].slots[1]"
    assert "overlaps users[0].slots[1]" in problem.expected  # slots that only touch are fine


def test_a_long_slot_may_overlap_several() -> None:
    users = [
        {"name": "U1", "letter": "A", "slots": slots(("Mon 09:00", "Fri 09:00"))},
        {"name": "U2", "letter": "B", "slots": slots(("Tue 09:00", "Tue 12:00"), ("Wed 11:00", "Thu 09:00"))},
    ]
    assert [problem.where for problem in problems({"users": users})] == ["users[1].slots[0]", "users[1].slots[1]"]


@pytest.mark.parametrize(
    "changes",
    [
        {"quiet": [{"name": "q", "from": "Tue 20:00", "to": "Tue 20:00"}]},
        {"users.0.slots": slots(("Tue 20:00", "Tue 06:00"))},
        {"people": [{"name": "P", "away": slots(("Tue 20:00", "Tue 06:00"))}]},
    ],
)
def test_spans_end_after_they_begin(changes: Changes) -> None:
    (problem,) = problems(changes)
    assert problem.expected == "must end after it begins"
    assert "first one from the week's start on" in problem.hint


def test_a_span_in_the_hour_that_a_clock_change_repeats() -> None:
    week = {"start": "2031-10-20T08:00", "end": "2031-10-27T08:00"}
    (problem,) = problems({**week, "quiet": [{"name": "q", "from": "Sun 02:30", "to": "Sun 06:00"}]})
    assert "happens twice in Europe/Vienna" in problem.expected
