"""The steps of a plan as a pandas table."""

from __future__ import annotations

from collections.abc import Sequence

import pandas as pd

from planner.clock import Clock
from planner.plan.step import Step

COLUMNS = {
    "step": "int64",
    "kind": "string",
    "what": "string",
    "user": "string",
    "sample": "string",
    "target": "string",
    "take": "string",
    "start": "object",
    "end": "object",
    "start_s": "int64",
    "seconds": "int64",
    "field_from_T": "float64",
    "field_to_T": "float64",
    "lead_current_to_A": "float64",
    "coil_mode": "string",
    "temperature_to_K": "float64",
    "gates_to_V": "string",
    "pace": "string",
    "helium_before_L": "float64",
    "helium_after_L": "float64",
    "poured_L": "float64",
    "drawn_L": "float64",
    "attended": "bool",
    "people": "string",
}


def steps_frame(steps: Sequence[Step], clock: Clock) -> pd.DataFrame:
    """One row a step; times are zone-aware datetimes, fields are along z."""
    rows = [
        {
            "step": step.number,
            "kind": str(step.kind),
            "what": step.label,
            "user": step.user,
            "sample": step.sample,
            "target": step.target,
            "take": step.take,
            "start": clock.moment(step.start_s),
            "end": clock.moment(step.end_s),
            "start_s": step.start_s,
            "seconds": step.seconds,
            "field_from_T": step.before.coil.field_T[2],
            "field_to_T": step.after.coil.field_T[2],
            "lead_current_to_A": step.after.coil.lead_current_A[2],
            "coil_mode": str(step.after.coil.mode),
            "temperature_to_K": step.after.stage.temperature_K,
            "gates_to_V": ", ".join(f"{name} {volt:g}" for name, volt in step.after.gates_V),
            "pace": step.pace,
            "helium_before_L": step.helium_before_L,
            "helium_after_L": step.helium_after_L,
            "poured_L": step.poured_L,
            "drawn_L": step.drawn_L,
            "attended": step.attended,
            "people": ", ".join(step.people),
        }
        for step in steps
    ]
    return pd.DataFrame(rows, columns=list(COLUMNS)).astype(COLUMNS)
