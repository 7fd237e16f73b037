"""Laws of change of pads, seats and section losses over the visits, and what they do to the utilisations."""

from assess.trend.companion import Companion, companion, pettitt
from assess.trend.detect import Detection, detect
from assess.trend.forecast import Crossing, PadFuture, crossing, pad_future
from assess.trend.laws import PadLaw, Trend, fit_trend
from assess.trend.losses import LossLaw, fit_loss
from assess.trend.seats import SeatLaw, fit_seat
from assess.trend.shares import variance_shares
from assess.trend.visits import Cut, VisitEstimate, with_common_error

__all__ = [
    "Companion",
    "Crossing",
    "Cut",
    "Detection",
    "LossLaw",
    "PadFuture",
    "PadLaw",
    "SeatLaw",
    "Trend",
    "VisitEstimate",
    "companion",
    "crossing",
    "detect",
    "fit_loss",
    "fit_seat",
    "fit_trend",
    "pad_future",
    "pettitt",
    "variance_shares",
    "with_common_error",
]
