"""What is set on the supply, the switch and the gates in a step, in tesla and ampere, from the legs of the plan."""

from __future__ import annotations

from dataclasses import dataclass

from planner.plan import Coil, CoilMode, Leg, Step
from planner.runsheet.wording import WallTimes, ampere, clean, duration, fixed, per_minute, significant, tesla

MOVING = ("ramp", "sweep")
MOST_GATE_LINES = 6

_ACTIONS = {
    "settle": "settle",
    "hold": "hold",
    "heater on": "switch heater ON, wait",
    "heater off": "switch heater OFF, wait",
    "reverse": "reverse polarity at 0 A",
}


@dataclass(frozen=True, slots=True)
class SetPoint:
    """One thing to set, or to wait for, and when. Field and current are None where nothing is set."""

    second: int
    at: str
    action: str
    lasts: str
    field_T: float | None = None
    current_A: float | None = None
    rate_T_per_s: float | None = None
    rate_A_per_s: float | None = None

    @property
    def target(self) -> str:
        """The set-point in tesla and ampere."""
        if self.current_A is None:
            return ""
        return ampere(self.current_A) if self.field_T is None else f"{tesla(self.field_T)} = {ampere(self.current_A)}"

    @property
    def rate(self) -> str:
        """The rate in T/min and A/min."""
        if self.rate_A_per_s is None:
            return ""
        in_ampere = per_minute(self.rate_A_per_s, "A")
        return in_ampere if self.rate_T_per_s is None else f"{per_minute(self.rate_T_per_s, 'T')} = {in_ampere}"


def joined(legs: tuple[Leg, ...]) -> list[Leg]:
    """The coil's legs; neighbours that move the same way at the same rate are one, as the supply sees them."""
    whole: list[Leg] = []
    for leg in (leg for leg in legs if leg.channel == "coil"):
        last = whole[-1] if whole else None
        if last is not None and last.coil and leg.coil and _goes_on(last, leg):
            whole[-1] = Leg(
                leg.channel,
                leg.action,
                last.start_s,
                leg.end_s,
                leg.reason,
                last.litres + leg.litres,
                leg.rate,
                (last.coil[0], leg.coil[1]),
            )
        else:
            whole.append(leg)
    return whole


def _goes_on(last: Leg, leg: Leg) -> bool:
    if last.action != leg.action:
        return False
    if leg.action not in MOVING:
        return leg.action in ("settle", "hold") and last.coil == leg.coil
    return last.rate == leg.rate and (change_T(last) > 0) == (change_T(leg) > 0)


def change_T(leg: Leg) -> float:
    """How far a leg moves the field, signed."""
    return leg.coil[1].field_T[2] - leg.coil[0].field_T[2] if leg.coil else 0.0


def coil_set_points(step: Step, walls: WallTimes, field_per_current_T_per_A: float) -> tuple[SetPoint, ...]:
    """The coil's part of a step, one line for each thing set or waited for, in time order."""
    return tuple(_set_point(leg, walls, field_per_current_T_per_A) for leg in joined(step.legs))


def _set_point(leg: Leg, walls: WallTimes, per_current: float) -> SetPoint:
    at, lasts = walls.time(leg.start_s), duration(leg.seconds)
    if leg.coil is None or leg.action in _ACTIONS:
        return SetPoint(leg.start_s, at, _ACTIONS.get(leg.action, clean(leg.action)), lasts)
    after = leg.coil[1]
    if leg.action == "leads":
        return SetPoint(
            leg.start_s, at, "leads to", lasts, None, after.lead_current_A[2], None, abs(leg.rate) if leg.rate else None
        )
    rate_T_per_s = abs(leg.rate) if leg.rate else None
    return SetPoint(
        leg.start_s,
        at,
        f"{clean(leg.action)} to",
        lasts,
        after.field_T[2],
        after.field_T[2] / per_current,
        rate_T_per_s,
        rate_T_per_s / per_current if rate_T_per_s is not None else None,
    )


def mode_words(coil: Coil) -> str:
    """Who carries the coil's current."""
    if coil.mode == CoilMode.ZERO:
        return "no current"
    if coil.mode == CoilMode.DRIVEN:
        return "driven"
    trapped = coil.persistent_current_A
    if trapped == "unknown":
        return f"persistent, trapped current UNKNOWN, leads {ampere(coil.lead_current_A[2])}"
    return f"persistent, leads {ampere(coil.lead_current_A[2])}"


def mode_change(before: Coil, after: Coil) -> str:
    """The coil's mode through a step."""
    first, last = mode_words(before), mode_words(after)
    return first if first == last else f"{first} → {last}"


def gate_lines(step: Step) -> tuple[str, ...]:
    """What the gates do in a step: changes with their rate, then what is held away from zero."""
    lines: list[str] = []
    moved: set[str] = set()
    for leg in step.legs:
        if leg.channel != "gates" or leg.gates_V is None:
            continue
        before, after = dict(leg.gates_V[0]), dict(leg.gates_V[1])
        changed = [name for name in after if before.get(name, 0.0) != after[name]]
        moved.update(changed)
        rate = f" at {significant(abs(leg.rate) * 1000)} mV/s" if leg.rate else f" in {duration(leg.seconds)}"
        sweep = "sweep " if "sweep" in leg.action else ""
        lines += [f"{clean(n)} {sweep}{_volt(before.get(n, 0.0))} → {_volt(after[n])} V{rate}" for n in changed]
    more = len(lines) - MOST_GATE_LINES
    if more > 0:
        lines = [*lines[:MOST_GATE_LINES], f"… and {more} more gate moves (all are in the plan file)"]
    before = dict(step.before.gates_V)
    for name, volt in step.after.gates_V:
        if name not in moved and before.get(name, volt) != volt:
            lines.append(f"{clean(name)} {_volt(before[name])} → {_volt(volt)} V")
        elif name not in moved and volt != 0:
            lines.append(f"{clean(name)} {_volt(volt)} V")
    return tuple(lines)


def _volt(volt: float) -> str:
    return fixed(volt, 4).rstrip("0").rstrip(".")
