"""What has been done at supports, and what it cuts."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from db.documents import BridgeDoc
from db.intervention_doc import InterventionDoc


def replaced(bridge: BridgeDoc, girder: str) -> list[InterventionDoc]:
    """Pads of a girder that were replaced, by date."""
    return [one for one in bridge.interventions if one.girder == girder and one.kind == "replaced"]


def since_of(
    bridge: BridgeDoc, girder: str, support: str, kinds: Sequence[str], until: dt.date | None = None
) -> dt.date | None:
    """The last day up to `until` on which something of some kinds was done at a support; None if it never was."""
    days = [
        one.date
        for one in bridge.interventions
        if (one.girder, one.support) == (girder, support)
        and one.kind in kinds
        and (until is None or one.date <= until)
    ]
    return max(days, default=None)
