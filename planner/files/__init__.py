"""Week and rig files: models, reading, versions."""

from planner.files.reading import Request, parse_rig, parse_week, read_rig, read_week, request_of
from planner.files.rig import Rig
from planner.files.week import Week

__all__ = ["Request", "Rig", "Week", "parse_rig", "parse_week", "read_rig", "read_week", "request_of"]
