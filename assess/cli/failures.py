"""One place that turns an exception into the line and the exit code that a person sees."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import click

if TYPE_CHECKING:
    from db.errors import BedstoneError

INPUT_OR_CALL = 2
DEFECT = 1


@dataclass(frozen=True, kw_only=True)
class Failure:
    """What is said on stderr, and the exit code."""

    line: str
    exit_code: int


def read_failure(error: Exception) -> Failure:
    """Return the line and the exit code for an exception.

    Usage errors and `BedstoneError` are the user's to mend (2); anything else is a defect (1).
    """
    from db.errors import BedstoneError

    if isinstance(error, BedstoneError):
        return Failure(line=error.line(), exit_code=INPUT_OR_CALL)
    if isinstance(error, click.UsageError):
        return Failure(line=_usage_line(error), exit_code=INPUT_OR_CALL)
    if isinstance(error, click.ClickException):
        return Failure(line=_one_line(error.format_message()), exit_code=INPUT_OR_CALL)
    told = _one_line(str(error)) or "no message"
    return Failure(
        line=f"a defect of the program: {type(error).__name__}: {told}; "
        "set BEDSTONE_TRACEBACK=1 and run it again to see where",
        exit_code=DEFECT,
    )


def wrong(problem: str, *, file: Path, remedy: str) -> BedstoneError:
    """Return a `BedstoneError` about a file; the family is imported only once something is wrong."""
    from db.errors import BedstoneError

    return BedstoneError(problem, file=str(file), remedy=remedy)


def cannot_write(path: Path, error: OSError) -> BedstoneError:
    """Return the error for a file that the system does not let us write."""
    return wrong(f"cannot be written: {error.strerror or error}", file=path, remedy="name another place")


def _usage_line(error: click.UsageError) -> str:
    path = error.ctx.command_path if error.ctx else "bedstone"
    message = _one_line(error.format_message()).rstrip(".")
    if isinstance(error, click.NoSuchOption) and error.option_name == "--record":
        return f"{message}; --record stands before the command: bedstone --record PATH-OR-URL ..."
    return f"{message}; see '{path} --help'"


def _one_line(text: str) -> str:
    return " ".join(text.split())
