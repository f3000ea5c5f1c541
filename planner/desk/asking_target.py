"""What one target of a week needs: its kind first, then where, how long and how."""

from __future__ import annotations

from collections.abc import Generator
from dataclasses import replace
from typing import Any

from planner.desk.asking import LEFT_OUT, OWN, Parts, Question, Script, value
from planner.desk.offers import tidy
from planner.desk.place import value_at
from planner.desk.reach import meant
from planner.desk.values import shown
from planner.files import Rig
from planner.files.targets import TARGET_KINDS, Target

_FIRST = (
    ("other work", "Contacts and leakage"),
    ("field sweep", "Low-field Hall"),
    ("field sweep", "Survey"),
)


class TargetAsker:
    """The questions of one target, given what is known of its rig and sample."""

    def __init__(self, rig: Rig, sample: dict[str, Any], row: int, rows: int, before: list[str]) -> None:
        self.rig = rig
        self.sample = sample
        self.row = row
        self.which = f"Target {row + 1} of {rows}"
        self.before = before
        self.at: Parts = ("targets", row)
        self.known: dict[str, Any] = {"sample": sample["name"]}
        self.field_T = float(rig.magnet.rated_field_T)

    @property
    def model(self) -> type[Target]:
        """The model of its kind."""
        return TARGET_KINDS[self.known["kind"]]

    def ask(self, key: str, ask: str, why: str, offer: str) -> Script:
        """One key; what the rig cannot reach is refused."""
        question = value(self.model, (*self.at, key), f"{self.which}: {ask}", why, offer, mark=OWN)
        given = yield self._within_reach(question, key)
        if given is not LEFT_OUT:
            self.known[key] = given

    def needed(self, key: str, ask: str, why: str, offer: str) -> Script:
        """One key that must be given, whatever the model says."""
        question = value(self.model, (*self.at, key), f"{self.which}: {ask}", why, offer, mark=OWN)
        self.known[key] = yield replace(self._within_reach(question, key), optional=False)

    def _within_reach(self, question: Question, key: str) -> Question:
        def read(text: str) -> Any:
            given = question.read(text)
            found = meant(self.rig, self.sample, self.known, key, given)
            if found is not None and not found.reached:
                raise ValueError(found.text)
            return given

        def says(text: str) -> str:
            found = meant(self.rig, self.sample, self.known, key, question.read(text))
            if found is not None and found.text:
                return f"= {found.text}"
            return question.says(text) if question.says else ""

        return replace(question, read=read, says=says)

    def place(self, ask: str, why: str, offer: str, keys: tuple[str, ...] = ("field", "filling")) -> Script:
        """A field or a filling, or several, whichever is written; unit and commas tell them apart."""
        questions = {key: self._within_reach(value(self.model, (*self.at, key), "", "", ""), key) for key in keys}

        def key_of(text: str) -> str:
            key = "field" if "T" in text else "filling"
            return f"{key}s" if "," in text and f"{key}s" in keys else key

        def read(text: str) -> tuple[str, Any]:
            key = key_of(text)
            return key, questions[key].read(text)

        def says(text: str) -> str:
            key = key_of(text)
            told = questions[key].says
            return told(text) if told else ""

        def puts(found: tuple[str, Any]) -> dict[Parts, Any]:
            others = {(*self.at, key): LEFT_OUT for key in keys if key != found[0]}
            if found[0] in ("fields", "fillings"):
                others[(*self.at, "rungs")] = LEFT_OUT
            return {**others, (*self.at, found[0]): found[1]}

        def holds(data: dict[str, Any]) -> str | None:
            row = value_at(data, self.at)
            return next((shown(row[key]) for key in keys if key in row), None) if isinstance(row, dict) else None

        parts, asked = (*self.at, "field"), f"{self.which}: {ask}"
        wanted = f"a field such as {offer}, or a filling such as " + ("2 to 1" if " to " in offer else "1/3")
        key, given = yield Question(parts, asked, why, offer, read, wanted, False, OWN, puts, holds, says)
        self.known[key] = given

    def direction(self) -> Script:
        """Up, down, both or either."""
        yield from self.ask("direction", "direction", "Both ways show hysteresis and the filter's lag.", "both")

    def temperature(self) -> Script:
        """A temperature for the whole target."""
        why = "base, a value, or a limit such as <= 50 mK."
        yield from self.ask("temperature", "temperature", why, "base")


def target_script(
    rig: Rig, sample: dict[str, Any], row: int, rows: int, before: list[str]
) -> Generator[Question, Any, str]:
    """Every question for one target; gives its name.

    Parameters
    ----------
    sample
        The sample as the file shall hold it.
    before
        Names of the targets already there.
    """
    asker = TargetAsker(rig, sample, row, rows, before)
    kind, name = _FIRST[row] if row < len(_FIRST) else ("hold", "")
    kinds = tuple(one for one in TARGET_KINDS if sample.get("gates") or one not in ("gate sweep", "map"))
    asker.known["kind"] = yield _kind_question(asker, kind, kinds)
    if asker.known["kind"] != kind or not name or name in before:
        name = f"{asker.known['kind'].capitalize()} {row + 1}"
    yield from asker.ask("name", "name", "Plan and sheet call it so.", name)
    yield from _KINDS[asker.known["kind"]](asker)
    yield from asker.ask(
        "priority", "priority, 1 to 5", "5 matters most where not everything fits.", "5" if row < 2 else "3"
    )
    earlier = [one for one in before if "," not in one and ";" not in one]
    if earlier:
        why = "Names of targets that must be done first; - for none."
        yield from asker.ask("after", "after", why, earlier[-1] if row < 3 else earlier[0])
    return str(asker.known["name"])


def _kind_question(asker: TargetAsker, offer: str, kinds: tuple[str, ...]) -> Question:
    parts: Parts = (*asker.at, "kind")
    sample: Parts = (*asker.at, "sample")

    def read(text: str) -> str:
        begun = [one for one in kinds if one.startswith(text.lower())]
        if len(begun) != 1:
            raise ValueError(f"expected one of {', '.join(kinds)}")
        return begun[0]

    why = "Each kind asks for something else: " + ", ".join(kinds) + "."
    wanted = "one of " + ", ".join(kinds)
    ask = f"{asker.which}: kind"
    return Question(parts, ask, why, offer, read, wanted, puts=lambda kind: {parts: kind, sample: asker.sample["name"]})


def _hold(asker: TargetAsker) -> Script:
    yield from asker.place("field or filling", "Where to stay.", f"{tidy(0.5 * asker.field_T, 2)} T")
    yield from asker.temperature()
    yield from asker.ask("duration", "how long", "Settling comes on top.", "1 h")


def _series(asker: TargetAsker) -> Script:
    yield from asker.place("field or filling", "Where to stay.", f"{tidy(0.5 * asker.field_T, 2)} T")
    low, high = float(asker.rig.stage.base_K), float(asker.rig.stage.highest_K)
    steps = [low * (high / low) ** (part / 4) for part in (1, 2, 3)]
    offer = ", ".join(f"{tidy(1e3 * kelvin, 2)} mK" for kelvin in steps)
    yield from asker.ask("temperatures", "temperatures", "One take at each; evenly in 1/T suits a gap.", offer)
    yield from asker.ask("duration", "how long at each", "Settling comes on top.", "20 min")


def _field_sweep(asker: TargetAsker) -> Script:
    low = tidy(min(1.0, 0.95 * asker.field_T), 2)
    offer = f"-{low} T to {low} T" if asker.row < 2 else f"0 T to {tidy(0.95 * asker.field_T, 2)} T"
    yield from asker.place("range of field or filling, or one filling", "What is swept.", offer)
    filling = asker.known.get("filling")
    if filling is not None and not (isinstance(filling, str) and " to " in filling):
        yield from asker.needed("width", "width of the window", "The whole window around that filling.", "0.3 T")
    why = "The magnet and the lock-in may slow it down; - for as fast as they allow."
    yield from asker.ask("rate", "sweep rate", why, "0.1 T/min")
    yield from asker.direction()
    yield from asker.temperature()


def _gate(asker: TargetAsker) -> Script:
    gate = asker.sample["gates"][0]
    yield from asker.ask("gate", "gate", "Which one is swept.", str(gate["name"]))
    chosen = next((one for one in asker.sample["gates"] if one["name"] == asker.known["gate"]), gate)
    yield from asker.ask("sweep", "range", "Within the gate's window.", f"{chosen['lowest']} to {chosen['highest']}")
    yield from asker.ask("points", "points", "Each waits for the lock-in.", "201")
    yield from asker.direction()


def _gate_sweep(asker: TargetAsker) -> Script:
    yield from asker.place("field or filling", "Where to stay.", f"{tidy(0.5 * asker.field_T, 2)} T")
    yield from _gate(asker)
    yield from asker.temperature()


def _map(asker: TargetAsker) -> Script:
    offer = f"0 T to {tidy(0.5 * asker.field_T, 2)} T"
    keys = ("field", "filling", "fields", "fillings")
    yield from asker.place("range of field or filling, or a list", "The rungs lie in it.", offer, keys)
    if "field" in asker.known or "filling" in asker.known:
        yield from asker.needed("rungs", "rungs", "So many fields, one gate sweep at each.", "6")
    yield from _gate(asker)
    yield from asker.temperature()


def _other_work(asker: TargetAsker) -> Script:
    yield from asker.ask("what", "what is done", "The sheet prints it.", "two-wire checks of every contact")
    yield from asker.ask("duration", "how long", "From begin to end.", "40 min")
    yield from asker.ask("field", "field", "The rig is brought there first.", "0 T")
    yield from asker.ask("attended", "must somebody be there", "It is then planned in staffed hours.", "yes")


_KINDS = {
    "hold": _hold,
    "temperature series": _series,
    "field sweep": _field_sweep,
    "gate sweep": _gate_sweep,
    "map": _map,
    "other work": _other_work,
}
