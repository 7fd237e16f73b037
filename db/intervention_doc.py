"""What has been done to a bearing, as a bridge file says it."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

INTERVENTION_KINDS = ("replaced", "jacked", "shimmed")
"""A new pad; the girder lifted at the seat; packing put in or taken out."""


@dataclass(frozen=True, kw_only=True)
class InterventionDoc:
    """Work at a support on a day: what was read there before says nothing of after.

    "replaced" cuts the history of the pad's stiffness, "jacked" and "shimmed" that of the seat. Readings of that very
    day count as after.
    """

    date: dt.date
    kind: str  # one of INTERVENTION_KINDS
    girder: str
    support: str
    remark: str = ""
