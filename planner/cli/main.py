"""The command ``fridgeweek``: one module a family of commands; here they come together."""

from __future__ import annotations

import sys
from typing import Any

import click

from planner.cli.check import check, schema
from planner.cli.new import new
from planner.cli.output import CAUTION, UNUSABLE, say, say_error
from planner.cli.physics_commands import COMMANDS as PHYSICS_COMMANDS
from planner.cli.plan import plan
from planner.cli.sheet import sheet
from planner.cli.targets import targets
from planner.errors import PlannerError


class _Command(click.Group):
    """Turns the program's own errors into messages and exit statuses, for every command alike."""

    def invoke(self, ctx: click.Context) -> Any:
        try:
            return super().invoke(ctx)
        except PlannerError as error:
            sys.exit(say_error(error))
        except KeyboardInterrupt:
            say("")
            say("Interrupted.")
            sys.exit(UNUSABLE)

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002 - click's own signature
        """In the order in which a week goes through them."""
        return list(self.commands)


@click.group(cls=_Command, epilog=CAUTION, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(package_name="fridgeweek")
def main() -> None:
    """Plan a week of cryostat and magnet time: order the sweeps, check every limit, write the run sheet."""


for _command in (new, targets, check, plan, sheet, *PHYSICS_COMMANDS, schema):
    main.add_command(_command)
