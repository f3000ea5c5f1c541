"""Every place as text, on the smallest and on a good screen, in the dark look and under NO_COLOR.

The texts lie in ``golden/``. After a change that is meant: ``GOLDEN=write`` before the test command writes them anew,
then look at the difference.
"""

from __future__ import annotations

import os
from pathlib import Path

import pytest
from textual.filter import Monochrome

from planner.screens.actions import PLACES, TITLES
from tests.screens.sitting import LARGE, SMALL, run, sitting
from tests.screens.stored_plan import session_with_plan

GOLDEN = Path(__file__).parent / "golden"
FORBIDDEN = ("chamber", "sequence", "queue", "procedure", "station", "parameter", "loop", "experiment manager")


@pytest.mark.parametrize("look", ["night", "no_color"])
@pytest.mark.parametrize("size", [SMALL, LARGE], ids=["80x24", "120x40"])
def test_every_place(size: tuple[int, int], look: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    if look == "no_color":
        monkeypatch.setenv("NO_COLOR", "1")
    else:
        monkeypatch.delenv("NO_COLOR", raising=False)
    texts = run(_texts(size, tmp_path))
    assert set(texts) == set(PLACES)
    wrong = [name for name, text in texts.items() if not _same(name, f"{size[0]}x{size[1]}", look, text)]
    assert not wrong, f"changed: {wrong}; look at {GOLDEN} after GOLDEN=write"


async def _texts(size: tuple[int, int], folder: Path) -> dict[str, str]:
    session = session_with_plan(folder)
    texts = {}
    async with sitting(session, size) as user:
        assert any(isinstance(one, Monochrome) for one in user.app._filters) == ("NO_COLOR" in os.environ)
        for at, name in enumerate(PLACES):
            await user.keys(f"f{at + 2}")
            if name == "plan":
                await user.keys("down", "down", "down")
            texts[name] = user.text()
            assert f"[{TITLES[name]}]" in texts[name]
            lines = texts[name].splitlines()
            assert len(lines) == size[1]
            assert max(map(len, lines)) <= size[0]
    return texts


def _same(name: str, size: str, look: str, text: str) -> bool:
    """The text of a place is the same in every look: nothing is told by colour alone."""
    path = GOLDEN / f"{name}-{size}.txt"
    if os.environ.get("GOLDEN") == "write" and look == "night":
        path.parent.mkdir(exist_ok=True)
        path.write_text(text + "\n", encoding="utf-8")
    return path.read_text(encoding="utf-8") == text + "\n"


def test_no_label_reminds_of_other_programs() -> None:
    words = {path.name: path.read_text(encoding="utf-8").lower() for path in GOLDEN.glob("*.txt")}
    assert words
    assert [(name, word) for name, text in words.items() for word in FORBIDDEN if word in text] == []
