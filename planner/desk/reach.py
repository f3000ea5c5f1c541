"""What a target's filling, field or temperature means on this rig today, and whether the rig reaches it."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Any

from pydantic import ValidationError

from planner.desk.wording import rounded
from planner.files import Rig
from planner.files.asks import Range, read_field_range, read_filling_or_range, read_temperature
from planner.files.targets import Hold
from planner.files.week import Sample
from planner.takes.conditions import CannotError, FieldAsk, checked_kelvin, field_of, kelvin_of, within_reach
from planner.units import parse_amount

_SWEPT = ("gate sweep", "map")


@dataclass(frozen=True, slots=True)
class Meant:
    """A sentence, and whether the rig can do it."""

    text: str
    reached: bool


def meant(rig: Rig | None, sample: Any, target: dict[str, Any], key: str, written: Any) -> Meant | None:
    """What ``written`` under ``key`` of a target means; None where nothing can be said.

    Parameters
    ----------
    sample, target
        Plain data of the file, which may have problems elsewhere.
    """
    if rig is None or written in (None, ""):
        return None
    try:
        if key in ("filling", "field"):
            return field_meant(rig, sample, target, key, written)
        if key == "temperature":
            return temperature_meant(rig, target, written)
        if key == "temperatures" and isinstance(written, list):
            kelvins = [float(parse_amount(one, "K")) for one in written]
            for one in kelvins:
                checked_kelvin(rig, one)
            return Meant(f"{len(kelvins)} takes", True)
    except CannotError as error:
        return Meant(str(error), False)
    except ValueError:  # not readable, or the sample is not: the field itself says so
        return None
    return None


def field_meant(rig: Rig, sample: Any, target: dict[str, Any], key: str, written: Any) -> Meant:
    """The field that a filling or field means now, its interval by the density's error, and whether it is reached.

    Raises
    ------
    CannotError, ValueError
        If the rig cannot do it; if something cannot be read.
    """
    ends = _ends(key, written)
    carrier = _carrier(sample, target)
    free = str(target.get("gate", "")) if target.get("kind") in _SWEPT else ""
    asks = [
        field_of(carrier, _sample(sample) if key == "filling" else _nobody(), *_asked(key, end), free=free)
        for end in ends
    ]
    text = " to ".join(_said(ask) for ask in asks)
    notes = []
    for ask in asks:
        _, told = within_reach(rig, ask)
        notes += [note for note in told if "limit" in note]
    limit = float(rig.magnet.rated_field_T)
    return Meant(f"{text}, may pass {rounded(limit)} T: cut there" if notes else f"{text}", True)


def temperature_meant(rig: Rig, target: dict[str, Any], written: Any) -> Meant:
    """Whether the stage holds a temperature; raises CannotError or ValueError as `field_meant` does."""
    asked = read_temperature(written)
    held = kelvin_of(rig, _carrier({"name": "any"}, {**target, "gates": {}, "temperature": written}))
    if asked.kelvin is None or asked.at_most:
        return Meant(f"base, {rounded(held * 1000)} mK", True)
    return Meant("", True)


def _ends(key: str, written: Any) -> list[float]:
    read = read_filling_or_range(written) if key == "filling" else None
    if key == "field":
        whole = isinstance(written, str) and " to " in written
        read = read_field_range(written) if whole else parse_amount(written, "T")
    return [read.first, read.last] if isinstance(read, Range) else [float(read or 0.0)]


def _asked(key: str, value: float) -> tuple[float | None, float | None]:
    return (value, None) if key == "field" else (None, value)


def _said(ask: FieldAsk) -> str:
    if not ask.uncertain:
        return f"{ask.field_T:.3f} T".replace("-", "−")
    return f"{ask.field_T:.3f} T ({ask.low_T:.3f} … {ask.high_T:.3f})".replace("-", "−")


@cache
def _nobody() -> Sample:
    """The sample of a field in tesla, which needs none."""
    return Sample.model_validate({"name": "any", "user": "any", "density": "1e11 cm^-2"})


def _sample(data: Any) -> Sample:
    try:
        return Sample.model_validate(data)
    except ValidationError as error:
        raise ValueError("the sample has problems of its own") from error


def _carrier(sample: Any, target: dict[str, Any]) -> Hold:
    """A target that carries the gates and the temperature of another of any kind."""
    name = sample.get("name", "any") if isinstance(sample, dict) else "any"
    data = {"name": "any", "kind": "hold", "sample": name, "filling": 1, "duration": "1 s"}
    more = {key: target[key] for key in ("gates", "temperature") if key in target}
    try:
        return Hold.model_validate({**data, **more})
    except ValidationError as error:
        raise ValueError("the target has problems of its own") from error
