"""What a running solve says of itself."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Progress:
    """Best plan so far against what is proven: points, cost in hours, seconds since the solve began.

    None where nothing is known yet.
    """

    best_points: int | None
    points_bound: int | None
    best_cost_h: float | None
    cost_bound_h: float | None
    gap: float | None
    elapsed_s: float
