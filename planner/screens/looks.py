"""How things look: three themes, and the styles of lanes, messages and marks in each.

Users' colours are the palette for colour-blind readers of Okabe and Ito (2008, Color Universal Design); letters and
patterns say the same.
"""

from __future__ import annotations

from functools import cache

from rich.style import Style
from textual.theme import Theme

USERS = ("#E69F00", "#56B4E9", "#009E73", "#F0E442", "#0072B2", "#D55E00", "#CC79A7", "#999999")
USERS_ON_LIGHT = ("#B87700", "#0072B2", "#00795A", "#8A7F00", "#004C7D", "#B34A00", "#A3577F", "#555555")

NIGHT = Theme(
    name="night",
    primary="#6C9BD2",
    secondary="#8FB3A4",
    accent="#E0B060",
    foreground="#DDE1E6",
    background="#12161C",
    surface="#1A2028",
    panel="#232B35",
    success="#7FB685",
    warning="#E0B060",
    error="#E5786D",
    dark=True,
)
DAY = Theme(
    name="day",
    primary="#2A5D9F",
    secondary="#3D7A66",
    accent="#8A5A00",
    foreground="#1B1F24",
    background="#FAFAF7",
    surface="#F0F0EA",
    panel="#E2E2DA",
    success="#2C6E3F",
    warning="#8A5A00",
    error="#A52A1E",
    dark=False,
)
CLEAR = Theme(
    name="clear",
    primary="#56B4E9",
    secondary="#009E73",
    accent="#F0E442",
    foreground="#FFFFFF",
    background="#000000",
    surface="#101010",
    panel="#2A2A2A",
    success="#56B4E9",
    warning="#F0E442",
    error="#E69F00",
    dark=True,
)
LOOKS = {theme.name: theme for theme in (NIGHT, DAY, CLEAR)}


def next_look(name: str) -> str:
    """The look after this one."""
    names = list(LOOKS)
    return names[(names.index(name) + 1) % len(names)] if name in names else names[0]


@cache
def lane_style(look: str, theme_name: str, *, cursor: bool = False) -> Style:
    """The style of a run of the timeline. Every style has colours of its own, so that no cell is left unstyled."""
    theme = LOOKS.get(theme_name, NIGHT)
    kind, _, more = look.partition(" ")
    back = str(theme.panel if cursor else theme.background)
    style = Style(color=_colour(kind, theme), bgcolor=back)
    if more == "low":
        style += Style(color=theme.error, bold=True)
    if "low" in more:
        style += Style(color=theme.error)
    if "reverse" in more or more == "letter":
        style += Style(reverse=True, bold=more == "letter")
    return style


def _colour(kind: str, theme: Theme) -> str:
    if kind.startswith("user-"):
        users = USERS if theme.dark else USERS_ON_LIGHT
        return users[int(kind[5:]) % len(users)]
    colours = {
        "field": theme.primary,
        "stage": theme.accent,
        "helium": theme.secondary,
        "driven": theme.primary,
        "persistent": theme.secondary,
        "attended": theme.accent,
        "service": theme.accent,
        "cursor": theme.accent,
        "day": theme.foreground,
        "name": theme.foreground,
        "line": theme.warning,
    }
    return str(colours.get(kind) or ("#8A929C" if theme.dark else "#6B6F75"))


def message_style(theme_name: str, kind: str) -> Style:
    """The style of words: "bad", "good", "quiet", "strong", or plain."""
    theme = LOOKS.get(theme_name, NIGHT)
    styles = {
        "bad": Style(color=theme.error, bold=True),
        "good": Style(color=theme.success),
        "quiet": Style(color="#8A929C" if theme.dark else "#6B6F75"),
        "strong": Style(bold=True),
        "warn": Style(color=theme.warning, bold=True),
    }
    return styles.get(kind, Style())
