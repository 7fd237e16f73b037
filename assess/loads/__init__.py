"""Loads: what stands on a girder line, and what moves over it."""

from assess.loads.allowance import Allowance, en_rail
from assess.loads.library import UnknownModelError, live_model, model_names
from assess.loads.live_model import Alternative, Block, LiveModel, ModelLoad, Second
from assess.loads.permanent import LoadCase
from assess.loads.train import Train

__all__ = [
    "Allowance",
    "Alternative",
    "Block",
    "LiveModel",
    "LoadCase",
    "ModelLoad",
    "Second",
    "Train",
    "UnknownModelError",
    "en_rail",
    "live_model",
    "model_names",
]
