"""Read week and rig files: every problem of both, in one go."""

from __future__ import annotations

import hashlib
import tomllib
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Literal, TypeVar

from pydantic import BaseModel, ValidationError

from planner.errors import InputError, Problem
from planner.files.limits import DEEPEST, LARGEST_FILE, MOST_TAKES, MOST_TARGETS, size_problems, too_deep
from planner.files.problems import problems_of, shown
from planner.files.references import nearest, reference_problems
from planner.files.rig import Rig
from planner.files.targets import FieldSweep, GateSweep, Map
from planner.files.versions import migrate
from planner.files.week import Week
from planner.plan import Source

_Model = TypeVar("_Model", bound=BaseModel)
_Role = Literal["week", "rig"]


@dataclass(frozen=True, slots=True)
class Request:
    """A week with its rig, and the files both came from."""

    week: Week
    rig: Rig
    sources: tuple[Source, ...]


def read_week(path: Path | str) -> Request:
    """Read a week file and the rig file it names.

    Raises
    ------
    InputError
        With every problem found in either file.
    """
    path = Path(path)
    text = text_of(path)
    data = _toml(text, path.name)
    problems: list[Problem] = []
    rig_text, rig = "", None
    try:
        beside = rig_path(data, path)
        rig_text = text_of(beside)
        rig = parse_rig(rig_text, beside.name)
    except InputError as error:
        problems += error.problems
    try:
        week = parse_week(text, path.name)
    except InputError as error:
        raise InputError([*error.problems, *problems]) from None
    if rig is None:
        raise InputError(problems)
    return _fitting(week, rig, (source("week", path.name, text), source("rig", week.rig, rig_text)))


def read_rig(path: Path | str) -> tuple[Rig, Source]:
    """Read a rig file; raises InputError as `read_week` does."""
    path = Path(path)
    text = text_of(path)
    return parse_rig(text, path.name), source("rig", path.name, text)


def request_of(sources: tuple[Source, ...]) -> Request:
    """The week and rig of these texts, which a plan carries; raises InputError as `read_week` does."""
    texts = {item.role: item for item in sources}
    if len(sources) != 2 or texts.keys() != {"week", "rig"}:
        raise InputError([Problem("plan", "sources", "", "expected one week and one rig")])
    week = parse_week(texts["week"].text, texts["week"].path)
    return _fitting(week, parse_rig(texts["rig"].text, texts["rig"].path), sources)


def _fitting(week: Week, rig: Rig, sources: tuple[Source, ...]) -> Request:
    problems = fit_problems(week, rig, next(source.path for source in sources if source.role == "week"))
    if problems:
        raise InputError(problems)
    return Request(week, rig, sources)


def source(role: _Role, path: str, text: str) -> Source:
    """A file as a plan remembers it."""
    return Source(role, path, hashlib.sha256(text.encode()).hexdigest(), text)


def parse_week(text: str, file: str = "week") -> Week:
    """A week from TOML text; raises InputError with every problem."""
    return week_of(_toml(text, file), file)


def week_of(data: dict[str, Any], file: str = "week") -> Week:
    """A week from its plain data; raises InputError with every problem."""
    data = migrate(_of_kind(data, "week", file), "week", file)
    targets = data.get("targets")
    if isinstance(targets, list) and len(targets) > MOST_TARGETS:
        raise InputError([Problem(file, "targets", f"{len(targets)} rows", f"a week holds {MOST_TARGETS} at most")])
    week, problems = _validate(Week, data, file)
    problems += reference_problems(data, file)
    if problems or week is None:
        raise InputError(problems)
    takes = sum(target.takes for target in week.targets)
    if takes > MOST_TAKES:
        raise InputError([Problem(file, "targets", f"{takes} takes", f"a week holds {MOST_TAKES} at most")])
    return week


def parse_rig(text: str, file: str = "rig") -> Rig:
    """A rig from TOML text; raises InputError with every problem."""
    return rig_of(_toml(text, file), file)


def rig_of(data: dict[str, Any], file: str = "rig") -> Rig:
    """A rig from its plain data; raises InputError with every problem."""
    data = migrate(_of_kind(data, "rig", file), "rig", file)
    rig, problems = _validate(Rig, data, file)
    if problems or rig is None:
        raise InputError(problems)
    return rig


def text_of(path: Path) -> str:
    """The text of a file, byte for byte, so that its hash is the file's."""
    name = path.name[:200] or "."
    try:
        size = path.stat().st_size
        if not path.is_file():
            wrong = Problem(name, "", "", "expected a file")
        elif size > LARGEST_FILE:
            wrong = Problem(name, "", f"{size} bytes", f"expected at most {LARGEST_FILE} bytes")
        else:
            return path.read_bytes().decode("utf-8")
    except FileNotFoundError:
        wrong = Problem(str(path)[:200], "", "", "there is no such file")
    except UnicodeDecodeError:
        wrong = Problem(name, "", "", "expected text in UTF-8")
    except (OSError, ValueError) as error:
        wrong = Problem(name, "", "", f"cannot be read: {str(error)[:200]}")
    raise InputError([wrong])


def _toml(text: str, file: str) -> dict[str, Any]:
    if too_deep(text):
        raise InputError([Problem(file, "", "", f"a key has more than {DEEPEST} parts")])
    try:
        data = tomllib.loads(text.removeprefix("\ufeff"))  # some editors put a byte-order mark first
    except (tomllib.TOMLDecodeError, RecursionError, ValueError) as error:
        raise InputError([Problem(file, "", "", f"not valid TOML: {error}")]) from None
    if not data:
        raise InputError([Problem(file, "", "", "the file is empty")])
    if problems := size_problems(data, file):
        raise InputError(problems)
    return data


def _of_kind(data: dict[str, Any], kind: _Role, file: str) -> dict[str, Any]:
    """The data themselves; a file of the other kind is one problem, not one for every key."""
    other = "rig" if kind == "week" else "week"
    if data.get("kind") == other:
        raise InputError([Problem(file, "kind", f'"{other}"', f"expected a {kind} file")])
    return data


def rig_path(data: dict[str, Any], week: Path) -> Path:
    """Path of the rig file that a week's data name; raises InputError where it is not in the week's folder or below."""
    written = data.get("rig")
    if not isinstance(written, str):
        raise InputError([])  # the missing or mistyped key is reported by the model
    folder = week.resolve().parent
    expected = "expected the relative path of a rig file in the week's folder or below it"
    try:
        path = (folder / written).resolve()
        within, there = path.is_relative_to(folder) and not Path(written).is_absolute(), path.is_file()
    except (OSError, ValueError, RuntimeError):
        within, there = False, False
    if not within:
        raise InputError([Problem(week.name, "rig", shown(written), expected)])
    if not there:
        others = sorted(other.name for other in folder.glob("*.toml") if other != week.resolve())
        missing = Problem(week.name, "rig", shown(written), "there is no such rig file", nearest(written, others))
        raise InputError([missing])
    return path


def _validate(model: type[_Model], data: dict[str, Any], file: str) -> tuple[_Model | None, list[Problem]]:
    try:
        return model.model_validate(data), []
    except ValidationError as error:
        return None, problems_of(error, model, file)


def fit_problems(week: Week, rig: Rig, file: str) -> list[Problem]:
    """What the week must say for this rig to be planned at all."""
    problems = []
    if rig.bath is not None and week.present.level_percent is None:
        problems.append(
            Problem(file, "present.level", "", "is missing", "this rig has a helium bath: give the gauge reading")
        )
    if rig.bath is None and week.present.level_percent is not None:
        problems.append(Problem(file, "present.level", "", "this rig has no helium bath", "leave it out"))
    if rig.bath is not None and week.present.level_percent is not None:
        low, high = rig.bath.calibration[0].level_percent, rig.bath.calibration[-1].level_percent
        if not low <= week.present.level_percent <= high:
            expected = f"outside the gauge's calibration, {low:g} % to {high:g} %"
            problems.append(Problem(file, "present.level", f"{week.present.level_percent:g} %", expected))
    if rig.magnet.switch is None and week.present.coil == "persistent":
        problems.append(Problem(file, "present.coil", '"persistent"', "this rig has no persistent switch"))
    if rig.magnet.switch is None and week.wanted_end.coil == "persistent":
        problems.append(Problem(file, "wanted_end.coil", '"persistent"', "this rig has no persistent switch"))
    return [*problems, *_current_problems(week, rig, file), *_pace_problems(week, file)]


def _current_problems(week: Week, rig: Rig, file: str) -> list[Problem]:
    """A logged persistent current that belongs to another field than the one stated: one of them is wrong."""
    logged_A, switch = week.present.persistent_current_A, rig.magnet.switch
    if logged_A is None or isinstance(logged_A, str) or switch is None:
        return []
    current_A = week.present.field_T / rig.magnet.field_per_current_T_per_A
    if abs(logged_A - current_A) <= switch.match_A:
        return []
    expected = f"a field of {week.present.field_T:g} T takes {current_A:.2f} A on this rig"
    hint = 'find out which is right, or say "unknown"; the switch stays closed until then'
    return [Problem(file, "present.persistent_current", f"{logged_A:g} A", expected, hint)]


def _pace_problems(week: Week, file: str) -> list[Problem]:
    """Targets whose duration nothing in the file sets."""
    problems = []
    for at, target in enumerate(week.targets):
        if target.lockin is not None or week.sample(target.sample).lockin is not None:
            continue
        where = f"targets[{at}]"
        if isinstance(target, (GateSweep, Map)) and target.dwell_s is None:
            problems.append(Problem(file, f"{where}.dwell", "", "is missing", "give a dwell a point, or a lock-in"))
        if isinstance(target, FieldSweep) and target.feature_T is not None and target.rate_T_per_s is None:
            hint = "a feature sets the rate only together with the lock-in's time constant"
            problems.append(Problem(file, f"{where}.lockin", "", "is missing", hint))
    return problems
