"""Services the optimiser may place. `SERVICES` is the registry: one function a kind of service."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass

from planner.calendars import Calendar, both
from planner.files.level import litres_at
from planner.files.start import charge_of, persistent_coil
from planner.moves import whole_seconds
from planner.plan import Coil, CoilMode, Stage, State
from planner.planning.people import Availability
from planner.takes import Context, Take

MOST_USES = 14


@dataclass(frozen=True, slots=True)
class Refill:
    """How a service fills the bath from the stock."""

    fill_to_L: float
    seconds_per_L: float
    least_pour_L: float
    need_full: bool
    drawn_per_L: float
    drawn_fixed_L: float


@dataclass(frozen=True, slots=True)
class Service:
    """A service at one state of the rig: how long, when, how often at most, what it refills."""

    name: str
    label: str
    state: State
    seconds: int
    calendar: Calendar
    most_uses: int
    people: int = 0
    training: str = ""
    refill: Refill | None = None


def resting_state(context: Context, coil: Coil) -> State:
    """The rig at base with every gate at rest."""
    stage = Stage(float(context.rig.stage.base_K), charge_of(context.rig))
    return State(coil, stage, context.setup.resting, context.start.light, context.start.fills)


def helium_transfers(context: Context, availability: Availability, takes: Iterable[Take]) -> Iterator[Service]:
    """Fill the bath: to the full, or with what the stock holds; at zero field, or persistent where the site allows."""
    bath = context.rig.bath
    if bath is None:
        return
    rules = bath.transfer
    open_hours = availability.attended(rules.people, rules.training)
    if rules.hours:
        open_hours = both(open_hours, availability.hours(rules.hours))
    if not open_hours:
        return
    coils = [Coil()]
    if rules.coil == "persistent or zero":
        coils += persistent_stays(context, takes)
    stocked = context.week.helium.stock_L > 0 or context.week.helium.deliveries
    for coil in coils if stocked else []:
        for need_full in (True, False):
            refill = Refill(
                litres_at(bath, rules.fill_to_percent),
                1 / rules.rate_L_per_s,
                float(rules.least_pour_L),
                need_full,
                100 / rules.efficiency_percent,
                float(rules.line_loss_L),
            )
            state = resting_state(context, coil)
            uses = min(MOST_USES, len(open_hours))
            seconds = whole_seconds(rules.line_cooling_s)
            label = "helium transfer"
            yield Service(
                "helium transfer", label, state, seconds, open_hours, uses, rules.people, rules.training, refill
            )


def persistent_stays(context: Context, takes: Iterable[Take]) -> list[Coil]:
    """The persistent fields that takes of this week use."""
    fields = {
        way.exit.coil.field_T[2]
        for take in takes
        for way in take.alternatives
        if way.exit.coil.mode is CoilMode.PERSISTENT
    }
    return [persistent_coil(context.rig, field_T) for field_T in sorted(fields)]


def parking(context: Context, availability: Availability, takes: Iterable[Take]) -> Iterator[Service]:
    """Go to zero field and wait there."""
    if not any(True for _ in takes):
        return
    state = resting_state(context, Coil())
    days = availability.horizon_s // 86400 + 1
    yield Service("parking", "park at zero field", state, 0, availability.always, min(MOST_USES, days))


SERVICES: dict[str, Callable[[Context, Availability, Iterable[Take]], Iterator[Service]]] = {
    "helium transfer": helium_transfers,
    "parking": parking,
}
