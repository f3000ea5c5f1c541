"""Helium level against litres, as the gauge's calibration in the rig file says: straight lines between its points."""

from __future__ import annotations

from planner.files.rig import Bath


def _interpolate(x: float, xs: list[float], ys: list[float]) -> float:
    if x <= xs[0]:
        low = 0
    elif x >= xs[-1]:
        low = len(xs) - 2
    else:
        low = next(at for at in range(len(xs) - 1) if x <= xs[at + 1])
    return ys[low] + (x - xs[low]) * (ys[low + 1] - ys[low]) / (xs[low + 1] - xs[low])


def litres_at(bath: Bath, level_percent: float) -> float:
    """Litres in the bath at a gauge level; the end segments are carried on beyond the table."""
    points = bath.calibration
    return _interpolate(level_percent, [p.level_percent for p in points], [p.volume_L for p in points])


def level_at(bath: Bath, litres: float) -> float:
    """Gauge level in percent at a content in litres; the end segments are carried on beyond the table."""
    points = bath.calibration
    return _interpolate(litres, [p.volume_L for p in points], [p.level_percent for p in points])


def litres_for_trusted(bath: Bath, line_percent: float) -> float:
    """Litres at which the trusted level (gauge level less its error) just reaches a line."""
    return litres_at(bath, line_percent + bath.gauge_error_percent)
