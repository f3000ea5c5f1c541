"""Which field a filling needs at a density, whether a rig reaches it, and what would bring it in reach.

Magnitudes decide reach; signs follow the carriers (electrons positive). The density's uncertainty makes every field an
interval: wholly inside the rated field is reachable, wholly outside is not, in between is provisional until the density
is measured. A week is planned to the rated field only; a field with the coil below the lambda point is told beside it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import asdict, dataclass
from enum import StrEnum
from fractions import Fraction
from typing import TYPE_CHECKING, Any

import numpy as np

from planner.desk.layer import Layer
from planner.errors import OutOfRangeError
from planner.files.asks import filling_name
from planner.files.rig import Rig
from planner.physics.fillings import (
    density_for_filling_per_m2,
    field_for_filling_T,
    field_interval_T,
    fillings_to_list,
    hall_plateau_ohm,
    has_plateau,
    total_T,
)
from planner.physics.gaps import gap_scale_K, temperature_to_resolve_K

if TYPE_CHECKING:
    import pandas as pd

LARGEST_INTEGER = 20
"""Integers listed without being asked for: clean samples show them to 20 or 30 (common practice, no source)."""

MOST_OFFERS = 3
"""How many other fillings are offered for one out of reach."""

_EDGE = 1e-12


class Reach(StrEnum):
    """Whether a filling's field interval lies within the magnet's reach."""

    YES = "yes"
    PROVISIONAL = "provisional"
    LAMBDA = "lambda"
    LAMBDA_PROVISIONAL = "lambda, provisional"
    NO = "no"
    UNKNOWN = "no rig"


@dataclass(frozen=True, slots=True)
class Offer:
    """What would bring a filling, or one near it, in reach: ``value`` in ``unit``, at most at ``limit_T``."""

    kind: str
    text: str
    value: float
    unit: str
    limit_T: float


@dataclass(frozen=True, slots=True)
class FillingRow:
    """One filling: perpendicular field with its interval, total field, reach, plateau, gap scale, offers.

    ``tilt_deg`` is the largest tilt at which the whole interval stays within the rated field, ``lambda_tilt_deg`` the
    same within the field below the lambda point; None where even no tilt is in reach, or there is no such field.
    """

    filling: float
    name: str
    field_T: float
    low_T: float
    high_T: float
    total_T: float
    reach: Reach
    plateau_ohm: float
    plateau: bool
    gap_K: float | None
    resolve_K: float | None
    tilt_deg: float | None
    lambda_tilt_deg: float | None
    offers: tuple[Offer, ...]
    notes: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class FieldPage:
    """Fillings of one layer on one rig."""

    density_per_m2: float
    uncertainty_per_m2: float
    tilt_deg: float
    rated_T: float | None
    lambda_T: float | None
    base_K: float | None
    rows: tuple[FillingRow, ...]
    words: tuple[str, ...]

    def data(self) -> dict[str, Any]:
        """Everything as JSON-ready values, units in the keys."""
        return asdict(self)

    def frame(self) -> pd.DataFrame:
        """The rows as a table, units in the column names."""
        import pandas as pd

        rows = [
            {**asdict(row), "offers": "; ".join(offer.text for offer in row.offers), "notes": "; ".join(row.notes)}
            for row in self.rows
        ]
        return pd.DataFrame(rows).drop(columns="filling").rename(columns={"name": "filling"})


def default_fillings(largest_integer: int = LARGEST_INTEGER) -> tuple[Fraction, ...]:
    """Return the fillings worth a line, highest field first: see `planner.physics.fillings.fillings_to_list`."""
    return fillings_to_list(largest_integer)


def field_page(
    layer: Layer, fillings: Sequence[float | Fraction] | None = None, rig: Rig | None = None, *, tilt_rad: float = 0.0
) -> FieldPage:
    """Lay out the fields of fillings.

    Parameters
    ----------
    layer
        Density with its uncertainty and gates.
    fillings
        Fillings, signed; without them those of `default_fillings`.
    rig
        Its rated field, and its field below the lambda point if it has one, decide what is in reach.
    tilt_rad
        Angle between the field and the layer's normal.

    Raises
    ------
    OutOfRangeError
        If the gates leave no carriers, the uncertainty reaches zero density, or the tilt 90 degrees.
    """
    asked = default_fillings() if fillings is None else fillings
    limits = _Limits.of(rig)
    reach = _Reacher(layer, limits, tilt_rad, tuple(_candidates(layer, tilt_rad)))
    rows = tuple(reach.row(filling) for filling in asked)
    base = None if rig is None else float(rig.stage.base_K)
    return FieldPage(
        density_per_m2=layer.now_per_m2,
        uncertainty_per_m2=layer.uncertainty_per_m2,
        tilt_deg=float(np.degrees(tilt_rad)),
        rated_T=limits.rated_T,
        lambda_T=limits.lambda_T,
        base_K=base,
        rows=rows,
        words=tuple(_words(layer, limits)),
    )


def _words(layer: Layer, limits: _Limits) -> list[str]:
    words = []
    if layer.uncertainty_per_m2 > 0:
        words.append(
            f"The density is known to ±{100 * layer.uncertainty_per_m2 / abs(layer.now_per_m2):.2g} %: every field is "
            "provisional until it is measured in this cooldown."
        )
    if limits.rated_T is not None and limits.lambda_T is not None:
        words.append(
            f"Above {limits.rated_T:g} T only with the coil below the lambda point, to {limits.lambda_T:g} T; no week "
            "is planned there."
        )
    words.append(
        "Gaps are orders of magnitude for a GaAs-like layer; the temperature leaves 1 % of the longitudinal resistance."
    )
    return words


@dataclass(frozen=True, slots=True)
class _Limits:
    rated_T: float | None
    lambda_T: float | None

    @classmethod
    def of(cls, rig: Rig | None) -> _Limits:
        if rig is None:
            return cls(None, None)
        beyond = rig.magnet.lambda_field_T
        return cls(float(rig.magnet.rated_field_T), None if beyond is None else float(beyond))

    @property
    def fields_T(self) -> tuple[float, ...]:
        return tuple(field for field in (self.rated_T, self.lambda_T) if field is not None)

    def named(self, limit_T: float) -> str:
        return f"{limit_T:g} T{', lambda' if limit_T == self.lambda_T else ''}"


@dataclass(frozen=True, slots=True)
class _Candidate:
    """A filling with a plateau that may be offered: its total field, and the furthest end of its interval."""

    filling: Fraction
    total_T: float
    furthest_T: float


def _candidates(layer: Layer, tilt_rad: float) -> list[_Candidate]:
    known = [each for each in default_fillings() if has_plateau(each)]
    fillings = np.array([float(each) for each in known])
    field = np.asarray(total_T(field_for_filling_T(layer.now_per_m2, fillings), tilt_rad))
    ends = field_interval_T(layer.now_per_m2, layer.uncertainty_per_m2, fillings)
    furthest = np.max(np.abs([np.asarray(total_T(end, tilt_rad)) for end in ends]), axis=0)
    return [_Candidate(*each) for each in zip(known, field.tolist(), furthest.tolist(), strict=True)]


@dataclass(frozen=True, slots=True)
class _Reacher:
    """Judges fillings of one layer at one tilt."""

    layer: Layer
    limits: _Limits
    tilt_rad: float
    candidates: tuple[_Candidate, ...]

    def row(self, filling: float | Fraction) -> FillingRow:
        """Lay out one filling."""
        nu = float(filling)
        field = float(field_for_filling_T(self.layer.now_per_m2, nu))
        low, high = (float(end) for end in self._interval(nu))
        total = float(total_T(field, self.tilt_rad))
        exact = _as_fraction(filling)
        plateau = exact is not None and has_plateau(exact)
        gap, notes = self._gap(exact, field, total) if plateau and exact is not None else (None, _no_plateau(exact))
        reach = self._reach(low, high)
        return FillingRow(
            filling=nu,
            name=str(filling) if isinstance(filling, Fraction) else filling_name(filling),
            field_T=field,
            low_T=low,
            high_T=high,
            total_T=total,
            reach=reach,
            plateau_ohm=float(hall_plateau_ohm(nu)),
            plateau=plateau,
            gap_K=gap,
            resolve_K=None if gap is None else float(temperature_to_resolve_K(gap)),
            tilt_deg=_largest_tilt_deg(low, high, self.limits.rated_T),
            lambda_tilt_deg=_largest_tilt_deg(low, high, self.limits.lambda_T),
            offers=() if reach in (Reach.YES, Reach.UNKNOWN) else tuple(self._offers(nu, low, high, reach)),
            notes=notes,
        )

    def _interval(self, nu: float) -> tuple[float, float]:
        low, high = field_interval_T(self.layer.now_per_m2, self.layer.uncertainty_per_m2, nu)
        return float(low), float(high)

    def _gap(self, filling: Fraction, field_T: float, whole_T: float) -> tuple[float | None, tuple[str, ...]]:
        try:
            return gap_scale_K(filling, field_T, max(abs(whole_T), abs(field_T))), ()
        except OutOfRangeError as error:
            return None, (str(error),)

    def _reach(self, low_T: float, high_T: float) -> Reach:
        rated, beyond = self.limits.rated_T, self.limits.lambda_T
        if rated is None:
            return Reach.UNKNOWN
        nearest, furthest = self._sizes(low_T, high_T)
        if furthest <= rated * (1 + _EDGE):
            return Reach.YES
        if beyond is not None and nearest > rated * (1 + _EDGE):
            if furthest <= beyond * (1 + _EDGE):
                return Reach.LAMBDA
            if nearest <= beyond * (1 + _EDGE):
                return Reach.LAMBDA_PROVISIONAL
        return Reach.PROVISIONAL if nearest <= rated * (1 + _EDGE) else Reach.NO

    def _sizes(self, low_T: float, high_T: float) -> tuple[float, float]:
        """Smallest and largest magnitude of the total field."""
        ends = sorted(abs(float(total_T(end, self.tilt_rad))) for end in (low_T, high_T))
        return ends[0], ends[1]

    def _offers(self, nu: float, low_T: float, high_T: float, reach: Reach) -> list[Offer]:
        offers = []
        furthest = self._sizes(low_T, high_T)[1]
        beyond = self.limits.lambda_T
        if beyond is not None and reach in (Reach.LAMBDA, Reach.LAMBDA_PROVISIONAL, Reach.PROVISIONAL):
            fits = "" if furthest <= beyond * (1 + _EDGE) else " in part"
            offers.append(Offer("lambda", f"coil below the lambda point{fits} ({beyond:g} T)", beyond, "T", beyond))
        offers += self._tilts(low_T, high_T)
        offers += self._other_fillings(nu)
        for limit in self.limits.fields_T:
            if furthest > limit * (1 + _EDGE):
                offers += self._densities(nu, limit)
        return offers

    def _tilts(self, low_T: float, high_T: float) -> list[Offer]:
        """Smaller tilts that bring the whole interval in reach."""
        if self.tilt_rad == 0:
            return []
        offers = []
        for limit in self.limits.fields_T:
            tilt = _largest_tilt_deg(low_T, high_T, limit)
            if tilt is not None and tilt < abs(np.degrees(self.tilt_rad)):
                text = f"tilt ≤ {np.floor(10 * tilt) / 10:g}° ({self.limits.named(limit)})"
                offers.append(Offer("tilt", text, tilt, "deg", limit))
        return offers

    def _other_fillings(self, nu: float) -> list[Offer]:
        """The nearest fillings with a plateau that lie wholly in reach: within the rated field, else by lambda."""
        others = [each for each in self.candidates if abs(float(each.filling) - abs(nu)) > 1e-9]
        for limit in self.limits.fields_T:
            inside = [each for each in others if each.furthest_T <= limit * (1 + _EDGE)]
            if inside:
                near = sorted(inside, key=lambda each: abs(float(each.filling) - abs(nu)))[:MOST_OFFERS]
                return [self._other(each, nu, limit) for each in near]
        return []

    def _other(self, other: _Candidate, nu: float, limit_T: float) -> Offer:
        mate = ", its mirror" if abs(float(other.filling) + abs(nu) - 1.0) < 1e-9 else ""
        filling = other.filling if nu > 0 else -other.filling
        field = other.total_T if nu > 0 else -other.total_T
        return Offer("filling", f"ν = {filling} at {field:.2f} T{mate}", float(filling), "", limit_T)

    def _densities(self, nu: float, limit_T: float) -> list[Offer]:
        """The density that brings the whole interval in reach, and the gate voltages that give it."""
        reachable_T = limit_T * float(np.cos(self.tilt_rad))
        sign = 1.0 if self.layer.now_per_m2 > 0 else -1.0
        most = float(density_for_filling_per_m2(abs(nu), reachable_T)) - self.layer.uncertainty_per_m2
        if most <= 0:
            return []
        where = self.limits.named(limit_T)
        shown = np.floor(most / 1e12 + 1e-9) / 1e3
        offers = [Offer("density", f"n ≤ {shown:.3f}e11 cm^-2 ({where})", most, "m^-2", limit_T)]
        for gate in self.layer.gates:
            volt = gate.voltage_for_V(sign * most, self.layer.now_per_m2)
            if volt is None:
                continue
            window = "" if gate.allows(volt) else ", outside its window"
            # Rounded towards fewer carriers, so that the voltage shown is in reach.
            down = np.floor if sign * gate.slope_per_m2_V > 0 else np.ceil
            text = f"{gate.name} at {down(1e3 * volt) / 1e3:.3f} V{window} ({where})"
            offers.append(Offer("gate", text, volt, "V", limit_T))
        return offers


def _largest_tilt_deg(low_T: float, high_T: float, limit_T: float | None) -> float | None:
    from planner.physics.fillings import largest_tilt_rad

    furthest = max(abs(low_T), abs(high_T))
    if limit_T is None or furthest > limit_T * (1 + _EDGE):
        return None
    return float(np.degrees(largest_tilt_rad(min(furthest, limit_T), limit_T)))


def _as_fraction(filling: float | Fraction) -> Fraction | None:
    if isinstance(filling, Fraction):
        return filling
    simple = Fraction(float(filling)).limit_denominator(99)
    return simple if abs(float(simple) - float(filling)) < 1e-9 else None


def _no_plateau(filling: Fraction | None) -> tuple[str, ...]:
    if filling is None:
        return ("no simple fraction: a point on the Hall line, no plateau",)
    return ("no plateau expected: even denominator",)
