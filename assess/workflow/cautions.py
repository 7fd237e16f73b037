"""Every caution in words, so that all outputs say the same. None is ever left out because it is inconvenient."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from assess.calibrate import SUSPECT as SUSPECT
from assess.results import GirderAssessment, ReactionResult, SectionResult

STANDING = (
    (
        "These figures support the engineer in charge and never replace a judgement on site: a licensed engineer must review "
        "them, local codes and the owner's standards govern, and closure on sight of distress needs no calculation."
    ),
    "Stiffness seen under a test load may not be there at ultimate load: movements prove stiffness, not strength.",
)

WELL_TOLD = 0.95  # of the distance of a seat from the line through the end seats
TOLD = 0.5  # data share below which a pad is told by the assumption
REFERENCE_TEMPERATURE = 20.0  # degC
_FAR = 10.0  # K from the reference that calls for a word
MISFIT = 0.05


def not_read(girder: str, date: dt.date) -> str:
    """Caution: a girder without readings in test states."""
    return (
        f"{girder}: nothing was read under a test load on {date}; its pads are not calibrated by this visit."
    )


def no_pads(girder: str) -> str:
    """Caution: a girder with no pads."""
    return f"{girder}: all its supports hold their level; there is no pad to calibrate."


def left_out(date: dt.date) -> str:
    """Caution: a visit without readings in test states."""
    return f"{date}: nothing was read under a test load; this visit was not calibrated."


# assessment --------------------------------------------------------------------------------------


def no_calibration(bridge: str) -> str:
    """Caution: nominal pads."""
    return (
        f"No calibration is kept for {bridge}: the calibrated case shows nominal pads, its band the spread assumed for "
        "them, and no measured settlement."
    )


def stale(date: dt.date, made_on: int, newest: int) -> str:
    """Caution: a calibration that rests on an older bridge file."""
    return (
        f"The calibration of {date} was made on revision {made_on} of the bridge file, the assessment is on revision "
        f"{newest}: calibrate again."
    )


def superseded_visit(date: dt.date, newer: dt.date) -> str:
    """Caution: a newer visit is there, uncalibrated."""
    return f"The visit of {newer} has readings under test loads that are not calibrated yet; the calibration used is of {date}."


def girder_not_calibrated(girder: str) -> str:
    """Caution: a girder with nominal pads beside calibrated ones."""
    return f"{girder}: no calibration is kept for this girder: its calibrated case shows nominal pads."


def older_girder(girder: str, date: dt.date, newest: dt.date) -> str:
    """Caution: a girder calibrated by an older visit than the others."""
    return f"{girder}: not calibrated by the visit of {newest}; the calibration of {date} is used."


def forgotten_pad(girder: str, support: str, date: dt.date, earlier: dt.date, ratio: float) -> str:
    """Caution: a pad that the last visit does not tell but an earlier one did."""
    return (
        f'{girder}: the pad at "{support}" is not told by the visit of {date} and stands near its nominal value here, but '
        f"on {earlier} it was found at {ratio:.3g} times nominal: read it again before relying on this case."
    )


def settlements_used(girder: str, drops: Sequence[tuple[str, float, float, dt.date]]) -> list[str]:
    """Caution: measured seat settlements (support, mm, sd in mm, date) in the permanent effects."""
    if not drops:
        return []
    each = "; ".join(f'"{s}" {mm:.3g} mm (sd {sd:.2g} mm, {date})' for s, mm, sd, date in drops)
    said = f"{girder}: the permanent effects of the calibrated case include the settlements of the seats as levelled or calibrated"
    return [
        f"{said}, downward: {each}. The girder's full stiffness answers them, without relief by creep of the girder."
    ]


def settlements_left_out(girder: str, drops: Sequence[tuple[str, float]]) -> list[str]:
    """Caution: measured settlements (support, mm) that do not enter, because nothing is calibrated."""
    if not drops:
        return []
    each = "; ".join(f'"{support}" {mm:.3g} mm' for support, mm in drops)
    return [f"{girder}: seat settlements are in the record but do not enter nominal pads: {each}."]


def uplift(girder: str, reactions: Sequence[ReactionResult]) -> list[str]:
    """Cautions on supports that lift, or would under factored loads."""
    said = []
    for row in reactions:
        low = row.calibrated_factored_min_kN
        plain = row.calibrated_permanent_kN + row.calibrated_live_min_kN
        if row.calibrated_permanent_kN < 0.0:
            said.append(
                f'{girder}: uplift at "{row.support}" under permanent load alone ({row.calibrated_permanent_kN:.3g} kN): the '
                "pad would leave its seat, and this linear girder no longer holds; its figures are not to be used there."
            )
        elif plain < 0.0:
            said.append(
                f'{girder}: uplift at "{row.support}" as live load passes ({plain:.3g} kN): the pad would leave its seat, and '
                "this linear girder no longer holds for those positions."
            )
        elif low < 0.0:
            said.append(
                f'{girder}: uplift at "{row.support}" under factored loads ({low:.3g} kN); unfactored it keeps {plain:.3g} kN.'
            )
    return said


def of_sections(girder: str, sections: Sequence[SectionResult]) -> list[str]:
    """Cautions on rows that are over, may be over, or cannot be judged."""
    said = []
    blind: dict[str, list[str]] = {}
    for row in sections:
        name = f"{girder}: {section_name(row.effect, row.span, row.support)}"
        case = row.calibrated
        if case.utilisation is None:
            blind.setdefault(row.effect, []).append(f"{case.x_m:.4g} m")
            continue
        if case.utilisation > 1.0:
            said.append(f"{name} is over its factored capacity: utilisation {case.utilisation:.3g}.")
        elif case.probability_over_1 is not None and case.probability_over_1 >= 0.05:
            said.append(
                f"{name} may be over its factored capacity: probability {case.probability_over_1:.0%}."
            )
        kinder = row.unyielding.utilisation
        if kinder is not None and case.utilisation < kinder - 0.05:
            said.append(
                f"{name}: the measured supports relieve it (utilisation {case.utilisation:.3g}, {kinder:.3g} on unyielding "
                "supports); such relief can go when pads stiffen, settle or are replaced: do not bank it."
            )
    for effect, where in blind.items():
        said.append(
            f"{girder}: {effect} not determined where it governs at {', '.join(dict.fromkeys(where))}: the section there has no "
            f"{effect} capacity in the bridge file."
        )
    return said


def of_rivals(girder: str, shown: GirderAssessment) -> list[str]:
    """Caution: sections that a close rival explanation uses more than the calibration."""
    worse = [
        (row.calibrated.worst_rival_utilisation - row.calibrated.utilisation, row)
        for row in shown.sections
        if row.calibrated.utilisation is not None
        and row.calibrated.worst_rival_utilisation is not None
        and row.calibrated.used_more_by_rival
    ]
    if not worse:
        return []
    _, row = max(worse, key=lambda pair: pair[0])
    case = row.calibrated
    apart = {rival.name: rival.told_apart_by for rival in shown.rivals}.get(case.worst_rival or "")
    decide = f" This would decide: {apart}." if apart else ""
    more = f" ({len(worse)} rows in all are used more by a rival)" if len(worse) > 1 else ""
    name = section_name(row.effect, row.span, row.support)
    said = (
        f"{girder}: explained by {case.worst_rival}, which the readings bear as well, {name} would be used "
        f"{case.worst_rival_utilisation:.3g} and not {case.utilisation:.3g}{more}.{decide}"
    )
    return [said]


def section_name(effect: str, span: int | None, support: str | None) -> str:
    """Name a row in words."""
    if effect == "sagging":
        return f"sagging in span {span}"
    if effect == "hogging":
        return f'hogging at "{support}"'
    return f'shear in span {span} at "{support}"'


def no_live(bridge: str) -> str:
    """Caution: nothing to assess for."""
    return f"{bridge}: the bridge file names no live load: utilisations are of permanent load alone."


_SHORT_TERM = "Permanent effects use the pads' short-term stiffness; creep of the pads under permanent load is not in them."


def permanent_stiffness(creeps: Sequence[bool]) -> list[str]:
    """Caution on creep of the pads; `creeps` says of each girder whether its sustained ratio is in its figures."""
    if not creeps or not any(creeps):
        return [_SHORT_TERM]
    return (
        []
        if all(creeps)
        else [f"Where no sustained ratio was fitted: {_SHORT_TERM[0].lower()}{_SHORT_TERM[1:]}"]
    )


# trend -------------------------------------------------------------------------------------------


def doubtful(girder: str, date: dt.date, suspects: int, misfit: bool) -> str:
    """Caution: a visit whose fit is in doubt is among the points."""
    why = f"{suspects} suspect reading{'s' if suspects > 1 else ''}" if suspects else ""
    why = " and ".join(part for part in (why, "a misfit" if misfit else "") if part)
    return f"{girder}: the visit of {date} has {why} still in its fit; its stiffnesses may be off, and the rates with them."


def one_visit(girder: str) -> str:
    """Caution: no rate."""
    return f"{girder}: one calibrated visit gives no rate of change; nothing is carried forward."


def two_visits(girder: str) -> str:
    """Caution: a rate from two visits."""
    return f"{girder}: the rates rest on two visits only: their intervals are wide, and a slip in either visit shows as a change."


def rate_untold(girder: str, support: str) -> str:
    """Caution: no rate for a pad."""
    return f'{girder}: rate of the pad at "{support}" not determined: fewer than two visits tell this pad well enough.'


def scattered(girder: str, support: str, ratio: float) -> str:
    """Caution: visits that disagree with a line."""
    return (
        f'{girder}: the pad at "{support}" does not follow a straight line within its intervals (they were widened '
        f"{ratio:.2g} times): think of a step between two visits, a bad reading, or temperature."
    )


def jump(girder: str, support: str, change: float, first: dt.date, second: dt.date) -> str:
    """Caution: a change between two visits that is larger than their intervals."""
    way = "stiffer" if change > 0.0 else "softer"
    return (
        f'{girder}: between {first} and {second} the pad at "{support}" became {abs(change):.0%} {way}, more than the '
        "intervals of the two visits allow: look at this pad."
    )


def mixed_temperatures(dates: Sequence[dt.date], supports: Sequence[str]) -> str:
    """Caution: visits at very different temperatures, uncorrected."""
    days = ", ".join(date.isoformat() for date in dates)
    pads = ", ".join(f'"{support}"' for support in supports)
    return (
        f"Visits at pad temperatures more than {_FAR:.0f} K from {REFERENCE_TEMPERATURE:.0f} degC or unknown ({days}) are compared without "
        f"correction for pads that have no temperature_coefficient ({pads}): a cold visit reads as stiffer, and an error of 0.5 % for each K "
        "from the visits' mean is allowed for."
    )


def far_extrapolation(limit: dt.date) -> str:
    """Caution: dates beyond twice the span of the visits."""
    return f"Dates after {limit} lie further ahead than twice the span of the visits: read them as a direction, not a date."


def seat_moves(girder: str, support: str, rate: float, low: float, high: float) -> str:
    """Caution: a seat that moves on (mm a year)."""
    return (
        f'{girder}: the seat at "{support}" moves by {rate:+.2g} mm a year ({low:+.2g} to {high:+.2g}, downward positive) and is '
        "carried on at that rate; find out why it moves, because the ground may not keep to a line."
    )


def seats_without_rate(girder: str, supports: Sequence[str]) -> list[str]:
    """Caution: seats read once."""
    if not supports:
        return []
    names = ", ".join(f'"{support}"' for support in supports)
    return [
        f"{girder}: the seat level at {names} was read on one visit only: no rate; it is held at that level."
    ]


def seats_not_read(girder: str, supports: Sequence[str], last: dt.date) -> list[str]:
    """Caution: seats that were never levelled."""
    if not supports:
        return []
    names = ", ".join(f'"{support}"' for support in supports)
    return [
        f"{girder}: no seat level is in the record for {names} up to {last}: settlement there is unknown and not in these figures."
    ]


def seats_old(girder: str, supports: Sequence[str], date: dt.date, newest: dt.date) -> list[str]:
    """Caution: seat levels that are older than the visit that is assessed."""
    if not supports:
        return []
    names = ", ".join(f'"{support}"' for support in supports)
    return [
        f"{girder}: the seat level at {names} is of {date}, not of the visit of {newest}: what has moved since is not in these figures."
    ]


def seat_turned(
    girder: str, support: str, before: float, after: float, first: dt.date, second: dt.date
) -> str:
    """Caution: a seat that rose between two visits by more than its levels allow (mm)."""
    return (
        f'{girder}: the seat at "{support}" stands {after:.3g} mm down on {second} and stood {before:.3g} mm down on {first}: a seat '
        "seldom rises; check the datum, the benchmark and the sign before relying on it."
    )


def datum_changed(first: str, second: str, date: dt.date) -> str:
    """Caution: the levels' datum has another name."""
    return (
        f'The levels of {date} have another datum ("{second}") than those before ("{first}"): settlements are compared as if '
        "both were one."
    )


def resistance_above_one(factor: float) -> str:
    """Caution: a resistance factor that raises capacities."""
    return (
        f"The resistance factor {factor:g} multiplies the capacities and raises them; a partial factor that divides them is to be "
        f"written as {1.0 / factor:.3g}."
    )


def overdue(date: dt.date) -> str:
    """Caution: the next visit is due or overdue."""
    return f"The next visit was due by {date}: what is shown is of the last visit, and the bridge's present state is unknown."


def assumed_interval(years: float) -> str:
    """Caution: no interval given by the owner."""
    return f"The bridge file gives no visit_interval; {years:g} years between visits are assumed (common practice, no source)."


def high_chance(name: str, probability: float) -> str:
    """Caution: chance of being over although the median is within."""
    return (
        f"{name}: the chance of being over 1 already is {probability:.0%}, although the estimate is below it."
    )


def over_now(name: str, utilisation: float) -> str:
    """Caution: over today."""
    return f"{name} is over its factored capacity today: utilisation {utilisation:.3g}."


def is_far_from_reference(temperature: float | None) -> bool:
    """Tell whether a visit's temperature is unknown or far from the reference."""
    return temperature is None or abs(temperature - REFERENCE_TEMPERATURE) > _FAR
