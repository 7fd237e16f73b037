"""Pads over the years: steady or drift, and what that does to the utilisations."""

from assess.trend.forecast import Crossing, PadFuture, crossing, pad_future
from assess.trend.laws import PadLaw, Trend, VisitEstimate, fit_trend
from assess.trend.seats import SeatLaw, fit_seat

__all__ = [
    "Crossing",
    "PadFuture",
    "PadLaw",
    "SeatLaw",
    "Trend",
    "VisitEstimate",
    "crossing",
    "fit_seat",
    "fit_trend",
    "pad_future",
]
