"""What a database driver raises, as one clear line."""

from __future__ import annotations

import contextlib
from collections.abc import Iterator

from sqlalchemy.exc import DBAPIError, IntegrityError, SQLAlchemyError

from db.errors import BedstoneError

_MEANINGS = (
    (
        "file is not a database",
        "it is not a Bedstone record",
        "name another file, or make one: bedstone init",
    ),
    ("malformed", "the record is damaged", "restore it from a copy"),
    ("corrupt", "the record is damaged", "restore it from a copy"),
    ("could not decode", "the record is damaged", "restore it from a copy"),
    ("no such table", "the record is damaged: a table is missing", "restore it from a copy"),
    ("no such column", "the record is damaged: a column is missing", "restore it from a copy"),
    ("readonly", "the record cannot be written", "check the permissions of the file and of its folder"),
    ("read-only", "the record cannot be written", "check the permissions of the file and of its folder"),
    ("unable to open", "the record cannot be opened", "check the permissions of the file and of its folder"),
    ("is full", "there is no room left on the disk", "make room and do it again; nothing was kept"),
    ("disk i/o error", "the disk could not be read or written", "check the disk; nothing was kept"),
    ("can't load plugin", "this kind of database is unknown", "write a path, or a URL of a server"),
    ("locked", "another program has held the record too long", "do it again when that program is done"),
    ("busy", "another program has held the record too long", "do it again when that program is done"),
)


def is_busy(error: BaseException) -> bool:
    """Whether another program holds the file just now."""
    text = str(error).lower()
    return "locked" in text or "busy" in text


@contextlib.contextmanager
def told_plainly(file: str) -> Iterator[None]:
    """Turn what the driver raises inside into a BedstoneError that names the record.

    Raises
    ------
    BedstoneError
        For any error of the database.
    """
    try:
        yield
    except IntegrityError as error:
        raise _conflict(error, file) from error
    except DBAPIError as error:
        raise _meaning(error.orig or error, file) from error
    except SQLAlchemyError as error:
        raise _meaning(error, file) from error


def damaged(file: str, what: str) -> BedstoneError:
    """Return the error for a row that does not say what it must."""
    return BedstoneError(f"the record is damaged: {what}", file=file, remedy="restore it from a copy")


def _conflict(error: IntegrityError, file: str) -> BedstoneError:
    text = str(error.orig).lower()
    if "unique" in text or "duplicate" in text:
        problem = "another program added the same at the same moment; nothing was kept"
        return BedstoneError(problem, file=file, remedy="do it again")
    return damaged(file, " ".join(str(error.orig).split())[:120])


def _meaning(error: BaseException, file: str) -> BedstoneError:
    text = " ".join(str(error).split())
    for sign, problem, remedy in _MEANINGS:
        if sign in text.lower():
            return BedstoneError(problem, file=file, remedy=remedy)
    return BedstoneError(f"the database says: {text[:160]}", file=file, remedy="check the record")
