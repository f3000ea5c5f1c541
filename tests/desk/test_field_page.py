"""Fields of fillings, reach and offers: the unreachable filling of the acceptance scenarios, gates, tilt, signs.

Numbers of the scenario are invented; its fields are B = n·h/(e·nu) with h/e = 4.135 667 7e-15 T·m² (SI of 2019).
"""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from planner.desk.field_page import FillingRow, Offer, Reach, default_fillings, field_page
from planner.desk.layer import GateLine, Layer, layer_of_sample, sample_named, typed_layer, uncertainty_of, with_density
from planner.errors import InputError, OutOfRangeError
from planner.files import Rig, parse_rig, read_week
from planner.takes.conditions import field_of

REF_W = (Path(__file__).parents[1] / "data" / "ref_w.rig.toml").read_text(encoding="utf-8")
EXAMPLES = Path(__file__).parents[2] / "example_plans"
THIRD, TWO_THIRDS, THREE_FIFTHS = Fraction(1, 3), Fraction(2, 3), Fraction(3, 5)


def rig(*, with_lambda: bool = True) -> Rig:
    """REF-W, with its 14 T below the lambda point and a supply that reaches them."""
    text = REF_W.replace('max_current = "100 A"', 'max_current = "120 A"')
    return (
        parse_rig(text.replace('inductance = "20 H"', 'inductance = "20 H"\nlambda_field = "14 T"'))
        if (with_lambda)
        else parse_rig(text)
    )


def row(layer: Layer, filling: float | Fraction, which: Rig | None, tilt_deg: float = 0.0) -> FillingRow:
    return field_page(layer, [filling], which, tilt_rad=float(np.radians(tilt_deg))).rows[0]


def offers(found: FillingRow, kind: str) -> list[Offer]:
    return [offer for offer in found.offers if offer.kind == kind]


def test_one_third_at_this_density_is_out_of_reach_at_any_setting() -> None:
    third = row(Layer(1.65e15), THIRD, rig())
    assert third.field_T == pytest.approx(20.47, abs=0.005)
    assert third.reach is Reach.NO
    assert (third.tilt_deg, third.lambda_tilt_deg) == (None, None)


def test_it_offers_the_nearest_fillings_and_densities() -> None:
    third = row(Layer(1.65e15), THIRD, rig())
    texts = [offer.text for offer in offers(third, "filling")]
    assert "ν = 2/3 at 10.24 T, its mirror" in texts
    assert "ν = 3/5 at 11.37 T" in texts
    assert all(offer.limit_T == 12 for offer in offers(third, "filling"))
    assert [(offer.text, offer.limit_T) for offer in offers(third, "density")] == [
        ("n ≤ 0.967e11 cm^-2 (12 T)", 12.0),
        ("n ≤ 1.128e11 cm^-2 (14 T, lambda)", 14.0),
    ]


def test_the_tilt_it_would_allow() -> None:
    layer = Layer(1.65e15)
    flat = row(layer, TWO_THIRDS, rig())
    assert flat.reach is Reach.YES
    assert flat.tilt_deg is not None
    assert flat.lambda_tilt_deg is not None
    assert int(flat.tilt_deg) == 31
    assert int(flat.lambda_tilt_deg) == 43
    tilted = row(layer, TWO_THIRDS, rig(), tilt_deg=50)
    assert tilted.total_T == pytest.approx(15.9, abs=0.05)
    assert tilted.reach is Reach.NO
    assert [offer.text for offer in offers(tilted, "tilt")] == ["tilt ≤ 31.4° (12 T)", "tilt ≤ 43° (14 T, lambda)"]


def test_a_nominal_density_makes_fields_provisional() -> None:
    layer = Layer(1.65e15, 0.05 * 1.65e15)
    page = field_page(layer, [THIRD, Fraction(4, 7), THREE_FIFTHS], rig(with_lambda=False))
    assert [each.reach for each in page.rows] == [Reach.NO, Reach.PROVISIONAL, Reach.YES]
    assert page.rows[2].high_T == pytest.approx(1.05 * 11.373, abs=1e-3)
    assert page.rows[2].low_T == pytest.approx(0.95 * 11.373, abs=1e-3)
    assert "provisional until it is measured" in page.words[0]
    # The offered density keeps the whole interval in reach: n + 5 % of today's n at the limit.
    (density,) = offers(page.rows[0], "density")
    assert density.value + layer.uncertainty_per_m2 == pytest.approx(0.9672e15, rel=1e-4)


def test_a_field_between_the_two_limits_needs_the_lambda_point() -> None:
    layer = Layer(1.0e15)
    assert row(layer, THIRD, rig()).reach is Reach.LAMBDA
    assert row(layer, THIRD, rig(with_lambda=False)).reach is Reach.NO
    assert row(Layer(1.13e15, 0.02e15), THIRD, rig()).reach is Reach.LAMBDA_PROVISIONAL


def test_reaching_the_limit_exactly_is_in_reach() -> None:
    at_limit = Layer(12.0 / 3 / 4.135667696923859e-15)
    assert row(at_limit, THIRD, rig(with_lambda=False)).reach is Reach.YES


def test_without_a_rig_nothing_is_said_of_reach() -> None:
    bare = row(Layer(1.65e15), THIRD, None)
    assert bare.reach is Reach.UNKNOWN
    assert bare.offers == ()


def test_the_gate_voltage_that_brings_a_filling_in_reach_does() -> None:
    layer = typed_layer(1.65e15, "2 %", gate_slope_per_m2_V=0.7e15, gate_reference_V=0.1)
    (gate, _) = offers(row(layer, THIRD, rig()), "gate")
    moved = typed_layer(1.65e15, None, False, 0.7e15, 0.1, gate.value)
    there = row(Layer(moved.now_per_m2, layer.uncertainty_per_m2), THIRD, rig())
    assert there.reach is Reach.YES
    assert max(abs(there.low_T), abs(there.high_T)) == pytest.approx(12.0, rel=1e-9)
    shown = float(gate.text.split()[2])
    assert 0.7e15 * shown <= 0.7e15 * gate.value  # rounded towards reach


def test_a_gate_offer_outside_its_window_says_so() -> None:
    gate = GateLine("top", 0.7e15, 0.0, 0.0, lowest_V=-0.5, highest_V=0.5)
    (first, *_) = offers(row(Layer(1.65e15, 0.0, (gate,)), THIRD, rig()), "gate")
    assert "outside its window" in first.text


def test_holes_need_the_field_reversed_and_have_the_same_reach() -> None:
    electrons, holes = row(Layer(1.65e15), TWO_THIRDS, rig()), row(Layer(-1.65e15), TWO_THIRDS, rig())
    assert holes.field_T == -electrons.field_T
    assert holes.reach is electrons.reach
    assert holes.tilt_deg == electrons.tilt_deg
    gate = GateLine("top", 0.7e15)
    (offer, *_) = offers(row(Layer(-1.65e15, 0.0, (gate,)), THIRD, rig()), "gate")
    assert offer.value == pytest.approx((1.65e15 - 0.96720e15) / 0.7e15, rel=1e-4)


def test_plateau_gap_and_temperature() -> None:
    layer = Layer(1e15)
    third = row(layer, THIRD, None)
    assert third.plateau_ohm == pytest.approx(77438.42238, rel=1e-8)  # h/e² exact, CODATA 2018
    assert third.resolve_K == pytest.approx((third.gap_K or 0) / (2 * np.log(100)), rel=1e-12)
    half = row(layer, 0.5, None)
    assert not half.plateau
    assert half.gap_K is None
    assert "even denominator" in half.notes[0]
    assert row(layer, 0.7071, None).notes == ("no simple fraction: a point on the Hall line, no plateau",)


def test_the_listed_fillings_are_those_of_the_trade() -> None:
    """Integers to about twenty, fractions of odd denominator, 5/2 the exception: common practice, no source."""
    listed = default_fillings()
    assert {Fraction(*pair) for pair in ((1, 3), (2, 5), (3, 7), (4, 9), (2, 3), (3, 5), (4, 7), (5, 9))} <= set(listed)
    assert {Fraction(4, 3), Fraction(7, 5), Fraction(5, 2), Fraction(20)} <= set(listed)
    assert [each for each in listed if each.denominator % 2 == 0] == [Fraction(5, 2)]


@settings(deadline=None, max_examples=40)
@given(st.floats(0.3e15, 8e15), st.sampled_from([1, -1]), st.floats(0, 0.2), st.floats(0, 60))
def test_whatever_is_offered_is_in_reach(density: float, sign: int, share: float, tilt_deg: float) -> None:
    which, layer = rig(), Layer(sign * density, share * density)
    asked = [THIRD, 0.5, TWO_THIRDS, 1, 2, -2]
    for found in field_page(layer, asked, which, tilt_rad=float(np.radians(tilt_deg))).rows:
        for offer in offers(found, "filling"):
            assert offer.value * found.filling > 0
            assert furthest_T(layer, Fraction(offer.value).limit_denominator(30), tilt_deg) <= offer.limit_T * (
                1 + 1e-9
            )
        for offer in offers(found, "density"):
            if offer.value > layer.uncertainty_per_m2:
                there = Layer(sign * offer.value, layer.uncertainty_per_m2)
                assert furthest_T(there, found.filling, tilt_deg) == pytest.approx(offer.limit_T, rel=1e-9)


def furthest_T(layer: Layer, filling: float | Fraction, tilt_deg: float) -> float:
    there = row(layer, filling, None, tilt_deg)
    return max(abs(there.low_T), abs(there.high_T)) / float(np.cos(np.radians(tilt_deg)))


def test_a_sample_of_a_week_gives_the_fields_its_plan_will_use() -> None:
    request = read_week(EXAMPLES / "shared_week.toml")
    compared = 0
    for target in request.week.targets:
        filling = getattr(target, "filling", None)
        if not isinstance(filling, float):
            continue
        sample = request.week.sample(target.sample)
        planned = field_of(target, sample, None, filling)
        found = row(layer_of_sample(sample, target.gates), filling, request.rig)
        assert (found.field_T, found.low_T, found.high_T) == pytest.approx(
            (planned.field_T, planned.low_T, planned.high_T), rel=1e-12
        )
        compared += 1
    assert compared > 5


def test_names_and_uncertainties_that_are_wrong_say_so() -> None:
    week = read_week(EXAMPLES / "shared_week.toml").week
    with pytest.raises(InputError, match="expected a sample of this week"):
        sample_named(week, "nobody")
    with pytest.raises(InputError, match="expected a gate of this sample"):
        layer_of_sample(week.samples[0], {"side": 0.1})
    with pytest.raises(InputError, match="less than the density"):
        typed_layer(1e15, "120 %")
    with pytest.raises(OutOfRangeError, match="without carriers"):
        field_page(typed_layer(1e15, None, gate_slope_per_m2_V=1e15, gate_voltage_V=-1.0), [1])
    assert uncertainty_of("0.05e11 cm^-2", 1e15) == pytest.approx(0.05e15)
    assert with_density(Layer(-1e15, 1e13), 2e15, None) == Layer(-2e15, 0.0)
    assert with_density(Layer(-1e15, 1e13), None, None) == Layer(-1e15, 1e13)


def test_frame_and_data_carry_units_in_their_names() -> None:
    page = field_page(Layer(1.65e15), None, rig())
    frame = page.frame()
    assert {"filling", "field_T", "low_T", "high_T", "plateau_ohm", "gap_K", "offers"} <= set(frame.columns)
    assert len(frame) == len(page.rows)
    assert page.data()["rows"][0]["offers"][0]["unit"] == ""
