"""One sentence for every key of the files, shown beside the field that has the focus.

What the models say of a key themselves comes first; here stands the rest, by table and attribute.
"""

from __future__ import annotations

from pydantic.fields import FieldInfo

from planner.files.model import Table

_TABLES: dict[str, dict[str, str]] = {
    "Week": {
        "title": "heads every sheet and names its files",
        "rig": "the rig file, in the folder of the week file or below it",
        "zone": "whose wall clocks this week uses, by its IANA name",
        "start": "when the plan may begin; a local wall time",
        "end": "when the rig must be in its wanted end state",
        "present": "the rig as the week begins",
        "wanted_end": "the rig as the week shall end",
        "staffed": "when the lab is staffed; attended work happens only then",
        "people": "the roster: who may be asked to do what",
        "users": "the groups who share the magnet, each with a letter",
        "quiet": "times in which neighbours want no ramps, or no field",
        "helium": "what helium there is and what will come",
        "samples": "the chips in this load",
        "targets": "what is to be measured",
        "objective": "what a litre of helium is worth",
    },
    "Present": {
        "field_T": "in the coil now",
        "lead_current_A": "in the leads now; for a coil left persistent",
        "persistent_current_A": "the logged current in the coil, with its sign; unknown if nobody logged it",
        "temperature_K": "of the stage now, or base",
    },
    "WantedEnd": {
        "field_T": "in the coil when the week ends",
        "coil": "at a field: driven by the supply, or persistent with the leads down",
        "temperature_K": "of the stage when the week ends, or base",
    },
    "Person": {
        "name": "as the sheet shall print it",
        "trained": "what this person may do, such as transfer or switch",
        "hours": "this person's own hours; left out, all staffed hours",
        "away": "when this person is not there",
    },
    "User": {
        "name": "of the group or the person who measures",
        "letter": "marks this user's work wherever colour is not enough",
        "slots": "reserved for this user: nobody else measures then",
        "only_in_slots": "measure in the slots and at no other time",
    },
    "Quiet": {
        "name": "whose quiet time it is",
        "from_": "when it begins; a weekday alone is the first from the week's start on",
        "to": "when it ends",
        "forbids": "ramps: no change of field; field: none above the limit",
        "above_T": "with forbids = field: the highest field that may stand",
    },
    "Helium": {"stock_L": "liquid in storage vessels now", "deliveries": "liquid that will arrive"},
    "Delivery": {"at": "when the vessel is there", "volume_L": "liquid in it"},
    "Objective": {"hours_per_litre": "how many hours of moving one litre of helium is worth"},
    "Sample": {
        "name": "of the chip",
        "user": "who owns it",
        "density_per_m2": "of carriers, at the reference gate voltages; all fields of fillings follow from it",
        "density_error_percent": "how well the density is known; sweeps are widened by it",
        "carriers": "holes put positive fillings at negative field",
        "gates": "its gates",
        "contacts": "printed on the sheet",
    },
    "Gate": {
        "name": "of the gate",
        "lowest_V": "never driven below",
        "highest_V": "never driven above",
        "rate_V_per_s": "fastest change",
        "rest_V": "where it stays while others measure",
    },
    "LockIn": {
        "time_constant_s": "of the output filter",
        "poles": "of the output filter, 6 dB an octave each",
        "points_across": "independent points wanted across the narrowest feature",
        "settled_percent": "of a step that the output must reach before a point counts",
    },
    "Target": {
        "name": "unique in this week",
        "kind": "what kind of work it is",
        "sample": "the chip it is measured on",
        "must": "a plan that leaves it out is no plan",
        "temperature": "to hold: a value, an upper limit such as ≤ 50 mK, or base",
        "after": "targets that must be done before this one",
        "before": "targets that must wait for this one",
        "windows": "the only stretches of time in which it may run",
        "hours": "the only hours of the week in which it may run",
        "repeats": "how many times",
        "excitation": "printed on the sheet",
        "contacts": "printed on the sheet; left out, the sample's",
        "file": "name of the data file, printed on the sheet",
        "field_T": "to measure at; or give a filling",
        "field": "from one field to another; or give a filling",
        "filling": "ν: an integer, a fraction or a decimal; the field follows from the density",
        "coil": "persistent saves helium and is quiet; either lets the plan choose",
        "duration_s": "of the measurement itself",
        "direction": "both: there and back; either: whichever fits better",
        "gate": "the gate that is swept",
        "sweep": "from one voltage to another",
        "points": "of one sweep",
        "dwell_s": "at each point; left out, the lock-in's settling",
        "second_gate": "steps once for each sweep of the first",
        "second_sweep": "the second gate's range",
        "second_points": "how many steps of the second gate",
        "temperatures_K": "one measurement at each",
        "fields_T": "the rungs, one by one",
        "fillings": "the rungs, one by one, as fillings",
        "what": "the work in words",
        "people": "how many must be there",
        "training": "what those people must be trained for",
    },
    "Rig": {
        "name": "heads every sheet",
        "notes": "for whoever reads the file",
        "magnet": "the solenoid",
        "bath": "the liquid helium around the coil",
        "cooler": "of a rig without a bath",
        "stage": "the cold stage with the samples",
        "room": "the room, and whom to call",
        "policies": "rules of this site",
        "cooldown": "how this rig is cooled from room temperature",
    },
    "Magnet": {
        "rated_field_T": "the highest field the maker allows",
        "field_per_current_T_per_A": "turns field into supply current",
        "inductance_H": "with the rate it sets the charging voltage",
        "ramp_table": "the fastest ramp for each range of |B|",
        "supply": "the power supply",
        "switch": "the persistent switch",
        "lambda_table": "the fastest ramps beyond the rated field, below the lambda point",
        "conductor": "the wire, section by section, for its margins",
        "winding": "its size, for the stray field",
    },
    "Winding": {
        "mean_radius_m": "of the winding, for the stray field",
        "length_m": "of the winding",
        "measured": "distances at which a field was measured",
    },
    "RampSegment": {
        "to_T": "this row holds up to this |B|; the edge belongs to it",
        "rate_T_per_s": "the fastest ramp in this row",
    },
    "Supply": {
        "max_current_A": "the supply's limit",
        "max_voltage_V": "the supply's limit, charging and leads together",
        "lead_resistance_ohm": "of both leads",
        "polarity": "unipolar supplies stop at zero to be reversed",
    },
    "Conductor": {"name": "of this part of the winding"},
    "StrayDistance": {"field_T": "measured at these distances"},
    "Cooldown": {
        "copper_kg": "mass to be cooled",
        "aluminium_kg": "mass to be cooled",
        "stainless_kg": "mass to be cooled",
        "chain": "the parts of a cooldown, one after the other",
    },
    "ChainPart": {"what": "the work in words", "time_s": "how long it takes"},
    "Switch": {"warm_s": "until it is open", "cool_s": "until it is closed"},
    "Bath": {
        "calibration": "gauge level against litres",
        "gauge_error_percent": "the gauge may be wrong by this much; verdicts take it off",
        "lines": "the levels that stop work",
        "losses": "what empties the bath",
        "transfer": "how helium is filled here",
    },
    "LevelPoint": {"level_percent": "as the gauge reads", "volume_L": "in the bath at that level"},
    "Losses": {"static_L_per_s": "always"},
    "Transfer": {
        "efficiency_percent": "share of the drawn liquid that arrives",
        "line_cooling_s": "before liquid comes",
        "line_loss_L": "lost in cooling the line",
        "fill_to_percent": "never fuller than this",
        "people": "how many must be there",
        "training": "what those people must be trained for",
        "coil": "what the coil must be meanwhile",
        "hours": "the only hours in which it is done; left out, any staffed hour",
    },
    "Cooler": {"name": "as the sheet shall print it"},
    "StagePart": {
        "kind": "dilution holds a mixture, continuous does not",
        "base_K": "the lowest steady temperature",
        "highest_K": "the highest with the mixture circulating",
        "warming": "measured times from base up, settled",
        "cooling": "measured times down to base, settled",
        "model": "time constants, where nobody has measured a table",
        "after_ramp": "time to come back after the field has moved",
    },
    "WarmingPoint": {"to_K": "from base up to", "time_s": "until settled"},
    "CoolingPoint": {"from_K": "from here down to base", "time_s": "until settled"},
    "SettleAfterRamp": {"below_K": "for wanted temperatures below", "time_s": "after the last ramp"},
    "ThermalModel": {"warming_constant_s": "of the way up", "cooling_constant_s": "of the way down"},
    "Room": {"volume_m3": "for the oxygen figure on the sheet", "contacts": "whom to call, the first one first"},
    "Contact": {"role": "a role, no private name", "reach": "how to reach it"},
    "Policies": {"together": "what may move at the same time"},
}


def sentence(model: type[Table], attribute: str, info: FieldInfo) -> str:
    """What a key means; empty where neither the model nor this page says anything."""
    if info.description:
        return info.description
    for one in model.__mro__:
        if (found := _TABLES.get("Target" if _is_target(one) else one.__name__, {}).get(attribute)) is not None:
            return found
    return ""


def _is_target(model: type) -> bool:
    return any(base.__name__ == "Target" for base in model.__mro__)
