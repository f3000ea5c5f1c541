"""Questions as data: ask for a rig or a week in order, check every answer at once, and give the file's content.

A script is a generator that yields a `Question` and is sent the answer's value. After every answer the script is run to
its end with offers for whatever is not answered yet, and the whole is read as a file would be: an answer that does not
go with those before it is refused where it is given.
"""

from __future__ import annotations

import copy
from collections.abc import Callable, Generator, Mapping
from dataclasses import dataclass, replace
from itertools import pairwise
from typing import Any

from planner.desk.fields import Field, FieldKind, fields_of
from planner.desk.place import Part, Place, value_at
from planner.desk.values import explain, shown, wanted
from planner.errors import Problem, printable
from planner.files import Rig, Week
from planner.files.model import Table

Parts = tuple[Part, ...]
Script = Generator["Question", Any, None]
Judge = Callable[[dict[str, Any]], list[Problem]]

LEAVE_OUT = "-"
MAKER = "offer, put your own maker's number here"
MEASURED = "offer, put your own measured number here"
OWN = "offer, put your own here"
LONGEST_ANSWER = 500


class LeftOut:
    """The value of a key that is not to be in the file."""

    def __repr__(self) -> str:
        return "LEFT_OUT"


LEFT_OUT = LeftOut()


@dataclass(frozen=True, slots=True)
class Question:
    """One thing to be known.

    Attributes
    ----------
    parts
        Keys and row numbers of the place in the file.
    ask, why
        What is asked, and one sentence on why.
    offer
        The text that an empty answer stands for; nothing where an answer is needed.
    read
        From an answer's text to its value; raises ValueError with what was wanted.
    wanted
        What an answer looks like.
    optional
        Whether ``-`` leaves it out.
    mark
        What the file says beside an offer that was taken unseen.
    puts
        Where the value goes, if it is not simply put at ``parts``.
    holds
        What a file answers, if that is not simply the text at ``parts``.
    says
        What an answer's text means, where that is worth saying.
    heading
        The part of the conversation it belongs to.
    kept
        The value that stands for the offer, where the offer is what a file holds already.
    """

    parts: Parts
    ask: str
    why: str
    offer: str
    read: Callable[[str], Any]
    wanted: str
    optional: bool = False
    mark: str = ""
    puts: Callable[[Any], Mapping[Parts, Any]] | None = None
    holds: Callable[[dict[str, Any]], str | None] | None = None
    says: Callable[[str], str] | None = None
    heading: str = ""
    kept: Any = None

    def value_of(self, text: str) -> Any:
        """The value of a text; raises ValueError."""
        if not text and self.optional:
            return LEFT_OUT
        if text == LEAVE_OUT:
            if self.optional:
                return LEFT_OUT
            raise ValueError(f"cannot be left out: {self.wanted}")
        if not text:
            raise ValueError(f"an answer is needed: {self.wanted}")
        return self.read(text)

    @property
    def offered(self) -> Any:
        """The value of the offer; raises ValueError where there is none."""
        return self.value_of(self.offer) if self.kept is None else self.kept

    def places(self, value: Any) -> Mapping[Parts, Any]:
        """Where the value goes in the file."""
        return {self.parts: value} if self.puts is None else self.puts(value)


@dataclass(frozen=True, slots=True)
class Answer:
    """A question, its value, and whether the offer was taken as it stood."""

    question: Question
    value: Any
    unseen: bool


def value(
    model: type[Table], parts: Parts, ask: str, why: str, offer: str = "", *, mark: str = "", own_key: Parts = ()
) -> Question:
    """The question for one key of a table; what it takes is read from the model.

    ``own_key`` is the key inside the model where that is not the last of ``parts``.
    """
    field = field_at(model, own_key or (parts[-1],))

    def read(text: str) -> Any:
        found = explain(field, text)
        if not found.usable:
            raise ValueError(found.message)
        return found.value

    marked = MAKER if field.kind is FieldKind.QUANTITY else OWN

    def says(text: str) -> str:
        return explain(field, text).message

    optional = not field.required
    told = wanted(field) or "text of one line"
    return Question(parts, ask, why, offer, read, told, optional, mark or marked, says=says)


def field_at(model: type[Table], key: Parts) -> Field:
    """The field of a table under a key."""
    return next(field for field in fields_of(model) if field.parts == key)


def count(parts: Parts, ask: str, why: str, offer: int, least: int, most: int) -> Question:
    """How many rows a list has; the value is their number."""

    def read(text: str) -> int:
        if text.isascii() and text.isdigit() and len(text) < 6 and least <= int(text) <= most:
            return int(text)
        raise ValueError(f"expected a whole number from {least} to {most}")

    def holds(data: dict[str, Any]) -> str | None:
        return str(len(value_at(data, parts) or ())) if has_table(data, parts) else None

    whole = f"a whole number from {least} to {most}"
    return Question(parts, ask, why, str(offer), read, whole, puts=lambda number: {parts: Rows(number)}, holds=holds)


def has_table(data: dict[str, Any], parts: Parts) -> bool:
    """Whether a file has a say in a key: the table that may hold it is there, or may be left out as a whole."""
    above = parts[:-2] if "lockin" in parts[-2:-1] else parts[:-1]
    if isinstance(value_at(data, above), dict):
        return True
    model = Week if data.get("kind") == "week" else Rig
    return len(parts) == 2 and isinstance(model.model_fields[str(parts[0])].default, Table)


def choice(
    ask: str,
    why: str,
    offer: str,
    choices: tuple[str, ...],
    puts: Callable[[str], Mapping[Parts, Any]],
    holds: Callable[[dict[str, Any]], str | None],
) -> Question:
    """One of several words, each of which means something else for the file."""

    def read(text: str) -> str:
        begun = [one for one in choices if one.startswith(text.lower())]
        if len(begun) != 1 and text.lower() not in choices:
            raise ValueError(f"expected one of {', '.join(choices)}")
        return text.lower() if text.lower() in choices else begun[0]

    return Question((), ask, why, offer, read, "one of " + ", ".join(choices), puts=puts, holds=holds)


def under(heading: str, script: Generator[Question, Any, Any]) -> Generator[Question, Any, Any]:
    """A script's questions under a heading; gives what the script gives."""
    try:
        question = next(script)
        while True:
            question = script.send((yield replace(question, heading=heading)))
    except StopIteration as end:
        return end.value


class Asking:
    """A conversation: the current question, the answers so far, and the content they make.

    Parameters
    ----------
    script
        Makes the generator of questions anew.
    judge
        Says what is wrong with the content of a whole file; nothing where it can be used.
    start
        Content of an existing file: its values are the offers, and what is not asked for is kept.
    """

    def __init__(self, script: Callable[[], Script], judge: Judge, start: dict[str, Any] | None = None) -> None:
        self._script = script
        self._judge = judge
        self._start = start or {}
        self._answers: list[Answer] = []
        self._current = self._next()

    @property
    def question(self) -> Question | None:
        """The question to be answered now, with its offer; None at the end."""
        return self._current

    @property
    def answers(self) -> tuple[Answer, ...]:
        """What has been answered."""
        return tuple(self._answers)

    def answer(self, text: str) -> str:
        """Take an answer; an empty one takes the offer.

        Returns
        -------
        str
            What the answer means, where that is worth saying.

        Raises
        ------
        ValueError
            If it is not what is wanted, or does not go with the answers before it. The question then stays.
        """
        question = self._current
        if question is None:
            raise ValueError("everything is answered")
        if len(text) > LONGEST_ANSWER or not text.isprintable():
            most = f"at most {LONGEST_ANSWER} characters, none of them a control character"
            raise ValueError(f"expected one line of {most}: {question.wanted}")
        text = text.strip()
        answer = Answer(question, question.value_of(text) if text else question.offered, unseen=not text)
        if problems := self._problems([*self._answers, answer]):
            raise ValueError("; ".join(_told(problem, question.parts) for problem in problems[:3]))
        self._answers.append(answer)
        self._current = self._next()
        return question.says(text) if text and text != LEAVE_OUT and question.says else ""

    def back(self) -> None:
        """Take the last answer back."""
        if self._answers:
            self._answers.pop()
            self._current = self._next()

    def take_offers(self) -> None:
        """Answer everything that is left with the offers.

        Raises
        ------
        ValueError
            If a question is left that has no offer; the conversation then stands before it.
        """
        for held in (True, False):
            try:
                whole = self._completed(self._answers, held=held)
            except ValueError:
                continue
            if not self._judge(self._content(whole)):
                self._answers, self._current = whole, None
                return
        while self._current is not None:
            self.answer("")

    def content(self) -> dict[str, Any]:
        """What the answers make of the file, every key in the order of the questions."""
        return self._content(self._answers)

    # One run through the script

    def _content(self, answers: list[Answer]) -> dict[str, Any]:
        data = copy.deepcopy(self._start)
        for answer in answers:
            for parts, put in answer.question.places(answer.value).items():
                _put(data, parts, put)
        return data

    def _completed(self, answers: list[Answer], *, held: bool) -> list[Answer]:
        """The answers with offers for all that is not answered: those of the file, or the general ones."""
        script = self._script()
        question = next(script)
        whole = list(answers)
        try:
            for answer in answers:
                question = script.send(answer.value)
            while True:
                question = self._held(question) if held else question
                whole.append(Answer(question, question.offered, unseen=True))
                question = script.send(whole[-1].value)
        except StopIteration:
            return whole

    def _problems(self, answers: list[Answer]) -> list[Problem]:
        """What is wrong with these answers, whatever may follow; the start file's values are tried first."""
        problems: list[Problem] = []
        for held in (True, False) if self._start else (False,):
            problems = self._judge(self._content(self._completed(answers, held=held)))
            if not problems:
                return []
        return problems

    def _held(self, question: Question) -> Question:
        """The question with what the start file says here as its offer; as it is where that says nothing usable."""
        found = None
        if not self._start:
            return question
        if question.holds is not None:
            text = question.holds(self._start) or ""
        else:
            found = value_at(self._start, question.parts)
            text = (
                LEAVE_OUT
                if found is None and question.optional and has_table(self._start, question.parts)
                else shown(found)
            )
        try:
            value = question.value_of(text) if text else None
        except ValueError:
            return question
        if value is None:
            return question
        return replace(question, offer=text, mark="", kept=value if found is None else found)

    def _next(self) -> Question | None:
        script = self._script()
        try:
            question = next(script)
            for answer in self._answers:
                question = script.send(answer.value)
        except StopIteration:
            return None
        held = self._held(question)
        if held is not question and self._problems([*self._answers, Answer(held, held.offered, unseen=True)]):
            return question
        return held


def _told(problem: Problem, parts: Parts) -> str:
    """A problem as the answer to a question: its place is said where it is another one."""
    place = "" if problem.where == Place("week", parts).where else f"{problem.where}: "
    hint = f" ({problem.hint})" if problem.hint else ""
    return printable(f"{place}{problem.expected}{hint}")


def _put(data: dict[str, Any], parts: Parts, put: Any) -> None:
    """Put a value under its place; tables and rows on the way are made, a target of another kind begins anew."""
    table: Any = data
    put = LEFT_OUT if isinstance(put, Rows) and not put.number else put
    for part, following in pairwise(parts):
        if isinstance(part, int):
            while len(table) <= part:
                table.append({})
            table = table[part]
        else:
            if put is LEFT_OUT and part not in table:
                return
            table = table.setdefault(part, [] if isinstance(following, int) else {})
    last = parts[-1]
    if put is LEFT_OUT:
        table.pop(last, None)
        return
    if isinstance(put, Rows):
        del table.setdefault(last, [])[put.number :]
        return
    if last == "kind" and parts[0] == "targets" and table.get("kind", put) != put:
        table.clear()
    table[last] = put


@dataclass(frozen=True, slots=True)
class Rows:
    """As a value that is put: a list keeps no more rows than this."""

    number: int
