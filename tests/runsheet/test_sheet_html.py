"""The page, read with an HTML parser: order, rows, set-points, marks, and text from users as data."""

from __future__ import annotations

import hashlib
import re
import xml.etree.ElementTree as ET
from html.parser import HTMLParser
from pathlib import Path

import pytest

from planner.plan import Plan
from planner.runsheet.cautions import FOOTER, cautions_of, oxygen_of
from planner.runsheet.glance import glance_svg
from planner.runsheet.rows import shown_steps
from planner.runsheet.sheet import Sheet
from planner.runsheet.sheet_html import write
from planner.runsheet.wording import clean
from tests.runsheet.builder import WET, Builder, week_text
from tests.runsheet.plans import HOSTILE, clock_change_plan, dry_plan

VOID = {"meta", "br", "img", "link", "input", "hr"}


class Page(HTMLParser):
    """Collects tags, attributes and text, and fails on a tag that is not closed in order."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.open: list[str] = []
        self.tags: list[tuple[str, dict[str, str]]] = []
        self.text: list[str] = []
        self.feed(text)
        self.close()
        assert self.open == []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, {name: value or "" for name, value in attrs}))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, {name: value or "" for name, value in attrs}))

    def handle_endtag(self, tag: str) -> None:
        assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        if not {"style", "svg"} & set(self.open):
            self.text.append(data)

    @property
    def words(self) -> str:
        return " ".join(" ".join(self.text).split())

    def classes(self, tag: str) -> list[set[str]]:
        return [set(attrs.get("class", "").split()) for name, attrs in self.tags if name == tag]


def page_of(plan: Plan, *, review: bool = False) -> tuple[str, Page]:
    text = write(Sheet.of(plan, review=review)).decode("utf-8")
    return text, Page(text)


@pytest.fixture(scope="module")
def small_page(small_files: tuple[Path, ...]) -> Page:
    return Page(small_files[0].read_text(encoding="utf-8"))


def test_the_parts_stand_in_order(small_page: Page) -> None:
    words = small_page.words
    parts = [
        "Three groups, one magnet",
        "Planning aid.",
        "CALL",
        "BEFORE STEP 1",
        "The week at a glance",
        "Findings",
        "Steps",
        "Monday 3 March 2031",
        "Tuesday 4 March 2031",
        "Monday 10 March 2031",
        "Left out, and why",
        "How good the plan is",
        "PLANNING AID ONLY",
    ]
    places = [words.index(part) for part in parts[1:]]
    assert places == sorted(places)
    assert parts[0] in words


def test_heading_names_files_with_the_first_twelve_of_their_sha256(small: Plan, small_page: Page) -> None:
    for source in small.sources:
        assert hashlib.sha256(source.text.encode()).hexdigest()[:12] in small_page.words
    assert "Mon 2031-03-03 08:30 (UTC+01:00) to Mon 2031-03-10 08:30 (UTC+01:00)" in small_page.words
    assert "made by fridgeweek 0.1.0" in small_page.words
    assert hashlib.sha256(small.to_json()).hexdigest()[:12] in small_page.words


@pytest.mark.parametrize("name", ["small", "large", "hostile"])
def test_one_row_a_shown_step_with_a_box_and_blanks(name: str, request: pytest.FixtureRequest) -> None:
    plan: Plan = request.getfixturevalue(name)
    _, page = page_of(plan)
    kinds = {"move", "take", "service", "wait"}
    rows = [classes for classes in page.classes("tr") if classes & kinds]
    assert len(rows) == len(shown_steps(plan))
    assert sum("attended" in classes for classes in rows) == sum(step.attended for step in plan.steps)
    assert sum("box" in classes for classes in page.classes("span")) == len(rows)
    assert sum("blanks" in classes for classes in page.classes("div")) == len(rows)
    assert page.words.count("ATTENDED") == sum(step.attended for step in plan.steps) + 1  # and the legend


def test_a_row_gives_clock_elapsed_set_points_levels_and_people(small_page: Page) -> None:
    words = small_page.words
    assert "4 10:20 Mon +01:50 to 11:26 1 h 06 min" in words
    assert "+1.0000 T = +8.000 A → +11.5000 T = +92.000 A" in words
    assert "ramp to +11.5000 T = +92.000 A at 0.07 T/min = 0.56 A/min" in words
    assert "≥ 52.0 % (36.0 L) to begin a ramp" in words
    assert "leads to +54.594 A at 110 A/min" in words
    assert "ATTENDED Operator 1, Operator 2" in words
    assert "pour 19.0 L, draw 25.7 L, 174.3 L left in stock" in words


def test_a_take_goes_by_its_name_and_says_what_is_done(small_page: Page) -> None:
    build = Builder(week_text())
    plan = build.move(1.0).hold("rung 2: top −1 V to 0 V", 600, take="Fan · 2", target="Fan").move(0.0).plan()
    assert "Fan · 2 rung 2: top −1 V to 0 V" in page_of(plan)[1].words
    assert "look, then decide: Low-field Hall" in small_page.words


def test_waits_are_one_and_nothing_of_no_length_is_shown(small: Plan) -> None:
    numbers = [number for number, _ in shown_steps(small)]
    assert "25–26" in numbers
    empty = {str(step.number) for step in small.steps if step.seconds == 0}
    assert empty
    assert not empty & set(numbers)
    assert sum(step.seconds for _, step in shown_steps(small)) == sum(step.seconds for step in small.steps)


def test_a_pause_to_decide_has_room(small_page: Page) -> None:
    assert sum("decision" in classes for classes in small_page.classes("tr")) == 1
    assert "decided by" in small_page.words


def test_left_out_score_and_hand_orders(small_page: Page) -> None:
    words = small_page.words
    assert "no time left before the end" in words
    assert "96 of at most 104 points" in words
    assert "gap 7.0 %, not proven best" in words
    assert "9.0 h · 14.0 L" in words


def test_cautions_and_contacts(small_page: Page) -> None:
    for about in ("Oxygen.", "Quench.", "Strong field, implants.", "Cold burns.", "Pressure."):
        assert about in small_page.words
    assert FOOTER in small_page.words
    assert "Rig responsible: see the door" in small_page.words


def test_the_oxygen_figure_by_hand() -> None:
    """72 L at 749.6 volumes of gas a volume of liquid (20 °C) in 140 m³; 0.21·(1 − v/V) and 0.21·exp(−v/V).

    Sources: density of the liquid at its boiling point 124.73 kg/m³ and of the gas at 20 °C 0.1664 kg/m³, from memory.
    """
    found = oxygen_of(Builder().rig)
    assert found is not None
    gas_m3 = 0.072 * 124.73 / 0.1664
    assert found.gas_m3 == pytest.approx(gas_m3, rel=2e-3)
    assert found.displaced == pytest.approx(0.21 * (1 - gas_m3 / 140), rel=2e-3)
    assert found.mixed == pytest.approx(0.21 * 2.718281828 ** (-gas_m3 / 140), rel=2e-3)
    assert found.displaced < found.hazard == 0.195


def test_a_room_smaller_than_the_gas_and_a_room_of_unknown_volume() -> None:
    tiny = Builder(rig=WET.replace("140 m^3", "20 m^3")).rig
    found = oxygen_of(tiny)
    assert found is not None
    assert found.displaced == 0
    unknown = Builder(rig=WET.replace('volume = "140 m^3"', "")).rig
    assert oxygen_of(unknown) is None
    assert any("gives no volume for the room" in caution.text for caution in cautions_of(unknown))


def test_nobody_to_call_leaves_room_to_write() -> None:
    rig = re.sub(r"contacts = \[.*?\]\n", "", WET, flags=re.DOTALL)
    _, page = page_of(Builder(rig=rig).move(1.0).move(0.0).plan())
    assert "the rig file names nobody; write it here" in page.words


@pytest.mark.parametrize("name", ["small", "hostile"])
def test_nothing_is_fetched_and_nothing_runs(name: str, request: pytest.FixtureRequest) -> None:
    text, page = page_of(request.getfixturevalue(name))
    assert not {"script", "img", "link", "iframe", "object", "base", "form", "a"} & {tag for tag, _ in page.tags}
    for _, attrs in page.tags:
        assert not [key for key in attrs if key.startswith("on")]
        for key in ("src", "href", "xlink:href", "action", "style"):
            value = attrs.get(key, "")
            assert value.startswith("#") or "//" not in value
    style = text[text.index("<style>") : text.index("</style>")]
    assert "@import" not in style
    assert "url(" not in style


def test_text_from_users_is_shown_as_written(hostile: Plan) -> None:
    text, page = page_of(hostile)
    for word in HOSTILE:
        assert clean(word) in page.words
    assert not set(text) & set("\x00\x07\x1b\u202e\u2066")
    assert "<h1>owned" not in text


def test_dry_rig_has_no_helium_column() -> None:
    text, page = page_of(dry_plan())
    assert "gauge at the end" not in page.words
    assert 'class="dry"' in text
    assert "8.5000 T = +94.444 A" in page.words  # 8.5 T / 0.09 T/A


def test_a_clock_change_is_named() -> None:
    _, page = page_of(clock_change_plan())
    assert "CEST" in page.words
    assert "(UTC+02:00) to Tue 2031-10-28 08:30 (UTC+01:00)" in page.words


def test_the_figure_is_one_stable_svg_without_words_of_users() -> None:
    users = ("<b>$x$</b> & 🧲", "Noise group", "Wires group")
    build = Builder(week_text(users=users))
    build.move(3.0).hold("take", 3600, user=users[0]).move(0.0)
    plan = build.plan()
    svg = glance_svg(Sheet.of(plan))
    assert svg == glance_svg(Sheet.of(plan))
    root = ET.fromstring(svg)
    assert root.tag == "{http://www.w3.org/2000/svg}svg"
    assert "🧲" not in svg
    assert not list(root.iter("{http://www.w3.org/2000/svg}text"))
    assert not list(root.iter("{http://www.w3.org/2000/svg}image"))
