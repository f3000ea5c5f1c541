"""A newcomer's path, by keys only, on the smallest screen."""

from __future__ import annotations

from pathlib import Path

from tests.screens.sitting import run, session_in, sitting


def test_newcomers_path(tmp_path: Path) -> None:
    run(_path(tmp_path))


async def _path(folder: Path) -> None:
    session = session_in(folder)
    start = session.document.texts
    async with sitting(session) as user:
        assert "First week" in user.text()

        await user.keys("f4", "a")  # a sample; the cursor waits on the line that is missing
        assert "is missing" in user.text()
        await user.keys("enter")
        await user.type("0.8e11")
        assert "unit is missing" in user.text()
        await user.type(" cm^-2")
        await user.keys("enter")
        assert session.document.data("week")["samples"][1]["density"] == "0.8e11 cm^-2"
        assert not session.document.problems

        await user.keys("n", "down", "enter")  # ν = 1/3 and 2/5 at three temperatures
        await user.type("1/3, 2/5")
        assert "9.926 T; 8.271 T" in user.text()  # 0.8e15 h/(e ν) with h/e of CODATA 2018
        await user.keys("enter", "enter")
        await user.type("base, 50 mK, 0.2 K")
        await user.keys("enter", "end", "enter")
        targets = session.document.data("week")["targets"][-6:]
        assert [(row["filling"], row["temperature"]) for row in targets] == [
            (filling, kelvin) for filling in ("1/3", "2/5") for kelvin in ("base", "50 mK", "0.2 K")
        ]

        await user.keys("s")
        await user.solved()
        assert session.plan is not None
        assert "plan · best" in user.text()
        done = {step.target for step in session.plan.steps}
        assert {row["name"] for row in targets} <= done

        await user.keys("down", "down")
        shown = user.text()
        for word in ("when", "from", "to", "pace", "helium", "lowest allowed"):
            assert word in shown

        await user.keys("f3", "down", "enter", "enter")  # the rated field
        await user.type("9 T")
        await user.keys("enter", "f7")
        assert "STOP" in user.text()
        assert any(finding.kind == "stop" for finding in session.findings)
        await user.keys("f8", "w")
        await user.written()
        assert "edited since" in user.text()
        assert not (folder / "sheets").exists()

        await user.keys("u")
        assert not any(finding.kind == "stop" for finding in session.findings)
        await user.keys("w")
        await user.written()
        assert "Written:" in user.text()
        assert {path.suffix for path in (folder / "sheets").iterdir()} == {".html", ".csv", ".json"}
        assert "PLANNING AID" in next((folder / "sheets").glob("*.html")).read_text(encoding="utf-8").upper()

        await user.keys("ctrl+s")
        assert not session.document.changed
        assert "New sample" in (folder / "first_week.toml").read_text(encoding="utf-8")
        while session.undo():
            pass
        assert session.document.texts == start
