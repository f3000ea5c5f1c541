"""Sweep speed against the lock-in: the honest rate, the lag it leaves, the time it takes."""

from __future__ import annotations

from collections.abc import Iterator

from planner.checks.asks import honest_rate, lockin_of, passes, sweep_range_T
from planner.checks.plan_view import PlanView
from planner.checks.ramp_table import least_seconds, pieces
from planner.checks.registry import Rule, register
from planner.checks.week_view import WeekView
from planner.checks.wording import length, number, rate, tesla
from planner.files.targets import FieldSweep, LockIn
from planner.physics.lockin import lag_T
from planner.plan import Finding, Kind

EXACT = 1e-9
SURVEY_SHARE = 1 / 3
"""A survey may shift up and down traces against each other by this share of a feature (common practice, no source)."""

WINDOWS = 6
WINDOW_FEATURES = 15
"""The offer of windows: how many, and how many feature widths each (common practice, no source)."""

LOCKIN = register(
    Rule(
        "sweep against lock-in",
        "speed",
        "features against being smeared and shifted by the output filter",
        "week: lockin; rate = feature / (points × settling of n equal RC stages)",
        Kind.WARN,
    )
)
OUTRUN = register(
    Rule("sweep rate asked", "speed", "data against a faster sweep than was asked", "week: targets.rate", Kind.POLICY)
)


def _lag_text(used: float, lockin: LockIn) -> tuple[str, float]:
    shift = 2 * float(lag_T(used, float(lockin.time_constant_s), lockin.poles))
    return f"up and down traces differ by {number(shift * 1e3, 3)} mT", shift


def _offer(view: WeekView, target: FieldSweep, lockin: LockIn, honest: float, low: float, high: float) -> str:
    """A faster survey over the whole range, and slow windows where it matters."""
    feature = float(target.feature_T or 0.0)
    survey = SURVEY_SHARE * feature / (2 * lockin.time_constant_s * lockin.poles)
    magnet_s = least_seconds(view.magnet, low, high, survey)
    drops = [abs(b - a) / s for a, b, s in pieces(view.magnet, low, high, survey)]
    slower = sorted({value for value in drops if value < survey * (1 - EXACT)}, reverse=True)
    above = f", the table slows it to {' and '.join(rate(value) for value in slower)}" if slower else ""
    window = WINDOW_FEATURES * feature
    ways = passes(target)
    windows_s = WINDOWS * window / honest * ways
    both = " both ways" if ways > 1 else ""
    return (
        f"{rate(honest)}: {length(least_seconds(view.magnet, low, high, honest))} one way; or a survey at "
        f"{rate(survey)} at "
        f"most ({length(magnet_s)} each way{above}) and {WINDOWS} windows of {tesla(window)} at {rate(honest)}{both}, "
        f"{length(windows_s)} and their settling"
    )


@LOCKIN.week
def asked_sweep_against_lockin(view: WeekView) -> Iterator[Finding]:
    """A rate asked that outruns the lock-in, with the honest rate, the times and an offer."""
    for target in view.targets.values():
        if not isinstance(target, FieldSweep) or target.rate_T_per_s is None:
            continue
        honest, lockin = honest_rate(view.week, target), lockin_of(view.week, target)
        low, high = sweep_range_T(view.week, view.rig, target)
        if honest is None or lockin is None or high <= low:
            continue
        fastest = max(abs(b - a) / s for a, b, s in pieces(view.magnet, low, high, float(target.rate_T_per_s)))
        if fastest <= honest * (1 + EXACT):
            continue
        magnet_s = least_seconds(view.magnet, low, high, float(target.rate_T_per_s))
        lag, _ = _lag_text(fastest, lockin)
        yield LOCKIN.finding(
            f'"{target.name}" at {rate(target.rate_T_per_s)} outruns its lock-in: the magnet alone takes '
            f"{length(magnet_s)} each way, and {lag}; {tesla(target.feature_T or 0.0)} features with "
            f"{lockin.points_across} points settled to {lockin.settled_percent:g} % want {rate(honest)}, "
            f"{least_seconds(view.magnet, low, high, honest) / 60:.0f} min one way.",
            value=fastest * 60e3,
            most=honest * 60e3,
            unit="mT/min",
            subject=target.name,
            mend=_offer(view, target, lockin, honest, low, high),
        )


@LOCKIN.plan
def sweep_against_lockin(view: PlanView) -> Iterator[Finding]:
    """No sweep leg of a take is faster than its lock-in follows; one finding a take."""
    for at, step in enumerate(view.steps):
        target = view.targets.get(step.target)
        if not isinstance(target, FieldSweep):
            continue
        honest, lockin = honest_rate(view.week, target), lockin_of(view.week, target)
        legs = [item for item in view.by_step[at] if item.leg.action == "sweep" and item.leg.rate]
        fast = [item for item in legs if honest is not None and (item.leg.rate or 0.0) > honest * (1 + EXACT)]
        if not fast or honest is None or lockin is None:
            continue
        worst = max(fast, key=lambda item: item.leg.rate or 0.0)
        used = worst.leg.rate or 0.0
        lag, _ = _lag_text(used, lockin)
        low, high = sweep_range_T(view.week, view.rig, target)
        honest_s = passes(target) * least_seconds(view.magnet, low, high, honest)
        yield LOCKIN.finding(
            f"{step.label}: {rate(used)} from {view.wall(worst.leg.start_s)} on; the lock-in follows "
            f"{rate(honest)}, and {lag}.",
            value=used * 60e3,
            most=honest * 60e3,
            unit="mT/min",
            at_s=fast[0].leg.start_s,
            step=step.number,
            subject=step.target,
            mend=f"sweep at {rate(honest)}: {length(honest_s)} for the take",
        )


@OUTRUN.plan
def sweep_rate_asked(view: PlanView) -> Iterator[Finding]:
    """No sweep leg is faster than its target asked."""
    for at, step in enumerate(view.steps):
        target = view.targets.get(step.target)
        if not isinstance(target, FieldSweep) or target.rate_T_per_s is None:
            continue
        asked = float(target.rate_T_per_s)
        fast = next(
            (i for i in view.by_step[at] if i.leg.action == "sweep" and (i.leg.rate or 0.0) > asked * (1 + EXACT)), None
        )
        if fast is None:
            continue
        used = fast.leg.rate or 0.0
        yield OUTRUN.finding(
            f"{step.label}: {rate(used)} from {view.wall(fast.leg.start_s)} on; {rate(asked)} was asked.",
            value=used * 60e3,
            most=asked * 60e3,
            unit="mT/min",
            at_s=fast.leg.start_s,
            step=step.number,
            subject=step.target,
            mend=f"sweep at {rate(asked)}",
        )
