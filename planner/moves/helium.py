"""Helium along a plan: what each coil leg and each wait takes, and the least content it may start with."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

from planner.files.level import litres_for_trusted
from planner.files.rig import Bath, Rig
from planner.moves.field import field_legs
from planner.plan import Coil, CoilMode, Leg, magnitude


def rate_L_per_s(rig: Rig, coil: Coil) -> float:
    """Litres a second while nothing moves: static, switch heater if driven, leads by their current."""
    if rig.bath is None:
        return 0.0
    losses = rig.bath.losses
    heater = losses.switch_open_L_per_s if coil.mode is CoilMode.DRIVEN else 0.0
    return losses.static_L_per_s + heater + losses.leads_L_per_s_A * magnitude(coil.lead_current_A)


def leg_litres(rig: Rig, leg: Leg) -> float:
    """Litres a coil leg takes in all. Lead current that moves with the switch closed is no change of field."""
    if rig.bath is None or leg.coil is None:
        return 0.0
    losses = rig.bath.losses
    before, after = leg.coil
    heater_on = CoilMode.DRIVEN in (before.mode, after.mode) and leg.action != "heater off"
    amperes = (magnitude(before.lead_current_A) + magnitude(after.lead_current_A)) / 2
    per_s = losses.static_L_per_s + losses.leads_L_per_s_A * amperes
    per_s += losses.switch_open_L_per_s if heater_on else 0.0
    moved_T = magnitude((0.0, 0.0, after.field_T[2] - before.field_T[2]))
    return float(per_s * leg.seconds + losses.moving_L_per_T * moved_T)


def with_litres(rig: Rig, legs: Iterable[Leg]) -> tuple[Leg, ...]:
    """The same legs with their litres filled in."""
    return tuple(replace(leg, litres=leg_litres(rig, leg)) if leg.channel == "coil" else leg for leg in legs)


@dataclass(frozen=True)
class Lines:
    """The rig's helium lines in litres, gauge error included; all zero for a rig without a bath.

    ``recovering``: the week begins below a line, so that the reserve asks for nothing until helium has come.
    """

    rig: Rig
    recovering: bool = False

    @property
    def _bath(self) -> Bath | None:
        return self.rig.bath

    @property
    def start_ramp_L(self) -> float:
        """Below this no ramp to higher field starts."""
        return litres_for_trusted(self._bath, self._bath.lines.start_ramp_percent) if self._bath else 0.0

    @property
    def reserve_L(self) -> float:
        """Never below."""
        if self._bath is None or self.recovering:
            return 0.0
        return litres_for_trusted(self._bath, self._bath.lines.reserve_percent)

    def stay_L(self, coil: Coil) -> float:
        """The least content with the coil as it is.

        At a field: the at-field floor, or what a run-down from there needs to end at the coil's top, if that is more.
        """
        field_T = coil.field_T[2]
        if self._bath is None or field_T == 0:
            return self.reserve_L
        floor = litres_for_trusted(self._bath, self._bath.lines.at_field_percent)
        top = litres_for_trusted(self._bath, self._bath.lines.coil_top_percent)
        down = sum(leg_litres(self.rig, leg) for leg in field_legs(self.rig, field_T, 0.0))
        return max(floor, top + down)

    def least_start_L(self, legs: Iterable[Leg]) -> float:
        """The least content with which these coil legs (litres filled in) may start and keep every line.

        A ramp to higher field starts with its first rising leg. Legs that only run down ask for nothing themselves:
        what stands before them keeps the floor.
        """
        least, used, rising = 0.0, 0.0, False
        for leg in legs:
            if leg.channel != "coil" or leg.coil is None:
                continue
            before, after = (magnitude(coil.field_T) for coil in leg.coil)
            if after > before and not rising:
                least = max(least, self.start_ramp_L + used)
            rising = after > before
            used += leg.litres
            if after >= before:
                least = max(least, self.stay_L(leg.coil[1]) + used)
        return least
