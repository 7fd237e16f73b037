"""The continuous girder: its condensed form, responses, influence lines and envelopes."""

from assess.girder.condensed import Condensed, SupportDerivatives, SupportState
from assess.girder.envelope import Envelope, Passage, envelope, influence_line, passages, train_forces
from assess.girder.model import Girder, Piece
from assess.girder.response import RESPONSES, Places, forces_of, places

__all__ = [
    "RESPONSES",
    "Condensed",
    "Envelope",
    "Girder",
    "Passage",
    "Piece",
    "Places",
    "SupportDerivatives",
    "SupportState",
    "envelope",
    "forces_of",
    "influence_line",
    "passages",
    "places",
    "train_forces",
]
