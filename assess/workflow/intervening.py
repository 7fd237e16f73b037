"""What was done to the pads of a bridge: told to the record, listed, withdrawn."""

from __future__ import annotations

from db.errors import BedstoneError
from db.records import KeptIntervention, NewIntervention
from db.store import open_record


def add_intervention(url: str, bridge: str, new: NewIntervention) -> KeptIntervention | None:
    """Keep an intervention; None if the very same is in the record already."""
    with open_record(url) as record:
        return record.add_intervention(bridge, new)


def list_interventions(url: str, bridge: str) -> list[KeptIntervention]:
    """Return the interventions of a bridge, by date."""
    with open_record(url) as record:
        return record.interventions(bridge)


def withdraw_intervention(url: str, number: int, reason: str) -> KeptIntervention:
    """Withdraw an intervention that was not; the reason is kept."""
    if not reason.strip():
        raise BedstoneError("it is empty", field="--reason", remedy="say why; it is kept")
    with open_record(url) as record:
        return record.withdraw_intervention(number, reason.strip())
