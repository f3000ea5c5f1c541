"""The registry of sheet formats. A new one is a module with a `write(sheet) -> bytes` and its line in `FORMATS`."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from planner.runsheet.sheet import Sheet
from planner.runsheet.sheet_csv import write as write_csv
from planner.runsheet.sheet_html import write as write_html
from planner.runsheet.sheet_json import write as write_json


@dataclass(frozen=True, slots=True)
class SheetFormat:
    """How a sheet becomes a file: the end of its name, and its bytes (the same for the same plan)."""

    ending: str
    write: Callable[[Sheet], bytes]


FORMATS: dict[str, SheetFormat] = {
    "html": SheetFormat("run_sheet.html", write_html),
    "csv": SheetFormat("run_sheet.csv", write_csv),
    "json": SheetFormat("plan.json", write_json),
}
