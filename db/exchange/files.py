"""Reading a text file a person hands in, and TOML from it."""

from __future__ import annotations

import hashlib
import re
import tomllib
from pathlib import Path
from typing import Any

from db.errors import BedstoneError
from db.wording import printable

LARGEST = 20_000_000
"""No bridge file, visit file or table of readings is larger, in bytes."""

_CONTROLS = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f\ud800-\udfff]")


def read_text(path: Path, *, what: str) -> str:
    """Return a file's text (UTF-8, with or without a byte order mark).

    Parameters
    ----------
    path : Path
        The file.
    what : str
        What it should be, for the error: "bridge file".

    Raises
    ------
    BedstoneError
        If it is missing, no regular file, unreadable, too large or not UTF-8 text.
    """
    file = printable(str(path))
    try:
        if path.is_dir():
            raise BedstoneError("it is a folder", file=file, remedy=f"name the {what} itself")
        if not path.exists():
            raise BedstoneError("there is no such file", file=file, remedy=f"check the name of the {what}")
        if not path.is_file():
            raise BedstoneError("it is not a regular file", file=file, remedy=f"name a {what}")
        if path.stat().st_size > LARGEST:
            raise BedstoneError(f"it has more than {LARGEST // 10**6} MB", file=file, remedy=f"name a {what}")
        data = path.read_bytes()
    except (OSError, ValueError) as error:  # ValueError: a NUL in the name
        reason = getattr(error, "strerror", None) or str(error)
        remedy = f"check the name and the permissions of the {what}"
        raise BedstoneError(f"it cannot be read ({reason})", file=file, remedy=remedy) from error
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise BedstoneError(
            f"it is not UTF-8 text (byte {error.start + 1})", file=file, remedy=f"save the {what} as UTF-8"
        ) from error
    refuse_controls(text, file=file, what=what)
    return text


def refuse_controls(text: str, *, file: str, what: str) -> None:
    """Raise BedstoneError if the text holds a control character that no text file has."""
    found = _CONTROLS.search(text)
    if found:
        line = text.count("\n", 0, found.start()) + 1
        problem = f"line {line} holds the control character {ord(found.group()):#04x}"
        raise BedstoneError(problem, file=file, remedy=f"save the {what} as plain UTF-8 text")


def parse_toml(text: str, *, file: str, what: str) -> dict[str, Any]:
    """Return the tables of a TOML text.

    Raises
    ------
    BedstoneError
        If it is not TOML; names the line.
    """
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        remedy = f"mend the {what} there (text in quotes, one field a line)"
        raise BedstoneError(f"it is not TOML: {shown_reason(error)}", file=file, remedy=remedy) from error
    except (ValueError, RecursionError) as error:  # an integer of thousands of digits, a thousand brackets
        raise BedstoneError(
            "it is not TOML that can be read", file=file, remedy=f"mend the {what}"
        ) from error


def shown_reason(error: Exception) -> str:
    """Return another library's reason as tame text, its first letter small."""
    reason = "".join(c if c.isprintable() else " " for c in str(error))[:160].strip().rstrip(".")
    return reason[:1].lower() + reason[1:]


def digest_of(*texts: str) -> str:
    """Return the sha256 of one text, or of several with a NUL between them."""
    return hashlib.sha256("\0".join(texts).encode("utf-8")).hexdigest()
