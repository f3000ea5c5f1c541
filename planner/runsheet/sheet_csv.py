"""The sheet as CSV (RFC 4180, UTF-8 with a byte order mark): one row a step, units in the column names."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable

from planner.plan import Step
from planner.runsheet.levels import floor_of, gauge_percent
from planner.runsheet.setpoints import SetPoint, coil_set_points, gate_lines
from planner.runsheet.sheet import Sheet
from planner.runsheet.wording import clean

# What a spreadsheet program may take for the beginning of a formula, the full-width forms included.
_FORMULA = ("=", "+", "-", "@", "\t", "\r", "＝", "＋", "－", "＠")

Cell = str | int | float | bool | None


def write(sheet: Sheet) -> bytes:
    """One row a step of the plan, none left out."""
    out = io.StringIO()
    rows = [_cells(step, sheet) for step in sheet.plan.steps]
    writer = csv.DictWriter(out, fieldnames=list(rows[0]) if rows else ["step"], lineterminator="\r\n")
    writer.writeheader()
    writer.writerows(rows)
    return out.getvalue().encode("utf-8-sig")


def text_cell(text: str) -> str:
    """Text that no spreadsheet reads as a formula: a leading apostrophe marks what would begin one."""
    marked = text.lstrip().startswith(_FORMULA) or text.startswith(_FORMULA)
    kept = clean(text)
    return f"'{kept}" if marked or kept.startswith(_FORMULA) else kept


def _cells(step: Step, sheet: Sheet) -> dict[str, Cell]:
    plan, rig = sheet.plan, sheet.rig
    per_current = float(rig.magnet.field_per_current_T_per_A)
    set_points = [s for s in coil_set_points(step, sheet.walls, per_current) if s.current_A is not None]
    fields_T = [state.coil.field_T[2] for state in (step.before, step.after)]
    return {
        "step": step.number,
        "sheet": text_cell(sheet.banner or "to be run"),
        "kind": str(step.kind),
        "attended": step.attended,
        "what": text_cell(step.label),
        "user": text_cell(step.user),
        "sample": text_cell(step.sample),
        "target": text_cell(step.target),
        "take": text_cell(step.take),
        "direction": text_cell(step.direction),
        "service": text_cell(step.service),
        "start": plan.clock.moment(step.start_s).isoformat(),
        "end": plan.clock.moment(step.end_s).isoformat(),
        "start_s": step.start_s,
        "end_s": step.end_s,
        "duration_s": step.seconds,
        "field_from_T": _number(fields_T[0], 6),
        "field_to_T": _number(fields_T[1], 6),
        "current_from_A": _number(fields_T[0] / per_current, 5),
        "current_to_A": _number(fields_T[1] / per_current, 5),
        "lead_current_from_A": _number(step.before.coil.lead_current_A[2], 5),
        "lead_current_to_A": _number(step.after.coil.lead_current_A[2], 5),
        **_set_point_cells(set_points),
        "coil_mode_from": str(step.before.coil.mode),
        "coil_mode_to": str(step.after.coil.mode),
        "temperature_from_K": step.before.stage.temperature_K,
        "temperature_to_K": step.after.stage.temperature_K,
        "gates": text_cell("; ".join(gate_lines(step))),
        "pace": text_cell(step.pace),
        **_helium_cells(step, sheet),
        "people": text_cell(", ".join(step.people)),
        "details": text_cell("; ".join(f"{name}: {text}" for name, text in step.details)),
        "notes": text_cell("; ".join(step.notes)),
    }


def _set_point_cells(set_points: list[SetPoint]) -> dict[str, Cell]:
    """Every set-point of the coil in order, as lists; those of the leads with the switch closed have no field."""
    rates = [s.rate_A_per_s * 60 for s in set_points if s.rate_A_per_s is not None and s.field_T is not None]
    field_rates = [s.rate_T_per_s * 60 for s in set_points if s.rate_T_per_s is not None]
    return {
        "set_points_T": _listed((s.field_T for s in set_points), 6),
        "set_points_A": _listed((s.current_A for s in set_points), 5),
        "rates_T_per_min": _listed((None if s.rate_T_per_s is None else s.rate_T_per_s * 60 for s in set_points), 6),
        "rates_A_per_min": _listed((None if s.rate_A_per_s is None else s.rate_A_per_s * 60 for s in set_points), 5),
        "fastest_T_per_min": _number(max(field_rates), 6) if field_rates else None,
        "fastest_A_per_min": _number(max(rates), 5) if rates else None,
    }


def _helium_cells(step: Step, sheet: Sheet) -> dict[str, Cell]:
    rig = sheet.rig
    floor = floor_of(step, rig.bath) if rig.bath is not None else None
    return {
        "helium_before_L": _number(step.helium_before_L, 3),
        "helium_after_L": _number(step.helium_after_L, 3),
        "gauge_before_percent": _number(gauge_percent(rig, step.helium_before_L), 3),
        "gauge_after_percent": _number(gauge_percent(rig, step.helium_after_L), 3),
        "lowest_to_begin_percent": _number(floor.start_percent if floor else None, 3),
        "lowest_throughout_percent": _number(floor.through_percent if floor else None, 3),
        "lowest_to_begin_L": _number(floor.start_L if floor else None, 3),
        "lowest_throughout_L": _number(floor.through_L if floor else None, 3),
        "poured_L": _number(step.poured_L, 3) if floor else None,
        "drawn_L": _number(step.drawn_L, 3) if floor else None,
        "stock_after_L": _number(step.stock_after_L, 3),
    }


def _number(value: float | None, decimals: int) -> float | None:
    return None if value is None else round(value, decimals) + 0.0


def _listed(values: Iterable[float | None], decimals: int) -> str:
    """Numbers in brackets, which no spreadsheet reads as a formula; an empty place where there is none."""
    texts = ["" if value is None else str(_number(value, decimals)) for value in values]
    return f"[{'; '.join(texts)}]" if texts else ""
