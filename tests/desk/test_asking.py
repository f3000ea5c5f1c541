"""Questions as data: every answer is checked at once, any answers can be completed, files come out whole."""

from __future__ import annotations

import tomllib
from datetime import date
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from planner.checks import check_week
from planner.desk.asking import LEAVE_OUT, MAKER, Asking, Question
from planner.desk.asking_files import NewFile, zone_named
from planner.desk.offers import at_least, between, tidy
from planner.errors import InputError
from planner.files import parse_rig, read_week
from planner.plan import Kind
from tests.builders import DRY, rig_text, week_text
from tests.cli.run import put

EXAMPLES = Path(__file__).parents[2] / "example_plans"
DAY = date(2031, 3, 1)


def new_rig(folder: Path) -> NewFile:
    return NewFile("rig", folder / "new.rig.toml")


def new_week(folder: Path, **rig_changes: Any) -> NewFile:
    put(folder, rig=rig_text(rig_changes))
    return NewFile("week", folder / "new_week.toml", today=DAY)


def asked(asking: Asking) -> Question:
    assert asking.question is not None
    return asking.question


def go_to(asking: Asking, ask: str) -> None:
    """Take offers up to a question."""
    while asked(asking).ask != ask:
        asking.answer("")


def all_questions(asking: Asking) -> list[Question]:
    """Every question when all offers are taken, as it is asked."""
    found = []
    while (question := asking.question) is not None:
        found.append(question)
        asking.answer("")
    return found


def test_every_question_says_why_and_has_an_offer(tmp_path: Path) -> None:
    for made in (new_rig(tmp_path), new_week(tmp_path)):
        for question in all_questions(made.asking):
            assert question.ask
            assert question.heading
            assert question.wanted
            assert question.offer
            assert question.why.endswith(".")
            assert len(question.why) < 140


def test_a_rig_is_asked_for_in_the_order_of_the_trade(tmp_path: Path) -> None:
    headings = dict.fromkeys(question.heading for question in all_questions(new_rig(tmp_path).asking))
    assert list(headings) == ["The rig", "Magnet", "Helium bath", "Stage", "Room", "Site rules"]
    headings = dict.fromkeys(question.heading for question in all_questions(new_week(tmp_path).asking))
    assert list(headings) == [
        *("The week", "People", "The rig as the week begins", "Helium", "Who shares the magnet"),
        *("Samples", "Targets", "The rig as the week ends"),
    ]


def test_offers_follow_the_answers_before_them(tmp_path: Path) -> None:
    asking = new_rig(tmp_path).asking
    go_to(asking, "Rated field")
    asking.answer("5 T")
    go_to(asking, "Row 3 of 3: up to which field")
    assert asked(asking).offer == "5 T"
    go_to(asking, "Highest current of the supply")
    assert asked(asking).offer == "100 A"


@pytest.mark.parametrize(
    ("ask", "answer", "says"),
    [
        ("Name of the rig", "x" * 81, "expected at most 80 characters"),
        ("Is the coil in a helium bath or on a cooler?", "air", "expected one of bath, cooler"),
        ("Rated field", "12", "the unit is missing"),
        ("Rated field", "-12 T", "must be more than 0 T"),
        ("Rated field", LEAVE_OUT, "cannot be left out"),
        ("Rows of the ramp table", "0", "a whole number from 1 to 20"),
        ("Rows of the ramp table", "²", "a whole number from 1 to 20"),
        ("Row 2 of 3: up to which field", "1 T", "must rise from row to row"),
        ("Row 3 of 3: up to which field", "11 T", "ends at 11 T, below the rated field of 12 T"),
        ("Highest current of the supply", "50 A", "the rated field needs 100 A, the supply gives 50 A"),
        ("Resistance of the leads", "60 mohm", "the leads alone take 6 V"),
        ("Level at the top of the coil", "60 %", "expected reserve ≤ coil_top"),
        ("Row 2 of 3: level", "0 %", "level and volume must rise"),
        ("Full at", "101 %", "must be at most 100 percent"),
        ("People at a transfer", "two", "expected a whole number"),
        ("Highest temperature", "10 mK", "must not be below base"),
        ("Hours in which it is done", "mornings", "expected weekdays and times"),
        ("What may move at the same time", "everything", "expected one of field, temperature, gates"),
    ],
)
def test_a_rig_answer_is_checked_at_once(tmp_path: Path, ask: str, answer: str, says: str) -> None:
    asking = new_rig(tmp_path).asking
    go_to(asking, ask)
    before = asking.answers
    with pytest.raises(ValueError, match=r".") as caught:
        asking.answer(answer)
    assert says in str(caught.value)
    assert asking.answers == before
    assert asked(asking).ask == ask


@pytest.mark.parametrize(
    ("ask", "answer", "says"),
    [
        ("Rig file", "other.rig.toml", "there is no such rig file"),
        ("Rig file", "../round.rig.toml", "in the week's folder or below it"),
        ("Time zone", "Vienna", "IANA time zone"),
        ("Start", "Monday", "expected a date and time"),
        ("End", "2031-03-01 08:00", "must be after the start"),
        ("Level the gauge reads", "88", "the unit is missing"),
        ("Temperature of the stage", "-4 K", "must be more than 0 K"),
        ("User 1 of 1: letter", "a", "one capital letter"),
        ("Sample 1 of 1: user", "Group B", "expected one of Group A"),
        ("Sample 1 of 1: density", "1e11", "the unit is missing"),
        ("Target 1 of 3: kind", "nap", "expected one of hold, field sweep"),
        ("Target 2 of 3: range of field or filling, or one filling", "0 T to 11 T", "this rig reaches 10 T"),
        ("Target 2 of 3: range of field or filling, or one filling", "1/3 to 1/4", "this rig reaches 10 T"),
        ("Target 3 of 3: name", "Low-field Hall", "this name is taken already"),
        ("Target 3 of 3: temperature", "3 K", "900 mK"),
        ("Target 3 of 3: after", "Survey", "go round in a circle"),
    ],
)
def test_a_week_answer_is_checked_at_once(tmp_path: Path, ask: str, answer: str, says: str) -> None:
    asking = new_week(tmp_path, **{"stage.highest": "900 mK"}).asking
    go_to(asking, ask)
    with pytest.raises(ValueError, match=r".") as caught:
        asking.answer(answer)
    assert says in str(caught.value)
    assert asked(asking).ask == ask


def test_what_an_answer_means_is_told(tmp_path: Path) -> None:
    asking = new_week(tmp_path).asking
    go_to(asking, "Targets")
    asking.answer("4")
    go_to(asking, "Target 4 of 4: field or filling")
    # B = n h / (e ν): 1.1e15 m^-2 × 4.135 667 696e-15 Wb = 4.549 T (h/e from CODATA 2022), 3 % either way
    assert asking.answer("1") == "= 4.549 T (4.413 … 4.686)"


def test_offers_taken_unseen_are_marked_and_typed_values_are_not(tmp_path: Path) -> None:
    made = new_rig(tmp_path)
    go_to(made.asking, "Rated field")
    made.asking.answer("8 T")
    made.asking.take_offers()
    lines = made.text().splitlines()
    assert 'rated_field = "8 T"' in lines
    assert f'inductance = "18 H" # {MAKER}' in lines
    assert lines[lines.index('rated_field = "8 T"') - 1] == "# No plan goes beyond it."


def test_back_takes_the_last_answer_back(tmp_path: Path) -> None:
    asking = new_rig(tmp_path).asking
    asking.back()
    asking.answer("One")
    asking.answer("cooler")
    asking.back()
    asking.back()
    assert asked(asking).ask == "Name of the rig"
    assert asking.answers == ()


def test_a_branch_not_taken_leaves_nothing_behind(tmp_path: Path) -> None:
    made = new_rig(tmp_path)
    go_to(made.asking, "Is the coil in a helium bath or on a cooler?")
    made.asking.answer("cooler")
    made.asking.take_offers()
    rig = parse_rig(made.text())
    assert rig.bath is None
    assert rig.magnet.switch is None
    assert rig.stage.model is not None


def test_a_week_from_offers_has_no_stop(tmp_path: Path) -> None:
    for changes in ({}, dict(DRY)):
        folder = tmp_path / str(len(changes))
        folder.mkdir()
        made = new_week(folder, **changes)
        made.asking.take_offers()
        made.write()
        kinds = {finding.kind for finding in check_week(read_week(folder / "new_week.toml"))}
        assert not kinds & {Kind.STOP, Kind.POLICY}


@pytest.mark.parametrize("name", ["first_week.toml", "dry_week.toml", "wet_dilution.rig.toml", "dry_insert.rig.toml"])
def test_taking_every_offer_of_a_file_gives_the_same_text(name: str) -> None:
    role = "rig" if ".rig." in name else "week"
    made = NewFile(role, EXAMPLES / "none.toml", start=EXAMPLES / name)  # type: ignore[arg-type]
    made.asking.take_offers()
    assert made.text() == (EXAMPLES / name).read_text(encoding="utf-8")


def test_one_by_one_the_offers_of_a_file_are_its_values() -> None:
    made = NewFile("rig", EXAMPLES / "none.toml", start=EXAMPLES / "dry_insert.rig.toml")
    offers = {question.ask: question.offer for question in all_questions(made.asking)}
    assert offers["Inductance"] == "14 H"
    assert offers["Has it a persistent switch?"] == "no"
    assert offers["Row 2 of 2: fastest ramp"] == "0.10 T/min"
    assert made.text() == (EXAMPLES / "dry_insert.rig.toml").read_text(encoding="utf-8")


def test_a_value_of_the_file_that_no_longer_goes_is_not_offered() -> None:
    made = NewFile("rig", EXAMPLES / "none.toml", start=EXAMPLES / "dry_insert.rig.toml")
    go_to(made.asking, "Rated field")
    made.asking.answer("12 T")
    go_to(made.asking, "Row 2 of 2: up to which field")
    assert asked(made.asking).offer == "12 T"
    made.asking.take_offers()
    assert parse_rig(made.text()).magnet.rated_field_T == 12


def test_rows_fewer_and_more_than_the_file_has(tmp_path: Path) -> None:
    put(tmp_path, rig=rig_text())
    rows = [{"name": name, "kind": "hold", "field": "1 T", "duration": "1 h", "file": name} for name in "ABC"]
    put(tmp_path, **{"old.toml": "# kept\n" + week_text(None, rows)})
    for count, kind in ((2, ""), (4, ""), (3, "field sweep")):
        made = NewFile("week", tmp_path / "new.toml", start=tmp_path / "old.toml", today=DAY)
        go_to(made.asking, "Targets")
        made.asking.answer(str(count))
        made.asking.answer(kind)
        made.asking.take_offers()
        text = made.text()
        targets = tomllib.loads(text)["targets"]
        assert text.startswith("# kept\n")
        assert [row["name"] for row in targets][:3] == ["A", "B", "C"][:count]
        assert len(targets) == count
        assert targets[0].get("file") == (None if kind else "A")
        assert targets[1]["file"] == "B"


def test_where_there_is_no_rig_it_says_so_before_the_first_question(tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"no rig file that can be used here or below \(make one first"):
        NewFile("week", tmp_path / "new_week.toml")


def test_a_file_that_appears_meanwhile_is_not_replaced(tmp_path: Path) -> None:
    made = new_rig(tmp_path)
    made.asking.take_offers()
    (tmp_path / "new.rig.toml").write_text("mine", encoding="utf-8")
    with pytest.raises(InputError, match="is there already"):
        made.write()
    assert (tmp_path / "new.rig.toml").read_text(encoding="utf-8") == "mine"


def altered(draw: st.DrawFn, question: Question) -> str:
    """An answer near the offer: another size, another count, another word, or none."""
    head, _, unit = question.offer.partition(" ")
    try:
        number = float(head)
    except ValueError:
        return draw(
            st.sampled_from(["", LEAVE_OUT, "yes", "no", "cooler", "persistent", "2 to 1", "map", "1/3", "holes"])
        )
    factor = draw(st.sampled_from([0, 0.1, 0.5, 0.99, 1.5, 3, 10, -1]))
    text = f"{number * factor:.6g}"
    return f"{text} {unit}" if unit else str(round(number * factor)) if "." not in head else text


@st.composite
def answers_of(draw: st.DrawFn, made: NewFile) -> None:
    """Answer everything, now and then with something else than the offer; a refused answer falls back on the offer."""
    while (question := made.asking.question) is not None:
        if draw(st.integers(0, 5)) == 0:
            try:
                made.asking.answer(altered(draw, question))
                continue
            except (ValueError, InputError):
                assert made.asking.question == question
        made.asking.answer("")


SLOW = settings(max_examples=6, deadline=None, suppress_health_check=list(HealthCheck))


@SLOW
@given(st.data())
def test_whatever_has_been_answered_the_offers_complete_a_rig(
    tmp_path_factory: pytest.TempPathFactory, data: Any
) -> None:
    made = new_rig(tmp_path_factory.mktemp("rig"))
    data.draw(answers_of(made))
    content = {"format": 1, "kind": "rig", **made.asking.content()}
    assert tomllib.loads(made.text()) == content


@SLOW
@given(st.data())
def test_whatever_has_been_answered_the_offers_complete_a_week(
    tmp_path_factory: pytest.TempPathFactory, data: Any
) -> None:
    made = new_week(tmp_path_factory.mktemp("week"))
    data.draw(answers_of(made))
    content = {"format": 1, "kind": "week", **made.asking.content()}
    assert tomllib.loads(made.text()) == content


@given(st.floats(1e-6, 1e6), st.floats(1.001, 100), st.integers(1, 9))
def test_between_lies_between(low: float, ratio: float, parts: int) -> None:
    assert low < float(between(low, low * ratio, parts)) < low * ratio


@given(st.floats(1e-9, 1e9))
def test_at_least_is_not_below(value: float) -> None:
    assert value * (1 - 1e-9) <= float(at_least(value)) <= value * 1.02
    assert float(tidy(value)) == pytest.approx(value, rel=0.006)


def test_a_zone_that_is_none_gives_way_to_another() -> None:
    assert zone_named("Europe/Lisbon", "Europe/Vienna") == "Europe/Lisbon"
    assert zone_named("nowhere", "Europe/Vienna") == "Europe/Vienna"
    assert zone_named("", "Europe/Vienna") == "Europe/Vienna"
