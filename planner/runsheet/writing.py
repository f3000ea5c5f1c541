"""Write sheets into a folder: all or none are rendered, each file appears whole, nothing lands outside the folder."""

from __future__ import annotations

import hashlib
import os
import re
import unicodedata
from collections.abc import Sequence
from pathlib import Path

from planner.errors import InputError, Problem
from planner.files.references import nearest
from planner.plan import Plan
from planner.runsheet.formats import FORMATS
from planner.runsheet.release import refuse_unless_runnable
from planner.runsheet.sheet import Sheet

LONGEST_NAME = 60


def write_sheets(
    plan: Plan, folder: Path, formats: Sequence[str] = ("html", "csv", "json"), *, review: bool = False
) -> tuple[Path, ...]:
    """Write the sheets of a plan.

    Parameters
    ----------
    plan
        The plan; week and rig are read from the texts it carries.
    folder
        Where the files go; made if it is not there. Files of the same name are replaced.
    formats
        Names in `FORMATS`.
    review
        Write a review copy: every page is marked as not to be run, and nothing is refused.

    Returns
    -------
    tuple of Path
        The files, in the order of ``formats``. The same plan gives the same names and bytes.

    Raises
    ------
    RefusedError
        If the plan has a `stop` or `policy` finding and is neither a recovery plan nor a review copy.
    InputError
        If a format is unknown, the plan's own week or rig cannot be read, or a file cannot be written.
    """
    _known_formats(formats)
    sheet = Sheet.of(plan, review=review)
    if not review:
        refuse_unless_runnable(plan, sheet.rig)
    stem = file_stem(plan.title)
    contents = [(_file_name(stem, FORMATS[name].ending, review=review), FORMATS[name].write(sheet)) for name in formats]
    try:
        folder.mkdir(parents=True, exist_ok=True)
        return tuple(_replace(folder / name, content) for name, content in contents)
    except OSError as error:
        problem = Problem(str(folder), "", "", f"the sheet cannot be written: {error.strerror}")
        raise InputError([problem]) from error


def _known_formats(formats: Sequence[str]) -> None:
    known = list(FORMATS)
    expected = f"expected one of {', '.join(known)}"
    unknown = [name for name in formats if name not in FORMATS]
    if unknown:
        raise InputError(
            [Problem("sheet", "format", f'"{name[:40]}"', expected, nearest(name, known)) for name in unknown]
        )


def file_stem(title: str) -> str:
    """A file name's stem from a title: lower-case ASCII letters, digits and "_" only.

    A title that does not survive this gets six digits of its SHA-256, so that two such titles stay apart.
    """
    plain = unicodedata.normalize("NFKD", title).encode("ascii", "ignore").decode().lower()
    stem = re.sub(r"[^a-z0-9]+", "_", plain).strip("_")[:LONGEST_NAME].strip("_")
    lost = sum(sign.isalnum() for sign in title) > sum(sign.isalnum() for sign in stem)
    if lost or not stem:
        digest = hashlib.sha256(title.encode("utf-8", "surrogatepass")).hexdigest()[:6]
        return f"{stem}_{digest}".lstrip("_")
    return stem


def _file_name(stem: str, ending: str, *, review: bool) -> str:
    return f"{stem}-REVIEW_COPY-{ending}" if review else f"{stem}-{ending}"


def _replace(path: Path, content: bytes) -> Path:
    """Write beside the file and put it in its place in one go; a link of that name is replaced, not followed."""
    part = path.with_name(f".{path.name}.{os.getpid()}.part")
    part.unlink(missing_ok=True)
    try:
        with part.open("xb") as out:
            out.write(content)
        part.replace(path)
    finally:
        part.unlink(missing_ok=True)
    return path
