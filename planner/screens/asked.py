"""What a widget posts when a named action is asked for otherwise than by its key."""

from __future__ import annotations

from textual.message import Message


class Asked(Message):
    """A named action of the registry is wanted."""

    def __init__(self, name: str) -> None:
        self.name = name
        super().__init__()
