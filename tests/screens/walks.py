"""Random walks over all places: 40 keys each, the same for the same seed.

``python -m tests.screens.walks [COUNT] [FIRST_SEED]`` walks 500 times by default and prints how many keys were pressed,
how many edits were made, and the seconds it took. The tests walk a few times.

After each walk: nothing was raised; unsaved work is kept word for word; undo leads back to the very text that was
opened, redo to the very text that was left.
"""

from __future__ import annotations

import random
import sys
import tempfile
import time
from dataclasses import dataclass
from pathlib import Path

from textual.widgets import Input

from planner.screens.field_sheet import FieldSheet, Lines
from tests.screens.sitting import LARGE, SMALL, Sitting, run, session_in, sitting

KEYS = 40

MOVES = ("up", "down", "left", "right", "home", "end", "tab", "shift+tab", "pageup", "pagedown", "enter", "escape")
PLACES = ("f2", "f3", "f4", "f5", "f6", "f7", "f8")
EDITS = ("a", "c", "d", "n", "space", "backspace", "shift+up", "shift+down", "u", "r", "ctrl+s", "ctrl+t")
PLAN = ("s", "x", "plus", "minus", "0", "f", "g", "f1", "ctrl+p", "ctrl+o")
TEXTS = (
    "12 T",
    "1/3",
    "0.2 T/min",
    "50 mK",
    "base",
    "20 min",
    "2",
    "1.1e11 cm^-2",
    "yes",
    "9 T",
    "x y",
    "-1 T to 1 T",
    "é",
)


@dataclass(frozen=True, slots=True)
class Walked:
    """What a walk came to."""

    seed: int
    pressed: tuple[str, ...]
    edits: int


def walk(seed: int, folder: Path, keys: int = KEYS) -> Walked:
    """Walk once; raises AssertionError, or what the program raised, where it went wrong."""
    return run(_walk(seed, folder, keys))


async def _walk(seed: int, folder: Path, keys: int) -> Walked:
    chance = random.Random(seed)
    session = session_in(folder)
    start = session.document.texts
    pressed: list[str] = []
    edits = 0
    async with sitting(session, chance.choice((SMALL, LARGE))) as user:
        while len(pressed) < keys:
            before = user.session.document.texts
            for key in _next_keys(chance, user):
                pressed.append(key)
                await _press(user, key)
            edits += user.session.document.texts != before
            if user.session is not session:  # a file was opened
                session = user.session
                start = session.document.texts
                assert session.document.undoable == 0
        await _come_home(user)
        document = session.document
        last = document.texts
        draft = session.remembered.draft(document.week_path)
        if document.changed:
            assert draft is not None, pressed
            assert draft.texts == last, pressed
        else:
            assert draft is None, pressed
        steps = document.undoable
        for _ in range(steps):
            assert session.undo(), pressed
        assert not session.undo(), pressed
        assert document.texts == start, pressed
        for _ in range(steps):
            assert session.redo(), pressed
        assert document.texts == last, pressed
        await user.keys("f5")
        assert "[Targets]" in user.text(), pressed
    return Walked(seed, tuple(pressed), edits)


def _next_keys(chance: random.Random, user: Sitting) -> list[str]:
    kind = chance.choices((MOVES, PLACES, EDITS, PLAN, TEXTS), weights=(30, 10, 30, 8, 22))[0]
    if kind is EDITS:
        return [*(["escape"] * chance.choice((0, 2))), chance.choice(EDITS)]
    if kind is not TEXTS:
        return [chance.choice(kind)]
    text = chance.choice([*_wanted(user), *_wanted(user), *TEXTS])
    return ["enter", f"'{text}'", chance.choice(("enter", "enter", "tab", "escape"))]


async def _press(user: Sitting, key: str) -> None:
    """Press a key; a text in quotes is put into the line that is typed into, as one stroke."""
    if not key.startswith("'"):
        await user.pilot.press(key)
    elif isinstance(user.app.focused, Input):
        user.app.focused.value = key[1:-1]
        await user.pilot.pause()


def _wanted(user: Sitting) -> list[str]:
    """What the line under the cursor would take: its choices, or its examples."""
    focused = user.app.focused
    sheet = focused.parent if isinstance(focused, Lines) else None
    row = sheet.row if isinstance(sheet, FieldSheet) else None
    if row is None:
        return []
    return list(row.choices) or row.wanted.rpartition("such as ")[2].split(" or ")


async def _come_home(user: Sitting) -> None:
    """Close whatever is open, and let the solve end."""
    user.session.stop_solve()
    while len(user.app.screen_stack) > 1:
        await user.keys("escape")
    await user.keys("escape")
    await user.solved()


def main(count: int, first: int) -> None:
    """Walk so many times."""
    began, pressed, edits = time.monotonic(), 0, 0
    for seed in range(first, first + count):
        with tempfile.TemporaryDirectory() as folder:
            try:
                walked = walk(seed, Path(folder))
            except BaseException:
                print(f"walk {seed} went wrong", file=sys.stderr)
                raise
        pressed, edits = pressed + len(walked.pressed), edits + walked.edits
    print(f"{count} walks, {pressed} keys, {edits} edits, {time.monotonic() - began:.0f} s")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 500, int(sys.argv[2]) if len(sys.argv) > 2 else 0)
