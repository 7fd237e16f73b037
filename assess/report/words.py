"""How the report words numbers, intervals, dates, places and statuses."""

from __future__ import annotations

import datetime as dt
import math
import re
from collections.abc import Iterable, Sequence

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
_ISO_DATE = re.compile(r"(?<![\w./-])\d{4}-\d{2}-\d{2}(?![\w/-]|\.\w)")  # none within a file name
CALIBRATED, NOMINAL, HELD = "calibrated pads", "nominal pads", "supports that hold their level"
WATCH_FROM = 0.9
OVER_FROM = 1.0

FIXED_CAUTIONS = (
    "These outputs support the engineer in charge and never replace that engineer.",
    "Local codes and the owner's standards govern.",
    "A licensed engineer must review these outputs before anyone acts on them.",
    "On sight of distress, close the bridge: closure needs no calculation.",
    "Deflection proves stiffness, not strength: what resists under test loads may be gone at failure.",
)

# How the results word what the fixed cautions say in full; such a caution of theirs would stand twice.
SAID_BY_FIXED = (
    "These figures support the engineer in charge and never replace",
    "Stiffness seen under a test load may not be there at ultimate load",
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


def prose(text: str, names: Iterable[str] = ()) -> str:
    """Word a sentence from elsewhere as this page does: dates in words, names of supports without quotes.

    Parameters
    ----------
    text
        A verdict, a reason or a caution.
    names
        The supports of the bridge; a name in quotes that is none of them keeps its quotes.
    """
    dated = _ISO_DATE.sub(_in_prose, text)
    for name in sorted(set(names), key=len, reverse=True):
        dated = dated.replace(f'"{name}"', name)
    return dated


def _in_prose(match: re.Match[str]) -> str:
    try:
        return date(dt.date.fromisoformat(match.group()))
    except ValueError:  # looks like a date and is none: a number of a drawing, say
        return match.group()


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


def signed(value: float) -> str:
    """Word a finite number with its sign."""
    return number(value) if value <= 0.0 else f"+{number(value)}"


def listed(names: Sequence[str]) -> str:
    """Word a list: "a", "a and b", "a, b and c"."""
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def entered(value: float, unit: str = "") -> str:
    """Word a number that a person wrote, as it was written: no figures added, none past six."""
    return f"{value:.6g} {unit}".rstrip().replace("-", MINUS)


def spread(sd: float, unit: str = "") -> str:
    """Word a standard deviation in at most two significant figures."""
    return entered(float(f"{sd:.2g}"), unit)


def span_length(length_m: float) -> str:
    """Word the length of a span in at most four significant figures."""
    return entered(float(f"{length_m:.4g}"), "m")


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
    if low is not None and high is not None and math.isfinite(low) and high == math.inf:
        return f"{number(value)} ({number(low)} to no upper limit) {unit}".rstrip()
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


def judged(utilisation: float | None, basis: str) -> str:
    """Word a status and, where no pad is calibrated, that nothing measured stands behind it."""
    return status_on(status(utilisation), basis)


def status_on(told: str, basis: str) -> str:
    """Add to a status word, except on calibrated pads, that it was not measured."""
    return told if basis == CALIBRATED else f"{told}, not measured"


def section(effect: str, span: int | None, support: str | None) -> str:
    """Name a governing section: "sagging in span 1", "hogging at pier 1", "shear in span 1 at pier 1"."""
    where = f" in span {span}" if span is not None else ""
    return effect + where + (f" at {support}" if support is not None else "")


def law(name: str, visits: int) -> str:
    """Word a law of the pads; a name that is not known here is shown as it is. Fewer than two visits give none."""
    if visits < 2:
        return f"none: {'one visit' if visits == 1 else 'no visit'} gives no law"
    return LAWS.get(name, name)


def seat_moved(drop_mm: float | None, sd_mm: float | None) -> bool:
    """Say whether a seat moved since the datum by more than twice the standard deviation of its level."""
    if drop_mm is None or not math.isfinite(drop_mm) or drop_mm == 0.0:
        return False
    return sd_mm is None or not abs(drop_mm) <= 2.0 * sd_mm


def seat(drop_mm: float) -> str:
    """Word which way and how far a seat moved: "down 7.4 mm"."""
    if drop_mm == 0.0:
        return "0 mm"
    return f"{'down' if drop_mm > 0.0 else 'up'} {entered(float(f'{abs(drop_mm):.3g}'))} mm"


def told_by(data_share: float | None) -> str:
    """Word what told a pad's stiffness: the readings or the assumption (its prior)."""
    if data_share is None or not math.isfinite(data_share):
        return not_determined("no calibration")
    share = f"{number(100.0 * data_share, 2)} % from readings"
    if data_share < 0.5:
        return f"told by the assumption, not by the readings ({share})"
    return f"told by the readings ({share})"
