"""Run the migrations on an open connection, inside the caller's transaction."""

from __future__ import annotations

from pathlib import Path

from alembic import command
from alembic.config import Config
from alembic.script import ScriptDirectory
from sqlalchemy import Connection


def configuration() -> Config:
    """Return Alembic's configuration; the scripts lie beside this file, wherever it is installed."""
    config = Config()
    config.set_main_option("script_location", str(Path(__file__).parent).replace("%", "%%"))
    config.set_main_option("path_separator", "os")
    return config


def known_versions() -> list[str]:
    """Return every version of the schema, newest first."""
    scripts = ScriptDirectory.from_config(configuration())
    return [script.revision for script in scripts.walk_revisions()]


def upgrade(connection: Connection, *, to: str = "head") -> None:
    """Bring the tables to a version; harmless if they are there already. Commits nothing."""
    config = configuration()
    config.attributes["connection"] = connection
    command.upgrade(config, to)
