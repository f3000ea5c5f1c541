"""The commands that answer from the physics: data on stdout, messages on stderr, exit statuses."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
from click.testing import CliRunner, Result

from planner.cli import main
from tests.physics.traces import Faults, Layer, sweep, there_and_back

EXAMPLES = Path(__file__).parents[2] / "example_plans"
WET, DRY = str(EXAMPLES / "wet_dilution.rig.toml"), str(EXAMPLES / "dry_insert.rig.toml")
WEEK = str(EXAMPLES / "shared_week.toml")
Run = Callable[..., Result]


@pytest.fixture
def run() -> Run:
    return lambda *words: CliRunner().invoke(main, list(words))


@pytest.fixture
def trace(tmp_path: Path) -> Path:
    fields = there_and_back(-0.3, 1.4, 300)
    columns = sweep(fields, Layer(1.65e15), Faults(0.01), np.random.default_rng(5))
    path = tmp_path / "trace.csv"
    rows = "".join(f"{field:.6f},{hall / 1e3:.8f},{along:.6f}\n" for field, hall, along in zip(*columns, strict=True))
    path.write_text("field (T),Rxy (kohm),Rxx (ohm)\n" + rows)
    return path


def test_field_tells_fields_reach_and_offers(run: Run) -> None:
    done = run("field", "--density", "1.65e11 cm^-2", "--uncertainty", "5 %", "--rig", WET, "--filling", "1/3, 2/3")
    assert done.exit_code == 0
    assert done.stderr == ""
    for part in ("20.472", "19.45–21.50", "no", "10.236", "yes", "instead of 1/3", "2/3 at 10.24 T", "provisional"):
        assert part in done.stdout


def test_field_as_json_and_csv(run: Run) -> None:
    words = ("field", "--density", "1.65e11 cm^-2", "--rig", WET)
    data = json.loads(run(*words, "--json").stdout)
    assert data["rated_T"] == 12
    table = list(csv.DictReader(io.StringIO(run(*words, "--csv").stdout)))
    assert len(table) == len(data["rows"]) > 30
    assert table[0]["filling"] == "1/3"
    assert float(table[0]["field_T"]) == pytest.approx(data["rows"][0]["field_T"])


def test_field_of_a_week_s_sample_with_a_gate_moved(run: Run) -> None:
    plain = json.loads(run("field", "--week", WEEK, "--sample", "L1", "--filling", "2/3", "--json").stdout)
    other = run("field", "--week", WEEK, "--sample", "L1", "--density", "2e11 cm^-2", "--filling", "2/3", "--json")
    assert plain["base_K"] == 0.015
    assert json.loads(other.stdout)["uncertainty_per_m2"] == 0.0
    first = EXAMPLES / "first_week.toml"
    words = ("field", "--week", str(first), "--filling", "1", "--json")
    moved = json.loads(run(*words, "--gate", "top", "--gate-voltage", "-0.1 V").stdout)
    assert moved["density_per_m2"] < json.loads(run(*words).stdout)["density_per_m2"]


def test_field_with_holes_a_gate_and_a_tilt(run: Run) -> None:
    words = (
        "field", "--density", "1.65e11 cm^-2", "--holes", "--gate-slope", "0.7e11 cm^-2/V", "--gate-voltage", "0.5 V",
        "--rig", WET, "--filling", "2/3", "--tilt", "30 deg", "--json",
    )  # fmt: skip
    (row,) = json.loads(run(*words).stdout)["rows"]
    assert row["field_T"] == pytest.approx(-4.1356677 * (1.65 - 0.35) / (2 / 3), rel=1e-6)
    assert row["total_T"] == pytest.approx(row["field_T"] / np.cos(np.radians(30)))


def test_density_by_both_ways_and_the_lines_for_a_week(run: Run, trace: Path) -> None:
    done = run("density", str(trace))
    assert done.exit_code == 0
    assert "Hall slope" in done.stdout
    assert "period in 1/B" in done.stdout
    assert 'density = "1.6' in done.stdout
    data = json.loads(run("density", str(trace), "--json").stdout)
    assert data["best"]["density_per_m2"] == pytest.approx(1.65e15, rel=0.01)
    assert data["agree"] is True
    narrow = run("density", str(trace), "--low-field", "0.4 T", "--oscillations", "0.3 T to 1 T", "--json")
    fitted = json.loads(narrow.stdout)
    assert fitted["hall_fit"]["largest_T"] == 0.4
    assert 0.3 <= fitted["oscillation_fit"]["low_T"] < fitted["oscillation_fit"]["high_T"] <= 1.0


def test_magnet_prints_and_draws(run: Run, tmp_path: Path) -> None:
    figure = tmp_path / "magnet.svg"
    done = run("magnet", WET, "-o", str(figure))
    assert done.exit_code == 0
    assert figure.read_text().startswith("<svg")
    assert "wrote" in done.stderr
    for part in ("fraction", "short sample", "quench", "stray field", "0.5", "planning aid", "implants"):
        assert part in done.stdout
    rows = list(csv.DictReader(io.StringIO(run("magnet", WET, "--csv").stdout)))
    assert float(rows[-1]["field_T"]) == 13.5
    data = json.loads(run("magnet", DRY, "--json").stdout)
    assert any("without a helium bath" in text for text in data["missing"])


def test_cooldown_prints_litres_hours_and_days(run: Run) -> None:
    done = run("cooldown", WET, "--by", "2031-03-10")
    assert done.exit_code == 0
    for part in ("copper", "helium from the dewar", "in all, at least", "order helium by", "2031-02-27"):
        assert part in done.stdout
    data = json.loads(run("cooldown", WET, "--by", "2031-03-10", "--holiday", "2031-03-06", "--json").stdout)
    assert data["order"]["delivered"] == "2031-03-05"
    assert data["hours"] == 42
    assert "no helium is needed" in run("cooldown", DRY).stdout


@pytest.mark.parametrize(
    ("words", "says"),
    [
        (("field",), "give --density"),
        (("field", "--density", "1.65e11"), "the unit is missing"),
        (("field", "--density", "1.65 T"), "is not a unit of this kind"),
        (("field", "--density", "0 cm^-2"), "must be more than 0"),
        (("field", "--density", "1e11 cm^-2", "--uncertainty", "5"), "uncertainty"),
        (("field", "--density", "1e11 cm^-2", "--filling", "0"), "expected a filling"),
        (("field", "--density", "1e11 cm^-2", "--tilt", "30 %"), "expected an angle"),
        (("field", "--density", "1e11 cm^-2", "--tilt", "90 deg"), "the layer lies along the field"),
        (("field", "--density", "1e11 cm^-2", "--json", "--csv"), "one of them"),
        (("field", "--density", "1e11 cm^-2", "--sample", "L1"), "give --week too"),
        (("field", "--density", "1e11 cm^-2", "--gate-voltage", "1 V"), "need --gate-slope"),
        (("field", "--density", "1e11 cm^-2", "--gate-slope", "1e11 cm^-2/V", "--gate-voltage", "-1 V"), "carriers"),
        (("field", "--week", WEEK), "expected a sample of this week"),
        (("field", "--week", WEEK, "--sample", "L1", "--rig", WET), "has its own rig"),
        (("field", "--week", WEEK, "--sample", "L1", "--gate", "top"), "go together"),
        (("field", "--density", "1e11 cm^-2", "--rig", "nowhere.toml"), "no such file"),
        (("field", "--density", "1e11 cm^-2", "--rig", WEEK), "expected a rig file"),
        (("density", "nowhere.csv"), "no such file"),
        (("density", WET), "expected a header such as"),
        (("magnet", WET, "-o", "figure.png"), "ends in .svg"),
        (("magnet", WET, "-o", "/nowhere/at/all.svg"), "cannot be written"),
        (("cooldown", WET, "--by", "tomorrow"), "expected a day such as"),
        (("cooldown", WET, "--by", "2031-02-30"), "expected a day such as"),
        (("cooldown", WET, "--holiday", "x"), "expected a day such as"),
    ],
)
def test_unusable_input_ends_with_two_and_one_clear_message(run: Run, words: tuple[str, ...], says: str) -> None:
    done = run(*words)
    assert done.exit_code == 2
    assert done.stdout == ""
    assert says in done.stderr
    assert "Traceback" not in done.stderr


@pytest.mark.parametrize("command", ["field", "density", "magnet", "cooldown"])
def test_each_has_help(run: Run, command: str) -> None:
    done = run(command, "--help")
    assert done.exit_code == 0
    assert "Usage" in done.stdout
