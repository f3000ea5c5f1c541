"""The example week with ten mistakes: each is found under its own name, and mended it gives none of them."""

from __future__ import annotations

from pathlib import Path

import pytest

from planner.checks import check_week
from planner.files import Request, parse_week, read_week
from tests.checks.build import of, rules, serious

WEEK = Path(__file__).parent.parent.parent / "example_plans" / "mistaken_week.toml"

MENDED = {
    "transfer people": ('name = "Operator 2"\ntrained = ["switch"]', 'name = "Operator 2"\ntrained = ["transfer"]'),
    "filling in reach": ('filling = "1/3"', 'filling = "2/3"'),
    "sweep rate in the table": ('rate = "0.6 T/min"', 'rate = "0.28 T/min"'),
    "sweep against lock-in": ('rate = "60 mT/min"', 'rate = "11 mT/min"'),
    "temperature range": ('"300 mK", "1.2 K"', '"300 mK", "0.9 K"'),
    "helium at field": ('duration = "50 h"', 'duration = "24 h"'),
    "gate window": ('sweep = "-0.9 V to 0.4 V"', 'sweep = "-0.6 V to 0.4 V"'),
    "windows of a target": ('to = "Tue 12:05"', 'to = "Tue 16:00"'),
    "staffed hours": ('from = "19:00", to = "23:00"', 'from = "09:00", to = "18:00"'),
    "quiet hours": ('from = "Wed 20:00"\nto = "Thu 02:00"', 'from = "Tue 20:00"\nto = "Wed 02:00"'),
}


def with_text(text: str) -> Request:
    """The request with another week text."""
    found = read_week(WEEK)
    return Request(parse_week(text), found.rig, found.sources)


def test_all_ten_are_found_and_nothing_else() -> None:
    found = check_week(read_week(WEEK))
    assert rules(serious(found)) == set(MENDED)
    for rule in MENDED:
        assert of(found, rule).mend


def test_mended_there_is_nothing_left_to_say() -> None:
    text = WEEK.read_text(encoding="utf-8")
    for before, after in MENDED.values():
        assert text.count(before) == 1
        text = text.replace(before, after)
    assert not serious(check_week(with_text(text)))


@pytest.mark.parametrize("rule", MENDED)
def test_each_mend_clears_its_own_mistake_alone(rule: str) -> None:
    text = WEEK.read_text(encoding="utf-8").replace(*MENDED[rule])
    assert rules(serious(check_week(with_text(text)))) == set(MENDED) - {rule}


def test_numbers_of_the_mistakes() -> None:
    found = check_week(read_week(WEEK))
    # 4.135667697 T × 1.5 / (1/3) = 18.61 T; 2 % less: 18.24 T
    assert of(found, "filling in reach").value == pytest.approx(4.135667697 * 4.5 * 0.98)
    assert "ν = 3/5 at 10.34 T" in of(found, "filling in reach").mend
    # four RC stages settle to 99 % in 10.045 τ: 20 mT / (10 × 10.045 s) = 11.95 mT/min
    assert of(found, "sweep against lock-in").limit == pytest.approx(20 / 100.45 * 60, rel=1e-4)
    assert of(found, "sweep rate in the table").limit == pytest.approx(0.28)
    assert of(found, "temperature range").margin == pytest.approx(-0.3)
    assert of(found, "gate window").margin == pytest.approx(-0.3)
    # 241 × 1.5 s + 0.8 V / 20 mV/s = 401.5 s in a window of 300 s
    assert of(found, "windows of a target").margin == pytest.approx(-101.5 / 60)
    assert of(found, "quiet hours").value == pytest.approx(6)
    assert of(found, "staffed hours").value == 0
