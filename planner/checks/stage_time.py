"""How long the stage needs at least from one temperature to another, by the rig's measured tables or its model."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

from planner.files.rig import StagePart


def _time_at(points: Sequence[tuple[float, float]], temperature_K: float) -> float:
    """Time by straight lines in ln T between (temperature, time) points, the first being base with time 0."""
    for (low_K, low_s), (high_K, high_s) in pairwise(points):
        if temperature_K <= high_K:
            share = math.log(temperature_K / low_K) / math.log(high_K / low_K)
            return low_s + max(0.0, share) * (high_s - low_s)
    return points[-1][1]


def least_seconds(stage: StagePart, first_K: float, last_K: float) -> float:
    """The time the rig's file gives for the way, settled; 0 where the temperature stays. Not rounded."""
    if first_K == last_K:
        return 0.0
    if stage.model is not None:
        within = stage.model.within_percent / 100 * last_K
        away = abs(first_K - last_K)
        constant = stage.model.warming_constant_s if last_K > first_K else stage.model.cooling_constant_s
        return constant * math.log(away / within) if away > within else 0.0
    if last_K > first_K:
        points = [(float(stage.base_K), 0.0), *((float(p.to_K), float(p.time_s)) for p in stage.warming)]
        return _time_at(points, last_K) - _time_at(points, first_K)
    points = [(float(stage.base_K), 0.0), *((float(p.from_K), float(p.time_s)) for p in stage.cooling)]
    return _time_at(points, first_K) - _time_at(points, last_K)


def settle_after_ramp_s(stage: StagePart, wanted_K: float) -> float:
    """How long the stage takes to come back after the field has moved, for a wanted temperature."""
    return max((float(row.time_s) for row in stage.after_ramp if wanted_K < row.below_K), default=0.0)
