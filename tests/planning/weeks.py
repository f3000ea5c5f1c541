"""Random small weeks as files: a rig and up to five takes, seeded."""

from __future__ import annotations

import random
from pathlib import Path

from planner.files import Request, read_week

BATH = """
[bath]
gauge_error = "{error} %"
calibration = [
  {{ level = "0 %", volume = "0 L" }},
  {{ level = "50 %", volume = "{middle} L" }},
  {{ level = "100 %", volume = "60 L" }},
]
lines = {{ start_ramp = "50 %", at_field = "40 %", coil_top = "30 %", reserve = "15 %" }}
losses = {{ static = "0.5 L/h", switch_open = "0.4 L/h", leads = "0.004 L/h/A", moving = "0.12 L/T" }}

[bath.transfer]
rate = "50 L/h"
efficiency = "80 %"
line_cooling = "15 min"
line_loss = "1.5 L"
least_pour = "5 L"
people = {people}
coil = "zero"
hours = [{{ days = "Mon", from = "10:00", to = "{closes}" }}]
"""

SWITCH = """
[magnet.switch]
warm = "30 s"
cool = "45 s"
hold_before = "4 min"
settle_after = "10 s"
leads = "100 A/min"
match = "0.1 A"
attended = {attended}
"""


def random_rig(rng: random.Random) -> str:
    """A wet or dry rig with random rates, lines and rules."""
    wet = rng.random() < 0.75
    parts = [
        f"""
format = 1
kind = "rig"
name = "Random rig"
[magnet]
rated_field = "10 T"
field_per_current = "0.11 T/A"
inductance = "12 H"
settle = "{rng.choice([0, 40, 90])} s"
ramp_table = [
  {{ to = "{rng.choice([4, 6])} T", rate = "{rng.choice([0.3, 0.41])} T/min" }}, {{ to = "10 T", rate = "0.13 T/min" }}
]
supply = {{ max_current = "95 A", max_voltage = "{rng.choice([1.2, 5])} V", lead_resistance = "4 mohm" }}
"""
    ]
    if rng.random() < 0.6:
        parts.append(SWITCH.format(attended=rng.choice(["true", "false"])))
    if wet:
        choices = {"error": rng.choice([0, 2, 3]), "middle": rng.choice([24, 30]), "people": rng.choice([1, 2])}
        parts.append(BATH.format(closes=rng.choice(["12:00", "15:00"]), **choices))
    else:
        parts.append('[cooler]\nname = "cold head"\n')
    together = rng.choice(['["field", "temperature", "gates"]', '["field", "gates"]', "[]"])
    parts.append(
        f"""
[stage]
kind = "continuous"
base = "300 mK"
highest = "10 K"
warming = [{{ to = "2 K", time = "6 min" }}, {{ to = "10 K", time = "12 min" }}]
cooling = [{{ from = "2 K", time = "14 min" }}, {{ from = "10 K", time = "35 min" }}]
after_ramp = [{{ below = "1 K", time = "{rng.choice([0, 7])} min" }}]
[policies]
together = {together}
"""
    )
    return "".join(parts)


def random_target(rng: random.Random, number: int) -> str:
    """One target that is one take."""
    lines = ["[[targets]]", f'name = "t{number}"', 'sample = "S"', f"priority = {rng.randint(1, 5)}"]
    kind = rng.choice(["hold", "hold", "field sweep", "gate sweep", "other work"])
    lines.append(f'kind = "{kind}"')
    field = rng.choice(['field = "0 T"', 'field = "3 T"', 'field = "-2 T"', 'field = "7.5 T"', "filling = 1"])
    if kind == "hold":
        lines += [field, f'duration = "{rng.randint(10, 280)} min"', f'coil = "{rng.choice(["driven", "either"])}"']
    elif kind == "field sweep":
        ends = rng.choice([("0", "4"), ("-1", "1"), ("3", "8"), ("7", "5")])
        lines += [f'field = "{ends[0]} T to {ends[1]} T"', 'rate = "0.1 T/min"']
        lines.append(f'direction = "{rng.choice(["up", "down", "both", "either"])}"')
    elif kind == "gate sweep":
        lines += [field, 'gate = "g"', 'sweep = "-0.5 V to 0.5 V"', "points = 60", f'dwell = "{rng.randint(2, 30)} s"']
        lines += [f'direction = "{rng.choice(["up", "either"])}"', 'coil = "driven"']
    else:
        lines += ['what = "a job"', f'duration = "{rng.randint(5, 60)} min"', "attended = true"]
    if kind != "other work" and rng.random() < 0.4:
        lines.append(f'temperature = "{rng.choice(["300 mK", "1.5 K", "4 K"])}"')
    if rng.random() < 0.35:
        lines.append("must = true")
    if rng.random() < 0.2:
        lines.append('windows = [{ from = "Mon 10:00", to = "Mon 16:00" }]')
    if number and rng.random() < 0.25:
        lines.append(f'after = ["t{rng.randrange(number)}"]')
    if rng.random() < 0.15:
        lines.append('decide = "10 min"')
    return "\n".join(lines)


def random_week(rng: random.Random, wet: bool, takes: int) -> str:
    """A day of work for a rig in ``rig.toml``."""
    present = f'present = {{ level = "{rng.choice([38, 46, 55, 70, 95])} %" }}' if wet else "present = {}"
    quiet = ""
    if rng.random() < 0.3:
        quiet = f'quiet = [{{ name = "next door", from = "Mon 13:00", to = "Mon 14:{rng.randint(10, 50)}" }}]'
    return f"""
format = 1
kind = "week"
title = "Random week"
rig = "rig.toml"
zone = "Europe/Vienna"
start = 2031-03-03T08:00:00
end = 2031-03-03T{rng.randint(15, 23)}:00:00
{present}
{quiet}
staffed = [{{ days = "Mon-Fri", from = "08:30", to = "17:00" }}]
helium = {{ stock = "{rng.choice([0, 12, 60])} L", deliveries = [{{ at = "Mon 11:20", volume = "20 L" }}] }}
people = [
  {{ name = "Operator 1", trained = ["transfer", "switch"] }},
  {{ name = "Operator 2", trained = ["transfer"], hours = [{{ days = "Mon", from = "09:00", to = "14:30" }}] }},
]
users = [{{ name = "Hall group", letter = "A" }}]
[[samples]]
name = "S"
user = "Hall group"
density = "1.2e11 cm^-2"
density_error = "1 %"
gates = [{{ name = "g", lowest = "-1 V", highest = "1 V", rate = "10 mV/s" }}]
""" + "\n\n".join(random_target(rng, number) for number in range(takes))


def random_request(folder: Path, seed: int, takes: int) -> Request:
    """A random week read from files in ``folder``."""
    rng = random.Random(seed)
    rig = random_rig(rng)
    (folder / "rig.toml").write_text(rig, encoding="utf-8")
    (folder / "week.toml").write_text(random_week(rng, "[bath]" in rig, takes), encoding="utf-8")
    return read_week(folder / "week.toml")
