"""Sections built from plates: properties, resistances, losses. Levels are above the section's own datum."""

from assess.section.built import HOGGING, SAGGING, BuiltSection, Elastic
from assess.section.plastic import Blocks, Plastic, plastic
from assess.section.plate import Deck, Hole, Plate
from assess.section.resistance import ELASTIC, PLASTIC, BuiltResistance, resistance

__all__ = [
    "ELASTIC",
    "HOGGING",
    "PLASTIC",
    "SAGGING",
    "Blocks",
    "BuiltResistance",
    "BuiltSection",
    "Deck",
    "Elastic",
    "Hole",
    "Plastic",
    "Plate",
    "plastic",
    "resistance",
]
