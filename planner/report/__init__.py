"""Summaries of plans for terminals and programs, and live progress."""

from planner.report.data import as_data, finding_data
from planner.report.findings import findings_table
from planner.report.progress import Progress, progress_line, watching
from planner.report.summary import summary

__all__ = ["Progress", "as_data", "finding_data", "findings_table", "progress_line", "summary", "watching"]
