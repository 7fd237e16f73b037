"""The record: open it, add evidence to it, ask it."""

from db.store.open import open_record
from db.store.record import Record

__all__ = ["Record", "open_record"]
