"""What a week file needs, in the order in which fridge time is agreed on: when, who, the rig now, samples, targets.

Every offer is an invented value of ordinary size that the rig can do.
"""

from __future__ import annotations

from collections.abc import Callable, Generator
from dataclasses import replace
from datetime import date, datetime, time, timedelta
from typing import Any

from planner.clock import zone
from planner.desk.asking import LEFT_OUT, OWN, Parts, Question, Script, count, under
from planner.desk.asking import value as asked_of
from planner.desk.asking_target import target_script
from planner.desk.offers import number, tidy
from planner.files import Rig, Week
from planner.files.model import Table
from planner.files.targets import LockIn
from planner.files.week import (
    Delivery,
    Gate,
    Helium,
    Objective,
    Person,
    Present,
    Sample,
    User,
    WantedEnd,
)

RigReader = Callable[[str], Rig]


def value(model: type[Table], parts: Parts, ask: str, why: str, offer: str = "") -> Question:
    """The question for one key, whose offer is anybody's to replace."""
    return asked_of(model, parts, ask, why, offer, mark=OWN)


def week_script(rig_of: RigReader, rig_offer: str, today: date, zone_offer: str) -> Script:
    """Every question for a week.

    Parameters
    ----------
    rig_of
        Reads the rig file of a relative path; raises ValueError or InputError where it cannot be used.
    rig_offer
        Path of the rig file to offer; nothing where there is none.
    today
        The week offered begins on the Monday after it.
    zone_offer
        Name of the time zone to offer.
    """
    rig = yield from under("The week", _week(rig_of, rig_offer, today, zone_offer))
    yield from under("People", _people(rig))
    yield from under("The rig as the week begins", _present(rig))
    if rig.bath is not None:
        yield from under("Helium", _helium())
    users = yield from under("Who shares the magnet", _users())
    samples = yield from under("Samples", _samples(users))
    yield from under("Targets", _targets(rig, samples))
    yield from under("The rig as the week ends", _end(rig))


def _week(rig_of: RigReader, rig_offer: str, today: date, zone_offer: str) -> Generator[Question, Any, Rig]:
    path = yield _rig_question(rig_of, rig_offer)
    yield value(Week, ("title",), "Title", "It heads every sheet and names its files.", "First week")
    yield _zone_question(zone_offer)
    monday = datetime.combine(today + timedelta(days=7 - today.weekday()), time(8, 30))
    start = yield value(
        Week, ("start",), "Start", "Nothing is planned before it; a wall time of that zone.", f"{monday:%Y-%m-%d %H:%M}"
    )
    end = (start if isinstance(start, datetime) else monday) + timedelta(days=4, hours=9, minutes=30)
    yield value(Week, ("end",), "End", "By then the rig is in its wanted end state.", f"{end:%Y-%m-%d %H:%M}")
    yield value(
        Week,
        ("staffed",),
        "Staffed hours",
        "Transfers, switch work and attended targets happen only then.",
        "Mon-Fri 08:30-18:00",
    )
    return rig_of(path)


def _rig_question(rig_of: RigReader, offer: str) -> Question:
    asked = value(
        Week, ("rig",), "Rig file", "It holds every limit of the plan; a path beside this file or below.", offer
    )

    def read(text: str) -> Any:
        path = asked.read(text)
        rig_of(path)
        return path

    return Question(asked.parts, asked.ask, asked.why, offer, read, "the path of a rig file, such as our.rig.toml")


def _zone_question(offer: str) -> Question:
    asked = value(Week, ("zone",), "Time zone", "Elapsed time stays true when the clocks change.", offer)

    def read(text: str) -> Any:
        zone(text)
        return text

    return Question(asked.parts, asked.ask, asked.why, offer, read, 'an IANA name such as "Europe/Vienna"', mark=OWN)


def _people(rig: Rig) -> Script:
    skills = [rig.bath.transfer.training] if rig.bath is not None else []
    skills += ["switch"] if rig.magnet.switch is not None else []
    wanted = max(1, rig.bath.transfer.people) if rig.bath is not None else 1
    rows = yield count(
        ("people",),
        "People on the roster",
        "With a roster a plan knows who is there; with none, staffed hours will do.",
        wanted,
        0,
        60,
    )
    for row in range(rows):
        at: Parts = ("people", row)
        which = f"Person {row + 1} of {rows}"
        yield value(Person, (*at, "name"), f"{which}: name", "As the sheet shall print it.", f"Operator {row + 1}")
        yield value(
            Person,
            (*at, "trained"),
            f"{which}: trained for",
            "Only trained people are planned for such work.",
            ", ".join(skills) or "-",
        )


def _present(rig: Rig) -> Script:
    at: Parts = ("present",)
    if rig.bath is not None:
        points = rig.bath.calibration
        level = max(points[0].level_percent, min(88.0, points[-1].level_percent))
        why = "Every helium line is judged from it on; give the reading itself."
        yield _needed(value(Present, (*at, "level"), "Level the gauge reads", why, f"{tidy(level)} %"))
    field = yield _needed(value(Present, (*at, "field"), "Field", "The first move starts from it.", "0 T"))
    field_T = number(field, "T")
    coil: Any = LEFT_OUT
    if field_T and rig.magnet.switch is not None:
        coil = yield value(
            Present, (*at, "coil"), "Coil", "Driven by the supply, or persistent with leads down.", "driven"
        )
    if coil == "persistent":
        current = f"{field_T / rig.magnet.field_per_current_T_per_A:.4f} A"
        why = "The switch may be opened only onto the recorded current; say unknown if nobody logged it."
        yield _needed(value(Present, (*at, "persistent_current"), "Logged current", why, current))
    yield value(Present, (*at, "temperature"), "Temperature of the stage", "Warming and cooling start from it.", "base")


def _needed(question: Question) -> Question:
    """The same question, not to be left out."""
    return replace(question, optional=False)


def _helium() -> Script:
    at: Parts = ("helium",)
    yield value(Helium, (*at, "stock"), "Liquid helium in storage vessels", "A transfer can draw no more.", "100 L")
    rows = yield count(
        (*at, "deliveries"), "Deliveries this week", "What arrives can be transferred from then on.", 0, 0, 50
    )
    for row in range(rows):
        which = f"Delivery {row + 1} of {rows}"
        yield value(Delivery, (*at, "deliveries", row, "at"), f"{which}: when", "Not before.", "Wed 10:00")
        yield value(Delivery, (*at, "deliveries", row, "volume"), f"{which}: litres", "In the vessel.", "60 L")


def _users() -> Generator[Question, Any, list[str]]:
    rows = yield count(("users",), "Users or groups", "Each has a letter in every list, and may have slots.", 1, 1, 26)
    names = []
    for row in range(rows):
        at: Parts = ("users", row)
        letter = chr(ord("A") + row)
        which = f"User {row + 1} of {rows}"
        name = yield value(User, (*at, "name"), f"{which}: name", "Their work is listed under it.", f"Group {letter}")
        yield value(
            User, (*at, "letter"), f"{which}: letter", "It marks their work where colour is not enough.", letter
        )
        names.append(name)
    return names


def _samples(users: list[str]) -> Generator[Question, Any, list[dict[str, Any]]]:
    rows = yield count(("samples",), "Samples in this load", "They share one field and one temperature.", 1, 1, 50)
    found = []
    for row in range(rows):
        sample = yield from _sample(("samples", row), f"Sample {row + 1} of {rows}", row, users)
        found += [sample]
    return found


def _sample(at: Parts, which: str, row: int, users: list[str]) -> Generator[Question, Any, dict[str, Any]]:
    sample: dict[str, Any] = {}

    def asked(key: str, ask: str, why: str, offer: str) -> Generator[Question, Any, None]:
        given = yield value(Sample, (*at, key), f"{which}: {ask}", why, offer)
        if given is not LEFT_OUT:
            sample[key] = given

    yield from asked("name", "name", "Targets and gates refer to it.", f"S{row + 1}")
    why = "It comes under the name of a user above."
    sample["user"] = yield _one_of((*at, "user"), f"{which}: user", why, users)
    yield from asked("density", "density", "Every filling becomes a field by it.", "1.1e11 cm^-2")
    yield from asked("density_error", "how well it is known", "Sweeps are widened by it.", "3 %")
    yield from asked("carriers", "carriers", "Holes have their fillings at the other sign of field.", "electrons")
    yield from asked(
        "contacts", "contacts", "The sheet prints them; - leaves them out.", "current 1-5, Rxx 2-3, Rxy 2-8"
    )
    yield from _lockin((*at, "lockin"), which)
    sample["gates"] = yield from _gates(at, which)
    return sample


def _lockin(at: Parts, which: str) -> Script:
    """The output filter; a sample may go without."""
    key: Parts = (*at, "time_constant")
    why = "No sweep may outrun the filter; - for none."
    asked = value(LockIn, key, f"{which}: lock-in time constant", why, "300 ms")

    def puts(given: Any) -> dict[Parts, Any]:
        return {at: LEFT_OUT} if given is LEFT_OUT else {key: given}

    constant = yield replace(asked, optional=True, puts=puts)
    if constant is not LEFT_OUT:
        yield value(LockIn, (*at, "poles"), f"{which}: lock-in poles", "More poles settle more slowly.", "4")


def _gates(at: Parts, which: str) -> Generator[Question, Any, list[dict[str, Any]]]:
    rows = yield count((*at, "gates"), f"{which}: gates", "A gate is never driven out of its window.", 0, 0, 8)
    found = []
    for row in range(rows):
        gate: dict[str, Any] = {}

        def asked(
            key: str, ask: str, why: str, offer: str, row: int = row, gate: dict[str, Any] = gate
        ) -> Generator[Question, Any, None]:
            given = yield value(Gate, (*at, "gates", row, key), f"{which}, gate {row + 1}: {ask}", why, offer)
            if given is not LEFT_OUT:
                gate[key] = given

        name = ("top", "back")[row] if row < 2 else f"gate {row + 1}"
        yield from asked("name", "name", "Targets refer to it.", name)
        yield from asked("lowest", "lowest voltage", "Never below.", "-1 V")
        low_V = number(gate["lowest"], "V")
        yield from asked("highest", "highest voltage", "Never above.", f"{tidy(max(1.0, low_V + abs(low_V)))} V")
        within = low_V <= 0 <= number(gate["highest"], "V")
        yield from asked(
            "rest", "voltage at rest", "It stands there while others measure.", "0 V" if within else gate["lowest"]
        )
        yield from asked("rate", "fastest change", "Leakage and hysteresis set it.", "20 mV/s")
        why = "Fillings then follow the gate; - if not known."
        yield from asked("density_slope", "density per volt", why, "0.4e11 cm^-2/V")
        found.append(gate)
    return found


def _one_of(parts: Parts, ask: str, why: str, names: list[str]) -> Question:
    """One of the names given before."""

    def read(text: str) -> str:
        if text not in names:
            raise ValueError(f"expected one of {', '.join(names)}")
        return text

    return Question(parts, ask, why, names[0], read, "one of " + ", ".join(names))


def _targets(rig: Rig, samples: list[dict[str, Any]]) -> Script:
    why = "What is to be measured; more can come from a spreadsheet later."
    rows = yield count(("targets",), "Targets", why, 3, 1, 200)
    names: list[str] = []
    for row in range(rows):
        sample = samples[0]
        if len(samples) > 1:
            name = yield _one_of(
                ("targets", row, "sample"),
                f"Target {row + 1} of {rows}: sample",
                "Whose work it is.",
                [one["name"] for one in samples],
            )
            sample = next(one for one in samples if one["name"] == name)
        names.append((yield from target_script(rig, sample, row, rows, names)))


def _end(rig: Rig) -> Script:
    at: Parts = ("wanted_end",)
    yield value(WantedEnd, (*at, "field"), "Field", "The last move leads to it.", "0 T")
    why = "The next users inherit it."
    yield value(WantedEnd, (*at, "temperature"), "Temperature of the stage", why, "base")
    if rig.bath is not None:
        why = "It weighs helium against time where they disagree."
        yield value(Objective, ("objective", "hours_per_litre"), "Worth of a litre of helium", why, "0.25 h/L")
