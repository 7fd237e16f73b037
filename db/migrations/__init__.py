"""How an old record becomes a new one."""

from db.migrations.upgrade import known_versions, upgrade

__all__ = ["known_versions", "upgrade"]
