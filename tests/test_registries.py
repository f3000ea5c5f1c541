"""What is registered in one place has its partner in the others."""

from __future__ import annotations

from typing import get_args

from planner.checks import RULES
from planner.files.rig import StagePart
from planner.files.targets import TARGET_KINDS
from planner.planning.services import SERVICES
from planner.runsheet import FORMATS
from planner.takes.kinds import EXPANDERS


def test_every_kind_of_target_becomes_takes() -> None:
    assert set(EXPANDERS) == set(TARGET_KINDS)


def test_every_kind_of_service_is_judged() -> None:
    """A service that fills something, or that people do, has rules that name it."""
    assert set(SERVICES) == {"helium transfer", "parking"}
    families = {rule.family for rule in RULES.values()}
    assert "transfers" in families
    assert "helium" in families  # parking is a wait at zero field: the lines and the book judge it


def test_every_stage_kind_has_its_charge_and_its_rules() -> None:
    kinds = get_args(StagePart.model_fields["kind"].annotation)
    assert set(kinds) == {"dilution", "continuous"}
    assert "stage" in {rule.family for rule in RULES.values()}


def test_sheet_formats_write_bytes_under_their_own_ending() -> None:
    endings = [sheet_format.ending for sheet_format in FORMATS.values()]
    assert len(set(endings)) == len(endings)
    assert {"html", "csv", "json"} <= set(FORMATS)
