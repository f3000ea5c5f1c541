"""What it takes to get from one state to another, and what helium it costs."""

from planner.moves.field import driven, field_legs, joined
from planner.moves.helium import Lines, rate_L_per_s
from planner.moves.move import move
from planner.moves.setup import Setup, setup_of, whole_seconds
from planner.moves.stretch import Needs, Stretch, delayed, end_of, held, stretch
from planner.moves.switch import warming_leg

__all__ = [
    "Lines",
    "Needs",
    "Setup",
    "Stretch",
    "delayed",
    "driven",
    "end_of",
    "field_legs",
    "held",
    "joined",
    "move",
    "rate_L_per_s",
    "setup_of",
    "stretch",
    "warming_leg",
    "whole_seconds",
]
