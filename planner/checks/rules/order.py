"""Which takes are done, when, and in what order: must, windows, precedence, deciding."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from planner.checks.asks import least_take_s, takes_asked
from planner.checks.plan_view import PlanView, is_decision
from planner.checks.registry import Rule, register
from planner.checks.room import STAFFED, first_too_short
from planner.checks.spans import less, lies_in, next_fit, shared
from planner.checks.week_view import WeekView
from planner.checks.wording import length
from planner.files.targets import AnyTarget
from planner.plan import Finding, Kind, Step, StepKind

MUST = register(Rule("must be done", "order", "what must be measured", "week: targets.must", Kind.POLICY))
ASKED = register(
    Rule("asked for", "order", "fridge time against work nobody asked for, or twice", "week: targets", Kind.POLICY)
)
SAID = register(Rule("left out is said", "order", "users against silence", "plan: left_out", Kind.WARN))
WINDOW = register(
    Rule("windows of a target", "order", "work that has its time", "week: targets.windows, hours", Kind.POLICY)
)
ORDER = register(
    Rule("order of targets", "order", "work that needs another's result", "week: targets.after, before", Kind.POLICY)
)
DECIDE = register(Rule("time to decide", "order", "the pause to look at data", "week: targets.decide", Kind.POLICY))
FITS = register(
    Rule("time in the week", "order", "what must be done against a week too short", "week: start, end", Kind.STOP)
)


@MUST.plan
def must_be_done(view: PlanView) -> Iterator[Finding]:
    """Every take of a target that must be done is in the plan."""
    for target in view.targets.values():
        asked, done = takes_asked(target), len(view.takes.get(target.name, ()))
        if target.must and done < asked:
            yield MUST.finding(
                f'"{target.name}" must be done: {done} of {asked} takes are in the plan, which ends '
                f"{view.wall(view.horizon_s)}.",
                kind=Kind.WARN if view.recovers else MUST.kind,
                value=float(done),
                least=float(asked),
                unit="takes",
                subject=target.name,
                mend="make room for it, or say that it need not be done",
            )


@SAID.plan
def left_out_is_said(view: PlanView) -> Iterator[Finding]:
    """What a plan does not do stands in its list of what was left out."""
    said = {entry.target for entry in view.plan.left_out}
    for target in view.targets.values():
        asked, done = takes_asked(target), len(view.takes.get(target.name, ()))
        if done < asked and target.name not in said and not target.must:
            yield SAID.finding(
                f'"{target.name}": {done} of {asked} takes are in the plan, and nothing is said of the others.',
                value=float(done),
                least=float(asked),
                unit="takes",
                subject=target.name,
                mend="list it as left out, with the reason",
            )


@ASKED.plan
def asked_for(view: PlanView) -> Iterator[Finding]:
    """Every take belongs to a target of the week, is done once, and none is done more often than asked."""
    once: set[str] = set()
    counted: Counter[str] = Counter()
    for step in sorted(view.of_step(StepKind.TAKE), key=lambda step: step.start_s):
        target = view.targets.get(step.target)
        if target is None:
            yield _unasked(view, step, "nobody asked for it")
            continue
        if is_decision(step):
            continue
        counted[step.target] += 1
        take = step.take or step.target
        if take in once:
            yield _unasked(view, step, f'the take "{take}" is in the plan already')
        elif counted[step.target] > takes_asked(target):
            yield _unasked(view, step, f"{takes_asked(target)} were asked")
        elif step.user != view.user_of(target):
            yield _unasked(view, step, f"it is {view.user_of(target)} who asked for it, not {step.user or 'nobody'}")
        once.add(take)


def _unasked(view: PlanView, step: Step, why: str) -> Finding:
    return ASKED.finding(
        f"{step.label}, {view.wall(step.start_s)} to {view.wall(step.end_s)}: {why}.",
        at_s=step.start_s,
        step=step.number,
        subject=step.target,
        mend=f"leave it out: {length(step.seconds)} are free",
    )


@WINDOW.plan
def windows_of_a_target(view: PlanView) -> Iterator[Finding]:
    """The whole take lies in one of its target's windows."""
    for name, steps in view.takes.items():
        target = view.targets.get(name)
        windows = None if target is None else view.windows(target)
        if windows is None:
            continue
        for step in steps:
            if lies_in(windows, step.start_s, step.end_s):
                continue
            outside = less(((step.start_s, step.end_s),), windows)
            at_s = outside[0][0] if outside else step.start_s
            follows = next_fit(windows, step.start_s, step.seconds)
            yield WINDOW.finding(
                f"{step.label} from {view.wall(step.start_s)} to {view.wall(step.end_s)} is outside its windows from "
                f"{view.wall(at_s)} on.",
                value=sum(end - begin for begin, end in outside) / 60,
                most=0.0,
                unit="min",
                at_s=at_s,
                step=step.number,
                subject=name,
                mend="no later window is long enough" if follows is None else f"begin at {view.wall(follows)}",
            )


def before_of(view: WeekView, target: AnyTarget) -> tuple[str, ...]:
    """Names of the targets that must be done before one."""
    others = [other.name for other in view.targets.values() if target.name in other.before]
    return tuple(dict.fromkeys([*target.after, *others]))


@ORDER.plan
def order_of_targets(view: PlanView) -> Iterator[Finding]:
    """A target begins once every take of those before it has ended, deciding included."""
    decided: dict[str, int] = {}
    for step in view.of_step(StepKind.TAKE):
        decided[step.target] = max(decided.get(step.target, 0), step.end_s)
    for name, steps in view.takes.items():
        target = view.targets.get(name)
        for earlier in before_of(view, target) if target is not None else ():
            done = len(view.takes.get(earlier, ()))
            asked = takes_asked(view.targets[earlier])
            ends = decided.get(earlier)
            if ends is not None and done >= asked and ends <= steps[0].start_s:
                continue
            why = f"{done} of its {asked} takes are in the plan" if done < asked else f"it ends {view.wall(ends or 0)}"
            yield ORDER.finding(
                f'{steps[0].label} begins {view.wall(steps[0].start_s)} and comes after "{earlier}": {why}.',
                value=float(done) if done < asked else float(steps[0].start_s),
                least=float(asked) if done < asked else float(ends or 0),
                unit="takes" if done < asked else "s",
                at_s=steps[0].start_s,
                step=steps[0].number,
                subject=name,
                mend=f'measure "{earlier}" first' if done < asked else f"begin at {view.wall(ends or 0)}",
            )


@DECIDE.plan
def time_to_decide(view: PlanView) -> Iterator[Finding]:
    """A target that asks for a pause to look and decide has one after a take of it, long enough."""
    for name, steps in view.takes.items():
        target = view.targets.get(name)
        if target is None or not target.decide_s:
            continue
        pauses = [s for s in view.of_step(StepKind.TAKE) if s.target == name and is_decision(s)]
        longest = max((s.seconds for s in pauses if s.start_s >= steps[0].end_s), default=0)
        if longest < target.decide_s - 1e-6:
            yield DECIDE.finding(
                f"After {steps[-1].label}, {view.wall(steps[-1].end_s)}, {length(longest)} are left to look "
                "and decide; "
                f"{length(target.decide_s)} were asked.",
                value=float(longest),
                least=float(target.decide_s),
                unit="s",
                at_s=steps[-1].end_s,
                step=steps[-1].number,
                subject=name,
                mend=f"a pause of {length(target.decide_s)}, attended",
            )


@WINDOW.week
def room_for_a_take(view: WeekView) -> Iterator[Finding]:
    """Windows, people and slots leave every target one stretch long enough for a take."""
    for target in view.targets.values():
        short = first_too_short(view, target)
        if short is None or short[0] == STAFFED:
            continue
        why, longest, needed = short
        yield WINDOW.finding(
            f'"{target.name}" needs {length(needed)} in one piece; the longest stretch in {why} is {length(longest)}, '
            f"between {view.wall(0)} and {view.wall(view.horizon_s)}.",
            kind=FITS.kind if why == "the week" else WINDOW.kind,
            value=longest / 60,
            least=needed / 60,
            unit="min",
            subject=target.name,
            mend=f"{length(needed - longest)} more, or a shorter take",
        )


@FITS.week
def musts_fit(view: WeekView) -> Iterator[Finding]:
    """What must be done, moves apart, takes no longer than the week; what is attended no longer than staffed hours."""
    musts = [target for target in view.targets.values() if target.must]
    totals = {t.name: takes_asked(t) * least_take_s(view.week, view.rig, t) for t in musts}
    decide = sum(float(target.decide_s) for target in musts)
    total = sum(totals.values()) + decide
    if total > view.horizon_s:
        longest = max(totals, key=lambda name: totals[name])
        yield FITS.finding(
            f"What must be done takes {length(total)} without any move, and the week has {length(view.horizon_s)}, "
            f"to {view.wall(view.horizon_s)}.",
            value=total / 3600,
            most=view.horizon_s / 3600,
            unit="h",
            mend=f'{length(total - view.horizon_s)} less; the longest is "{longest}" with {length(totals[longest])}',
        )
    attended = sum(totals[t.name] for t in musts if t.attended) + decide
    there = sum(end - begin for begin, end in shared(view.staffed, ((0, view.horizon_s),)))
    if attended > there:
        yield FITS.finding(
            f"What must be done with somebody there takes {length(attended)}, and the week has {length(there)} of "
            f"staffed hours, to {view.wall(view.horizon_s)}.",
            kind=Kind.POLICY,
            value=attended / 3600,
            most=there / 3600,
            unit="h",
            source="week: staffed",
            mend=f"{length(attended - there)} more of staffed hours",
        )


@ORDER.week_last
def order_with_the_impossible(view: WeekView) -> Iterator[Finding]:
    """A target that comes after one that cannot be done cannot be done either; said down the whole line."""
    blocked: dict[str, str] = {}
    again = True
    while again:
        again = False
        for target in view.targets.values():
            if target.name in blocked or target.name in view.impossible:
                continue
            stands = next((e for e in before_of(view, target) if e in view.impossible or e in blocked), None)
            if stands is not None:
                blocked[target.name] = stands
                again = True
    for name, stands in blocked.items():
        cause = view.impossible.get(stands)
        why = f" ({cause.rule})" if cause is not None else ""
        must = view.targets[name].must
        yield ORDER.finding(
            f'"{name}" comes after "{stands}", which cannot be done{why}: it cannot be done before '
            f"{view.wall(view.horizon_s)}.",
            kind=Kind.STOP if must else Kind.WARN,
            subject=name,
            mend=f'mend "{stands}" first, or take it out of the order',
        )


@MUST.week_last
def impossible_musts(view: WeekView) -> Iterator[Finding]:
    """A target that must be done and cannot be."""
    for name, cause in view.impossible.items():
        target = view.targets.get(name)
        if target is not None and target.must:
            yield MUST.finding(
                f'"{name}" must be done and cannot be by {view.wall(view.horizon_s)}: {cause.text}',
                kind=Kind.STOP if cause.kind is Kind.STOP else MUST.kind,
                value=cause.value,
                most=cause.limit if cause.margin is not None and cause.value is not None and _upper(cause) else None,
                least=cause.limit
                if cause.margin is not None and cause.value is not None and not _upper(cause)
                else None,
                unit=cause.unit,
                subject=name,
                mend=cause.mend,
            )


def _upper(finding: Finding) -> bool:
    return finding.value is not None and finding.limit is not None and finding.value > finding.limit
