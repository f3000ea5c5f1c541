"""How long and how warm: the cycles of an annealing that goes on as long as it is let."""

from __future__ import annotations

from collections.abc import Iterator

HOT = 0.4  # first temperature in takes of average worth; less keeps the first structure found (measured)
HOT_COST = 0.02  # the same once no more prize can be had
COLD = 2e-4  # last temperature as a share of the first
COLD_COST = 4e-3

SHORTEST_S = 1.0
GROWTH = 1.5  # of the time gone, for the next cycle: each starts hot from the best, so that more time is never worse


def cycles(whole_s: float) -> Iterator[tuple[float, float]]:
    """Begin and end of each cooling, in seconds, up to ``whole_s``; what is left at the end lengthens the last."""
    begin = 0.0
    while begin < whole_s:
        end = begin + max(SHORTEST_S, GROWTH * begin)
        following = end + max(SHORTEST_S, GROWTH * end)
        if following > whole_s + 0.5 * (following - end):
            end = whole_s
        yield begin, end
        begin = end


def shares(count: int) -> list[float]:
    """Shares of a fixed amount of work for ``count`` coolings, each longer than the one before."""
    whole = count * (count + 1) / 2
    return [(row + 1) / whole for row in range(count)]


def temperature(gone: float, *, fine: bool) -> float:
    """Temperature after the share ``gone`` of a cooling, in takes of average worth; ``fine``: only cost counts."""
    return float(HOT_COST * COLD_COST**gone if fine else HOT * COLD**gone)
