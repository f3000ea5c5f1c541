"""Reading the rig's ramp table: by |B|, the edge belonging to the lower-field segment."""

from __future__ import annotations

from planner.files.rig import Magnet, RampSegment

TOUCH_T = 1e-9
"""An overlap with a segment shorter than this is its edge, or a float's last digit."""


def size_range_T(first_T: float, last_T: float) -> tuple[float, float]:
    """Least and largest |B| on the way from one field to another."""
    low, high = sorted((abs(first_T), abs(last_T)))
    return (0.0, high) if first_T * last_T < 0 else (low, high)


def segments_touched(magnet: Magnet, first_T: float, last_T: float) -> tuple[RampSegment, ...]:
    """Every segment of the table in which a stretch of the way lies; beyond the table its last segment."""
    low, high = size_range_T(first_T, last_T)
    touched = []
    floor_T = 0.0
    for segment in magnet.ramp_table:
        if min(high, segment.to_T) - max(low, floor_T) > TOUCH_T:
            touched.append(segment)
        floor_T = segment.to_T
    if not touched or high > floor_T + TOUCH_T:
        touched.append(next((s for s in magnet.ramp_table if high <= s.to_T), magnet.ramp_table[-1]))
    return tuple(dict.fromkeys(touched))


def fastest(magnet: Magnet, first_T: float, last_T: float) -> RampSegment:
    """The segment that binds on the way: of those touched, the one with the lowest rate."""
    return min(segments_touched(magnet, first_T, last_T), key=lambda segment: segment.rate_T_per_s)


def pieces(
    magnet: Magnet, first_T: float, last_T: float, cap_T_per_s: float = float("inf")
) -> list[tuple[float, float, float]]:
    """The way cut at the table's edges and at zero: (from, to, seconds) at the fastest rate up to ``cap_T_per_s``."""
    if first_T * last_T < 0:
        return pieces(magnet, first_T, 0.0, cap_T_per_s) + pieces(magnet, 0.0, last_T, cap_T_per_s)
    sign = -1.0 if first_T + last_T < 0 else 1.0
    low, high = size_range_T(first_T, last_T)
    rising = []
    floor_T = 0.0
    for at, segment in enumerate(magnet.ramp_table):
        ceiling_T = float("inf") if at == len(magnet.ramp_table) - 1 else segment.to_T
        begin, end = max(low, floor_T), min(high, ceiling_T)
        if end > begin:
            rising.append((sign * begin, sign * end, (end - begin) / min(segment.rate_T_per_s, cap_T_per_s)))
        floor_T = segment.to_T
    if abs(last_T) >= abs(first_T):
        return rising
    return [(end, begin, seconds) for begin, end, seconds in reversed(rising)]


def least_seconds(magnet: Magnet, first_T: float, last_T: float, cap_T_per_s: float = float("inf")) -> float:
    """The shortest time of the way at the table's rates, none above ``cap_T_per_s``; not rounded."""
    return sum(seconds for _, _, seconds in pieces(magnet, first_T, last_T, cap_T_per_s))
