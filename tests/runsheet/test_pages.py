"""The page as a browser prints it: nothing cut, nothing on top of anything else, the foot on every page.

Needs Chromium and poppler's pdftotext; where they are missing these tests are skipped.
"""

from __future__ import annotations

import re
import shutil
import subprocess
from pathlib import Path
from typing import NamedTuple

import pytest

from planner.plan import Plan
from planner.runsheet.rows import shown_steps
from planner.runsheet.sheet import REVIEW, Sheet
from planner.runsheet.sheet_html import write

BROWSER = shutil.which("chromium") or shutil.which("chromium-browser")
pytestmark = pytest.mark.skipif(
    BROWSER is None or shutil.which("pdftotext") is None, reason="needs Chromium and pdftotext"
)
MARGIN_pt = 9 / 25.4 * 72  # the smallest margin of the page style, 9 mm


class Word(NamedTuple):
    left: float
    top: float
    right: float
    bottom: float
    text: str


class Printed(NamedTuple):
    width: float
    height: float
    words: list[Word]


def printed(plan: Plan, paper: str, folder: Path, *, review: bool = False) -> list[Printed]:
    """The pages as a browser lays them out on a paper, in points."""
    page = folder / "page.html"
    text = write(Sheet.of(plan, review=review)).decode("utf-8")
    assert "size: landscape;" in text
    page.write_text(text.replace("size: landscape;", f"size: {paper} landscape;"), encoding="utf-8")
    pdf = folder / "page.pdf"
    subprocess.run(
        [str(BROWSER), "--headless", "--no-sandbox", "--disable-gpu", "--no-pdf-header-footer",
         f"--user-data-dir={folder / 'profile'}", f"--print-to-pdf={pdf}", page.as_uri()],
        check=True, capture_output=True, timeout=60,
    )  # fmt: skip
    boxes = subprocess.run(["pdftotext", "-bbox", str(pdf), "-"], check=True, capture_output=True, text=True).stdout
    number = r'"([\d.-]+)"'
    pages = []
    for part in boxes.split("<page ")[1:]:
        size = re.search(rf"width={number} height={number}", part)
        assert size is not None
        words = re.findall(rf"xMin={number} yMin={number} xMax={number} yMax={number}>(.*?)</word>", part)
        found = [Word(*map(float, word[:4]), word[4]) for word in words]
        pages.append(Printed(float(size[1]), float(size[2]), found))
    return pages


def overlapping(words: list[Word]) -> list[tuple[Word, Word]]:
    """Pairs of words of which one covers half of the other's height and some of its width."""
    found = []
    ordered = sorted(words, key=lambda word: word.top)
    for at, first in enumerate(ordered):
        for second in ordered[at + 1 :]:
            if second.top > first.bottom:
                break
            wide = min(first.right, second.right) - max(first.left, second.left)
            high = min(first.bottom, second.bottom) - max(first.top, second.top)
            if wide > 1.5 and high > 0.45 * min(first.bottom - first.top, second.bottom - second.top):
                found.append((first, second))
    return found


@pytest.mark.parametrize(("name", "paper"), [("small", "letter"), ("large", "A4")])
def test_pages_are_whole(name: str, paper: str, request: pytest.FixtureRequest, tmp_path: Path) -> None:
    plan: Plan = request.getfixturevalue(name)
    pages = printed(plan, paper, tmp_path, review=name == "small")
    for page in pages:
        texts = " ".join(word.text for word in page.words)
        assert "PLANNING AID ONLY" in texts
        assert (REVIEW in texts) == (name == "small")
        foot = min(word.top for word in page.words if word.text == "PLANNING" and word.top > page.height - 90)
        assert not [word for word in page.words if word.bottom > foot and word.top < foot - 12]
        assert min(word.left for word in page.words) >= MARGIN_pt - 1
        assert max(word.right for word in page.words) <= page.width - MARGIN_pt + 1
        assert overlapping(page.words) == []
    body = " ".join(word.text for page in pages for word in page.words)
    assert body.count("began") == sum(step.kind != "wait" for _, step in shown_steps(plan))
    assert body.count("initials") == len(shown_steps(plan))
