"""What is believed of a bridge before its readings, and where the next visit can read, in SI."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, kw_only=True)
class PriorDoc:
    """Standard deviations of the unknowns beside the pads, before any reading.

    The defaults are common practice, no source.
    """

    settlement_sd: float = 0.020  # m, of a seat
    girder_sd: float = 0.10  # of ln of the factor on the girder's stiffness
    share_sd: float = 0.10  # of ln of the factor on the load share of a test vehicle
    datum_shift_sd: float = 0.002  # m, of a levelling epoch
    datum_tilt_sd: float = 0.002  # m, difference between the ends of the girder
    gradient_sd: float = 5.0  # K, top against underside, in the permanent state
    test_gradient_sd: float = 1.0  # K, its change between unloaded and loaded
    sustained_ratio: float | None = None  # sustained over short-term stiffness, (0, 1]; None: from the pads
    sustained_sd: float = 0.10  # of ln of that ratio


@dataclass(frozen=True, kw_only=True)
class GaugeDoc:
    """A place where the next visit can take a reading."""

    quantity: str  # one of QUANTITIES
    support: str | None = None
    at: float | None = None  # m from the girder's left end
    height: float | None = None  # m above the section's neutral axis; strain only
    sd: float  # m, rad or strain
    sd_entered: str  # as written, e.g. "0.05 mm"
    unit: str  # as written, e.g. "mm"
    cost: float = 1.0  # beside the other gauges
    state: str = "test"  # "test" | "permanent"
