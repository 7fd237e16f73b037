"""Records: tables, files, units and transactions. Knows no mechanics and imports nothing from `assess`."""

from db.errors import BedstoneError

__all__ = ["BedstoneError"]
