"""The form that turns fillings × temperatures into targets at once."""

from __future__ import annotations

from dataclasses import asdict, replace

from planner.desk.form import FormRow
from planner.desk.grid import QUESTIONS, Grid, judged, parts
from planner.desk.reach import meant
from planner.desk.session import Session
from planner.desk.values import Explained

ADD = "add"


class GridForm:
    """The questions of a grid, and the line that adds its targets."""

    def __init__(self, session: Session, sample: str = "") -> None:
        self.session = session
        names = self._samples()
        self.grid = Grid(sample if sample in names else names[0] if names else "", "")
        self.added = 0

    def rows(self) -> list[FormRow]:
        """A line for each question, then the one that adds."""
        wrong = judged(self.session.document, self.grid)
        found = [self._row(key, self.grid, wrong[key]) for key in QUESTIONS]
        count = len(parts(self.grid.fillings)) * len(parts(self.grid.temperatures))
        ready = not any(wrong.values())
        label = f"▶ add {count} targets" if ready else "▶ add"
        problem = "" if ready else "answer the lines above first"
        return [*found, FormRow(ADD, label, "", "", "Enter adds them, as one step" if ready else "", problem, act=True)]

    def explain(self, key: str, text: str) -> Explained:
        """What an answer means, each filling with its field."""
        asked = replace(self.grid, **{key: text.strip()})
        wrong = judged(self.session.document, asked)[key]
        return Explained(not wrong, wrong or self._means(key, asked), text.strip())

    def commit(self, key: str, text: str) -> Explained:
        """Take an answer, or add the targets."""
        if key == ADD:
            try:
                self.added = self.session.add_grid(self.grid)
            except ValueError as error:
                return Explained(False, str(error))
            return Explained(True, f"added {self.added} targets")
        found = self.explain(key, text)
        if found.usable:
            self.grid = replace(self.grid, **{key: text.strip()})
        return found

    def _row(self, key: str, grid: Grid, wrong: str) -> FormRow:
        label, told = QUESTIONS[key]
        text = str(asdict(grid)[key])
        means = "" if wrong else self._means(key, grid)
        choices = self._samples() if key == "sample" else tuple("54321") if key == "priority" else ()
        return FormRow(key, label, text, text, means, wrong, told, choices=choices)

    def _samples(self) -> tuple[str, ...]:
        rows = self.session.document.data("week").get("samples")
        return tuple(str(row.get("name")) for row in rows if isinstance(row, dict)) if isinstance(rows, list) else ()

    def _means(self, key: str, grid: Grid) -> str:
        document = self.session.document
        rows = document.data("week").get("samples", [])
        sample = next((row for row in rows if isinstance(row, dict) and row.get("name") == grid.sample), {})
        if key == "fillings":
            said = [meant(document.rig, sample, {}, "filling", filling) for filling in parts(grid.fillings)]
            return "; ".join(("" if one.reached else "✗ ") + one.text for one in said if one is not None)
        if key == "temperatures":
            said = [meant(document.rig, sample, {}, "temperature", one) for one in parts(grid.temperatures)]
            return "; ".join(f"✗ {one.text}" for one in said if one is not None and not one.reached)
        return ""
