"""``new`` with answers from a pipe: what is asked goes to stderr, the file is written whole or not at all."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest
from click.testing import CliRunner

from planner import open_week, plan_request
from planner.cli import main
from planner.plan import Kind
from tests.builders import rig_text, week_text
from tests.cli.run import put, run


def test_two_conversations_give_a_week_that_plans(tmp_path: Path) -> None:
    rig = run(tmp_path, "new", "rig", "our.rig.toml", answers="Rig of the test\n>\n")
    assert rig.status == 0, rig.err
    assert rig.out == ""
    assert "wrote our.rig.toml" in rig.err
    week = run(tmp_path, "new", "week", "our_week.toml", answers=">\n")
    assert week.status == 0, week.err
    assert "fridgeweek plan our_week.toml" in week.err
    request = open_week(tmp_path / "our_week.toml")
    assert request.rig.name == "Rig of the test"
    plan = plan_request(request, seconds=0.5, reproducible=True)
    assert not [finding for finding in plan.findings if finding.kind in (Kind.STOP, Kind.POLICY)]
    assert {step.target for step in plan.steps if step.target} == {target.name for target in request.week.targets}


def test_without_a_name_it_asks_for_one(tmp_path: Path) -> None:
    ran = run(tmp_path, "new", "rig", answers="mine.toml\n>\n")
    assert ran.status == 0
    assert list(ran.after) == ["mine.toml"]
    assert list(run(tmp_path, "new", "rig", answers="\n>\n").after) == ["mine.toml", "our.rig.toml"]


def test_a_wrong_answer_is_explained_and_asked_again(tmp_path: Path) -> None:
    ran = run(tmp_path, "new", "rig", "r.toml", answers="My rig\n\n12\n12 K\n12 T\n>\n")
    assert ran.status == 0
    assert 'the unit is missing; for example "12 T"' in ran.err
    assert '"K" is not a unit of this kind' in ran.err
    assert ran.err.count("Rated field [12 T]:") == 3
    text = ran.after["r.toml"].decode()
    assert 'rated_field = "12 T"\n' in text  # typed, so not marked
    assert """inductance = "18 H" # offer, put your own maker's number here\n""" in text


def test_an_answer_that_does_not_go_with_an_earlier_one_is_asked_again(tmp_path: Path) -> None:
    answers = ["", "", "12 T", "", "", "2", "6 T", "", "11 T", "12 T", ">"]
    ran = run(tmp_path, "new", "rig", "r.toml", answers="\n".join(answers) + "\n")
    assert ran.status == 0, ran.err
    assert "ramp_table: ends at 11 T, below the rated field of 12 T" in ran.err
    table = tomllib.loads(ran.after["r.toml"].decode())["magnet"]["ramp_table"]
    assert [row["to"] for row in table] == ["6 T", "12 T"]


def test_the_reason_of_each_question_is_said_and_help_on_request(tmp_path: Path) -> None:
    ran = run(tmp_path, "new", "rig", "r.toml", answers="\n\n?\n>\n")
    assert "No plan goes beyond it." in ran.err
    assert "Wanted: a number with its unit, such as 12 T." in ran.err


def test_going_back(tmp_path: Path) -> None:
    ran = run(tmp_path, "new", "rig", "r.toml", answers="One\n<\nTwo\n>\n")
    assert tomllib.loads(ran.after["r.toml"].decode())["name"] == "Two"


@pytest.mark.parametrize("answers", ["", "One\n", "One\n\n12 T\n", "\n" * 20])
def test_answers_that_end_too_soon_leave_nothing(tmp_path: Path, answers: str) -> None:
    ran = run(tmp_path, "new", "rig", "r.toml", answers=answers)
    assert ran.status == 2
    assert ran.out == ""
    assert "The answers ended at " in ran.lines[-1]
    assert ran.lines[-1].endswith("nothing is written.")
    assert ran.after == {}


def test_ctrl_c_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupted(_prompt: str) -> str:
        raise KeyboardInterrupt

    monkeypatch.chdir(tmp_path)
    monkeypatch.setattr("planner.cli.new._read", interrupted)
    ran = CliRunner().invoke(main, ["new", "rig", "r.toml"])
    assert ran.exit_code == 2
    assert ran.stderr.splitlines()[-1] == "Left before the end: nothing is written."
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    ("answer", "says"),
    [
        ("x" * 600, "at most 500 characters, none of them a control"),
        ("x" * 50_000, "at most 500 characters, none of them a control"),
        ("clear \x1b[2J", "at most 500 characters, none of them a control"),
        ("nul \0", "at most 500 characters, none of them a control"),
        ("x" * 81, "expected at most 80 characters"),
    ],
)
def test_odd_answers_are_refused_and_asked_again(tmp_path: Path, answer: str, says: str) -> None:
    ran = run(tmp_path, "new", "rig", "r.toml", answers=f"{answer}\nPlain\n>\n")
    assert ran.status == 0, ran.err
    assert says in ran.err
    assert "\x1b[2J" not in ran.err
    assert tomllib.loads(ran.after["r.toml"].decode())["name"] == "Plain"


def test_answers_that_are_no_text(tmp_path: Path) -> None:
    ran = run(tmp_path, "new", "rig", "r.toml", answers=b"caf\xe9\n>\n")
    assert ran.status == 2
    assert "expected text in UTF-8" in ran.err
    assert ran.after == {}


def test_from_keeps_comments_and_what_is_not_asked(tmp_path: Path) -> None:
    old = "# ours\n" + rig_text({"notes": "kept"}).replace('"name" =', '# the name\n"name" =')
    put(tmp_path, rig=old)
    ran = run(tmp_path, "new", "rig", "new.rig.toml", "--from", "round.rig.toml", answers="Newer rig\n>\n")
    assert ran.status == 0, ran.err
    new = ran.after["new.rig.toml"].decode()
    assert "Name of the rig [Round-number rig]:" in ran.err
    assert new == old.replace("Round-number rig", "Newer rig")
    assert ran.after["round.rig.toml"] == old.encode()


def test_replace_writes_over_the_start_itself(tmp_path: Path) -> None:
    put(tmp_path, rig=rig_text(), week=week_text())
    refused = run(tmp_path, "new", "week", "week.toml", "--from", "week.toml", answers=">\n")
    assert refused.status == 2
    assert "is there already (give another name, or --replace)" in refused.err
    ran = run(tmp_path, "new", "week", "week.toml", "--from", "week.toml", "--replace", answers="\nA newer title\n>\n")
    assert ran.status == 0, ran.err
    assert tomllib.loads(ran.after["week.toml"].decode())["title"] == "A newer title"


def test_what_a_filling_means_is_said_and_what_is_out_of_reach_refused(tmp_path: Path) -> None:
    put(tmp_path, rig=rig_text())
    answers = answers_up_to(tmp_path, "Targets")
    answers += ["4", *answers_up_to(tmp_path, "Target 4 of 4: kind", [*answers, "4"])[len(answers) + 1 :]]
    answers += ["hold", "Fourth", "1/3", "1", ">"]
    ran = run(tmp_path, "new", "week", "w.toml", answers="\n".join(answers) + "\n")
    assert ran.status == 0, ran.err
    # B = n h / (e ν) at the density offered, 1.1e11 cm^-2, with h/e from CODATA 2022: 13.65 T at 1/3, 4.549 T at 1
    assert "lies at 13.648 T; this rig reaches 10 T" in ran.err
    assert "= 4.549 T" in ran.err
    last = tomllib.loads(ran.after["w.toml"].decode())["targets"][-1]
    assert (last["name"], last["kind"], last["filling"]) == ("Fourth", "hold", 1)


def answers_up_to(folder: Path, question: str, answers: list[str] | None = None) -> list[str]:
    """The answers, and empty ones up to a question; each end of answers says which question it stands before."""
    found = list(answers or [])
    while (
        f'"{question}"' not in run(folder, "new", "week", "w.toml", answers="".join(f"{a}\n" for a in found)).lines[-1]
    ):
        found.append("")
    return found
