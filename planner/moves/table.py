"""All moves between many states at once, as arrays. `move` is the same for one pair, with its legs."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from planner.moves.field import driven, rate_stages
from planner.moves.helium import Lines, rate_L_per_s
from planner.moves.move import move
from planner.moves.setup import Setup, whole_seconds
from planner.moves.temperature import after_ramp_seconds, stage_seconds
from planner.plan import Coil, CoilMode, State

Ints = npt.NDArray[np.int64]
Floats = npt.NDArray[np.float64]
Bools = npt.NDArray[np.bool_]

OPEN, CHANGE, CLOSE = 0, 1, 2


@dataclass(frozen=True)
class MoveTable:
    """Moves between all pairs of states: shape (from, to, stretch) with stretches open, change, close in order.

    ``present`` says which stretches a move has; ``least_start_L`` is the least content each may start with;
    ``wait_L_per_s`` and ``stay_L`` hold for a wait after each; ``ramps`` whether the field moves; ``highest_T``
    the highest |B| on the way.
    """

    present: Bools
    seconds: Ints
    litres: Floats
    least_start_L: Floats
    wait_L_per_s: Floats
    stay_L: Floats
    ramps: Bools
    highest_T: Floats


@dataclass(frozen=True)
class _Places:
    """The states' parts as arrays."""

    field_T: Floats
    persistent: Bools
    zero: Bools
    gates_V: Floats
    kelvin: Floats


def move_table(setup: Setup, lines: Lines, states: Sequence[State]) -> MoveTable:
    """Every move between the states (all with the same gates); agrees exactly with `move`."""
    count = len(states)
    names = [name for name, _ in states[0].gates_V]
    places = _Places(
        np.array([state.coil.field_T[2] for state in states]),
        np.array([state.coil.mode is CoilMode.PERSISTENT for state in states]),
        np.array([state.coil.mode is CoilMode.ZERO for state in states]),
        np.array([[volt for _, volt in state.gates_V] for state in states]).reshape(count, len(names)),
        np.array([state.stage.temperature_K for state in states]),
    )
    shape = (count, count, 3)
    present, ramps = (np.zeros(shape, dtype=np.bool_) for _ in range(2))
    litres, least_L, wait, stay, highest_T = (np.zeros(shape) for _ in range(5))
    table = MoveTable(present, np.zeros(shape, dtype=np.int64), litres, least_L, wait, stay, ramps, highest_T)
    numbers = {coil: number for number, coil in enumerate(dict.fromkeys(state.coil for state in states))}
    coils = np.array([numbers[state.coil] for state in states])
    same_coil = coils[:, None] == coils[None, :]
    _switch_stretches(setup, lines, states, ~same_coil, table)
    _changes(setup, lines, states, places, same_coil, table)
    return table


def _switch_stretches(
    setup: Setup, lines: Lines, states: Sequence[State], coil_changes: Bools, table: MoveTable
) -> None:
    """Opening depends on where a move begins only, closing on where it ends."""
    for at, state in enumerate(states):
        if state.coil.mode is not CoilMode.PERSISTENT:
            continue
        open_state = replace(state, coil=driven(setup.rig, state.coil.field_T[2]))
        for slot, legs_of in ((OPEN, (state, open_state)), (CLOSE, (open_state, state))):
            if slot == OPEN and state.coil.persistent_current_A == "unknown":
                seconds, litres, least = 10**9, 0.0, 0.0  # no switch step before staff confirm: never fits
            else:
                done = move(setup, lines, *legs_of)[-1 if slot == CLOSE else 0]
                seconds, litres, least = done.seconds, done.litres, done.least_start_L
            where = (at, slice(None), slot) if slot == OPEN else (slice(None), at, slot)
            changes = coil_changes[at, :] if slot == OPEN else coil_changes[:, at]
            after = legs_of[1].coil
            table.present[where] = changes
            table.seconds[where] = np.where(changes, seconds, 0)
            table.litres[where] = np.where(changes, litres, 0.0)
            table.least_start_L[where] = np.where(changes, least, 0.0)
            table.wait_L_per_s[where] = rate_L_per_s(setup.rig, after)
            table.stay_L[where] = lines.stay_L(after)
            table.highest_T[where] = abs(state.coil.field_T[2])


@dataclass(frozen=True)
class _Ramps:
    """Straight ramps between unique fields: seconds, litres, those used before the first rising leg, reversals."""

    seconds: Ints
    litres: Floats
    litres_before_rise: Floats
    reverses: Bools


def _ramps(setup: Setup, fields_T: Floats) -> _Ramps:
    """Ramps between all pairs of the fields, piece by piece of the rate table, each rounded up as its leg is."""
    rig = setup.rig
    begin, finish = fields_T[:, None], fields_T[None, :]
    seconds = np.zeros((len(fields_T),) * 2, dtype=np.int64)
    litres, falling_litres = np.zeros(seconds.shape), np.zeros(seconds.shape)
    for stage in rate_stages(rig):
        for sign in (-1, 1):
            least, most = sorted((sign * stage.low_T, sign * stage.high_T))
            low = np.clip(np.minimum(begin, finish), least, most)
            high = np.clip(np.maximum(begin, finish), least, most)
            rising = (finish > begin) if sign > 0 else (finish < begin)
            rate = np.where(rising, stage.up_T_per_s, stage.down_T_per_s)
            taken = np.ceil(np.abs(high - low) / rate - 1e-6).astype(np.int64)
            used = _coil_litres(setup, taken, (np.abs(low) + np.abs(high)) / 2, high - low)
            seconds += taken
            litres += used
            falling_litres += np.where(rising, 0.0, used)
    turns = (begin < 0) != (finish < 0) if rig.magnet.supply.polarity == "unipolar" else np.zeros_like(seconds, bool)
    reversal = np.where(turns, whole_seconds(rig.magnet.supply.reversal_s), 0)
    turned = _coil_litres(setup, reversal, np.zeros(seconds.shape), np.zeros(seconds.shape))
    return _Ramps(seconds + reversal, litres + turned, falling_litres + turned, reversal > 0)


def _coil_litres(setup: Setup, seconds: Ints, mean_T: Floats, moved_T: Floats) -> Floats:
    """Litres of driven legs."""
    if setup.rig.bath is None:
        return np.zeros(seconds.shape)
    losses, per_A = setup.rig.bath.losses, setup.rig.magnet.field_per_current_T_per_A
    per_s = losses.static_L_per_s + losses.switch_open_L_per_s + losses.leads_L_per_s_A * mean_T / per_A
    return np.asarray(per_s * seconds + losses.moving_L_per_T * moved_T)


def _pairs(values: Floats, seconds_of: object) -> Ints:
    """A function of two temperatures, for all pairs of a few unique ones."""
    unique, index = np.unique(values, return_inverse=True)
    small = np.array([[seconds_of(a, b) for b in unique] for a in unique], dtype=np.int64)  # type: ignore[operator]
    return np.asarray(small[index[:, None], index[None, :]])


def _changes(
    setup: Setup, lines: Lines, states: Sequence[State], places: _Places, same_coil: Bools, table: MoveTable
) -> None:
    rig = setup.rig
    unique, index = np.unique(np.append(places.field_T, 0.0), return_inverse=True)
    index = index[:-1]
    ramps = _ramps(setup, unique)
    pick = (index[:, None], index[None, :])
    moved = places.field_T[:, None] != places.field_T
    warm = whole_seconds(rig.magnet.switch.warm_s) if rig.magnet.switch else 0
    warm_s = np.where(moved & places.zero[:, None], warm, 0)
    settle = whole_seconds(rig.magnet.settle_s)
    ramped_s = np.where(moved, warm_s + ramps.seconds[pick], 0)
    field_s = np.where(moved, ramped_s + settle, 0)
    stage_s = _pairs(places.kelvin, lambda a, b: stage_seconds(rig.stage, float(a), float(b)))
    back = np.array([after_ramp_seconds(rig.stage, float(kelvin)) for kelvin in places.kelvin])
    back_s = np.where(moved, back[None, :], 0)
    total, lead_in = _together(setup, field_s, ramped_s, back_s, stage_s, _gates_s(setup, states, places))

    rates = _hold_rates(setup, states)
    before_rate = np.where(same_coil, rates.stated[:, None], rates.driven[:, None])
    before_rate = np.where(places.zero[:, None], rates.stated[:, None], before_rate)
    after_rate = np.where(~same_coil & places.persistent[None, :], rates.driven[None, :], rates.stated[None, :])
    zeros = np.zeros(moved.shape)
    lead_in_L = np.where(moved, before_rate * lead_in, 0.0)
    warm_L = _coil_litres(setup, warm_s, zeros, zeros)
    settle_L = np.where(moved, after_rate * settle, 0.0)
    held_s = total - np.where(moved, lead_in + field_s, 0)
    ramp_L = np.where(moved, ramps.litres[pick], 0.0)
    litres = lead_in_L + warm_L + ramp_L + settle_L + after_rate * held_s

    stay = np.array([lines.stay_L(state.coil) for state in states])
    ends_falling = moved & (np.abs(places.field_T)[None, :] < np.abs(places.field_T)[:, None]) & ~_crosses(places)
    rises = moved & ~ends_falling
    quiet_end = ends_falling & (settle == 0) & (held_s == 0) & ~ramps.reverses[pick]
    least = np.where(quiet_end, 0.0, stay[None, :] + litres)
    before_rise = lead_in_L + warm_L + np.where(moved, ramps.litres_before_rise[pick], 0.0)
    least = np.where(rises, np.maximum(least, lines.start_ramp_L + before_rise), least)
    least = np.where(moved & (lead_in > 0), np.maximum(least, stay[:, None] + lead_in_L), least)

    present = total > 0
    table.present[:, :, CHANGE] = present
    table.seconds[:, :, CHANGE] = total
    table.litres[:, :, CHANGE] = np.where(present, litres, 0.0)
    table.least_start_L[:, :, CHANGE] = np.where(present, least, 0.0)
    table.wait_L_per_s[:, :, CHANGE] = after_rate
    table.stay_L[:, :, CHANGE] = stay[None, :]
    table.ramps[:, :, CHANGE] = moved
    table.highest_T[:, :, CHANGE] = np.maximum(np.abs(places.field_T)[:, None], np.abs(places.field_T)[None, :])


def _crosses(places: _Places) -> Bools:
    return np.asarray(places.field_T[:, None] * places.field_T[None, :] < 0)


def _gates_s(setup: Setup, states: Sequence[State], places: _Places) -> Ints:
    seconds = np.zeros((len(states),) * 2, dtype=np.int64)
    for column, (name, _) in enumerate(states[0].gates_V):
        volts = places.gates_V[:, column]
        apart = np.abs(volts[:, None] - volts[None, :]) / setup.gate_rates_V_per_s[name]
        seconds = np.maximum(seconds, np.ceil(apart - 1e-6).astype(np.int64))
    return seconds


def _together(
    setup: Setup, field_s: Ints, ramped_s: Ints, back_s: Ints, stage_s: Ints, gates_s: Ints
) -> tuple[Ints, Ints]:
    """Seconds of the whole change, and when its field part begins."""
    together = setup.rig.policies.together
    last, lead_in = np.zeros_like(field_s), np.zeros_like(field_s)
    channels = {"field": field_s, "temperature": stage_s, "gates": gates_s}
    for name in sorted(channels, key=lambda channel: channel not in together):
        begins = np.zeros_like(last) if name in together else last
        last = np.maximum(last, np.where(channels[name] > 0, begins + channels[name], 0))
        if name == "field":
            lead_in = np.where(field_s > 0, begins, 0)
    settled = np.where((ramped_s > 0) & (back_s > 0), lead_in + ramped_s + back_s, 0)
    return np.maximum(last, settled), lead_in


@dataclass(frozen=True)
class _Rates:
    stated: Floats
    driven: Floats


def _hold_rates(setup: Setup, states: Sequence[State]) -> _Rates:
    def rates(coils: list[Coil]) -> Floats:
        return np.array([rate_L_per_s(setup.rig, coil) for coil in coils])

    coils = [state.coil for state in states]
    return _Rates(rates(coils), rates([driven(setup.rig, coil.field_T[2]) for coil in coils]))
