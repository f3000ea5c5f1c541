"""Every rule finds its planted faults, by name and number; plans that just keep a rule pass every rule."""

from __future__ import annotations

import pytest

from planner.checks import RULES, check_plan, check_week
from planner.plan import Finding, Kind
from tests.checks import plants_asked, plants_helium, plants_magnet, plants_plan, plants_work
from tests.checks.build import serious
from tests.checks.plants import PLANTS, SOUND, Judged, Plant

FAMILIES = (plants_magnet, plants_helium, plants_work, plants_plan, plants_asked)


def judged(made: Judged) -> tuple[Finding, ...]:
    """Findings of a plan, or of a week before planning."""
    asked, plan = made
    return check_week(asked) if plan is None else check_plan(asked, plan)


@pytest.mark.parametrize("plant", PLANTS, ids=lambda plant: plant.make.__name__)
def test_planted_fault_is_found_by_its_rule(plant: Plant) -> None:
    found = judged(plant.make())
    mine = [finding for finding in found if finding.rule == plant.rule]
    assert mine, [finding.text for finding in found]
    others = {finding.rule for finding in serious(found)} - {plant.rule} - plant.also
    assert not others, [finding.text for finding in found]
    for name, value in plant.expected.items():
        got = getattr(mine[0], name)
        assert got == (value if isinstance(value, str) else pytest.approx(value, rel=1e-5)), mine[0]


@pytest.mark.parametrize(("rule", "make"), SOUND, ids=lambda made: getattr(made, "__name__", str(made)))
def test_plan_that_keeps_its_rules_passes(rule: str, make: object) -> None:
    assert rule in RULES
    found = judged(make())  # type: ignore[operator]
    assert not [finding.text for finding in serious(found)]


def test_every_rule_has_a_plant() -> None:
    assert {plant.make.__module__ for plant in PLANTS} == {module.__name__ for module in FAMILIES}
    assert {plant.rule for plant in PLANTS} == set(RULES)


@pytest.mark.parametrize("plant", PLANTS, ids=lambda plant: plant.make.__name__)
def test_findings_say_all_they_must(plant: Plant) -> None:
    for finding in judged(plant.make()):
        assert finding.text[0].isupper() or finding.text[0] in '"0123456789ν' or finding.step is not None, finding.text
        assert finding.text.endswith(".")
        assert finding.source
        assert finding.mend
        if finding.limit is not None:
            assert finding.value is None or finding.margin is not None
            assert finding.kind is Kind.NOTE or finding.margin is None or finding.margin < 0, finding


def test_rules_explain_themselves() -> None:
    for rule in RULES.values():
        assert rule.family
        assert rule.protects
        assert rule.source
        assert rule.of_plan or rule.of_week or rule.of_week_last
        assert rule.name == rule.name.lower()
