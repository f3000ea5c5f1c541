"""A cooldown from 300 K: litres against the published table, hours and days by hand."""

from __future__ import annotations

from datetime import date
from typing import Any

import pytest

from planner.desk.cooldown_page import cooldown_page
from planner.errors import InputError
from planner.files import Rig
from tests.builders import REMOVED, rig

TABLE = "litres per kg of metal: Table 2 of PMC9017651, traced to R. B. Jacobs, Adv. Cryog. Eng. 8, 529 (1963)"
CHAIN = [
    {"what": "nitrogen in", "time": "10 h"},
    {"what": "helium fill", "time": "4 h", "helium": True},
    {"what": "to base", "time": "600 min"},
]


def cooled(changes: dict[str, Any] | None = None, **keys: Any) -> Rig:
    return rig({"cooldown": {"copper": "10 kg", "precool": "nitrogen", "chain": CHAIN, **keys}, **(changes or {})})


@pytest.mark.parametrize(
    ("metal", "precool", "least", "most", "tolerance"),
    [
        ("copper", "none", 0.79, 31.1, 0.08),
        ("copper", "nitrogen", 0.15, 2.16, 0.08),
        ("aluminium", "none", 1.61, 66.6, 0.08),
        ("stainless", "none", 0.79, 33.3, 0.16),
    ],
)
def test_helium_by_the_published_table(metal: str, precool: str, least: float, most: float, tolerance: float) -> None:
    page = cooldown_page(cooled(precool=precool, **{"copper": "0 kg", metal: "10 kg"}))
    assert page.in_bath is not None
    assert page.in_bath.least_L == pytest.approx(10 * least, rel=tolerance), TABLE
    assert page.in_bath.most_L == pytest.approx(10 * most, rel=tolerance), TABLE


@pytest.mark.parametrize(("metal", "litres"), [("copper", 0.46), ("aluminium", 1.01), ("stainless", 0.53)])
def test_nitrogen_by_the_published_table(metal: str, litres: float) -> None:
    page = cooldown_page(cooled(**{"copper": "0 kg", metal: "10 kg"}))
    assert page.nitrogen is not None
    assert page.nitrogen.most_L == pytest.approx(10 * litres, rel=0.06), TABLE
    assert page.nitrogen.least_L < page.nitrogen.most_L


def test_fills_transfer_losses_and_masses_add_up() -> None:
    """The round-number rig's transfer: its efficiency divides, its line takes its litres on top."""
    bare = cooldown_page(cooled())
    full = cooldown_page(cooled(fill="50 L", nitrogen_fill="30 L", stainless="5 kg"))
    assert bare.in_bath is not None
    assert full.in_bath is not None
    assert full.nitrogen is not None
    assert bare.nitrogen is not None
    stainless = next(row for row in full.metals if row.metal == "stainless")
    assert stainless.helium is not None
    assert stainless.nitrogen is not None
    assert full.in_bath.most_L == pytest.approx(bare.in_bath.most_L + 50 + stainless.helium.most_L)
    assert full.nitrogen.least_L == pytest.approx(bare.nitrogen.least_L + 30 + stainless.nitrogen.least_L)
    transfer = rig().bath.transfer  # type: ignore[union-attr]
    share = transfer.efficiency_percent / 100
    assert full.from_dewar is not None
    assert full.from_dewar.most_L == pytest.approx(full.in_bath.most_L / share + transfer.line_loss_L)


def test_nitrogen_saves_helium() -> None:
    page = cooldown_page(cooled())
    assert page.unprecooled is not None
    assert page.in_bath is not None
    assert page.unprecooled.most_L > 10 * page.in_bath.most_L
    assert cooldown_page(cooled(precool="none")).unprecooled is None


def test_hours_and_when_helium_is_needed() -> None:
    page = cooldown_page(cooled())
    assert page.hours == 24
    assert page.helium_after_h == 10
    assert page.chain[2] == ("to base", 10.0)
    assert page.order is None


@pytest.mark.parametrize(
    ("by", "lead", "holidays", "begins", "delivered", "order"),
    [
        # Cold as Thursday 13 March 2031 begins: begun as Wednesday begins, delivered Tuesday, 5 working days: Tuesday.
        ("2031-03-13", 5, (), "2031-03-12", "2031-03-11", "2031-03-04"),
        # Monday: Sunday's beginning becomes Friday, delivered Thursday.
        ("2031-03-10", 5, (), "2031-03-07", "2031-03-06", "2031-02-27"),
        ("2031-03-10", 0, (), "2031-03-07", "2031-03-06", "2031-03-06"),
        # A holiday on the Thursday moves delivery to Wednesday.
        ("2031-03-10", 1, ("2031-03-06",), "2031-03-07", "2031-03-05", "2031-03-04"),
    ],
)
def test_days_by_hand(by: str, lead: int, holidays: tuple[str, ...], begins: str, delivered: str, order: str) -> None:
    free = [date.fromisoformat(day) for day in holidays]
    found = cooldown_page(cooled(order_lead_days=lead), date.fromisoformat(by), free).order
    assert found is not None
    assert [str(day) for day in (found.begins, found.delivered, found.order)] == [begins, delivered, order]


def test_a_dry_rig_needs_no_helium() -> None:
    page = cooldown_page(cooled({"bath": REMOVED, "cooler": {}}, precool="none"), date(2031, 3, 13))
    assert (page.in_bath, page.from_dewar, page.nitrogen, page.unprecooled, page.helium_after_h) == (None,) * 5
    assert page.metals[0].helium is None
    assert page.order is not None
    assert (page.order.delivered, page.order.order) == (None, None)
    assert "no helium is needed" in page.words[0]


def test_without_the_table_it_says_what_is_missing() -> None:
    with pytest.raises(InputError, match=r"no \[cooldown\] table"):
        cooldown_page(rig())
