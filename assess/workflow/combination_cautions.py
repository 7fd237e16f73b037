"""Cautions on factors, stages, temperature and relief."""

from __future__ import annotations

from assess.capacity import factor_set
from db.documents import BridgeDoc

RELIEF_COUNTS = (
    "Relief by settlement counts, as the bridge file says: a seat that is lifted, packed or heaves takes it away; the utilisation "
    "without it stands beside."
)
TEMPERATURE = (
    "Temperature acts as a straight difference from top to underside and as seats that rise; its curved part, sudden changes and "
    "what a whole girder's lengthening does to its bearings are not in it."
)
STAGES = (
    "Loads that came on span by span are taken on simple spans: how the spans were propped and joined is not checked, nor the "
    "creep of a deck that joins them."
)


def of_bridge(bridge: BridgeDoc) -> list[str]:
    """Cautions on what a bridge is assessed with."""
    said = []
    if bridge.factors.set is not None:
        base = factor_set(bridge.factors.set)
        said.append(f'The factor set "{base.name}" follows {base.text}: {base.status}.')
    if bridge.factors.relief_counts:
        said.append(RELIEF_COUNTS)
    if bridge.temperature:
        said.append(TEMPERATURE)
    if any(p.stage == "span by span" for girder in bridge.girders for p in girder.permanent):
        said.append(STAGES)
    return said
