"""What planning produces and every other part reads: states, legs, steps, findings, the plan."""

from planner.plan.finding import Finding, Kind, worst
from planner.plan.plan import (
    PLAN_FORMAT,
    HandOrder,
    LeftOut,
    Plan,
    Score,
    Source,
)
from planner.plan.state import (
    ZERO,
    Charge,
    Coil,
    CoilMode,
    Fills,
    Gates,
    Stage,
    State,
    Vector,
    along_z,
    magnitude,
)
from planner.plan.step import Leg, Step, StepKind

__all__ = [
    "PLAN_FORMAT",
    "ZERO",
    "Charge",
    "Coil",
    "CoilMode",
    "Fills",
    "Finding",
    "Gates",
    "HandOrder",
    "Kind",
    "LeftOut",
    "Leg",
    "Plan",
    "Score",
    "Source",
    "Stage",
    "State",
    "Step",
    "StepKind",
    "Vector",
    "along_z",
    "magnitude",
    "worst",
]
