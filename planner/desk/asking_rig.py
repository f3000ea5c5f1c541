"""What a rig file needs, in the order in which one walks round a cryostat: magnet, supply, switch, bath, stage, room.

Every offer is an invented number of ordinary size that goes with the answers before it.
"""

from __future__ import annotations

from collections.abc import Generator
from typing import Any

from planner.desk.asking import (
    LEFT_OUT,
    MEASURED,
    OWN,
    Parts,
    Question,
    Script,
    choice,
    count,
    under,
    value,
)
from planner.desk.asking_bath import bath_script, cooler_script
from planner.desk.offers import at_least, between, number, tidy
from planner.desk.place import value_at
from planner.files import Rig
from planner.files.rig import (
    Contact,
    CoolingPoint,
    Magnet,
    Policies,
    RampSegment,
    Room,
    SettleAfterRamp,
    StagePart,
    Supply,
    Switch,
    ThermalModel,
    WarmingPoint,
)

_RATES = ("0.28 T/min", "0.14 T/min", "0.07 T/min")


def rig_script() -> Script:
    """Every question for a rig."""
    wet = yield from under("The rig", _rig())
    persistent = yield from under("Magnet", _magnet(wet))
    yield from under("Helium bath" if wet else "Cooler", bath_script() if wet else cooler_script())
    yield from under("Stage", _stage(wet))
    yield from under("Room", _room())
    yield from under("Site rules", _policies(persistent))


def _rig() -> Generator[Question, Any, bool]:
    yield value(
        Rig, ("name",), "Name of the rig", "It heads every sheet, so that nobody takes it to the wrong rig.", "Our rig"
    )
    cooling = yield choice(
        "Is the coil in a helium bath or on a cooler?",
        "A bath is planned with its level, losses and transfers; a cryogen-free cooler has none of these.",
        "bath",
        ("bath", "cooler"),
        lambda word: {("cooler" if word == "bath" else "bath",): LEFT_OUT},
        lambda data: "bath" if "bath" in data else "cooler",
    )
    return bool(cooling == "bath")


def _magnet(wet: bool) -> Generator[Question, Any, bool]:
    at: Parts = ("magnet",)
    rated = yield value(
        Magnet, (*at, "rated_field"), "Rated field", "No plan goes beyond it.", "12 T" if wet else "9 T"
    )
    field_T = number(rated, "T")
    per_current = yield value(
        Magnet,
        (*at, "field_per_current"),
        "Field per current",
        "It turns every field into the current that the supply is set to.",
        f"{tidy(field_T / 100)} T/A",
    )
    yield value(Magnet, (*at, "inductance"), "Inductance", "With the ramp rate it gives the charging voltage.", "18 H")
    yield from _ramp_table(rated, field_T)
    yield value(
        Magnet, (*at, "settle"), "Settling time after a ramp", "Data wait until field and stage are at rest.", "2 min"
    )
    yield from _supply(field_T / number(per_current, "T/A"), field_T)
    switch = yield choice(
        "Has it a persistent switch?",
        "With one a field may stand with the leads down, which saves helium and gives quiet nights.",
        "yes" if wet else "no",
        ("yes", "no"),
        lambda word: {} if word == "yes" else {(*at, "switch"): LEFT_OUT},
        lambda data: "yes" if value_at(data, (*at, "switch")) else "no",
    )
    if switch == "yes":
        yield from _switch()
    return bool(switch == "yes")


def _ramp_table(rated: str, field_T: float) -> Script:
    at: Parts = ("magnet", "ramp_table")
    rows = yield count(at, "Rows of the ramp table", "Most magnets must go slower near the top.", 3, 1, 20)
    edge_T = 0.0
    for row in range(rows):
        last = row == rows - 1
        offer = rated if last and field_T > edge_T else f"{between(edge_T, max(field_T, 1.2 * edge_T), rows - row)} T"
        to = yield value(
            RampSegment,
            (*at, row, "to"),
            f"Row {row + 1} of {rows}: up to which field",
            "A row holds up to this |B|; the last one must reach the rated field.",
            offer,
        )
        edge_T = number(to, "T")
        why = "The fastest ramp the maker allows there; no ramp and no sweep of any plan is faster."
        yield value(RampSegment, (*at, row, "rate"), f"Row {row + 1} of {rows}: fastest ramp", why, _RATES[min(row, 2)])


def _supply(most_A: float, field_T: float) -> Script:
    at: Parts = ("magnet", "supply")
    current = yield value(
        Supply,
        (*at, "max_current"),
        "Highest current of the supply",
        "The rated field must be within what the supply gives.",
        f"{at_least(most_A)} A",
    )
    voltage = yield value(
        Supply,
        (*at, "max_voltage"),
        "Highest voltage of the supply",
        "It limits how fast the coil charges, less what the leads take.",
        "5 V",
    )
    leads_ohm = min(0.004, 0.5 * number(voltage, "V") / max(number(current, "A"), most_A, 10 * field_T))
    yield value(
        Supply,
        (*at, "lead_resistance"),
        "Resistance of the leads",
        "They take their share of the voltage.",
        f"{tidy(1e3 * leads_ohm)} mohm",
    )
    polarity = yield value(
        Supply,
        (*at, "polarity"),
        "Polarity",
        "A unipolar supply stops at zero before the field changes its sign.",
        "bipolar",
    )
    if polarity == "unipolar":
        yield value(
            Supply, (*at, "reversal"), "Time to change the polarity", "Every plan through zero pays it.", "3 min"
        )


def _switch() -> Script:
    at: Parts = ("magnet", "switch")
    for key, ask, why, offer in (
        ("warm", "Warming the switch", "The heater is on so long before the coil may be driven.", "30 s"),
        ("cool", "Cooling the switch", "The leads come down only when the switch is closed for certain.", "60 s"),
        (
            "hold_before",
            "Hold at the field before the heater goes off",
            "Drift of a fresh field is then over.",
            "5 min",
        ),
        ("settle_after", "Rest after the leads have moved", "The lead current is then read and matched.", "10 s"),
        ("leads", "Lead rate with the switch closed", "Leads may move faster than the coil.", "110 A/min"),
        ("match", "Largest mismatch at heater on", "A switch opened on other current quenches the coil.", "0.1 A"),
        (
            "attended",
            "Must somebody be there when switch and leads are worked?",
            "It decides which nights can be persistent.",
            "yes",
        ),
    ):
        yield value(Switch, (*at, key), ask, why, offer)


def _stage(wet: bool) -> Script:
    at: Parts = ("stage",)
    kind = yield value(
        StagePart,
        (*at, "kind"),
        "Kind of stage",
        "One that holds a mixture goes no higher than that allows.",
        "dilution" if wet else "continuous",
    )
    cold = kind == "dilution"
    base = yield value(
        StagePart,
        (*at, "base"),
        "Base temperature",
        "The coldest that anything can be asked for.",
        "15 mK" if cold else "1.5 K",
        mark=MEASURED,
    )
    offer_K = max(0.9 if cold else 60.0, 2 * number(base, "K"))
    highest = yield value(
        StagePart, (*at, "highest"), "Highest temperature", "Nothing warmer is planned.", _kelvin(offer_K)
    )
    way = yield choice(
        "Are its times known from a measured table, or from time constants?",
        "Warming and cooling take most of a temperature series.",
        "table" if cold else "constants",
        ("table", "constants"),
        lambda word: (
            {(*at, "model"): LEFT_OUT} if word == "table" else {(*at, "warming"): LEFT_OUT, (*at, "cooling"): LEFT_OUT}
        ),
        lambda data: "constants" if value_at(data, (*at, "model")) else "table",
    )
    if way == "table":
        yield from _times("warming", "to", WarmingPoint, base, highest, (8, 14, 25, 40))
        yield from _times("cooling", "from", CoolingPoint, base, highest, (25, 45, 75, 120))
    else:
        yield from _model()
    yield from _after_ramp(base, cold)


def _after_ramp(base: str, cold: bool) -> Script:
    at: Parts = ("stage",)
    rows = yield count(
        (*at, "after_ramp"),
        "Rows of settling after a ramp",
        "A ramp warms a cold stage by eddy currents.",
        int(cold),
        0,
        20,
    )
    for row in range(rows):
        offer_K = max(4 * number(base, "K"), 0.06)
        yield value(
            SettleAfterRamp,
            (*at, "after_ramp", row, "below"),
            f"Row {row + 1}: for temperatures below",
            "Warmer ones do not notice.",
            _kelvin(offer_K),
            mark=MEASURED,
        )
        yield value(
            SettleAfterRamp,
            (*at, "after_ramp", row, "time"),
            f"Row {row + 1}: time to come back",
            "Data wait for it.",
            "15 min",
            mark=MEASURED,
        )


def _model() -> Script:
    for key, ask, why, offer in (
        ("warming_constant", "Time constant of warming", "An exponential approach stands in for a table.", "4 min"),
        ("cooling_constant", "Time constant of cooling", "Cooling is usually slower than warming.", "9 min"),
        ("within", "Settled when within", "The nearer it must be, the longer it takes.", "1 %"),
    ):
        yield value(ThermalModel, ("stage", "model", key), ask, why, offer, mark=MEASURED)


def _times(name: str, key: str, model: Any, base: str, highest: str, minutes: tuple[int, ...]) -> Script:
    at: Parts = ("stage", name)
    way = "from base up" if name == "warming" else "down to base"
    rows = yield count(at, f"Rows of the {name} table", f"How long the stage takes {way}, settled.", 4, 1, 20)
    kelvin, longest_s, longest = number(base, "K"), 0.0, "0 min"
    top_K = number(highest, "K")
    for row in range(rows):
        last = row == rows - 1
        offer = highest if last and top_K > kelvin else _between_kelvin(kelvin, max(top_K, 1.5 * kelvin), rows - row)
        which = f"Row {row + 1} of {rows}: {key}"
        why = "Temperatures rise from row to row; the last must reach the highest one."
        kelvin = number((yield value(model, (*at, row, key), which, why, offer, mark=MEASURED)), "K")
        usual = minutes[min(row, len(minutes) - 1)]
        offer = f"{usual} min" if 60 * usual >= longest_s else longest
        longest = yield value(
            model,
            (*at, row, "time"),
            f"Row {row + 1} of {rows}: time",
            f"Measured {way}, settled.",
            offer,
            mark=MEASURED,
        )
        longest_s = number(longest, "s")


def _kelvin(value_K: float) -> str:
    return f"{tidy(1e3 * value_K)} mK" if value_K < 1 else f"{tidy(value_K)} K"


def _between_kelvin(low_K: float, high_K: float, rows: int) -> str:
    """A temperature between two, at equal ratios, in the unit one would say it in."""
    share = (high_K / low_K) ** (1 / rows) - 1
    wanted_K = low_K * (1 + share)
    scale, unit = (1e3, "mK") if wanted_K < 1 else (1.0, "K")
    return f"{between(low_K * scale, high_K * scale, rows, wanted_K * scale)} {unit}"


def _room() -> Script:
    yield value(
        Room,
        ("room", "volume"),
        "Volume of the room",
        "For the oxygen that is left if the bath boils away.",
        "140 m^3",
        mark=OWN,
    )
    rows = yield count(
        ("room", "contacts"), "People to call", "Their roles stand on every sheet, the first one first.", 1, 0, 10
    )
    for row in range(rows):
        at: Parts = ("room", "contacts", row)
        yield value(
            Contact,
            (*at, "role"),
            f"Contact {row + 1}: role",
            "A role, no private name.",
            "Rig responsible" if row == 0 else f"Contact {row + 1}",
        )
        yield value(Contact, (*at, "reach"), f"Contact {row + 1}: how to reach", "At night too.", "see the door")


def _policies(persistent: bool) -> Script:
    at: Parts = ("policies",)
    yield value(
        Policies,
        (*at, "together"),
        "What may move at the same time",
        "The rest moves one after the other.",
        "field, temperature, gates",
    )
    if persistent:
        yield value(
            Policies,
            (*at, "unattended_persistent"),
            "May a persistent field stand with nobody there?",
            "It decides what can be done at night.",
            "yes",
        )
