"""The registry of actions: one line each. Keys, the line of keys, the palette and the help are made from it."""

from __future__ import annotations

from dataclasses import dataclass

PLACES = ("week", "rig", "samples", "targets", "plan", "findings", "sheet")
TITLES = {name: name.capitalize() for name in PLACES}
PLACE_KEYS = {name: f"f{number}" for number, name in enumerate(PLACES, 2)}
ANYWHERE = PLACES
LISTS = ("week", "rig", "samples", "targets")


@dataclass(frozen=True, slots=True)
class Action:
    """Something a key does.

    ``keys`` are textual's names, the one that is shown first; ``short`` stands in the line of keys, ``long`` in help
    and palette; ``where`` are the places in which it can be done. ``weight`` orders the line of keys, 0 is not shown.
    """

    name: str
    keys: tuple[str, ...]
    short: str
    long: str
    where: tuple[str, ...] = ANYWHERE
    weight: int = 0
    label: str = ""

    @property
    def key(self) -> str:
        """The key as the line of keys shows it; ``label`` where one word stands for two keys."""
        return self.label or (shown_key(self.keys[0]) if self.keys else "")


def shown_key(key: str) -> str:
    """A key as people write it."""
    names = {"question_mark": "?", "plus": "+", "minus": "−", "enter": "Enter", "delete": "Del", "left": "←",
             "right": "→", "up": "↑", "down": "↓", "home": "Home", "end": "End", "space": "Space", "pageup": "PgUp",
             "pagedown": "PgDn", "equals_sign": "="}  # fmt: skip
    *held, last = key.split("+")
    text = names.get(last, last.upper() if last.startswith("f") and last[1:].isdigit() else last)
    return "".join({"ctrl": "^", "shift": "⇧"}.get(one, f"{one}+") for one in held) + text


ACTIONS: dict[str, Action] = {
    action.name: action
    for action in (
        Action("add", ("a",), "add", "Add a row, or an optional table that is left out", LISTS, 9),
        Action("copy", ("c",), "copy", "Copy this row", LISTS, 8),
        Action("delete", ("d", "delete"), "delete", "Delete this row or optional table", LISTS, 8),
        Action("many", ("n",), "many", "Turn fillings × temperatures into targets at once", ("samples", "targets"), 9),
        Action("row_up", ("shift+up",), "up", "Move this row up", LISTS),
        Action("row_down", ("shift+down",), "move", "Move this row down", LISTS, 3, "⇧↑↓"),
        Action("step_before", ("left",), "", "The step before", ("plan",)),
        Action("step_after", ("right",), "step", "The step after", ("plan",), 9, "←→"),
        Action("take_before", ("up",), "", "The take or service before", ("plan",)),
        Action("take_after", ("down",), "take", "The take or service after", ("plan",), 8, "↑↓"),
        Action("first", ("home",), "", "The first step", ("plan",)),
        Action("last", ("end",), "", "The last step", ("plan",)),
        Action("nearer", ("plus", "equals_sign"), "zoom", "Show a shorter time, finer", ("plan",), 7, "+−"),
        Action("wider", ("minus",), "", "Show a longer time", ("plan",)),
        Action("whole", ("0",), "", "Show the whole week", ("plan",)),
        Action("next_finding", ("f",), "finding", "The next step with a finding", ("plan",), 6),
        Action("to_target", ("g", "enter"), "target", "Go to the target of this step", ("plan",), 5),
        Action("panel_up", ("pageup",), "", "Read the panel upwards", ("plan", "findings", "sheet")),
        Action("panel_down", ("pagedown",), "panel", "Read the panel downwards", ("plan", "findings", "sheet"), 2,
               "PgUp/Dn"),
        Action("jump", ("enter",), "to its step", "Go to the step, or the target, that a finding is about",
               ("findings",), 9),
        Action("write", ("w",), "write", "Write the sheet", ("sheet",), 9),
        Action("solve", ("f9", "s"), "solve", "Solve the week as it stands, in the background", ANYWHERE, 6),
        Action("stop", ("f10", "x"), "stop", "Stop the solve and keep the best so far", ANYWHERE, 6),
        Action("undo", ("u", "ctrl+z"), "undo", "Undo the last edit", ANYWHERE, 5),
        Action("redo", ("r", "ctrl+y"), "redo", "Do the undone edit again", ANYWHERE, 1),
        Action("save", ("ctrl+s",), "save", "Save the week and the rig file", ANYWHERE, 5),
        Action("open", ("ctrl+o",), "open", "Open another week file", ANYWHERE, 1),
        Action("help", ("f1", "question_mark"), "help", "Help for the thing in focus", ANYWHERE, 7),
        Action("look", ("ctrl+t",), "look", "Change the look: dark, light, clear colours", ANYWHERE, 1),
        Action("leave", ("ctrl+q",), "leave", "Leave the program", ANYWHERE, 4),
        Action("reload", (), "", "Read the files from disk again"),
        *(Action(f"place_{name}", (PLACE_KEYS[name], str(at)), TITLES[name], f"Go to {TITLES[name]}")
          for at, name in enumerate(PLACES, 1)),
    )
}  # fmt: skip


def here(place: str) -> list[Action]:
    """The actions of a place, those of its own first."""
    found = [action for action in ACTIONS.values() if place in action.where]
    return sorted(found, key=lambda action: (len(action.where) == len(PLACES), -action.weight))
