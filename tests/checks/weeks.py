"""Weeks for the plants: one on the reference rig, Monday 08:30 to 18:00, and the pieces to fill it with."""

from __future__ import annotations

from tests.checks.build import REF_W

WEEK = """
format = 1
kind = "week"
title = "By hand"
rig = "ref_w.rig.toml"
zone = "Europe/Vienna"
start = 2031-03-03T08:30:00
end = {end}
staffed = [{{ {staffed} }}]
present = {{ {present} }}
wanted_end = {{ {wanted} }}
helium = {{ {helium} }}
{quiet}
[[people]]
name = "Ada"
trained = ["transfer", "switch"]

[[people]]
name = "Ben"
trained = ["transfer"]
{away}
[[people]]
name = "Cleo"

[[users]]
name = "Group"
letter = "A"

[[users]]
name = "Guests"
letter = "B"
{slots}
[[samples]]
name = "S"
user = "Group"
density = "1.1e11 cm^-2"
lockin = {{ time_constant = "300 ms", poles = 1 }}
gates = [
  {{ name = "top", lowest = "-0.5 V", highest = "0.5 V", rate = "20 mV/s", density_slope = "0.4e11 cm^-2/V" }},
]

[[samples]]
name = "Z"
user = "Guests"
density = "2e11 cm^-2"
gates = [{{ name = "back", lowest = "-2 V", highest = "2 V", rate = "50 mV/s" }}]
"""


def week(
    targets: str = "",
    *,
    present: str = 'level = "95 %"',
    end: str = "2031-03-03T18:00:00",
    wanted: str = 'field = "0 T"',
    helium: str = 'stock = "100 L"',
    quiet: str = "",
    slots: str = "",
    away: str = "",
    staffed: str = 'days = "Mon-Fri", from = "08:30", to = "18:00"',
) -> str:
    """The text of a week."""
    head = WEEK.format(
        present=present, end=end, wanted=wanted, helium=helium, quiet=quiet, slots=slots, away=away, staffed=staffed
    )
    return head + targets


def target(name: str, kind: str, **keys: object) -> str:
    """A target on sample S; every key as TOML writes it."""
    rows = {"sample": '"S"', **keys}
    return f'\n[[targets]]\nname = "{name}"\nkind = "{kind}"\n' + "".join(f"{k} = {v}\n" for k, v in rows.items())


def rig(**changes: str) -> str:
    """The reference rig with keys changed; ``after_ramp`` and ``table`` stand for rows of their own."""
    text = REF_W
    for key, value in changes.items():
        lines = [line for line in text.splitlines() if line.split("=")[0].strip() == key]
        assert len(lines) == 1, (key, lines)
        text = text.replace(lines[0], f"{key} = {value}")
    return text


SETTLING = rig(settle='"60 s"').replace(
    "[stage.model]", '[[stage.after_ramp]]\nbelow = "60 mK"\ntime = "15 min"\n\n[stage.model]'
)
"""A magnet that settles in a minute, a stage that takes 15 min to come back below 60 mK."""
