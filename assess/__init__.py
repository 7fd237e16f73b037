"""Bedstone's mechanics and its outputs: girders on elastomeric bearings, calibrated from readings."""

__version__ = "0.1.0"

__all__ = ["__version__"]
