"""The `wearbook` command: its commands by name, each loaded only when it runs."""

from __future__ import annotations

import errno
import importlib
import io
import sys
from collections.abc import Sequence
from typing import NoReturn

import click

from fleet.errors import FleetError

# name -> (module, one line for --help); modules are loaded when their command runs, so that --help stays quick.
COMMANDS: dict[str, tuple[str, str]] = {
    "demo": ("fleet.cli.books", "Build the invented fleet, print its odds, spares and plates, open the dashboard."),
    "new": ("fleet.cli.books", "Make an empty book."),
    "import": ("fleet.cli.books", "Read set-up and ledger from a folder of CSV files."),
    "show": ("fleet.cli.books", "Open the dashboard on this machine."),
    "log": ("fleet.cli.logging", "Log a session, a failure, a swap or a check."),
    "ages": ("fleet.cli.read_outs", "Age of every fitted part, in every clock."),
    "lives": ("fleet.cli.read_outs", "How long each part type lasts, and when to replace it."),
    "odds": ("fleet.cli.read_outs", "Odds that each robot finishes its next session."),
    "spares": ("fleet.cli.read_outs", "How many spares to hold, and what is short."),
    "plates": ("fleet.cli.read_outs", "What to print, on which printer, from when."),
    "fit": ("fleet.cli.tables", "Fit a table of lives that you already have."),
}


class _Commands(click.Group):
    """Loads a command's module only when it is asked for."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name not in COMMANDS:
            return None
        module = importlib.import_module(COMMANDS[cmd_name][0])
        command = getattr(module, f"{cmd_name}_command")
        assert isinstance(command, click.Command)
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        with formatter.section("Commands"):
            formatter.write_dl([(name, said) for name, (_, said) in COMMANDS.items()])


@click.group(cls=_Commands, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(package_name="wearbook", prog_name="wearbook")
def wearbook() -> None:
    """Keep the age of every part of a fleet of robots, and see what it will need.

    Start with 'wearbook demo'. For your own fleet: 'wearbook new', then 'wearbook import FOLDER', then after every
    session 'wearbook log session ROBOT --hours H'.

    Every command finds its book by --book PATH (or a database URL), else by the environment variable WEARBOOK_BOOK,
    else it takes ./wearbook.db.

    Odds and spares are estimates, no safety check: inspect before every session. Not for life-critical, medical,
    people-carrying or safety functions; local codes and licensed practice come first.
    """


def main(arguments: Sequence[str] | None = None) -> None:
    """Run the command line; what the user can mend is one sentence on standard error, and exit code 2."""
    if isinstance(sys.stdout, io.TextIOWrapper):
        sys.stdout.reconfigure(errors="replace")  # a terminal that cannot show a sign shows a question mark
    try:
        wearbook.main(None if arguments is None else list(arguments), prog_name="wearbook", standalone_mode=False)
    except click.exceptions.NoArgsIsHelpError as asked:
        click.echo(asked.format_message(), err=True)
        sys.exit(2)
    except click.UsageError as error:
        path = error.ctx.command_path if error.ctx is not None else "wearbook"
        said = error.format_message().rstrip(".")
        _refuse(f"{said}{'' if said.endswith('?') else '.'} ('{path} --help' shows how.)")
    except click.ClickException as error:
        _refuse(error.format_message())
    except click.Abort:
        _refuse("stopped.")
    except FleetError as error:
        _refuse(str(error))
    except OSError as error:
        if error.errno != errno.ENOSPC:
            raise
        _refuse("the answer cannot be written: the disk is full.")


def _refuse(sentence: str) -> NoReturn:
    click.echo(f"wearbook: {sentence}", err=True)
    sys.exit(2)


if __name__ == "__main__":
    main()
