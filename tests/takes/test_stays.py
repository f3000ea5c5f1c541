"""Holds, temperature series and other work; coil ways; fields of fillings."""

from __future__ import annotations

import pytest

from planner.plan import CoilMode
from tests.builders import DRY, REMOVED, Changes
from tests.takes.wishes import FILLING_1_T, field_T, one_take, refusal, seconds, takes_of, wish


def hold(**keys: object) -> Changes:
    return wish("hold", **{"field": "1 T", "duration": "10 min", **keys})


def at_filling(filling: object, **keys: object) -> Changes:
    return wish("hold", filling=filling, duration="10 min", **keys)


def test_a_hold_lasts_what_is_asked_rounded_up() -> None:
    take = one_take(hold(duration="90.5 s", coil="driven"))
    assert seconds(take) == [91]
    (way,) = take.alternatives
    assert way.entry == way.exit
    assert not way.stretches[0].needs.ramps
    assert way.stretches[0].litres == pytest.approx(91 * (1e-4 + 5e-5 + 10e-6))
    assert (take.name, take.user, take.label) == ("T1", "U1", "hold at 1 T")


# Driven or persistent


def coils(target: Changes, **changes: object) -> list[str]:
    return [way.coil for way in one_take(target, **changes).alternatives]


def test_a_stay_may_be_driven_or_persistent() -> None:
    assert coils(hold()) == ["driven", "persistent"]
    assert coils(hold(coil="driven")) == ["driven"]
    assert coils(hold(coil="persistent")) == ["persistent"]
    assert coils(hold(field="0 T")) == ["zero"]
    assert coils(hold(field="0 T", coil="persistent")) == ["zero"]


def test_a_persistent_stay_has_the_leads_down() -> None:
    (way,) = one_take(hold(field="-6 T", coil="persistent")).alternatives
    coil = way.entry.coil
    assert coil.mode is CoilMode.PERSISTENT
    assert coil.lead_current_A == (0, 0, 0)
    assert coil.persistent_current_A == pytest.approx((0, 0, -60))
    assert way.stretches[0].litres == pytest.approx(600 * 1e-4)


def test_a_site_that_lets_no_persistent_field_stand_unattended() -> None:
    strict: Changes = {"policies": {"unattended_persistent": False}}
    assert coils(hold(), rig=strict) == ["driven"]
    assert coils(hold(attended=True), rig=strict) == ["driven", "persistent"]
    assert "lets no persistent field stand unattended" in refusal(hold(coil="persistent"), rig=strict)


def test_a_rig_without_a_switch() -> None:
    assert coils(hold(), rig=DRY) == ["driven"]
    assert "has no persistent switch" in refusal(hold(coil="persistent"), rig={"magnet.switch": REMOVED})


# Fields of fillings: B = n h / (e ν), filling 1 at 8.2713 T


@pytest.mark.parametrize(
    ("filling", "field"), [(1, 8.2713), (2, 4.1357), ("5/2", 3.3085), (4, 2.0678), ("-2", -4.1357), ("-5/2", -3.3085)]
)
def test_electrons_have_positive_fillings_at_positive_field(filling: object, field: float) -> None:
    take = one_take(at_filling(filling, coil="driven"))
    assert field_T(take.alternatives[0]) == pytest.approx(field, abs=5e-5)
    assert take.label == f"hold at ν = {filling}"


def test_holes_have_negative_fillings_at_positive_field() -> None:
    holes: Changes = {"samples.0.carriers": "holes"}
    assert field_T(one_take(at_filling(-2), week=holes).alternatives[0]) == pytest.approx(FILLING_1_T / 2)
    assert field_T(one_take(at_filling(2), week=holes).alternatives[0]) == pytest.approx(-FILLING_1_T / 2)


@pytest.mark.parametrize(
    ("gates", "more", "density_per_m2"),
    [
        ({}, {}, 2.0e15),
        ({"top": "0.5 V"}, {}, 2.5e15),  # 1e15 per m² and volt
        ({"top": "-0.5 V"}, {}, 1.5e15),
        ({"back": "1 V"}, {}, 2.0e15),  # a gate without a slope does nothing
        ({"top": "0.5 V"}, {"samples.0.gates.0.reference": "0.2 V"}, 2.3e15),
        ({}, {"samples.0.gates.0.rest": "-0.3 V"}, 1.7e15),  # at rest it counts as well
        ({"top": "0.5 V", "back": "1 V"}, {"samples.0.gates.1.density_slope": "0.2e11 cm^-2/V"}, 2.7e15),
        ({"top": "0.5 V"}, {"samples.0.carriers": "holes"}, -1.5e15),  # a positive gate takes holes away
    ],
)
def test_gates_tune_the_density(gates: Changes, more: Changes, density_per_m2: float) -> None:
    filling = 2 if density_per_m2 > 0 else -2
    (way,) = one_take(at_filling(filling, gates=gates, coil="driven"), week=more).alternatives
    assert field_T(way) == pytest.approx(FILLING_1_T / 2 * abs(density_per_m2) / 2e15)


def test_gates_that_empty_the_sample() -> None:
    wide: Changes = {"samples.0.gates.0.lowest": "-3 V"}
    assert "without carriers" in refusal(at_filling(2, gates={"top": "-2 V"}), week=wide)


def test_an_uncertain_density_gives_an_interval() -> None:
    take = one_take(at_filling(2), week={"samples.0.density_error": "5 %"})
    assert field_T(take.alternatives[0]) == pytest.approx(FILLING_1_T / 2)
    assert take.notes == ("ν = 2: 4.136 T, between 3.929 and 4.342 T by the density",)


def test_the_gates_part_of_the_density_counts_as_known() -> None:
    take = one_take(at_filling(2, gates={"top": "-0.5 V"}), week={"samples.0.density_error": "5 %"})
    # 1.5e15 at 3.1018 T; the uncertainty stays 5 % of 2e15, worth 0.2068 T
    assert take.notes == ("ν = 2: 3.102 T, between 2.895 and 3.309 T by the density",)


def test_an_interval_that_straddles_the_limit_is_cut() -> None:
    take = one_take(at_filling(0.8), week={"samples.0.density_error": "5 %"})
    # 10.339 T, from 9.822 T on
    assert field_T(take.alternatives[0]) == 10
    assert take.notes[-1] == "ν = 0.8 may lie beyond the limit: cut at 10 T until the density is known"
    negative = one_take(at_filling("-0.8"), week={"samples.0.density_error": "5 %"})
    assert field_T(negative.alternatives[0]) == -10


@pytest.mark.parametrize(
    ("filling", "error", "lies_at"), [("1/3", "0 %", "24.814"), (0.8, "0 %", "10.339"), (0.7, "5 %", "11.816")]
)
def test_an_interval_wholly_beyond_the_limit_is_impossible(filling: object, error: str, lies_at: str) -> None:
    reason = refusal(at_filling(filling), week={"samples.0.density_error": error})
    assert reason == f"ν = {filling} lies at {lies_at} T; this rig reaches 10 T"


def test_exactly_the_rated_field_is_in_reach() -> None:
    assert seconds(one_take(hold(field="10 T", coil="driven"))) == [600]
    assert "reaches 10 T" in refusal(hold(field="10.001 T"))


# Temperatures


@pytest.mark.parametrize(
    ("written", "kelvin"), [("base", 0.02), ("50 mK", 0.05), ("≤ 50 mK", 0.02), ("<= 20 mK", 0.02), ("1 K", 1.0)]
)
def test_temperatures(written: str, kelvin: float) -> None:
    way = one_take(hold(temperature=written)).alternatives[0]
    assert way.entry.stage.temperature_K == kelvin


@pytest.mark.parametrize("written", ["10 mK", "≤ 10 mK", "1.5 K"])
def test_temperatures_the_stage_cannot_hold(written: str) -> None:
    assert "this stage holds 20 mK to 1 K" in refusal(hold(temperature=written))


def test_a_temperature_series_is_a_take_a_temperature() -> None:
    takes = takes_of(
        wish("temperature series", filling=2, temperatures=["20 mK", "100 mK", "1 K"], duration="10 min", coil="driven")
    )
    assert [take.name for take in takes] == ["T1 · 1", "T1 · 2", "T1 · 3"]
    assert [take.alternatives[0].entry.stage.temperature_K for take in takes] == [0.02, 0.1, 1.0]
    assert [seconds(take) for take in takes] == [[600], [600], [600]]
    assert [field_T(take.alternatives[0]) for take in takes] == pytest.approx([FILLING_1_T / 2] * 3)
    assert takes[1].label == "ν = 2 at 100 mK"


def test_a_series_with_one_temperature_too_high_is_impossible_as_a_whole() -> None:
    target = wish("temperature series", field="1 T", temperatures=["20 mK", "2 K"], duration="10 min")
    assert refusal(target) == "2 K: this stage holds 20 mK to 1 K"


# Other work


def test_other_work_needs_a_state_and_perhaps_people() -> None:
    plain = one_take(wish("other work", what="anneal", duration="30 min"))
    (way,) = plain.alternatives
    assert (plain.label, way.stretches[0].seconds, way.coil) == ("anneal", 1800, "zero")
    assert way.stretches[0].needs.people == 0
    trained = one_take(wish("other work", what="LED", duration="30 min", training="light", people=2, field="1 T"))
    needs = trained.alternatives[0].stretches[0].needs
    assert (needs.people, needs.training) == (2, "light")
    attended = one_take(wish("other work", what="look", duration="30 min", attended=True))
    assert attended.alternatives[0].stretches[0].needs.people == 1
