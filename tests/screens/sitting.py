"""Sits at the program in tests: opens a copy of the first week, presses keys, reads the screen as text."""

from __future__ import annotations

import asyncio
import io
import shutil
from collections.abc import AsyncIterator, Coroutine
from contextlib import asynccontextmanager
from pathlib import Path
from typing import Any, TypeVar

from rich.console import Console
from textual.pilot import Pilot

from planner.desk.remembered import Remembered
from planner.desk.session import Session
from planner.desk.solving import Effort
from planner.screens.app import FridgeweekApp

EXAMPLES = Path(__file__).parents[2] / "example_plans"
SMALL, LARGE = (80, 24), (120, 40)

_Result = TypeVar("_Result")


def run(coroutine: Coroutine[Any, Any, _Result]) -> _Result:
    """Run an asynchronous test."""
    return asyncio.run(coroutine)


def week_in(folder: Path) -> Path:
    """A copy of the first week and its rig in a folder."""
    for name in ("first_week.toml", "wet_dilution.rig.toml"):
        shutil.copy(EXAMPLES / name, folder / name)
    return folder / "first_week.toml"


def session_in(folder: Path) -> Session:
    """A sitting at the first week, its state kept in the same folder; solves stop on a small count of work."""
    return Session.begin(week_in(folder), Remembered(folder / "state"), Effort(0.5, 0, reproducible=True))


class Sitting:
    """The program under a pilot."""

    def __init__(self, app: FridgeweekApp, pilot: Pilot[None]) -> None:
        self.app = app
        self.pilot = pilot

    @property
    def session(self) -> Session:
        """What is open."""
        return self.app.session

    async def keys(self, *keys: str) -> None:
        """Press keys by textual's names."""
        for key in keys:
            await self.pilot.press(key)
        await self.pilot.pause()

    async def type(self, text: str) -> None:
        """Press a key for each character."""
        names = {" ": "space", ",": "comma", "/": "slash", ".": "full_stop", "^": "circumflex_accent", "-": "minus"}
        await self.keys(*(names.get(sign, sign) for sign in text))

    async def solved(self) -> None:
        """Wait until a solve has ended and its plan is shown."""
        while self.session.solving:
            await asyncio.sleep(0.02)
        await self.pilot.pause()
        self.app.refresh_solve()
        await self.pilot.pause()

    async def written(self) -> None:
        """Wait until the sheets are written, or refused."""
        await self.app.workers.wait_for_complete()
        await self.pilot.pause()

    def text(self) -> str:
        """The screen as text, one line a row."""
        return screen_text(self.app)


def screen_text(app: FridgeweekApp) -> str:
    """The characters on the screen, lines without their trailing blanks."""
    width, height = app.size
    console = Console(
        width=width, height=height, file=io.StringIO(), force_terminal=True, record=True, legacy_windows=False,
        color_system="truecolor",
    )  # fmt: skip
    console.print(app.screen._compositor.render_update(full=True))
    return "\n".join(line.rstrip() for line in console.export_text().splitlines())


@asynccontextmanager
async def sitting(session: Session, size: tuple[int, int] = SMALL) -> AsyncIterator[Sitting]:
    """The program on a screen of that size."""
    app = FridgeweekApp(session)
    async with app.run_test(size=size, notifications=True) as pilot:
        await pilot.pause()
        await pilot.pause()
        try:
            yield Sitting(app, pilot)
        finally:
            app.session.leave()
