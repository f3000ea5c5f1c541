"""``new``: ask for a rig or a week, and write the file."""

from __future__ import annotations

import contextlib
import os
import sys
import textwrap
from pathlib import Path
from typing import TYPE_CHECKING, Literal

import click

from planner.cli.output import UNUSABLE, say
from planner.errors import InputError, Problem

if TYPE_CHECKING:
    from planner.desk import NewFile
    from planner.desk.asking import Question

_HELP = "Enter takes the offer in [ ] · ? says what is wanted · < goes back · > takes all offers that are left · "
_HELP += "Ctrl-C leaves, nothing is written"
_LONGEST_LINE = 4096


class _EndedError(Exception):
    """There are no more answers."""


@click.group()
def new() -> None:
    """Ask for what a rig or a week needs, and write the file."""


def _options(command: click.decorators.FC) -> click.decorators.FC:
    path = click.Path(path_type=Path)
    command = click.option("--replace", is_flag=True, help="Replace FILE if it is there already.")(command)
    command = click.option("--from", "start", type=path, help="Start from this file: its values are the offers.")(
        command
    )
    return click.argument("file", required=False, type=path)(command)


@new.command()
@_options
def rig(file: Path | None, start: Path | None, replace: bool) -> None:
    """Ask for a rig and write FILE: the limits, losses and times of one cryostat."""
    _converse("rig", file, start, replace)


@new.command()
@_options
def week(file: Path | None, start: Path | None, replace: bool) -> None:
    """Ask for a week and write FILE, beside its rig file: who wants what, when, on which samples."""
    _converse("week", file, start, replace)


def _converse(role: Literal["rig", "week"], file: Path | None, start: Path | None, replace: bool) -> None:
    from planner.desk import NewFile

    try:
        if file is None:
            offer = "our.rig.toml" if role == "rig" else "our_week.toml"
            say(f"The file to write. {_HELP.split(' · ')[0]}.")
            file = Path(_read(f"File [{offer}]: ").strip() or offer)
        made = NewFile(role, file, start=start, zone_offer=_zone(), replace=replace)
        say(_HELP + ".")
        _ask_all(made)
    except (KeyboardInterrupt, EOFError):
        click.echo("", err=True)
        say("Left before the end: nothing is written.")
        sys.exit(UNUSABLE)
    except _EndedError as ended:
        say(f"The answers ended{ended}: nothing is written.")
        sys.exit(UNUSABLE)
    written = made.write()
    say(f"wrote {written}")
    following = (
        f"fridgeweek plan {written}" if role == "week" else f"fridgeweek new week, in {written.resolve().parent}"
    )
    say(f"Look through it; offers that nobody has looked at are marked. Then: {following}")


def _ask_all(made: NewFile) -> None:
    asking, heading = made.asking, ""
    while (question := asking.question) is not None:
        if question.heading != heading:
            heading = question.heading
            click.echo(f"\n{click.style(heading, bold=True)}", err=True)
        try:
            text = _read(_prompt(question)).strip()
        except _EndedError:
            raise _EndedError(f' at "{question.ask}"') from None
        try:
            if text == "?":
                say(f"  {question.why} Wanted: {question.wanted}." + (" - leaves it out." if question.optional else ""))
            elif text == "<":
                asking.back()
            elif text == ">":
                asking.take_offers()
            elif told := asking.answer(text):
                say(f"  {told}")
        except (InputError, ValueError) as error:
            for line in str(error).splitlines():
                say(f"  {line}")


def _prompt(question: Question) -> str:
    why = textwrap.fill(question.why, 100, initial_indent="  ", subsequent_indent="  ")
    offer = f" [{question.offer}]" if question.offer else ""
    return f"{click.style(why, dim=True)}\n{question.ask}{offer}: "


def _read(prompt: str) -> str:
    """One line of an answer. The prompt goes to stderr; on a terminal the line can be edited.

    Raises
    ------
    EOFError, _EndedError
        At the end of typing; at the end of answers that come from a file.
    """
    if sys.stdin is None:
        raise _EndedError
    if sys.stdin.isatty() and sys.stdout.isatty() and sys.stderr.isatty():
        head, _, last = prompt.rpartition("\n")
        if head:
            click.echo(head, err=True)
        with contextlib.suppress(ImportError):  # not on every system; there the line is edited as the terminal does it
            import readline  # noqa: F401 - makes input() editable
        return input(last)
    click.echo(prompt, nl=False, err=True)
    line, whole = _line(), True
    if not line:
        raise _EndedError
    while len(line) == _LONGEST_LINE and not line.endswith("\n"):
        line, whole = _line(), False
    click.echo("", err=True)
    return line.rstrip("\n") if whole else "\0"  # no answer is so long: refused like any other control character


def _line() -> str:
    """The next line of standard input, or a piece of it; empty at the end."""
    try:
        return sys.stdin.readline(_LONGEST_LINE)
    except UnicodeDecodeError:
        raise InputError([Problem("answers", "", "", "expected text in UTF-8")]) from None


def _zone() -> str:
    """The zone of this machine by its IANA name, where the system says it."""
    from planner.desk import zone_named

    there = os.environ.get("TZ", "").lstrip(":") or str(Path("/etc/localtime").resolve()).partition("zoneinfo/")[2]
    return zone_named(there, "Europe/Vienna")
