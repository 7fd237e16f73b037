"""Loads: what stands on a girder line, and what moves over it."""

from assess.loads.permanent import LoadCase
from assess.loads.train import Train

__all__ = ["LoadCase", "Train"]
