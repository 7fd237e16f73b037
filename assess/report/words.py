"""How the report words numbers, intervals, dates, places and statuses."""

from __future__ import annotations

import datetime as dt
import math

MONTHS = (
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
)
MINUS = "\N{MINUS SIGN}"
THIN = "\N{NARROW NO-BREAK SPACE}"
WATCH_FROM = 0.9
OVER_FROM = 1.0

FIXED_CAUTIONS = (
    "These outputs support the engineer in charge and never replace that engineer.",
    "Local codes and the owner's standards govern.",
    "A licensed engineer must review these outputs before anyone acts on them.",
    "On sight of distress, close the bridge: closure needs no calculation.",
    "Deflection proves stiffness, not strength: what resists under test loads may be gone at failure.",
)

LAWS = {
    "steady": "steady: no change told by the readings",
    "drift": "drift: the same change each year",
    "creep": "creep: change that slows with time",
    "step": "step: a change between two visits",
    "wander": "wander: change without a settled direction",
}


def plain(text: str) -> str:
    """Return the text with control characters, which no XML can hold, shown as a replacement mark."""
    spaced = " ".join(text.split())
    return "".join(c if c.isprintable() or c == " " else "\N{REPLACEMENT CHARACTER}" for c in spaced)


def known(value: float | None) -> bool:
    """Say whether a value is there: neither None nor NaN nor infinite."""
    return value is not None and math.isfinite(value)


def not_determined(reason: str = "") -> str:
    """Word a result that could not be determined, with its reason where one is known."""
    return f"not determined: {reason}" if reason else "not determined"


def number(value: float, digits: int = 3) -> str:
    """Word a finite number in `digits` significant figures; thousands are set apart from 10 000 on.

    Raises
    ------
    ValueError
        If the value is not finite: say why it could not be determined instead.
    """
    if not math.isfinite(value):
        raise ValueError(f"a number to print must be finite, not {value}")
    if value == 0.0:
        return "0"
    mantissa, exponent = f"{abs(value):.{digits - 1}e}".split("e")
    sign = MINUS if value < 0 else ""
    power = int(exponent)
    if not -5 < power < 9:
        return f"{sign}{mantissa}e{power}"
    rounded = float(f"{mantissa}e{power}")
    text = f"{rounded:.{max(0, digits - 1 - power)}f}"
    return sign + (f"{rounded:,.0f}".replace(",", THIN) if power >= 4 else text)


def entered(value: float, unit: str = "") -> str:
    """Word a number that a person wrote, as it was written: no figures added, none past six."""
    return f"{value:.6g} {unit}".rstrip().replace("-", MINUS)


def quantity(value: float | None, unit: str, reason: str = "") -> str:
    """Word a number with its unit, or why it is missing."""
    if value is None or not math.isfinite(value):
        return not_determined(reason)
    return f"{number(value)} {unit}".rstrip()


def interval(
    value: float | None, low: float | None, high: float | None, unit: str = "", reason: str = ""
) -> str:
    """Word a value with its 95 % interval: "0.87 (0.84 to 0.91) unit"."""
    if value is None or not math.isfinite(value):
        return not_determined(reason)
    if low is None or high is None or not (math.isfinite(low) and math.isfinite(high)):
        return f"{number(value)} {unit}".rstrip() + " (interval not determined)"
    return f"{number(value)} ({number(low)} to {number(high)}) {unit}".rstrip()


def place(x_m: float) -> str:
    """Word a place along a girder to the centimetre."""
    return f"{x_m:.2f}".replace("-", MINUS) + " m"


def probability(value: float | None, reason: str = "") -> str:
    """Word a probability in per cent; draws tell neither 0 nor 100 % for certain."""
    if value is None or not math.isfinite(value):
        return not_determined(reason)
    if value < 0.001:
        return "under 0.1 %"
    if value > 0.999:
        return "over 99.9 %"
    return f"{number(100.0 * value, 2)} %"


def date(day: dt.date | None, reason: str = "") -> str:
    """Word a date so that no reader takes day for month."""
    if day is None:
        return not_determined(reason)
    return f"{day.day} {MONTHS[day.month - 1]} {day.year}"


def status(utilisation: float | None) -> str:
    """Word a utilisation: within below 0.9, watch from 0.9, over from 1.0, unknown if there is none."""
    if utilisation is None or not math.isfinite(utilisation):
        return "unknown"
    if utilisation < WATCH_FROM:
        return "within"
    return "watch" if utilisation < OVER_FROM else "over"


def section(effect: str, span: int | None, support: str | None) -> str:
    """Name a governing section: "sagging, span 1", "hogging at pier 1", "shear, span 1 at pier 1"."""
    where = f", span {span}" if span is not None else ""
    return effect + where + (f" at {support}" if support is not None else "")


def law(name: str) -> str:
    """Word a law of the pads; a name that is not known here is shown as it is."""
    return LAWS.get(name, name)


def told_by(data_share: float | None) -> str:
    """Word what told a pad's stiffness: the readings or the assumption (its prior)."""
    if data_share is None or not math.isfinite(data_share):
        return not_determined("no calibration")
    share = f"{number(100.0 * data_share, 2)} % from readings"
    if data_share < 0.5:
        return f"told by the assumption, not by the readings ({share})"
    return f"told by the readings ({share})"
