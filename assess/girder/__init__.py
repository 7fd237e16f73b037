"""The continuous girder: its condensed form, responses, influence lines and envelopes."""

from assess.girder.condensed import Condensed, SupportDerivatives, SupportState
from assess.girder.envelope import (
    Envelope,
    Passage,
    envelope,
    extremes,
    influence_line,
    passages,
    train_forces,
)
from assess.girder.model import Girder, Piece
from assess.girder.response import REACTION, RESPONSES, Places, forces_of, places, support_places

__all__ = [
    "REACTION",
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
    "extremes",
    "forces_of",
    "influence_line",
    "passages",
    "places",
    "support_places",
    "train_forces",
]
