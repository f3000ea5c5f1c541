"""What moves need to know of a request: the rig, and how fast each gate may go."""

from __future__ import annotations

import math
from dataclasses import dataclass

from planner.files import Rig, Week
from planner.files.start import resting_gates
from planner.plan import Gates


@dataclass(frozen=True)
class Setup:
    """A rig with the gates of the samples mounted in it."""

    rig: Rig
    gate_rates_V_per_s: dict[str, float]
    resting: Gates


def setup_of(rig: Rig, week: Week) -> Setup:
    """The setup of one week."""
    rates = {f"{s.name}/{g.name}": float(g.rate_V_per_s) for s in week.samples for g in s.gates}
    return Setup(rig, rates, resting_gates(week))


def whole_seconds(seconds: float) -> int:
    """Round up to whole seconds; an excess under a microsecond is a float's error, not time."""
    return math.ceil(seconds - 1e-6)
