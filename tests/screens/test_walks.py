"""A few of the random walks; `walks.py` walks as often as one likes."""

from __future__ import annotations

from pathlib import Path

import pytest

from tests.screens.walks import KEYS, walk


@pytest.mark.parametrize("seed", range(3))
def test_walk(seed: int, tmp_path: Path) -> None:
    assert len(walk(seed, tmp_path).pressed) >= KEYS
