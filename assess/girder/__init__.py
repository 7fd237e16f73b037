"""The continuous girder: its condensed form, responses, influence lines and envelopes."""

from assess.girder.condensed import Condensed, SupportDerivatives, SupportState
from assess.girder.contact import ContactState, Tips, contact, holds, kinds
from assess.girder.contact_many import ManyStates, contact_many
from assess.girder.distributed import Sweep
from assess.girder.envelope import (
    Envelope,
    Part,
    Passage,
    Placement,
    envelope,
    extremes,
    governing_placement,
    influence_line,
    passage_at,
    passages,
    train_forces,
)
from assess.girder.imposed import imposed, imposed_forces
from assess.girder.model import Girder, Piece
from assess.girder.response import (
    REACTION,
    RESPONSES,
    Places,
    forces_of,
    places,
    simple_forces_of,
    support_places,
)
from assess.girder.rolling import Rolling

__all__ = [
    "REACTION",
    "RESPONSES",
    "Condensed",
    "ContactState",
    "Envelope",
    "Girder",
    "ManyStates",
    "Part",
    "Passage",
    "Piece",
    "Placement",
    "Places",
    "Rolling",
    "SupportDerivatives",
    "SupportState",
    "Sweep",
    "Tips",
    "contact",
    "contact_many",
    "envelope",
    "extremes",
    "forces_of",
    "governing_placement",
    "holds",
    "imposed",
    "imposed_forces",
    "influence_line",
    "kinds",
    "passage_at",
    "passages",
    "places",
    "simple_forces_of",
    "support_places",
    "train_forces",
]
