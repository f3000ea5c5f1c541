"""Broken week and rig files: one clear message, status 2, nothing on stdout, nothing written.

What the messages say is the project's own choice (no source); that such files are met is common practice, no source.
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from tests.builders import DRY, REMOVED, Changes, rig_text, week_text
from tests.cli.run import put, run

HOLD: Changes = {"name": "T1", "kind": "hold", "field": "1 T", "duration": "1 h"}
SWEEP: Changes = {"name": "T1", "kind": "field sweep", "field": "0 T to 1 T", "rate": "0.1 T/min"}
GATES: Changes = {"name": "T1", "kind": "gate sweep", "field": "1 T", "gate": "top", "sweep": "0 V to 1 V", "points": 5}
MAP: Changes = {"name": "T1", "kind": "map", "field": "0 T to 1 T", "rungs": 3, "gate": "top", "sweep": "0 V to 1 V"}


def assert_refused(folder: Path, says: str, *args: str, lines: int = 1) -> None:
    ran = run(folder, *args)
    assert ran.status == 2, ran.err
    assert ran.out == ""
    assert len(ran.lines) == lines, ran.err
    assert says in ran.err
    assert "Traceback" not in ran.err
    assert ran.after == ran.before


WEEKS: list[tuple[str, Any, str]] = [
    ("present.level", "90", "the unit is missing"),
    ("present.level", "90 T", '"T" is not a unit of this kind'),
    ("present.level", 90, "a bare number has no unit"),
    ("present.level", "-1 %", "must be at least 0 percent"),
    ("present.level", "101 %", "must be at most 100 percent"),
    ("present.level", REMOVED, "present.level: is missing"),
    ("present.field", "1e999 T", "the number is too large"),
    ("present.field", "1e30 T", "a size from 1e-09 to 1000 T"),
    ("present.field", "nan T", "expected a quantity such as"),
    ("present.field", "inf T", "expected a quantity such as"),
    ("present.field", "1,5 T", "a decimal point, not a comma"),
    ("present.field", "5 t", "a capital T"),
    ("present.field", "50 kG", "in tesla"),
    ("present.field", "5 T T", "is not a unit of this kind"),
    ("present.field", "5 9**9**9**9", "is not a unit of this kind"),
    ("present.field", "5 ((((((((", "is not a unit of this kind"),
    ("present.temperature", "20 °C", "an absolute temperature in K"),
    ("present.temperature", "20 k", "a capital K"),
    ("present.temperature", "0 K", "must be more than 0 K"),
    ("present.gates", {"S1/tap": "0 V"}, 'did you mean "S1/top"?'),
    ("present.coil", "persistent", "expected the logged current"),
    ("start", "2031-03-30T02:30", "the clocks go forward over it"),
    ("start", "2031-10-26T02:30", "happens twice in Europe/Vienna"),
    ("start", "Monday", "expected a date and time"),
    ("start", "2031-02-30T08:00", "expected a date and time"),
    ("start", "1066-10-14T08:00", "expected a year from 1970 to 2199"),
    ("start", REMOVED, "start: is missing"),
    ("end", "2031-03-03T08:00", "must be after the start"),
    ("end", "2031-03-01T08:00", "must be after the start"),
    ("end", "2032-03-03T08:00", "a plan spans ten weeks at most"),
    ("zone", "Europe/Vien", "expected an IANA time zone"),
    ("zone", "../../etc/passwd", "expected an IANA time zone"),
    ("rig", "../round.rig.toml", "in the week's folder or below it"),
    ("rig", "/etc/hostname", "in the week's folder or below it"),
    ("rig", "round.rog.toml", 'did you mean "round.rig.toml"?'),
    ("rig", "week.toml", "expected a rig file"),
    ("staffed.0.from", "8 o'clock", "expected a time of day"),
    ("staffed.0.from", "25:00", "expected a time of day"),
    ("staffed.0.days", "Mo-Fr", "expected weekdays"),
    ("staffed.0.until", "18:00", 'staffed[0].until: unknown key'),
    ("users.0.letter", "AB", "expected one capital letter"),
    ("users.0.slots", [{"from": "Wed 10:00", "to": "Tue 10:00"}], "must end after it begins"),
    ("users.0.slots", [{"from": "Tue 10:00", "to": "Tue 10:00"}], "must end after it begins"),
    ("users.0.slots", [{"from": f"Tue 1{n}:00", "to": "Wed 10:00"} for n in (0, 1)], "the magnet can be promised once"),
    ("users.0.slots", [{"from": "Sun 99:00", "to": "Sun 10:00"}], "expected a time of day"),
    ("samples.0.user", "U2", "expected a user of this file"),
    ("samples.0.density", "2e11 cm^-3", '"cm^-3" is not a unit of this kind'),
    ("samples.0.density", "-2e11 cm^-2", "must be more than 0"),
    ("samples.0.density_error", "80 %", "must be at most 50 percent"),
    ("samples.0.gates.0.lowest", "2 V", "expected lowest ≤ rest ≤ highest"),
    ("samples.0.gates.0.rate", "10 mV", '"mV" is not a unit of this kind'),
    ("samples.0.gates.1.name", "top", "this name is taken already"),
    ("helium", {"stock": "100 K"}, '"K" is not a unit of this kind'),
    ("helium", {"deliveries": [{"at": "some day", "volume": "60 L"}]}, "expected a date and time"),
    ("quiet", [{"name": "q", "from": "Tue 20:00", "to": "Tue 06:00"}], "must end after it begins"),
    ("people", [{"name": "P"}, {"name": "P"}], "this name is taken already"),
    ("title", "", "expected at least 1 characters"),
    ("title", "clear \x1b[2J", "without control characters"),
    ("title", "turned \u202e", "without control characters"),
    ("format", 2, "reads formats up to 1"),
    ("format", "1", "expected the file format version"),
    ("format", 0, "no way is known to bring this format up to date"),
    ("kind", "weak", "expected 'week'"),
    ("targtes", [], 'did you mean "targets"?'),
    ("targets", "all of them", "expected a list, in [ ]"),
]  # fmt: skip


@pytest.mark.parametrize(("place", "value", "says"), WEEKS, ids=[f"{place}: {says}"[:60] for place, _, says in WEEKS])
def test_broken_weeks(tmp_path: Path, place: str, value: Any, says: str) -> None:
    put(tmp_path, week=week_text({place: value}), rig=rig_text())
    assert_refused(tmp_path, says, "check", "week.toml")


TARGETS: list[tuple[Changes, Changes, str]] = [
    (HOLD, {"duration": "3 h 20 min"}, 'write "200 min"'),
    (HOLD, {"duration": "90 m"}, "minutes are written min"),
    (HOLD, {"duration": "90"}, "the unit is missing"),
    (HOLD, {"duration": "-1 h"}, "must be more than 0 s"),
    (HOLD, {"duration": "1e300 h"}, "a size from"),
    (HOLD, {"duration": float("nan")}, "expected a finite number"),
    (HOLD, {"duration": float("inf")}, "expected a finite number"),
    (HOLD, {"priority": 6}, "expected at most 5"),
    (HOLD, {"priority": 2.5}, "expected a whole number"),
    (HOLD, {"priority": 10**30}, "at most 64 bits"),
    (HOLD, {"must": "perhaps"}, "expected true or false"),
    (HOLD, {"repeats": 5000}, "expected at most 100"),
    (HOLD, {"durration": "1 h"}, 'did you mean "duration"?'),
    (HOLD, {"kind": "holt"}, 'did you mean "hold"?'),
    (HOLD, {"kind": REMOVED}, "expected a kind of target"),
    (HOLD, {"sample": "S9"}, "expected a sample of this file"),
    (HOLD, {"after": ["T9"]}, "expected a target of this file"),
    (HOLD, {"after": ["T1"]}, "go round in a circle"),
    (HOLD, {"field": REMOVED}, "expected either `field` or `filling`"),
    (HOLD, {"filling": 1}, "expected either `field` or `filling`"),
    (HOLD, {"field": REMOVED, "filling": "1/0"}, "the denominator is zero"),
    (HOLD, {"field": REMOVED, "filling": 0}, "not zero"),
    (HOLD, {"field": REMOVED, "filling": "1e-9"}, "of a size from"),
    (HOLD, {"temperature": "≤ 50"}, "the unit is missing"),
    (HOLD, {"temperature": "-5 mK"}, "above 0 K"),
    (HOLD, {"gates": {"tip": "0 V"}}, 'did you mean "top"?'),
    (HOLD, {"windows": [{"from": "Tue 20:00"}]}, "windows[0].to: is missing"),
    (HOLD, {"hours": [{"days": "daily", "from": "20:00", "to": "late"}]}, "expected a time of day"),
    (SWEEP, {"rate": "-0.1 T/min"}, "must be more than 0 T/s"),
    (SWEEP, {"rate": "0.1 T"}, '"T" is not a unit of this kind'),
    (SWEEP, {"field": "1 T to 1 T"}, "the two ends are the same"),
    (SWEEP, {"field": "1 T"}, "expected a range"),
    (SWEEP, {"field": REMOVED, "filling": "-1 to 1"}, "both ends need the same sign"),
    (SWEEP, {"field": REMOVED, "filling": 1}, "needs its `width`"),
    (SWEEP, {"rate": REMOVED, "feature": "20 mT"}, "only together with the lock-in's time constant"),
    (GATES, {}, "give a dwell a point, or a lock-in"),
    (GATES, {"dwell": "1 s", "points": 1}, "expected at least 2"),
    (GATES, {"dwell": "1 s", "points": 10**6}, "expected at most 100000"),
    (
        GATES,
        {"dwell": "1 s", "points": 10**5, "second_gate": "back", "second_sweep": "0 V to 1 V", "second_points": 10**4},
        "10000000 points in all",
    ),
    (GATES, {"dwell": "1 s", "second_gate": "back"}, "needs `second_gate`, `second_sweep` and `second_points`"),
    (MAP, {"dwell": "1 s", "points": 5, "rungs": REMOVED}, "`rungs` goes with a range"),
    (MAP, {"dwell": "1 s", "points": 5, "rungs": 1000, "repeats": 100}, "100000 takes: a week holds 2000 at most"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("target", "changes", "says"),
    TARGETS,
    ids=[f"{next(iter(change), target['kind'])}: {says}"[:60] for target, change, says in TARGETS],
)
def test_broken_targets(tmp_path: Path, target: Changes, changes: Changes, says: str) -> None:
    row = {key: value for key, value in {**target, **changes}.items() if value is not REMOVED}
    text = week_text(None, [row]).replace("NaN", "nan").replace("Infinity", "inf")
    put(tmp_path, week=text, rig=rig_text())
    assert_refused(tmp_path, says, "check", "week.toml")


def test_a_circle_of_three(tmp_path: Path) -> None:
    rows = [{**HOLD, "name": name, "after": [other]} for name, other in ("AB", "BC", "CA")]
    put(tmp_path, week=week_text(None, rows), rig=rig_text())
    assert_refused(tmp_path, "`after` and `before` go round in a circle", "check", "week.toml")


RIGS: list[tuple[Changes, str]] = [
    ({"magnet.rated_field": "12 K"}, '"K" is not a unit of this kind'),
    ({"magnet.rated_field": float("nan")}, "expected a finite number"),
    ({"magnet.rated_field": "12 T"}, "below the rated field of 12 T"),
    ({"magnet.ramp_table.1.rate": "-1 T/min"}, "must be more than 0 T/s"),
    ({"magnet.ramp_table.1.rate": "0 T/min"}, "must be more than 0 T/s"),
    ({"magnet.ramp_table.1.to": "5 T"}, "must rise from row to row"),
    ({"magnet.ramp_table": []}, "expected at least 1 of them"),
    ({"magnet.ramp_table": [{"to": f"{n} mT", "rate": "1 T/min"} for n in range(1, 200)]}, "at most 100 of them"),
    ({"magnet.supply.max_current": "10 A"}, "the rated field needs 100 A"),
    ({"magnet.supply.max_voltage": "0.1 V"}, "the leads alone take"),
    ({"magnet.supply": REMOVED}, "magnet.supply: is missing"),
    ({"magnet.switch.heater": "5 mA"}, "magnet.switch.heater: unknown key"),
    ({"bath.calibration.1.level": "0 %"}, "level and volume must rise"),
    ({"bath.lines.reserve": "60 %"}, "expected reserve ≤ coil_top ≤ at_field ≤ start_ramp"),
    ({"bath.losses.static": "-0.1 L/h"}, "must be at least 0 L/s"),
    ({"bath.transfer.efficiency": "0 %"}, "must be more than 0 percent"),
    ({"bath.transfer.people": 0}, "expected at least 1"),
    ({"bath": REMOVED}, "expected one of the tables [bath] and [cooler]"),
    ({"stage.base": "2 K"}, "highest: must not be below base"),
    ({"stage.cooling.2.time": "1 min"}, "times must not fall"),
    ({"room": {"volume": "0 m^3"}}, "must be more than 0"),
    ({"policies": {"together": ["everything"]}}, "expected 'field', 'temperature' or 'gates'"),
    ({"name": "x" * 81}, "expected at most 80 characters"),
    ({"notes": "bell \x07"}, "without control characters"),
    ({"kind": "week"}, "expected a rig file"),
    (DRY, "this rig has no helium bath"),
]  # fmt: skip


@pytest.mark.parametrize(("changes", "says"), RIGS, ids=[f"{next(iter(change))}: {says}"[:60] for change, says in RIGS])
def test_broken_rigs(tmp_path: Path, changes: Changes, says: str) -> None:
    put(tmp_path, week=week_text(), rig=rig_text(changes).replace("NaN", "nan"))
    assert_refused(tmp_path, says, "check", "week.toml")


BYTES: list[tuple[str, bytes, str]] = [
    ("empty", b"", "the file is empty"),
    ("a remark only", b"# later\n", "the file is empty"),
    ("not UTF-8", week_text().encode().replace(b"A test week", b"A t\xe9st week"), "expected text in UTF-8"),
    ("UTF-16", week_text().encode("utf-16"), "expected text in UTF-8"),
    ("NUL", week_text().encode() + b"\0", "not valid TOML"),
    ("cut short", week_text().encode()[:-40], "not valid TOML"),
    ("a key twice", week_text().encode() + b'"title" = "again"\n', "not valid TOML"),
    ("JSON", b'{"format": 1, "kind": "week"}', "not valid TOML"),
    ("nested too deep", week_text().encode() + b"x = " + b"[" * 5000, "not valid TOML"),
    ("nested deep", week_text().encode() + b"x = " + b"[" * 50 + b"]" * 50, "at most 12 deep"),
    ("a key of many parts", week_text().encode() + b"\n[" + b"a." * 5000 + b"a]", "a key has more than 12 parts"),
    ("a long number", week_text().encode() + b"x = " + b"1" * 9000, "not valid TOML"),
    ("a long hex number", week_text().encode() + b"x = 0x" + b"f" * 9000, "at most 64 bits"),
    ("a long text", week_text({"samples.0.contacts": "1" * 6000}).encode(), "6000 characters: expected at most 5000"),
]


@pytest.mark.parametrize(("content", "says"), [row[1:] for row in BYTES], ids=[row[0] for row in BYTES])
@pytest.mark.parametrize("role", ["week", "rig"])
def test_broken_bytes(tmp_path: Path, role: str, content: bytes, says: str) -> None:
    put(tmp_path, **{"week": week_text(), "rig": rig_text(), role: content})
    ran = run(tmp_path, "check", "week.toml")
    assert ran.status == 2
    assert ran.out == ""
    assert says in ran.err
    assert len(ran.lines) == 1, ran.err
    assert ran.after == ran.before


@pytest.mark.parametrize("command", [("check",), ("plan",), ("plan", "-o", "out")])
def test_every_command_refuses_a_broken_week_alike(tmp_path: Path, command: tuple[str, ...]) -> None:
    put(tmp_path, week=week_text({"present.level": "90"}), rig=rig_text())
    assert_refused(tmp_path, 'week.toml: present.level is "90"', command[0], "week.toml", *command[1:])


def test_all_that_is_wrong_is_said_in_one_go(tmp_path: Path) -> None:
    put(tmp_path, week=week_text({"present.level": "90", "zone": "Vienna"}), rig=rig_text({"magnet.inductance": "18"}))
    assert_refused(tmp_path, "round.rig.toml: magnet.inductance", "check", "week.toml", lines=3)


def test_a_message_cannot_steer_the_terminal(tmp_path: Path) -> None:
    put(tmp_path, week=week_text({"zone": "\x1b[2J\x1b]0;own\x07\u202e"}), rig=rig_text())
    ran = run(tmp_path, "check", "week.toml")
    assert ran.status == 2
    assert r"\x1b[2J" in ran.err
    assert all(sign.isprintable() or sign == "\n" for sign in ran.err)
