"""The checks' own arithmetic, against numbers worked out by hand."""

from __future__ import annotations

import math
from datetime import datetime
from zoneinfo import ZoneInfo

import pytest

from planner.checks import burn, ramp_table, spans, stage_time
from planner.clock import Clock
from planner.files import parse_rig
from planner.files.hours import Hours
from planner.plan import Coil, Leg
from tests.checks.build import HOUR, REF_W, driven, persistent
from tests.checks.weeks import rig

MAGNET = parse_rig(REF_W).magnet
VIENNA = ZoneInfo("Europe/Vienna")


def hours(days: str, begin: str, end: str) -> Hours:
    """Hours as a file writes them."""
    return Hours.model_validate({"days": days, "from": begin, "to": end})


class TestRampTable:
    def test_times_from_edge_to_edge_and_across_zero(self) -> None:
        # 8/0.3 + 3/0.15 + 1/0.08 = 59.1667 min
        assert ramp_table.least_seconds(MAGNET, 0, 12) == pytest.approx(3550)
        assert ramp_table.least_seconds(MAGNET, 12, 0) == pytest.approx(3550)
        assert ramp_table.least_seconds(MAGNET, -8, 8) == pytest.approx(3200)
        assert ramp_table.least_seconds(MAGNET, 10.236, 6) == pytest.approx((2.236 / 0.15 + 2 / 0.3) * 60)
        assert ramp_table.least_seconds(MAGNET, 0, 12, 0.2 / 60) == pytest.approx(72.5 * 60)
        assert ramp_table.least_seconds(MAGNET, 5, 5) == 0

    def test_time_agrees_with_small_steps(self) -> None:
        def allowed(field: float) -> float:
            return (0.3 if abs(field) <= 8 else 0.15 if abs(field) <= 11 else 0.08) / 60

        for first, last in ((-11.7, 9.3), (3.1, 11.9), (-2, -12), (10, 0)):
            step = (last - first) / 40_000
            summed = sum(abs(step) / allowed(first + (at + 0.5) * step) for at in range(40_000))
            assert ramp_table.least_seconds(MAGNET, first, last) == pytest.approx(summed, rel=1e-4)

    def test_the_edge_belongs_to_the_lower_field(self) -> None:
        assert [s.to_T for s in ramp_table.segments_touched(MAGNET, 5, 8)] == [8]
        assert [s.to_T for s in ramp_table.segments_touched(MAGNET, 8, 9)] == [11]
        assert [s.to_T for s in ramp_table.segments_touched(MAGNET, -11.5, 2)] == [8, 11, 12]
        assert [s.to_T for s in ramp_table.segments_touched(MAGNET, 12, 12.5)] == [12]


class TestSpans:
    def test_weekly_hours_across_the_end_of_summer_time(self) -> None:
        # Europe/Vienna leaves summer time on Sunday 2031-10-26 at 03:00 (EU Directive 2000/84/EC)
        clock = Clock(datetime(2031, 10, 25, 8, 0, tzinfo=VIENNA))
        found = spans.weekly(clock, [hours("Sat", "20:00", "08:00"), hours("Sun, Mon", "08:30", "09:00")], 0, 3 * 86400)
        assert (12 * HOUR, 25 * HOUR) in found  # 12 h on the wall, 13 h long
        assert (int(25.5 * HOUR), 26 * HOUR) in found
        assert (int(49.5 * HOUR), 50 * HOUR) in found

    def test_hours_that_end_at_midnight(self) -> None:
        clock = Clock(datetime(2031, 3, 3, 0, 0, tzinfo=VIENNA))
        assert spans.weekly(clock, [hours("Mon", "22:00", "24:00")], 0, 86400)[-1] == (22 * HOUR, 24 * HOUR)
        daily = spans.weekly(clock, [hours("daily", "00:00", "24:00")], 0, 2 * 86400)
        assert daily == ((-86400, 3 * 86400),)

    def test_sets_of_spans(self) -> None:
        assert spans.united([(5, 9), (0, 5), (12, 12), (8, 10)]) == ((0, 10),)
        assert spans.shared(((0, 10), (20, 30)), ((5, 25),)) == ((5, 10), (20, 25))
        assert spans.less(((0, 10), (20, 30)), ((3, 4), (8, 22))) == ((0, 3), (4, 8), (22, 30))
        assert spans.lies_in(((0, 10),), 0, 10)
        assert not spans.lies_in(((0, 10), (11, 20)), 5, 12)
        assert spans.next_fit(((0, 10), (12, 30)), 5, 8) == 12
        assert spans.next_fit(((0, 10),), 5, 8) is None

    def test_two_people_means_the_same_two_all_through(self) -> None:
        ada, ben, cleo = ((0, 10),), ((0, 5),), ((5, 10),)
        found = spans.same_all_through(2, [ada, ben, cleo])
        assert not spans.lies_in(found, 0, 10)
        assert spans.lies_in(found, 0, 5)
        assert spans.lies_in(found, 5, 10)


class TestBurn:
    BATH = parse_rig(rig(switch_open='"0.35 L/h"\nleads = "0.002 L/h/A"')).bath

    def test_legs(self) -> None:
        assert self.BATH is not None

        def spent(action: str, seconds: int, before: Coil, after: Coil, *, transferring: bool = False) -> float:
            leg = Leg("coil", action, 0, seconds, "", coil=(before, after))
            assert self.BATH is not None
            return burn.leg_burn_L(self.BATH, leg, transferring=transferring)

        hour = HOUR
        assert spent("hold", hour, Coil(), Coil()) == pytest.approx(0.55)
        assert spent("hold", hour, Coil(), Coil(), transferring=True) == 0
        assert spent("hold", hour, driven(6), driven(6)) == pytest.approx(0.9 + 0.1)  # 50 A
        assert spent("ramp", hour, driven(0), driven(6)) == pytest.approx(0.9 + 0.05 + 0.6)
        assert spent("ramp", hour, driven(6), Coil()) == pytest.approx(0.9 + 0.05 + 0.6)
        assert spent("heater on", hour, Coil(), driven(0)) == pytest.approx(0.9)
        assert spent("heater on", hour, persistent(6, 50), driven(6)) == pytest.approx(1.0)
        assert spent("heater off", hour, driven(6), persistent(6, 50)) == pytest.approx(0.55 + 0.1)
        assert spent("leads", hour, persistent(6, 50), persistent(6)) == pytest.approx(0.55 + 0.05)
        assert spent("hold", hour, persistent(6), persistent(6)) == pytest.approx(0.55)

    def test_mean_size_through_zero(self) -> None:
        # |x| from −1 to 3: areas ½·1·¼ and ½·3·¾ of the way
        assert burn.mean_size(-1, 3) == pytest.approx(0.5 * 0.25 + 1.5 * 0.75)
        assert burn.mean_size(2, 4) == 3


class TestStage:
    TABLE = parse_rig(
        REF_W.replace(
            '[stage.model]\nwarming_constant = "5 min"\ncooling_constant = "15 min"\nwithin = "1 %"\n',
            "[[stage.after_ramp]]\n"
            'below = "60 mK"\ntime = "15 min"\n\n[[stage.after_ramp]]\nbelow = "30 mK"\ntime = "40 min"\n',
        ).replace(
            'highest = "900 mK"',
            'highest = "900 mK"\nwarming = [{ to = "60 mK", time = "10 min" }, { to = "960 mK", time = "30 min" }]\n'
            'cooling = [{ from = "60 mK", time = "20 min" }, { from = "960 mK", time = "60 min" }]',
        )
    ).stage

    def test_tables_by_straight_lines_in_the_logarithm(self) -> None:
        # 240 mK lies half way from 60 to 960 mK in the logarithm: 20 min up, 40 min down; 30 mK half way from 15 to 60
        assert stage_time.least_seconds(self.TABLE, 0.015, 0.24) == pytest.approx(20 * 60)
        assert stage_time.least_seconds(self.TABLE, 0.24, 0.015) == pytest.approx(40 * 60)
        assert stage_time.least_seconds(self.TABLE, 0.03, 0.24) == pytest.approx(15 * 60)
        assert stage_time.least_seconds(self.TABLE, 0.24, 0.03) == pytest.approx(30 * 60)
        assert stage_time.least_seconds(self.TABLE, 0.1, 0.1) == 0

    def test_settling_after_a_ramp(self) -> None:
        assert stage_time.settle_after_ramp_s(self.TABLE, 0.02) == 40 * 60
        assert stage_time.settle_after_ramp_s(self.TABLE, 0.03) == 15 * 60
        assert stage_time.settle_after_ramp_s(self.TABLE, 0.06) == 0

    def test_model(self) -> None:
        stage = parse_rig(REF_W).stage
        assert stage_time.least_seconds(stage, 0.1, 0.2) == pytest.approx(300 * math.log(50))
        assert stage_time.least_seconds(stage, 0.1, 0.1005) == 0
