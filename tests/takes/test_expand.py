"""From targets to takes: repeats, order, what cannot be done, pauses, details, the registry."""

from __future__ import annotations

from planner.files.targets import TARGET_KINDS
from planner.takes import context_of, expand, precedence
from planner.takes.kinds import EXPANDERS
from tests.builders import Changes, request
from tests.takes.wishes import expanded, one_take, seconds, takes_of, wish


def hold(name: str, **keys: object) -> Changes:
    return {**wish("hold", field="1 T", duration="10 min", coil="driven"), "name": name, **keys}


def series(name: str, **keys: object) -> Changes:
    kelvins = ["20 mK", "100 mK"]
    return {**wish("temperature series", field="1 T", temperatures=kelvins, duration="1 min"), "name": name, **keys}


def pairs(*targets: Changes) -> list[tuple[str, str]]:
    context = context_of(request(list(targets)))
    takes, _ = expand(context)
    return [(takes[first].name, takes[later].name) for first, later in precedence(context, takes)]


def test_every_kind_of_target_has_its_way_to_takes() -> None:
    assert set(EXPANDERS) == set(TARGET_KINDS)


def test_repeats() -> None:
    takes = takes_of(hold("H", repeats=3))
    assert [take.name for take in takes] == ["H × 1", "H × 2", "H × 3"]
    assert [seconds(take) for take in takes] == [[600]] * 3
    names = [take.name for take in takes_of(series("S", repeats=2))]
    assert sorted(names) == ["S · 1 × 1", "S · 1 × 2", "S · 2 × 1", "S · 2 × 2"]


def test_names_are_unique_and_takes_come_in_the_files_order() -> None:
    names = [take.name for take in takes_of(hold("B"), series("A", repeats=2), hold("C"))]
    assert len(set(names)) == len(names)
    assert [name[0] for name in names] == ["B", "A", "A", "A", "A", "C"]


def test_after_and_before_join_every_take_with_every_other() -> None:
    assert pairs(hold("A"), hold("B", after=["A"])) == [("A", "B")]
    assert pairs(hold("A", before=["B"]), hold("B")) == [("A", "B")]
    assert pairs(hold("A", before=["B"]), hold("B", after=["A"])) == [("A", "B")]  # said twice, once is enough
    assert set(pairs(series("S"), hold("H", after=["S"], repeats=2))) == {
        ("S · 1", "H × 1"), ("S · 1", "H × 2"), ("S · 2", "H × 1"), ("S · 2", "H × 2"),
    }  # fmt: skip
    assert pairs(hold("A"), hold("B")) == []


def test_what_comes_after_the_impossible_is_impossible_too() -> None:
    takes, cannot = expanded(
        hold("far", field="11 T"),
        hold("next", after=["far"]),
        hold("last"),
        hold("middle", after=["next"], before=["last"]),
        hold("free", before=["far"]),
    )
    assert [take.name for take in takes] == ["free"]
    reasons = {one.ask.name: one.reason for one in cannot}
    assert reasons == {
        "far": "11 T lies at 11.000 T; this rig reaches 10 T",
        "next": 'comes after "far", which cannot be done',
        "middle": 'comes after "next", which cannot be done',
        "last": 'comes after "middle", which cannot be done',
    }
    assert {one.user for one in cannot} == {"U1"}


def test_a_pause_to_look_and_decide_is_a_stretch_of_its_own() -> None:
    (way,) = one_take(hold("H", decide="20 min")).alternatives
    measuring, pause = way.stretches
    assert measuring.needs.people == 0
    assert (pause.label, pause.seconds, pause.needs.people) == ("look, then decide", 1200, 1)
    assert pause.before == pause.after == way.exit
    assert pause.litres > 0
    assert len(one_take(hold("H")).alternatives[0].stretches) == 1


def test_attended_targets_need_somebody() -> None:
    needs = one_take(hold("H", attended=True)).alternatives[0].stretches[0].needs
    assert (needs.people, needs.training) == (1, "")


def test_what_the_sheet_shows_beside_a_take() -> None:
    target = hold("H", excitation="10 nA", file="h1", lockin={"time_constant": "300 ms", "poles": 4})
    week = {"samples.0.contacts": "current 1-5"}
    assert one_take(target, week=week).details == (
        ("excitation", "10 nA"),
        ("contacts", "current 1-5"),
        ("lock-in", "0.3 s, 4-pole"),
        ("file", "h1"),
    )
    own = one_take({**target, "contacts": "current 2-6"}, week=week)
    assert dict(own.details)["contacts"] == "current 2-6"
    assert one_take(hold("H")).details == ()


def test_the_user_is_the_targets_own_or_the_samples() -> None:
    week = {"users": [{"name": "U1", "letter": "A"}, {"name": "U2", "letter": "B"}]}
    assert one_take(hold("H", user="U2"), week=week).user == "U2"
    assert one_take(hold("H"), week=week).user == "U1"


def test_the_load_keeps_its_light_history_and_other_samples_gates_rest() -> None:
    week: Changes = {
        "samples": [
            {"name": "S1", "user": "U1", "density": "2e11 cm^-2",
             "gates": [{"name": "top", "lowest": "-1 V", "highest": "1 V", "rate": "10 mV/s"}]},
            {"name": "S2", "user": "U1", "density": "1e11 cm^-2",
             "gates": [{"name": "top", "lowest": "-1 V", "highest": "1 V", "rate": "10 mV/s", "rest": "-0.7 V"}]},
        ]
    }  # fmt: skip
    way = one_take(hold("H", gates={"top": "0.3 V"}), week=week).alternatives[0]
    assert way.entry.gates_V == (("S1/top", 0.3), ("S2/top", -0.7))
    assert way.entry.light == (("S1", "dark"), ("S2", "dark"))
