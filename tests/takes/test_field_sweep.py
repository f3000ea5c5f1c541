"""Field sweeps by hand: the rig's rates are 0.005 T/s up to 6 T, 0.002 T/s up to 8 T, 0.001 T/s up to 10 T."""

from __future__ import annotations

import math

import pytest
from scipy.stats import gamma

from planner.plan import Coil, CoilMode
from tests.builders import DRY, REMOVED, Changes
from tests.takes.wishes import FILLING_1_T, coil_legs, field_T, one_take, refusal, seconds, wish

LOCKIN = {"time_constant": "1 s"}


def legs_of(take_way: object) -> list[tuple[str, int]]:
    return [(leg.action, leg.seconds) for leg in coil_legs(take_way)]  # type: ignore[arg-type]


def test_up_at_a_rate_asked() -> None:
    take = one_take(wish("field sweep", field="0 T to 9 T", rate="0.2 T/min", direction="up"))
    (way,) = take.alternatives
    # switch 30 s; 6 T at 1/300 T/s; then the magnet's own 0.002 and 0.001 T/s are slower
    assert legs_of(way) == [("heater on", 30), ("sweep", 1800), ("sweep", 1000), ("sweep", 1000)]
    assert [leg.reason for leg in coil_legs(way)[1:]] == ["rate asked", "rate table 6–8 T", "rate table 8–10 T"]
    assert way.stretches[0].pace == "rate asked"
    assert (way.direction, way.coil) == ("up", "driven")
    assert (way.entry.coil.mode, way.exit.coil.mode) == (CoilMode.ZERO, CoilMode.DRIVEN)
    assert "0.2 T/min asked; the magnet allows 0.06 T/min in the slowest part" in take.notes[0]


@pytest.mark.parametrize(
    ("direction", "ways"),
    [
        ("up", {"up": (1.0, 5.0, 800)}),
        ("down", {"down": (5.0, 1.0, 800)}),
        ("either", {"up": (1.0, 5.0, 800), "down": (5.0, 1.0, 800)}),
        ("both", {"up, down": (1.0, 1.0, 1600), "down, up": (5.0, 5.0, 1600)}),
    ],
)
def test_directions(direction: str, ways: dict[str, tuple[float, float, int]]) -> None:
    take = one_take(wish("field sweep", field="5 T to 1 T", direction=direction))  # as the file writes it, up is up
    found = {
        way.direction: (field_T(way), way.exit.coil.field_T[2], way.stretches[0].seconds) for way in take.alternatives
    }
    assert found == ways


def test_there_and_back_from_zero_and_from_the_top() -> None:
    take = one_take(wish("field sweep", field="0 T to 9 T", rate="0.2 T/min"))
    up_down, down_up = take.alternatives
    assert up_down.stretches[0].seconds == 30 + 2 * 3800
    assert up_down.exit.coil == Coil()
    assert down_up.stretches[0].seconds == 2 * 3800  # begins driven: no switch to open
    assert {leg.coil[0].mode for leg in coil_legs(down_up) if leg.coil} == {CoilMode.DRIVEN}  # nor at zero in between


def test_through_zero_the_supply_carries_on() -> None:
    take = one_take(wish("field sweep", field="-1 T to 1 T", rate="0.1 T/min", direction="up"))
    (way,) = take.alternatives
    assert legs_of(way) == [("sweep", 600), ("sweep", 600)]
    middle = coil_legs(way)[0].coil
    assert middle is not None
    assert middle[1].mode is CoilMode.DRIVEN


def test_honest_rate_of_the_lock_in() -> None:
    """JOB scenario 3: 20 mT features, 1 s, one pole, 10 points, 99 % settled: 26.1 mT/min."""
    settle_s = float(gamma.ppf(0.99, a=1, scale=1.0))
    assert settle_s == pytest.approx(4.605, abs=1e-3)
    rate_T_per_s = 0.020 / (10 * settle_s)
    assert rate_T_per_s * 60e3 == pytest.approx(26.1, abs=0.05)
    take = one_take(wish("field sweep", field="1 T to 4 T", feature="20 mT", direction="up", lockin=LOCKIN))
    (leg,) = coil_legs(take.alternatives[0])
    assert leg.rate == pytest.approx(rate_T_per_s)
    assert leg.seconds == math.ceil(3 / rate_T_per_s)
    assert leg.reason == "lock-in"


@pytest.mark.parametrize(("poles", "points", "percent"), [(1, 10, 99), (2, 10, 99), (4, 20, 99.9), (8, 5, 90)])
def test_the_lock_in_of_sample_or_target(poles: int, points: int, percent: float) -> None:
    settle_s = float(gamma.ppf(percent / 100, a=poles, scale=0.3))
    lockin = {
        "time_constant": "300 ms",
        "poles": poles,
        "points_across": points,
        "settled": f"{percent} %",
    }
    target = wish("field sweep", field="1 T to 2 T", feature="20 mT", direction="up")
    slow_sample = {"samples.0.lockin": {"time_constant": "100 s"}}
    by_target = one_take({**target, "lockin": lockin}, week=slow_sample)
    by_sample = one_take(target, week={"samples.0.lockin": lockin})
    assert seconds(by_target) == seconds(by_sample) == [math.ceil(1 / (0.020 / (points * settle_s)) - 1e-6)]


def test_a_magnet_slower_than_the_lock_in_sets_the_pace() -> None:
    quick = {"time_constant": "10 ms"}
    take = one_take(wish("field sweep", field="1 T to 4 T", feature="20 mT", direction="up", lockin=quick))
    (leg,) = coil_legs(take.alternatives[0])
    assert (leg.seconds, leg.reason) == (600, "rate table 0–6 T")


def test_a_sweep_beside_a_note_free_rate() -> None:
    assert one_take(wish("field sweep", field="1 T to 4 T", rate="0.1 T/min")).notes == ()


# Fillings: filling 1 lies at 8.2713 T


def test_a_range_of_fillings() -> None:
    take = one_take(wish("field sweep", filling="4 to 2", direction="up"))
    (way,) = take.alternatives
    assert field_T(way) == pytest.approx(FILLING_1_T / 4)
    assert way.exit.coil.field_T[2] == pytest.approx(FILLING_1_T / 2)
    assert way.stretches[0].seconds == math.ceil(FILLING_1_T / 4 / 0.005)
    assert take.notes == ()


def test_a_window_around_a_filling() -> None:
    (way,) = one_take(wish("field sweep", filling=2, width="0.4 T", direction="down")).alternatives
    assert field_T(way) == pytest.approx(FILLING_1_T / 2 + 0.2)
    assert way.exit.coil.field_T[2] == pytest.approx(FILLING_1_T / 2 - 0.2)


FIVE_PERCENT: Changes = {"samples.0.density_error": "5 %"}


def test_an_uncertain_density_widens_both_ends() -> None:
    take = one_take(wish("field sweep", filling="4 to 2", direction="up"), week=FIVE_PERCENT)
    (way,) = take.alternatives
    assert field_T(way) == pytest.approx(FILLING_1_T / 4 * 0.95)
    assert way.exit.coil.field_T[2] == pytest.approx(FILLING_1_T / 2 * 1.05)
    assert take.notes == ("widened from 2.068 to 4.136 T to 1.964 to 4.342 T, since the density is not known better",)


def test_widening_works_on_both_signs() -> None:
    (way,) = one_take(wish("field sweep", filling="-2 to -4", direction="up"), week=FIVE_PERCENT).alternatives
    assert field_T(way) == pytest.approx(-FILLING_1_T / 2 * 1.05)
    assert way.exit.coil.field_T[2] == pytest.approx(-FILLING_1_T / 4 * 0.95)


def test_a_sweep_is_cut_at_the_rated_field_and_says_so() -> None:
    take = one_take(wish("field sweep", filling="1 to 0.85", direction="up"), week=FIVE_PERCENT)
    (way,) = take.alternatives
    # filling 0.85 lies at 9.731 T, with 5 % up to 10.218 T; the magnet goes to 10 T
    assert field_T(way) == pytest.approx(FILLING_1_T * 0.95)
    assert way.exit.coil.field_T[2] == 10
    assert take.notes[-1] == "cut at the rated field: 7.858 to 10.000 T"


def test_a_window_is_cut_at_the_rated_field() -> None:
    take = one_take(wish("field sweep", filling=0.85, width="1 T", direction="up"))
    (way,) = take.alternatives
    assert field_T(way) == pytest.approx(FILLING_1_T / 0.85 - 0.5)
    assert way.exit.coil.field_T[2] == 10


def test_sweeps_beyond_reach() -> None:
    assert "reaches 10 T" in refusal(wish("field sweep", filling="0.8 to 0.7"))
    assert "reaches 10 T" in refusal(wish("field sweep", filling="1/3", width="0.3 T"))
    assert "12 T lies at 12.000 T; this rig reaches 10 T" in refusal(wish("field sweep", field="0 T to 12 T"))
    assert "-12 T lies at -12.000 T" in refusal(wish("field sweep", field="-12 T to 0 T"))


# Rigs without a switch or a bath


def test_without_a_switch_nothing_warms() -> None:
    (way,) = one_take(
        wish("field sweep", field="0 T to 3 T", direction="up"), rig={"magnet.switch": REMOVED}
    ).alternatives
    assert legs_of(way) == [("sweep", 600)]


def test_on_a_dry_rig_a_sweep_takes_no_litres() -> None:
    (way,) = one_take(wish("field sweep", field="0 T to 3 T", direction="up"), rig=DRY).alternatives
    assert way.stretches[0].litres == 0
    assert way.entry.stage.temperature_K == 1.5


def test_litres_of_a_sweep() -> None:
    (way,) = one_take(wish("field sweep", field="0 T to 6 T", rate="0.2 T/min", direction="up")).alternatives
    # switch: 30 s at 150e-6 L/s; sweep: 1800 s at a mean of 30 A, 180e-6 L/s; 6 T at 0.1 L/T
    assert way.stretches[0].litres == pytest.approx(0.0045 + 0.324 + 0.6)
    assert way.stretches[0].needs.ramps
