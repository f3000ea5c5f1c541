"""Makes the README's pictures of the screens: ``python -m tests.pictures.make_pictures``.

SVG at 120 × 40, of the stored plan of the shared week, so that they change only where the screens do.
"""

from __future__ import annotations

import tempfile
from pathlib import Path

from tests.screens.sitting import LARGE, run, sitting
from tests.screens.stored_plan import session_with_plan

FOLDER = Path(__file__).parent
PICTURES = {
    "plan": ("f6", "down", "down", "down", "down", "down", "down", "down", "down"),
    "targets": ("f5", *["down"] * 9),
}


async def _pictures(folder: Path) -> dict[str, str]:
    made = {}
    async with sitting(session_with_plan(folder), LARGE) as user:
        for name, keys in PICTURES.items():
            await user.keys(*keys)
            made[name] = user.app.export_screenshot(title="fridgeweek", simplify=True)
    return made


def main() -> None:
    """Write the pictures beside this script."""
    with tempfile.TemporaryDirectory() as folder:
        for name, svg in run(_pictures(Path(folder))).items():
            (FOLDER / f"{name}.svg").write_text(svg, encoding="utf-8")


if __name__ == "__main__":
    main()
