"""The entry point: the command group, read lazily, and the walk from an exception to an exit code."""

from __future__ import annotations

import importlib
import os
import sys
from collections.abc import Sequence
from typing import IO

import click

from assess import __version__
from assess.cli.failures import Failure, read_failure

COMMANDS = (
    "init",
    "bridge",
    "visit",
    "intervention",
    "calibrate",
    "assess",
    "trend",
    "triggers",
    "shim",
    "plan",
    "report",
    "action",
    "network",
    "demo",
)


class LazyGroup(click.Group):
    """A group whose commands are modules of this package, imported when they are asked for.

    The command of the module ``assess.cli.NAME`` is its attribute ``command``.
    """

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Return the names in the order in which a user meets them."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """Import and return a command, or None if there is no such name."""
        if cmd_name not in COMMANDS:
            return None
        command = importlib.import_module(f"assess.cli.{cmd_name}").command
        return command if isinstance(command, click.Command) else None


@click.group(
    cls=LazyGroup,
    no_args_is_help=False,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog="Exit codes: 0 done; 2 the input or the call is wrong; 1 a defect of the program.",
)
@click.option(
    "--record",
    "record",
    metavar="PATH-OR-URL",
    envvar="BEDSTONE_RECORD",
    default="bedstone.sqlite",
    show_default=True,
    show_envvar=True,
    help="The record to work on: an SQLite file or the URL of a database server.",
)
@click.version_option(__version__, prog_name="bedstone", message="%(prog)s %(version)s")
@click.pass_context
def cli(ctx: click.Context, record: str) -> None:
    """Bearing stiffness, moment redistribution and capacity trend of existing girder bridges.

    Keeps the inspection readings of a bridge on elastomeric bearings, finds the bearing
    stiffnesses that explain them, recomputes the moments with those stiffnesses, and says which
    spans are heading for their capacity, when, and how surely.

    \b
    Example:
      bedstone init
      bedstone bridge add quillmere.toml
      bedstone visit log visit-2024.toml
      bedstone calibrate quillmere
      bedstone --record other.sqlite assess quillmere --json
    """
    ctx.obj = record


def run(args: Sequence[str] | None = None) -> int:
    """Run one command line and return its exit code; every failure is one line on stderr.

    Parameters
    ----------
    args : sequence of str, optional
        The words after the program's name; None takes them from the process.

    Returns
    -------
    int
        0 done; 2 the input or the call is wrong; 1 a defect; 130 stopped by Ctrl-C; 141 the reader
        of stdout has gone.
    """
    words = list(sys.argv[1:] if args is None else args)
    try:
        with cli.make_context("bedstone", words) as ctx:
            cli.invoke(ctx)
        sys.stdout.flush()
    except click.exceptions.Exit as done:
        return done.exit_code
    except BrokenPipeError:
        _leave_pipe()
        return 141
    except KeyboardInterrupt:
        return _say(Failure(line="stopped", exit_code=130))
    except Exception as error:  # whatever it is, a person sees one line
        if os.environ.get("BEDSTONE_TRACEBACK") == "1":
            import traceback

            traceback.print_exc(file=sys.stderr)
        return _say(read_failure(error))
    return 0


def main() -> None:
    """Run the program as the console script `bedstone`."""
    if "_BEDSTONE_COMPLETE" in os.environ:  # the shell asks for completions
        cli.main(prog_name="bedstone")
    for stream in (sys.stdout, sys.stderr):
        _replace_what_cannot_be_written(stream)
    sys.exit(run())


def _say(failure: Failure) -> int:
    click.echo(f"bedstone: {failure.line}", err=True)
    return failure.exit_code


def _leave_pipe() -> None:
    """Point stdout at nothing, so that closing it later does not complain."""
    try:
        nowhere = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nowhere, sys.stdout.fileno())
    except (OSError, ValueError):  # stdout is no real file
        return


def _replace_what_cannot_be_written(stream: IO[str]) -> None:
    """Let a terminal of few characters show a replacement instead of stopping the program."""
    reconfigure = getattr(stream, "reconfigure", None)
    if reconfigure is not None:
        reconfigure(errors="replace")
