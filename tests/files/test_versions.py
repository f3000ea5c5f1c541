"""Old formats are brought up to date step by step; the steps here are the test's own."""

from __future__ import annotations

from typing import Any

import pytest

from planner.errors import InputError
from planner.files.versions import CURRENT, migrate

Data = dict[str, Any]


def _rename(data: Data) -> Data:
    """1 to 2: `volts` becomes `voltage`."""
    return {**{key: value for key, value in data.items() if key != "volts"}, "voltage": data["volts"]}


def _with_unit(data: Data) -> Data:
    """2 to 3: the voltage becomes text with a unit."""
    return {**data, "voltage": f"{data['voltage']} V"}


STEPS = {("week", 1): _rename, ("week", 2): _with_unit, ("rig", 1): lambda data: {**data, "rig_step": True}}


@pytest.mark.parametrize(
    "old",
    [
        {"format": 1, "volts": 5, "title": "t"},
        {"format": 2, "voltage": 5, "title": "t"},
        {"format": 3, "voltage": "5 V", "title": "t"},
    ],
)
def test_every_old_format_arrives_at_the_newest(old: Data) -> None:
    kept = dict(old)
    assert migrate(old, "week", "w", current=3, migrations=STEPS) == {"format": 3, "voltage": "5 V", "title": "t"}
    assert old == kept


def test_the_steps_of_the_other_kind_of_file_are_not_taken() -> None:
    assert migrate({"format": 1}, "rig", "r", current=2, migrations=STEPS) == {"format": 2, "rig_step": True}


@pytest.mark.parametrize(
    ("written", "says"),
    [
        (4, "w: format is 4: this program reads formats up to 3 (the file was made for a newer version)"),
        (0, "w: format is 0: no way is known to bring this format up to date"),
        (-1, "w: format is -1: no way is known to bring this format up to date"),
        ("1", "w: format is '1': expected the file format version, format = 3"),
        (1.0, "w: format is 1.0: expected the file format version, format = 3"),
        (True, "w: format is True: expected the file format version, format = 3"),
    ],
)
def test_formats_that_cannot_be_read(written: Any, says: str) -> None:
    with pytest.raises(InputError) as caught:
        migrate({"format": written}, "week", "w", current=3, migrations=STEPS)
    assert str(caught.value) == says


def test_a_gap_in_the_steps_is_said() -> None:
    with pytest.raises(InputError, match="format is 2: no way is known"):
        migrate({"format": 1, "volts": 1}, "week", "w", current=3, migrations={("week", 1): _rename})


def test_the_programs_own_formats_need_no_step() -> None:
    for kind, newest in CURRENT.items():
        assert migrate({"format": newest, "x": 1}, kind, "f") == {"format": newest, "x": 1}
