"""Reading: every problem in one go, each with file, place, value, what was expected, and a hint."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.errors import InputError, Problem
from planner.files import parse_rig, parse_week, read_week
from planner.files.reading import MOST_TARGETS
from tests.builders import DRY, REMOVED, Changes, rig_text, week_text, written

HOLD: Changes = {"name": "T1", "kind": "hold", "field": "1 T", "duration": "1 h"}
TOP_SWEPT: Changes = {"gate": "top", "sweep": "0 V to 1 V", "points": 5}


def problems_in_week(changes: Changes | None = None, targets: list[Changes] | None = None) -> list[Problem]:
    with pytest.raises(InputError) as caught:
        parse_week(week_text(changes, targets), "w.toml")
    return caught.value.problems


def problems_in_rig(changes: Changes) -> list[Problem]:
    with pytest.raises(InputError) as caught:
        parse_rig(rig_text(changes), "r.toml")
    return caught.value.problems


def test_every_problem_shows_at_once() -> None:
    found = problems_in_week(
        {"zone": "Europe/Vienn", "present.level": 90, "helium": {"stock": "100 K"}, "staffd": []},
        [
            {**HOLD, "priority": 7, "sample": "S2", "durration": "1 h"},
            {**HOLD, "kind": "holt"},
        ],
    )
    assert {str(problem) for problem in found} == {
        'w.toml: zone is "Europe/Vienn": expected an IANA time zone such as "Europe/Vienna"',
        (
            'w.toml: present.level is 90: expected a quantity such as "85 %": a bare number has no unit; '
            'write it as text, for example "90 %"'
        ),
        'w.toml: helium.stock is "100 K": expected a quantity such as "60 L": "K" is not a unit of this kind',
        'w.toml: staffd: unknown key (did you mean "staffed"?)',
        "w.toml: targets[0].priority is 7: expected at most 5",
        'w.toml: targets[0].durration: unknown key (did you mean "duration"?)',
        'w.toml: targets[0].sample is "S2": expected a sample of this file (known: S1)',
        'w.toml: targets[1].kind is "holt": expected a kind of target (did you mean "hold"?)',
        'w.toml: targets[1].name is "T1": this name is taken already',
    }
    priority = next(problem for problem in found if "priority" in problem.where)
    assert (priority.file, priority.where, priority.value) == ("w.toml", "targets[0].priority", "7")


def test_both_files_speak_at_once(tmp_path: Path) -> None:
    path = written(tmp_path, week_text({"title": REMOVED}), rig_text({"magnet.rated_field": "10"}))
    with pytest.raises(InputError) as caught:
        read_week(path)
    assert {(problem.file, problem.where) for problem in caught.value.problems} == {
        ("week.toml", "title"),
        ("round.rig.toml", "magnet.rated_field"),
    }


@pytest.mark.parametrize(
    ("place", "value", "says"),
    [
        ("start", "Monday", 'start is "Monday": expected a date and time such as 2031-03-03T08:30:00'),
        ("start", 5, "start is 5: expected a date and time"),
        ("start", "2031-03-30T02:30", "does not exist in Europe/Vienna"),
        ("end", "2031-03-03T07:00", "must be after the start, 2031-03-03 08:00:00"),
        ("end", "2031-09-03T07:00", "ten weeks at most"),
        ("end", "9999-12-31T23:00", "year from 1970 to 2199"),
        ("present.temperature", "warm", 'is "warm": expected a quantity such as "42 mK"; or the word "base"'),
        ("present.persistent_current", "5 T", '"T" is not a unit of this kind; or the word "unknown"'),
        ("present.coil", "on", "expected 'zero', 'driven' or 'persistent'"),
        ("users.0.letter", "a", 'users[0].letter is "a": expected one capital letter'),
        ("users.0.name", "", "expected at least 1 characters"),
        ("users", [], "users: expected at least 1 of them"),
        ("users.0.name", "two\nlines", "text of one line, without control characters"),
        ("users.0.only_in_slots", "perhaps", "expected true or false"),
        ("samples.0.name", ["S1"], "samples[0].name: expected text in quotes"),
        ("samples.0.gates.0.rest", "2 V", "samples[0].gates[0]: expected lowest ≤ rest ≤ highest"),
        ("samples.0.gates.1.name", "top", 'samples[0].gates is "top": this name is taken already'),
        ("samples.0.lockin", 3, "samples[0].lockin is 3: expected a table, in { }"),
        ("samples.0.lockin", {"time_constant": "1 s", "poles": 1.5}, "lockin.poles is 1.5: expected a whole number"),
        ("samples.0.density_error", "60 %", "must be at most 50 percent"),
        ("staffed", 3, "staffed is 3: expected a list, in [ ]"),
        ("staffed.0.days", "Mo-Fr", 'expected weekdays such as "Mon-Fri", "Mon, Wed" or "daily"'),
        ("staffed.0.from", 8, 'staffed[0].from is 8: expected a time of day such as "08:30"'),
        ("helium", {"deliveries": [{"at": 5, "volume": "60 L"}]}, "helium.deliveries[0].at is 5: expected a date"),
        ("helium", {"deliveries": [{"at": "Tuesday", "volume": "60 L"}]}, "deliveries[0].at is Tuesday: expected"),
        ("quiet", [{"name": "q", "from": "Wed 06:00", "to": "Tue 20:00"}], "is Wed 06:00 to Tue 20:00: must end"),
        ("format", REMOVED, "format: expected the file format version, format = 1"),
        ("kind", "rig", 'kind is "rig": expected a week file'),
        ("rig", 3, "rig is 3: expected text in quotes"),
    ],
)  # fmt: skip
def test_one_mistake_in_a_week_is_one_problem(place: str, value: Any, says: str) -> None:
    found = [str(problem) for problem in problems_in_week({place: value})]
    matching = [text for text in found if says in text]
    assert len(matching) == 1, found
    in_the_same_place = [text for text in found if text.split(" ")[1] == matching[0].split(" ")[1]]
    assert len(in_the_same_place) == 1, found


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        ({"field": REMOVED}, "targets[0]: expected either `field` or `filling`"),
        ({"filling": 2}, "targets[0]: expected either `field` or `filling`"),
        ({"field": REMOVED, "filling": "1/0"}, "targets[0].filling is \"1/0\": expected a filling such as \"1/3\""),
        ({"field": REMOVED, "filling": True}, "targets[0].filling is true: expected a filling"),
        ({"temperature": "cold"}, 'targets[0].temperature is "cold": expected a quantity such as "42 mK"'),
        ({"temperature": "0 K"}, "a temperature is above 0 K"),
        ({"kind": REMOVED}, "targets[0].kind: expected a kind of target (known: hold, field sweep, gate sweep, "),
        ({"kind": 3}, "targets[0].kind is 3: expected a kind of target"),
        ({"sample": ["S1"]}, "targets[0].sample: expected text in quotes"),
        ({"gates": {"tip": "1 V"}}, '.gates.tip is "tip": expected a gate of sample "S1" (did you mean "top"?)'),
        ({"gates": {"map": "x"}}, 'targets[0].gates.map is "x": expected a quantity such as "0.25 V"'),
        ({"windows": [{"from": "Tue 9:00"}]}, "targets[0].windows[0].to: is missing"),
        ({"points": 5}, "targets[0].points: unknown key"),
    ],
)  # fmt: skip
def test_one_mistake_in_a_target(changes: Changes, says: str) -> None:
    target = {key: value for key, value in {**HOLD, **changes}.items() if value is not REMOVED}
    found = [str(problem) for problem in problems_in_week(None, [target])]
    assert [says in text for text in found].count(True) == 1, found


@pytest.mark.parametrize(
    ("target", "says"),
    [
        ({"kind": "field sweep", "filling": 1}, "a sweep around one filling needs its `width`"),
        ({"kind": "field sweep", "filling": "2 to 1", "width": "1 T"}, "`width` goes with one filling"),
        ({"kind": "field sweep", "filling": "-1 to 1"}, "both ends need the same sign"),
        ({"kind": "field sweep", "field": "1 T to 1 T"}, "the two ends are the same"),
        ({"kind": "field sweep", "field": "1 T"}, 'expected a range such as "0 T to 12 T"'),
        (
            {"kind": "gate sweep", "field": "1 T", **TOP_SWEPT, "second_gate": "back"},
            "a second gate needs `second_gate`, `second_sweep` and `second_points`",
        ),
        (
            {"kind": "gate sweep", "field": "1 T", **TOP_SWEPT,
             "second_gate": "top", "second_sweep": "0 V to 1 V", "second_points": 3},
            "second_gate: must be another gate",
        ),
        (
            {"kind": "gate sweep", "field": "1 T", **TOP_SWEPT, "gates": {"top": "1 V"}},
            "gates.top: this gate is swept, so it cannot be held as well",
        ),
        (
            {"kind": "map", "fields": ["1 T"], **TOP_SWEPT, "gates": {"top": "1 V"}},
            "gates.top: this gate is swept",
        ),
        ({"kind": "map", **TOP_SWEPT}, "expected one of `field`, `filling`"),
        ({"kind": "map", **TOP_SWEPT, "field": "0 T to 1 T"}, "`rungs` goes with"),
        (
            {"kind": "temperature series", "field": "1 T", "temperatures": [], "duration": "1 h"},
            "expected at least 1 of them",
        ),
    ],
)  # fmt: skip
def test_targets_must_be_whole(target: Changes, says: str) -> None:
    found = [str(problem) for problem in problems_in_week(None, [{"name": "T1", **target}])]
    assert [says in text for text in found].count(True) == 1, found


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        ({"magnet.rated": "10 T"}, 'magnet.rated: unknown key (did you mean "rated_field"?)'),
        ({"magnet.ramp_table.1.rate": "0.12 T"}, 'magnet.ramp_table[1].rate is "0.12 T": expected a quantity such as'),
        ({"magnet.ramp_table.1.to": "6 T"}, "magnet: ramp_table: the `to` fields must rise"),
        ({"magnet.rated_field": "10.5 T"}, "ramp_table: ends at 10 T, below the rated field of 10.5 T"),
        ({"magnet.supply.max_current": "99 A"}, "the rated field needs 100 A, the supply gives 99 A"),
        ({"magnet.supply.max_voltage": "0.5 V"}, "at 10 T the leads alone take 0.5 V, none is left to charge"),
        ({"magnet.supply.polarity": "both"}, "expected 'bipolar' or 'unipolar'"),
        ({"bath.calibration.1.volume": "0 L"}, "level and volume must rise"),
        ({"bath.lines.reserve": "31 %"}, "expected reserve ≤ coil_top ≤ at_field ≤ start_ramp"),
        ({"bath.calibration.0": {"level": "23 %", "volume": "1 L"}}, "covers 23 % to 100 %, which leaves out a line"),
        ({"cooler": {}}, "expected one of the tables [bath] and [cooler]"),
        ({"stage.model": {"warming_constant": "1 s", "cooling_constant": "1 s", "within": "1 %"}}, "or a model"),
        ({"stage.cooling": REMOVED}, "expected both tables, warming and cooling"),
        ({"stage.highest": "2 K"}, "warming: must begin above base and reach highest (2 K)"),
        ({"stage.warming.0.to": "20 mK"}, "warming: must begin above base"),
        ({"stage.warming.1.time": "1 min"}, "times must not fall"),
        ({"policies": {"together": ["feild"]}}, "together[0] is \"feild\": expected 'field', 'temperature' or"),
        ({"kind": "week"}, 'kind is "week": expected a rig file'),
    ],
)  # fmt: skip
def test_one_mistake_in_a_rig(changes: Changes, says: str) -> None:
    found = [str(problem) for problem in problems_in_rig(changes)]
    assert len(found) == 1, found
    assert says in found[0]


# Week and rig together


@pytest.mark.parametrize(
    ("week_changes", "rig_changes", "place"),
    [
        ({"present.level": REMOVED}, {}, "present.level"),
        ({}, DRY, "present.level"),
        ({"present.level": "3 %"}, {"bath.calibration.0": {"level": "5 %", "volume": "1 L"}}, "present.level"),
        (
            {"present": {"field": "6 T", "coil": "persistent", "persistent_current": "60 A"}},
            DRY,
            "present.coil",
        ),
        (
            {"present.level": REMOVED, "wanted_end": {"field": "6 T", "coil": "persistent"}},
            DRY,
            "wanted_end.coil",
        ),
        # 0.1 T/A: 6 T is 60 A; the switch may be opened within 0.1 A
        (
            {"present": {"level": "90 %", "field": "6 T", "coil": "persistent", "persistent_current": "59.8 A"}},
            {},
            "present.persistent_current",
        ),
        (
            {"present": {"level": "90 %", "field": "-6 T", "coil": "persistent", "persistent_current": "60 A"}},
            {},
            "present.persistent_current",
        ),
    ],
)
def test_a_week_must_fit_its_rig(tmp_path: Path, week_changes: Changes, rig_changes: Changes, place: str) -> None:
    with pytest.raises(InputError) as caught:
        read_week(written(tmp_path, week_text(week_changes), rig_text(rig_changes)))
    assert [problem.where for problem in caught.value.problems] == [place]


@pytest.mark.parametrize("current", ["60 A", "59.95 A", "unknown"])
def test_a_logged_current_may_differ_by_as_much_as_the_switch_takes(tmp_path: Path, current: str) -> None:
    present = {"level": "90 %", "field": "6 T", "coil": "persistent", "persistent_current": current}
    assert read_week(written(tmp_path, week_text({"present": present}), rig_text())).week.present.field_T == 6


def test_a_pace_must_be_set_by_something(tmp_path: Path) -> None:
    targets: list[Changes] = [
        {"name": "G", "kind": "gate sweep", "field": "1 T", **TOP_SWEPT},
        {"name": "M", "kind": "map", "fields": ["1 T"], **TOP_SWEPT},
        {"name": "F", "kind": "field sweep", "field": "0 T to 1 T", "feature": "20 mT"},
        {"name": "fine", "kind": "gate sweep", "field": "1 T", "dwell": "1 s", **TOP_SWEPT},
    ]
    path = written(tmp_path, week_text(None, targets), rig_text())
    with pytest.raises(InputError) as caught:
        read_week(path)
    assert [p.where for p in caught.value.problems] == ["targets[0].dwell", "targets[1].dwell", "targets[2].lockin"]
    lockin = {"samples.0.lockin": {"time_constant": "1 s"}}
    assert len(read_week(written(tmp_path, week_text(lockin, targets), rig_text())).week.targets) == 4


def test_too_many_targets_are_one_problem() -> None:
    (problem,) = problems_in_week(None, [{"name": f"T{n}"} for n in range(MOST_TARGETS + 1)])
    assert (problem.where, problem.value) == ("targets", f"{MOST_TARGETS + 1} rows")


ODD = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats(allow_nan=False) | st.sampled_from(["", "S1", "5 T", "Tue"]),
    lambda inner: st.lists(inner, max_size=2) | st.dictionaries(st.sampled_from(["name", "from", "to"]), inner),
    max_leaves=4,
).filter(lambda value: value is not None)
PLACES = st.sampled_from(
    ["start", "end", "zone", "rig", "present", "users", "samples", "targets", "quiet", "helium", "people", "title",
     "users.0.slots", "samples.0.name", "samples.0.gates", "samples.0.gates.0.name", "targets.0.sample",
     "targets.0.after", "targets.0.gates", "targets.0.windows", "targets.0.kind", "targets.0.name", "present.gates",
     "helium.deliveries", "people.0.away", "quiet.0.from"]
)  # fmt: skip


@settings(max_examples=150, deadline=None)
@given(st.dictionaries(PLACES, ODD, min_size=1, max_size=3))
def test_odd_values_anywhere_are_problems_not_crashes(changes: dict[str, Any]) -> None:
    rows: Changes = {"people": [{"name": "P"}], "quiet": [{"name": "q", "from": "Tue 9:00", "to": "Tue 10:00"}]}
    outermost = {
        place: _without_none(value)
        for place, value in changes.items()
        if not any(place.startswith(f"{other}.") for other in changes)
    }
    try:
        parse_week(week_text({**rows, **outermost}, [HOLD]))
    except InputError as error:
        assert error.problems  # noqa: PT017 - either outcome is right, nothing else is


def _without_none(value: Any) -> Any:
    if isinstance(value, list):
        return [_without_none(one) for one in value if one is not None]
    if isinstance(value, dict):
        return {key: _without_none(one) for key, one in value.items() if one is not None}
    return value
