"""The command ``harvest``: start-up imports click and nothing else; a command is loaded when it is called."""

from __future__ import annotations

import io
import sys
from importlib import import_module

import click

from harvest import __version__
from harvest.errors import CAUTION, HarvestError

#: Commands in the order of a manager's work, with the line that the overview shows.
COMMANDS = {
    "new": "Make a new record from a template or a demo.",
    "convert": "Turn a record's folder into an Excel workbook, or back.",
    "check": "Check a record and tell every problem with its cure.",
    "yield": "What the population can sustain, and where it stands.",
    "thresholds": "What collapses it: the fold, the equilibria, the times.",
    "project": "What a rule does in the years ahead.",
    "quota": "The recommended quota and the quota table for the plan.",
    "app": "Do the whole job in the browser.",
    "keys": "Explain every key of the JSON files.",
}


class CommandsOnDemand(click.Group):
    """A group that imports a command's module only when the command is called."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Names in the order of work."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """The command, imported now."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"harvest.commands.{cmd_name}_").command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """The overview, from :data:`COMMANDS`, without importing anything."""
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))


@click.command(cls=CommandsOnDemand, epilog=CAUTION)
@click.version_option(__version__, prog_name="harvest")
def group() -> None:
    """From counts and removals to a quota with the risk written beside it.

    Start with: harvest new my_deer --demo deer, then: harvest quota my_deer --out my_quota
    """


def main() -> None:
    """Run the command; bad input ends with a message and exit status 2."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="replace")  # a name that the terminal cannot show must not stop the work
    try:
        group(standalone_mode=True)
    except HarvestError as error:
        click.echo(f"harvest: {error}", err=True)
        raise SystemExit(2) from error
