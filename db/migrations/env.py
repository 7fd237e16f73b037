"""Alembic's entry: migrates the connection it is given, and no other."""

from __future__ import annotations

from alembic import context

from db.schema import Base

connection = context.config.attributes.get("connection")
if connection is None or context.is_offline_mode():
    raise RuntimeError("run migrations through db.migrations.upgrade, which opens the record")

context.configure(
    connection=connection,
    target_metadata=Base.metadata,
    render_as_batch=connection.dialect.name == "sqlite",
    transactional_ddl=True,
    compare_type=True,
)
with context.begin_transaction():
    context.run_migrations()
