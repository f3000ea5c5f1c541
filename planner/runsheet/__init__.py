"""Run sheets: a plan as pages for people, tables for spreadsheets, and JSON."""

from planner.runsheet.formats import FORMATS, SheetFormat
from planner.runsheet.sheet import Sheet
from planner.runsheet.writing import write_sheets

__all__ = ["FORMATS", "Sheet", "SheetFormat", "write_sheets"]
