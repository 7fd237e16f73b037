"""Open a record: a SQLite file, or a server by URL."""

from __future__ import annotations

import contextlib
import sqlite3
import time
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any, TypeVar

from sqlalchemy import URL, Connection, Engine, create_engine, event, inspect, make_url, text
from sqlalchemy.exc import ArgumentError, DatabaseError
from sqlalchemy.pool import StaticPool

from db.errors import BedstoneError
from db.schema import SCHEMA_HEAD
from db.store.faults import is_busy, told_plainly
from db.store.record import WRITES, Record
from db.wording import shown

PATIENCE_S = 30.0
"""How long a program waits for another one that writes."""


_INIT = "make one first: bedstone init"
_COMPLETE = {"alembic_version", "bridges", "readings"}

T = TypeVar("T")


@contextlib.contextmanager
def open_record(location: str, *, create: bool = False) -> Iterator[Record]:
    """Open a record.

    Parameters
    ----------
    location : str
        A path of a SQLite file, or a SQLAlchemy URL.
    create : bool
        Make the record if there is none.

    Raises
    ------
    BedstoneError
        If there is none and `create` is not set, if it is not a record, or if a newer version made it.
    """
    url = _url(location)
    name = url.database or "memory" if _is_sqlite(url) else url.render_as_string(hide_password=True)
    _check_place(url, name, create)
    engine = _engine_for(url, name)
    try:
        with told_plainly(name):
            created = _ready(engine, name, create)
        yield Record(engine, name=name, created=created)
    finally:
        engine.dispose()


def _url(location: str) -> URL:
    if not location.strip() or not location.isprintable():
        raise BedstoneError(
            f'"{shown(location)}" is no name of a record', remedy="name a file, such as bedstone.sqlite"
        )
    if "://" not in location:
        return URL.create("sqlite", database=location)
    try:
        return make_url(location)
    except (ArgumentError, ValueError) as error:
        remedy = "write a path, or a URL such as postgresql+psycopg://host/name"
        raise BedstoneError("the record's URL cannot be read", remedy=remedy) from error


def _is_sqlite(url: URL) -> bool:
    return url.get_backend_name() == "sqlite"


def _in_memory(url: URL) -> bool:
    return _is_sqlite(url) and url.database in (None, "", ":memory:")


def _check_place(url: URL, name: str, create: bool) -> None:
    """Say what is wrong with the place of a SQLite file before the driver does."""
    if not _is_sqlite(url) or _in_memory(url) or name.startswith("file:"):
        return
    try:
        path = Path(name)
        if path.is_dir():
            raise BedstoneError("it is a folder", file=name, remedy="name a file, such as bedstone.sqlite")
        if not path.parent.is_dir():
            problem = f"there is no folder {path.parent}"
            raise BedstoneError(problem, file=name, remedy="make the folder first")
        if not path.exists() and not create:
            raise BedstoneError("there is no record", file=name, remedy=_INIT)
        if path.exists() and not path.is_file():
            raise BedstoneError("it is not a regular file", file=name, remedy="name another file")
    except (OSError, ValueError) as error:
        raise BedstoneError("it cannot be looked at", file=name, remedy="name another file") from error


def _engine(url: URL) -> Engine:
    if not _is_sqlite(url):
        return create_engine(url, pool_pre_ping=True)
    options: dict[str, Any] = {"poolclass": StaticPool} if _in_memory(url) else {}
    engine = create_engine(url, connect_args={"timeout": PATIENCE_S}, **options)
    event.listen(engine, "connect", _prepare)
    event.listen(engine, "begin", _begin)
    return engine


def _engine_for(url: URL, name: str) -> Engine:
    try:
        with told_plainly(name):
            return _engine(url)
    except ModuleNotFoundError as error:
        problem = f"the driver {error.name} for this kind of database is not installed"
        raise BedstoneError(problem, file=name, remedy="install it, or keep the record in a file") from error


def _prepare(connection: Any, record: object) -> None:
    """Set up a SQLite connection; transactions are begun by `_begin` alone."""
    connection.isolation_level = None
    cursor = connection.cursor()
    cursor.execute("PRAGMA foreign_keys = ON")
    cursor.execute("PRAGMA synchronous = FULL")
    cursor.close()


def _begin(connection: Connection) -> None:
    """Begin at once as a writer, so that two writers wait for each other instead of failing later."""
    writes = connection.get_execution_options().get(WRITES, False)
    _patiently(lambda: connection.exec_driver_sql("BEGIN IMMEDIATE" if writes else "BEGIN"))


def _patiently(action: Callable[[], T]) -> T:
    """Do it again while another program holds the file, for as long as `PATIENCE_S`."""
    until = time.monotonic() + PATIENCE_S
    pause = 0.005
    while True:
        try:
            return action()
        except DatabaseError as error:
            if not is_busy(error) or time.monotonic() > until:
                raise
        time.sleep(pause)
        pause = min(2 * pause, 0.2)


def _ready(engine: Engine, name: str, create: bool) -> bool:
    """See to it that the tables are there and of this version; True if they were made now."""
    created = False
    version = _patiently(lambda: _version(engine, name))
    if version is None and not create:
        raise BedstoneError("it holds no record yet", file=name, remedy=_INIT)
    if version != SCHEMA_HEAD:
        created = _migrate(engine, name)
    if create and engine.dialect.name == "sqlite":
        _patiently(lambda: _write_ahead(engine))
    return created


def _version(engine: Engine, name: str) -> str | None:
    with engine.connect() as connection:
        return _version_of(connection, name)


def _version_of(connection: Connection, name: str) -> str | None:
    """Return the version of the tables; None if the database is empty."""
    tables = set(inspect(connection).get_table_names())
    if not tables:
        return None
    if not tables >= _COMPLETE:
        raise BedstoneError(
            "it is a database, but not a Bedstone record", file=name, remedy=f"name another file, or {_INIT}"
        )
    versions = connection.execute(text("SELECT version_num FROM alembic_version")).scalars().all()
    if len(versions) != 1:
        raise BedstoneError("the record does not say its version", file=name, remedy="restore it from a copy")
    return str(versions[0])


def _migrate(engine: Engine, name: str) -> bool:
    """Make the tables, or bring old ones up to date, in one transaction; True if made now."""
    from db.migrations import known_versions, upgrade

    with engine.execution_options(**{WRITES: True}).begin() as connection:
        version = _version_of(connection, name)  # again, now that no other program can write
        if version is not None and version not in known_versions():
            problem = f"a newer Bedstone wrote it (its tables are of version {version[:20]})"
            raise BedstoneError(problem, file=name, remedy="use that newer Bedstone")
        upgrade(connection)
    return version is None


def _write_ahead(engine: Engine) -> None:
    """Let readers and a writer work at once from now on; the file remembers it."""
    raw = engine.raw_connection()
    try:
        cursor = raw.cursor()
        cursor.execute("PRAGMA journal_mode = WAL")
        cursor.close()
    except sqlite3.Error as error:
        raise DatabaseError("PRAGMA journal_mode = WAL", None, error) from error
    finally:
        raw.close()
