"""What a bridge file says of actions: who decides, and within how many days."""

from __future__ import annotations

from dataclasses import dataclass

OWNER_ROLE = "the engineer in charge"


@dataclass(frozen=True, kw_only=True)
class ActionsDoc:
    """The owner's own days from a finding to its decision; None: the built-in rule."""

    over: int | None = None
    rival: int | None = None
    may_be_over: int | None = None
    foreseen: int | None = None
    pad_over: int | None = None
    uplift: int | None = None
