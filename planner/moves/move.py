"""From one state to another: open the switch, change field, temperature and gates, close the switch."""

from __future__ import annotations

from dataclasses import replace

from planner.moves.field import driven, field_legs, joined
from planner.moves.helium import Lines
from planner.moves.setup import Setup, whole_seconds
from planner.moves.stretch import Stretch, delayed, end_of, held, stretch
from planner.moves.switch import closing_legs, opening_legs, warming_leg
from planner.moves.temperature import after_ramp_seconds, stage_seconds
from planner.plan import Coil, CoilMode, Gates, Leg, State


def move(setup: Setup, lines: Lines, before: State, after: State) -> tuple[Stretch, ...]:
    """The stretches that lead from one state to another; none where nothing changes.

    Raises
    ------
    ValueError
        If the switch would have to be worked with the persistent current unknown.
    """
    switch = setup.rig.magnet.switch
    keeps = before.coil == after.coil
    stretches = []
    here = before
    if before.coil.mode is CoilMode.PERSISTENT and not keeps and switch is not None:
        legs = opening_legs(switch, before.coil)
        last = legs[-1].coil
        assert last is not None
        opened = replace(before, coil=last[1])
        stretches.append(_switching(lines, "open switch", before, opened, legs, switch.attended))
        here = opened
    closes = after.coil.mode is CoilMode.PERSISTENT and not keeps and switch is not None
    there = replace(after, coil=driven(setup.rig, after.coil.field_T[2])) if closes else after
    changed = change(setup, lines, here, there)
    if changed is not None:
        stretches.append(changed)
    if closes and switch is not None:
        legs = closing_legs(setup.rig, switch, after.coil.field_T[2])
        stretches.append(_switching(lines, "close switch", there, after, legs, switch.attended))
    return tuple(stretches)


def _switching(lines: Lines, label: str, before: State, after: State, legs: tuple[Leg, ...], attended: bool) -> Stretch:
    people, training = (1, "switch") if attended else (0, "")
    return stretch(lines, label, before, after, legs, people=people, training=training, pace="switch and leads")


def change(setup: Setup, lines: Lines, before: State, after: State) -> Stretch | None:
    """Field, temperature and gates from one state to another with the switch as it is; None where nothing changes.

    What the rig allows together starts together; the rest follows, one after the other.
    """
    rig = setup.rig
    together = rig.policies.together
    coil_legs, ramped = _coil_legs(setup, before.coil, after.coil)
    channels = {
        "field": coil_legs,
        "temperature": _stage_legs(setup, before, after),
        "gates": _gate_legs(setup, before.gates_V, after.gates_V),
    }
    last = 0
    placed: dict[str, tuple[Leg, ...]] = {}
    for name in sorted(channels, key=lambda channel: channel not in together):
        placed[name] = delayed(channels[name], 0 if name in together else last)
        last = max(last, end_of(placed[name]))
    back = _settle_stage(setup, after, placed["field"], end_of(placed["temperature"])) if ramped else ()
    at = max(last, end_of(back))
    if at == 0:
        return None
    lead_in = held((), before.coil, placed["field"][0].start_s, "field follows") if placed["field"] else ()
    legs = held((*lead_in, *placed["field"]), after.coil, at, "held while the rest changes")
    beside = (*placed["temperature"], *back, *placed["gates"])
    label = "ramp" if ramped else "change"
    return stretch(lines, label, before, after, (*legs, *beside), pace=_pace((*legs, *beside), at))


def _pace(legs: tuple[Leg, ...], end_s: int) -> str:
    """What made it last so long: the longest leg on the channel that ends last, ramps before a settling included."""
    last = [leg for leg in legs if leg.end_s == end_s and leg.action != "hold"]
    if not last:
        return ""
    followed = [leg for leg in legs if leg.action == "ramp"] if last[0].action == "settle stage" else []
    same = [
        leg for leg in legs if leg.channel == last[0].channel and leg.action in (last[0].action, "ramp", "heater on")
    ]
    return max([*followed, *same], key=lambda leg: leg.seconds).reason


def _coil_legs(setup: Setup, before: Coil, after: Coil) -> tuple[tuple[Leg, ...], int]:
    """Legs of a field change, and the second at which the last ramp ends (0 without a ramp)."""
    from_T, to_T = before.field_T[2], after.field_T[2]
    if from_T == to_T:
        return (), 0
    rig = setup.rig
    warm = warming_leg(rig) if before.mode is CoilMode.ZERO else None
    lead_in = (warm,) if warm is not None else ()
    legs = joined((*lead_in, *delayed(field_legs(rig, from_T, to_T), end_of(lead_in))), before, after)
    ramped = end_of(legs)
    settled = ramped + whole_seconds(rig.magnet.settle_s)
    return (*legs, Leg("coil", "settle", ramped, settled, "magnet settles", coil=(after, after))), ramped


def _stage_legs(setup: Setup, before: State, after: State) -> tuple[Leg, ...]:
    from_K, to_K = before.stage.temperature_K, after.stage.temperature_K
    seconds = stage_seconds(setup.rig.stage, from_K, to_K)
    if seconds == 0:
        return ()
    action = "warm" if to_K > from_K else "cool"
    reason = "stage table" if setup.rig.stage.model is None else "stage model"
    return (Leg("stage", action, 0, seconds, reason, stage_K=(from_K, to_K)),)


def _settle_stage(setup: Setup, after: State, field: tuple[Leg, ...], changed_s: int) -> tuple[Leg, ...]:
    """What is left of the stage's settling after the last ramp once its own change of temperature is over."""
    wanted_K = after.stage.temperature_K
    ramped_s = max(leg.end_s for leg in field if leg.action != "settle")
    begins, settled = max(ramped_s, changed_s), ramped_s + after_ramp_seconds(setup.rig.stage, wanted_K)
    if settled <= begins:
        return ()
    reason = "stage settles after the ramp"
    return (Leg("stage", "settle stage", begins, settled, reason, stage_K=(wanted_K, wanted_K)),)


def gate_seconds(setup: Setup, before: Gates, after: Gates) -> int:
    """Seconds for all gates to go, each at its own rate, at the same time."""
    start = dict(before)
    return max(
        (whole_seconds(abs(volt - start[name]) / setup.gate_rates_V_per_s[name]) for name, volt in after), default=0
    )


def _gate_legs(setup: Setup, before: Gates, after: Gates) -> tuple[Leg, ...]:
    seconds = gate_seconds(setup, before, after)
    if seconds == 0:
        return ()
    return (Leg("gates", "gate ramp", 0, seconds, "gate rate", gates_V=(before, after)),)
