"""Working the persistent switch at 6 T = 60 A: leads 2 A/s, warm 30 s, cool 60 s, hold 300 s before, 10 s after."""

from __future__ import annotations

from dataclasses import replace

import pytest

from planner.files.rig import Switch
from planner.moves import warming_leg
from planner.moves.switch import closing_legs, opening_legs
from planner.plan import Coil, CoilMode, along_z
from tests.builders import DRY, coil_at, rig

RIG = rig()


def switch() -> Switch:
    assert RIG.magnet.switch is not None
    return RIG.magnet.switch


@pytest.mark.parametrize("field_T", [6.0, -6.0])
def test_closing_holds_cools_then_brings_the_leads_down(field_T: float) -> None:
    hold, cool, leads = closing_legs(RIG, switch(), field_T)
    assert [(leg.action, leg.start_s, leg.end_s) for leg in (hold, cool, leads)] == [
        ("hold", 0, 300),
        ("heater off", 300, 360),
        ("leads", 360, 390),
    ]
    driven, parked = coil_at(field_T), coil_at(field_T, persistent=True)
    carrying = replace(parked, lead_current_A=along_z(field_T * 10))
    assert [leg.coil for leg in (hold, cool, leads)] == [(driven, driven), (driven, carrying), (carrying, parked)]
    assert leads.rate == pytest.approx(2.0)


@pytest.mark.parametrize("field_T", [6.0, -6.0])
def test_opening_matches_the_leads_first_with_the_coils_sign(field_T: float) -> None:
    parked = coil_at(field_T, persistent=True)
    leads, settle, heater = opening_legs(switch(), parked)
    assert [(leg.action, leg.start_s, leg.end_s) for leg in (leads, settle, heater)] == [
        ("leads", 0, 30),
        ("settle", 30, 40),
        ("heater on", 40, 70),
    ]
    matched = replace(parked, lead_current_A=along_z(field_T * 10))
    assert [leg.coil for leg in (leads, settle, heater)] == [
        (parked, matched),
        (matched, matched),
        (matched, coil_at(field_T)),
    ]


def test_opening_uses_the_logged_current_not_the_field() -> None:
    """JOB scenario 5: 10.236 T at 0.120 T/A is 85.30 A; at 120 A/min the leads take 43 s."""
    logged = Coil(along_z(10.236), CoilMode.PERSISTENT, along_z(0.0), along_z(85.30))
    leads, _, heater = opening_legs(switch(), logged)
    assert leads.seconds == 43
    assert leads.coil is not None
    assert leads.coil[1].lead_current_A == along_z(85.30)
    assert heater.coil is not None
    assert heater.coil[1] == Coil(along_z(10.236), CoilMode.DRIVEN, along_z(85.30))


def test_leads_part_of_the_way_up_have_less_to_go() -> None:
    part = replace(coil_at(6.0, persistent=True), lead_current_A=along_z(50.0))
    assert opening_legs(switch(), part)[0].seconds == 5
    wrong_sign = replace(part, lead_current_A=along_z(-60.0))
    assert opening_legs(switch(), wrong_sign)[0].seconds == 60


@pytest.mark.parametrize("current", ["unknown", None])
def test_no_switch_step_while_the_current_is_not_known(current: str | None) -> None:
    coil = replace(coil_at(6.0, persistent=True), persistent_current_A=current)  # type: ignore[arg-type]
    with pytest.raises(ValueError, match="not known: no switch step before staff confirm"):
        opening_legs(switch(), coil)


def test_the_switch_opens_at_zero_before_a_ramp() -> None:
    leg = warming_leg(RIG)
    assert leg is not None
    assert (leg.action, leg.seconds) == ("heater on", 30)
    assert leg.coil == (Coil(), Coil(mode=CoilMode.DRIVEN))
    assert warming_leg(rig(DRY)) is None
    assert warming_leg(rig({"magnet.switch.warm": "0 s"})) is None
