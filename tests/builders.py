"""Builds small rigs and weeks for tests, with round numbers that hand arithmetic can follow.

The rig's rates inside: 0.005 T/s up to 6 T, 0.002 T/s up to 8 T, 0.001 T/s up to 10 T; 0.1 T/A, so 6 T is 60 A.
Its losses: 1e-4 L/s always, 5e-5 L/s with the switch open, 1e-6 L/s a lead ampere, 0.1 L a tesla moved.
Its bath: 0.8 L a percent up to 50 % (40 L), 1.2 L a percent from there to 100 % (100 L).
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from datetime import datetime
from pathlib import Path
from typing import Any

from planner.files import Request, Rig, Week, parse_rig, parse_week
from planner.files.reading import source
from planner.plan import Coil, CoilMode, Gates, Stage, State, along_z

Changes = Mapping[str, Any]

REMOVED = object()
"""As a changed value: take the key out."""


def toml_text(data: Mapping[str, Any]) -> str:
    """The data as TOML, tables inline."""
    return "".join(f"{json.dumps(key)} = {_value(value)}\n" for key, value in data.items())


def _value(value: Any) -> str:
    if isinstance(value, Mapping):
        return "{ " + ", ".join(f"{json.dumps(key)} = {_value(inner)}" for key, inner in value.items()) + " }"
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(_value(inner) for inner in value) + "]"
    if isinstance(value, datetime):
        return value.isoformat()
    return json.dumps(value, ensure_ascii=False)


def changed(data: dict[str, Any], changes: Changes) -> dict[str, Any]:
    """The data with values replaced at dotted places ("magnet.ramp_table.0.rate")."""
    for place, value in changes.items():
        *path, last = place.split(".")
        table: Any = data
        for part in path:
            table = table[int(part)] if isinstance(table, list) else table.setdefault(part, {})
        key: Any = int(last) if isinstance(table, list) else last
        if value is REMOVED:
            del table[key]
        else:
            table[key] = value
    return data


def rig_text(changes: Changes | None = None) -> str:
    """The wet rig's file."""
    data: dict[str, Any] = {
        "format": 1,
        "kind": "rig",
        "name": "Round-number rig",
        "magnet": {
            "rated_field": "10 T",
            "field_per_current": "0.1 T/A",
            "inductance": "10 H",
            "settle": "2 min",
            "ramp_table": [
                {"to": "6 T", "rate": "0.3 T/min"},
                {"to": "8 T", "rate": "0.12 T/min"},
                {"to": "10 T", "rate": "0.06 T/min"},
            ],
            "supply": {"max_current": "100 A", "max_voltage": "5 V", "lead_resistance": "5 mohm"},
            "switch": {
                "warm": "30 s",
                "cool": "60 s",
                "hold_before": "5 min",
                "settle_after": "10 s",
                "leads": "120 A/min",
                "match": "0.1 A",
            },
        },
        "bath": {
            "gauge_error": "2 %",
            "calibration": [
                {"level": "0 %", "volume": "0 L"},
                {"level": "50 %", "volume": "40 L"},
                {"level": "100 %", "volume": "100 L"},
            ],
            "lines": {"start_ramp": "60 %", "at_field": "45 %", "coil_top": "30 %", "reserve": "20 %"},
            "losses": {
                "static": "0.36 L/h",
                "switch_open": "0.18 L/h",
                "leads": "0.0036 L/h/A",
                "moving": "0.1 L/T",
            },
            "transfer": {"rate": "60 L/h", "efficiency": "80 %", "line_cooling": "20 min"},
        },
        "stage": {
            "kind": "dilution",
            "base": "20 mK",
            "highest": "1 K",
            "warming": [
                {"to": "40 mK", "time": "4 min"},
                {"to": "160 mK", "time": "10 min"},
                {"to": "1 K", "time": "20 min"},
            ],
            "cooling": [
                {"from": "40 mK", "time": "10 min"},
                {"from": "160 mK", "time": "30 min"},
                {"from": "1 K", "time": "60 min"},
            ],
            "after_ramp": [{"below": "50 mK", "time": "15 min"}],
        },
    }
    return toml_text(changed(data, changes or {}))


DRY: Changes = {
    "bath": REMOVED,
    "cooler": {"name": "cold head"},
    "magnet.switch": REMOVED,
    "stage": {
        "kind": "continuous",
        "base": "1.5 K",
        "highest": "60 K",
        "model": {"warming_constant": "200 s", "cooling_constant": "500 s", "within": "1 %"},
    },
}
"""Changes that make the rig cryogen-free, without a switch, with a stage by model."""

TOP: Changes = {"name": "top", "lowest": "-1 V", "highest": "1 V", "rate": "10 mV/s", "density_slope": "1e11 cm^-2/V"}
BACK: Changes = {"name": "back", "lowest": "-2 V", "highest": "2 V", "rate": "0.1 V/s"}


def week_text(changes: Changes | None = None, targets: list[Changes] | None = None) -> str:
    """A week of one user and one sample with two gates, density 2e15 per m²; targets take sample S1 unless they say."""
    data: dict[str, Any] = {
        "format": 1,
        "kind": "week",
        "title": "A test week",
        "rig": "round.rig.toml",
        "zone": "Europe/Vienna",
        "start": datetime(2031, 3, 3, 8),  # noqa: DTZ001 - files hold local times; a Monday
        "end": datetime(2031, 3, 8, 8),  # noqa: DTZ001
        "staffed": [{"days": "Mon-Fri", "from": "08:00", "to": "18:00"}],
        "present": {"level": "90 %"},
        "users": [{"name": "U1", "letter": "A"}],
        "samples": [
            {"name": "S1", "user": "U1", "density": "2e11 cm^-2", "gates": [dict(TOP), dict(BACK)]},
        ],
        "targets": [{"sample": "S1", **target} for target in targets or []],
    }
    return toml_text(changed(data, changes or {}))


def rig(changes: Changes | None = None) -> Rig:
    """The wet rig, read."""
    return parse_rig(rig_text(changes))


def week(changes: Changes | None = None, targets: list[Changes] | None = None) -> Week:
    """The week, read."""
    return parse_week(week_text(changes, targets))


def request(
    targets: list[Changes] | None = None, *, week_changes: Changes | None = None, rig_changes: Changes | None = None
) -> Request:
    """Week and rig, read, with their sources."""
    texts = week_text(week_changes, targets), rig_text(rig_changes)
    sources = source("week", "test.toml", texts[0]), source("rig", "round.rig.toml", texts[1])
    return Request(parse_week(texts[0]), parse_rig(texts[1]), sources)


def coil_at(field_T: float, *, persistent: bool = False, per_current_T_per_A: float = 0.1) -> Coil:
    """The coil at rest: zero at 0 T, else driven or persistent with the leads down."""
    current = along_z(field_T / per_current_T_per_A)
    if field_T == 0:
        return Coil()
    if persistent:
        return Coil(along_z(field_T), CoilMode.PERSISTENT, along_z(0.0), current)
    return Coil(along_z(field_T), CoilMode.DRIVEN, current)


REST: Gates = (("S1/back", 0.0), ("S1/top", 0.0))


def state_at(field_T: float, kelvin: float = 0.02, gates_V: Gates = REST, *, persistent: bool = False) -> State:
    """The rig settled at a field, a temperature and gate voltages."""
    return State(coil_at(field_T, persistent=persistent), Stage(kelvin), gates_V)


def written(folder: Path, week_toml: str, rig_toml: str | None = None) -> Path:
    """The week's path in a folder, with its rig beside it."""
    (folder / "week.toml").write_text(week_toml, encoding="utf-8")
    if rig_toml is not None:
        (folder / "round.rig.toml").write_text(rig_toml, encoding="utf-8")
    return folder / "week.toml"
