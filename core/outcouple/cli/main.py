"""The ``outcouple`` command: its commands, loaded when called, and how a mistake leaves."""

from __future__ import annotations

import importlib
import sys
from typing import Any

import click

from outcouple.errors import UserMistake, nearest

__all__ = ["main"]

COMMANDS: dict[str, str] = {
    "new": "Write a commented starter design.",
    "validate": "Check a design file and name every mistake.",
    "budget": "Where the light goes, signal, noise, decision, verdict.",
    "vary": "Sweep inputs: curves, maps, where the requirements are met.",
    "compare": "Variants side by side: who misses by most, and why.",
    "levers": "What moves the worst margin, and how far each input may go.",
    "draw": "Pictures: cross-section with rays, ledger, readings, response.",
    "dashboard": "A page on a folder of designs: explore, vary, compare.",
    "list": "Materials, geometries, contacts, metrics, plugins.",
}
"""Command -> its line in the help; module ``outcouple.cli.<command>`` holds ``command``."""

NEXT = """\
outcouple: design calculator for sensors that work by total internal reflection

  outcouple new                     write a starter design
  outcouple budget DESIGN.toml      where the light goes, and whether it is enough
  outcouple list geometries         the sensors it knows

outcouple --help lists every command.
"""


class Lazy(click.Group):
    """A group whose commands are imported when they run."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Names in the order of the work."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command:
        """The command, imported now."""
        if cmd_name not in COMMANDS:
            raise UserMistake(f"no command {cmd_name!r}{nearest(cmd_name, COMMANDS)}; there are: {', '.join(COMMANDS)}")
        module = importlib.import_module(f"outcouple.cli.{cmd_name}_command")
        command: click.Command = module.command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """One line per command, without importing any."""
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))


@click.group(cls=Lazy, invoke_without_command=True, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(package_name="outcouple")
@click.pass_context
def cli(ctx: click.Context) -> None:
    """Design calculator for sensors that work by total internal reflection and its frustration."""
    if ctx.invoked_subcommand is None:
        click.echo(NEXT, nl=False)


def main(argv: list[str] | None = None) -> Any:
    """Run the command line and leave with its exit code: 0 fine, 1 internal error, 2 bad usage or design, 3 not a
    pass, 130 interrupted."""
    try:
        code = cli.main(args=argv, prog_name="outcouple", standalone_mode=False)
    except UserMistake as mistake:
        for line in mistake.lines:
            click.echo(line, err=True)
        sys.exit(2)
    except click.ClickException as error:
        error.show()
        sys.exit(2)
    except (click.Abort, KeyboardInterrupt):
        click.echo("interrupted", err=True)
        sys.exit(130)
    except BrokenPipeError:
        sys.stderr.close()
        sys.exit(141)
    sys.exit(code if isinstance(code, int) else 0)
