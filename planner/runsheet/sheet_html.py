"""The sheet as one HTML page that fetches nothing and prints on A4 and Letter, landscape."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING, Any

from planner.clock import WEEKDAYS
from planner.plan import Finding, HandOrder, Kind, Plan
from planner.runsheet.cautions import FOOTER, cautions_of, contacts_of
from planner.runsheet.glance import glance_svg
from planner.runsheet.levels import gauge_percent
from planner.runsheet.release import numbers_of
from planner.runsheet.setpoints import mode_words
from planner.runsheet.sheet import Sheet
from planner.runsheet.wording import HOUR_S, clean, fixed, kelvin, significant, tesla

if TYPE_CHECKING:
    from jinja2 import Template


def write(sheet: Sheet) -> bytes:
    """The page, UTF-8."""
    from markupsafe import Markup

    plan = sheet.plan
    page = _template().render(
        title=clean(plan.title),
        rig=clean(plan.rig),
        zone=clean(plan.zone),
        span=_span(sheet),
        banner=sheet.banner,
        review=sheet.review,
        made_by=clean(plan.made_by),
        plan_id=hashlib.sha256(plan.to_json()).hexdigest()[:12],
        sources=[(source.role, clean(source.path), source.sha256[:12]) for source in plan.sources],
        cautions=cautions_of(sheet.rig),
        contacts=contacts_of(sheet.rig),
        footer=FOOTER,
        wet=sheet.rig.bath is not None,
        gauge_error=_gauge_error(sheet),
        present=_present(sheet),
        glance=Markup(glance_svg(sheet)),  # drawn by us, holds no text from users
        users=[(user.letter, clean(user.name)) for user in sheet.week.users],
        findings=[_finding(finding, sheet) for finding in _by_kind(plan.findings)],
        days=sheet.days,
        left_out=[
            (clean(item.target), clean(item.take), clean(item.user), item.priority, clean(item.reason))
            for item in plan.left_out
        ],
        score=_score(plan),
        compared=[_compared(order) for order in plan.compared],
    )
    return page.encode("utf-8", "replace")


@cache
def _template() -> Template:
    from jinja2 import Environment, PackageLoader, StrictUndefined

    environment = Environment(
        loader=PackageLoader("planner.runsheet", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    return environment.get_template("run_sheet.html.jinja")


def _span(sheet: Sheet) -> str:
    first, last = sheet.plan.clock.moment(0), sheet.plan.clock.moment(sheet.horizon_s)
    days = WEEKDAYS
    begin, end = (f"{days[m.weekday()]} {m:%Y-%m-%d %H:%M} (UTC{_offset(m.strftime('%z'))})" for m in (first, last))
    return f"{begin} to {end}"


def _offset(written: str) -> str:
    return f"{written[:3].replace('-', '−')}:{written[3:5]}"


def _gauge_error(sheet: Sheet) -> str:
    return significant(float(sheet.rig.bath.gauge_error_percent)) if sheet.rig.bath is not None else ""


def _present(sheet: Sheet) -> list[tuple[str, str]]:
    """What the rig must show before step 1."""
    if not sheet.plan.steps:
        return []
    first = sheet.plan.steps[0]
    state = first.before
    pairs = [("field", tesla(state.coil.field_T[2])), ("coil", mode_words(state.coil))]
    pairs.append(("stage", kelvin(state.stage.temperature_K)))
    level = gauge_percent(sheet.rig, first.helium_before_L)
    if level is not None and first.helium_before_L is not None:
        pairs.append(("gauge", f"{fixed(level, 1)} % ({fixed(first.helium_before_L, 1)} L)"))
    gates = [f"{clean(name)} {significant(volt)} V" for name, volt in state.gates_V if volt != 0]
    pairs.append(("gates", ", ".join(gates) if gates else "all at 0 V"))
    return pairs


def _by_kind(findings: tuple[Finding, ...]) -> list[Finding]:
    order = list(Kind)
    return sorted(findings, key=lambda finding: order.index(finding.kind))


@dataclass(frozen=True, slots=True)
class FindingLine:
    """A finding in the words of the page."""

    kind: str
    rule: str
    text: str
    numbers: str
    when: str
    step: str
    mend: str


def _finding(finding: Finding, sheet: Sheet) -> FindingLine:
    when = sheet.walls.day_time(finding.at_s) if finding.at_s is not None else ""
    step = str(finding.step) if finding.step is not None else ""
    subject = f"{clean(finding.subject)}: " if finding.subject else ""
    return FindingLine(
        str(finding.kind).upper() if finding.kind in (Kind.STOP, Kind.POLICY) else str(finding.kind),
        clean(finding.rule),
        subject + clean(finding.text),
        numbers_of(finding),
        when,
        step,
        clean(finding.mend),
    )


def _score(plan: Plan) -> dict[str, Any]:
    score = plan.score
    return {
        "points": score.points,
        "points_bound": score.points_bound,
        "moving_h": fixed(score.moving_s / HOUR_S, 1),
        "litres": fixed(score.litres, 1),
        "cost_h": fixed(score.cost_h, 1),
        "bound_h": fixed(score.cost_bound_h, 1),
        "h_per_litre": significant(score.hours_per_litre),
        "gap": fixed(100 * score.gap, 1),
        "proven": score.proven,
    }


def _compared(order: HandOrder) -> tuple[str, ...]:
    moving_h, plan_h = order.moving_s / HOUR_S, order.plan_moving_s / HOUR_S
    return (
        clean(order.name),
        f"{order.takes}",
        f"{order.plan_takes}",
        f"{fixed(moving_h, 1)} h · {fixed(order.litres, 1)} L",
        f"{fixed(plan_h, 1)} h · {fixed(order.plan_litres, 1)} L",
        f"{fixed(moving_h - plan_h, 1)} h · {fixed(order.litres - order.plan_litres, 1)} L",
    )
