"""How often the stated uncertainty of a density covers the truth, over seeded synthetic traces.

    python -m tests.bench.density_coverage [CASES]

Each case draws density, sign, mobilities, temperature, range of field, directions, offset, remanence and lag; the
noise is 2 % of the largest reading of each column. The uncertainty stated is for 95 %.
"""

from __future__ import annotations

import sys
import time

import numpy as np

from planner.desk.density_page import density_of_trace
from planner.desk.trace_file import Trace
from tests.physics.traces import Faults, Layer, sweep, there_and_back

NAMES = ("Hall", "oscillations", "best")


def case(seed: int) -> tuple[float, Trace]:
    """The true density and a trace."""
    rng = np.random.default_rng(seed)
    density = 1e15 * rng.uniform(1.0, 4.0) * rng.choice([-1.0, 1.0])
    layer = Layer(
        density,
        mobility_m2_per_Vs=rng.uniform(20, 200),
        quantum_m2_per_Vs=rng.uniform(3, 8),
        temperature_K=rng.uniform(0.05, 0.5),
    )
    top = abs(density) / 1e15 * rng.uniform(0.6, 0.9)
    low = rng.choice([-top, -0.3 * top, 0.0])
    points = int(rng.integers(600, 1200))
    fields = there_and_back(low, top, points // 2) if rng.random() < 0.5 else np.linspace(low, top, points)
    faults = Faults(0.02, rng.uniform(-0.03, 0.03), rng.normal(0, 3e-3), rng.uniform(0, 2e-3))
    field, hall, along = sweep(fields, layer, faults, rng)
    return density, Trace(field, hall, along)


def errors(seeds: range) -> dict[str, list[tuple[float, float]]]:
    """Of each way to a density: error and stated uncertainty, as shares of the truth."""
    found: dict[str, list[tuple[float, float]]] = {name: [] for name in NAMES}
    for seed in seeds:
        truth, trace = case(seed)
        page = density_of_trace(trace)
        for name, value in zip(NAMES, (page.hall, page.oscillations, page.best), strict=True):
            if value is not None:
                error = abs(value.density_per_m2) / abs(truth) - 1
                found[name].append((error, value.uncertainty_per_m2 / abs(truth)))
    return found


def main(cases: int = 500) -> None:
    """Print coverage and errors."""
    begin = time.perf_counter()
    found = errors(range(cases))
    for name, rows in found.items():
        error, stated = np.abs(np.array(rows)).T
        print(
            f"{name:13} {len(rows):4d} cases  covered {np.mean(error <= stated):6.1%}  "
            f"error median {np.median(error):.3%}, 99 % {np.quantile(error, 0.99):.3%}, largest {error.max():.3%}  "
            f"stated median {np.median(stated):.3%}"
        )
    print(f"{time.perf_counter() - begin:.1f} s")


if __name__ == "__main__":
    main(*(int(text) for text in sys.argv[1:2]))
