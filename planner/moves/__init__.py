"""What it takes to get from one state to another, and what helium it costs."""

from planner.moves.helium import Lines, rate_L_per_s
from planner.moves.move import move
from planner.moves.setup import Setup, setup_of, whole_seconds
from planner.moves.stretch import Needs, Stretch, delayed, end_of, held, stretch

__all__ = [
    "Lines",
    "Needs",
    "Setup",
    "Stretch",
    "delayed",
    "end_of",
    "held",
    "move",
    "rate_L_per_s",
    "setup_of",
    "stretch",
    "whole_seconds",
]
