"""How long the stage takes: measured tables, straight in ln T between their points, or the exponential model."""

from __future__ import annotations

import math
from functools import lru_cache
from itertools import pairwise

from planner.files.rig import StagePart
from planner.moves.setup import whole_seconds


def stage_seconds(stage: StagePart, from_K: float, to_K: float) -> int:
    """Seconds from one settled temperature to another, rounded up; 0 where they are the same.

    By table: the difference of the times from (or down to) base. By model: exponential approach to within the stated
    part of the wanted temperature, t = τ ln(|T₁ − T₂| / (within · T₂)).
    """
    if from_K == to_K:
        return 0
    model = stage.model
    if model is None:
        curve = _warming(stage) if to_K > from_K else _cooling(stage)
        return whole_seconds(abs(_along(curve, to_K) - _along(curve, from_K)))
    constant_s = model.warming_constant_s if to_K > from_K else model.cooling_constant_s
    apart = abs(from_K - to_K) / (model.within_percent / 100 * to_K)
    return whole_seconds(constant_s * math.log(apart)) if apart > 1 else 0


def after_ramp_seconds(stage: StagePart, wanted_K: float) -> int:
    """Seconds the stage takes to come back after the field has moved, by the wanted temperature."""
    return max((whole_seconds(row.time_s) for row in stage.after_ramp if wanted_K < row.below_K), default=0)


Curve = tuple[tuple[float, float], ...]


@lru_cache(maxsize=64)
def _warming(stage: StagePart) -> Curve:
    return ((math.log(stage.base_K), 0.0), *((math.log(p.to_K), float(p.time_s)) for p in stage.warming))


@lru_cache(maxsize=64)
def _cooling(stage: StagePart) -> Curve:
    return ((math.log(stage.base_K), 0.0), *((math.log(p.from_K), float(p.time_s)) for p in stage.cooling))


def _along(curve: Curve, kelvin: float) -> float:
    x = math.log(kelvin)
    if x <= curve[0][0]:
        return 0.0
    for (low, begin), (high, finish) in pairwise(curve):
        if x <= high:
            return begin + (x - low) * (finish - begin) / (high - low)
    return curve[-1][1]
