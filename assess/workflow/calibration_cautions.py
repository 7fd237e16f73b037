"""Cautions on a calibration: what the readings do not tell, and what would be a good fit for the wrong reason."""

from __future__ import annotations

from collections.abc import Sequence

from assess.calibrate import PAD_AND_SEAT, PAD_AT_LEAST, SUSPECT, UNTOLD, Fit
from assess.results import GirderCalibration
from assess.workflow.cautions import MISFIT, REFERENCE_TEMPERATURE, TOLD, WELL_TOLD, is_far_from_reference
from assess.workflow.fitting import Fitting
from db.documents import ReadingDoc, VisitDoc

STRONG = 0.9  # correlation past which two unknowns cannot be told apart by these readings
_THREEFOLD = 3.0
_FEW_DRAWS = 400.0


def of_fit(shown: GirderCalibration, fitting: Fitting) -> list[str]:
    """Cautions on one girder's fit."""
    found = fitting.found
    if found is None:
        return []
    said = [*_of_pads(shown), *_of_seats(shown), *_of_rivals(shown), *_of_causes(shown)]
    said += _of_misfit(shown, fitting.fitted, found)
    said += _of_numbers(shown)
    said += [
        f"{shown.girder}: left out of the fit by hand: {one.reading} ({one.reason})."
        for one in shown.left_out
    ]
    return said


def _of_pads(shown: GirderCalibration) -> list[str]:
    said = []
    for pad in shown.pads:
        if pad.data_share < TOLD:
            said.append(
                f'{shown.girder}: the pad at "{pad.support}" is told by the assumption, not by the readings '
                f"(data share {pad.data_share:.0%}); read its compression under a load near it."
            )
        if not 1.0 / _THREEFOLD <= pad.ratio_to_nominal <= _THREEFOLD:
            way = "stiffer" if pad.ratio_to_nominal > 1.0 else "softer"
            said.append(
                f'{shown.girder}: the pad at "{pad.support}" comes out {pad.ratio_to_nominal:.3g} times nominal, more than '
                f"threefold {way}: check the reading, the nominal value and the pad itself before relying on it."
            )
    for one in shown.others:
        if one.name == "girder stiffness" and one.value > 1.0:
            said.append(
                f"{shown.girder}: the girder answers the test {one.value:.3g} times as stiff as its sections say; what makes it so "
                "(deck, parapet, locked joint) need not be there at the limit, and no capacity is raised for it."
            )
        if one.data_share < TOLD and not one.name.startswith("benchmark "):
            said.append(
                f"{shown.girder}: {one.name} is told by the assumption, not by the readings (data share {one.data_share:.0%})."
            )
    return said


def _of_seats(shown: GirderCalibration) -> list[str]:
    blind = [s for s in shown.settlements_mm if s.data_share < TOLD]
    if not blind:
        return []
    between = shown.settlements_mm[1:-1]  # the end seats make the line
    bent = all(s.moment_relevant_data_share >= WELL_TOLD for s in between) and between
    names = ", ".join(f'"{s.support}"' for s in blind)
    said = f"{shown.girder}: how far the seats at {names} have dropped in all is told by the assumption, not by the readings"
    if bent:
        said += "; what bends the girder, the distances of the seats between from the line through the end seats, is told"
    return [f"{said}."]


def _of_rivals(shown: GirderCalibration) -> list[str]:
    own = next((one for one in shown.rivals if one.name == shown.calibrated_as), None)
    close = [one for one in shown.rivals if one.carried and not one.simpler and one is not own]
    said = []
    for one in close:
        word = "as well as" if own is None or own.within_2 else "better than"
        decide = f"; this would decide: {one.told_apart_by}" if one.told_apart_by else ""
        ranks = " (by AIC; AICc holds more against a second explanation of few readings)"
        if one.within_2 and own is not None and None not in (own.aicc, one.aicc):
            ranks = f" (AICc {one.aicc:.1f} against {own.aicc:.1f})"
        said.append(
            f"{shown.girder}: {one.name} would explain the readings {word} the calibration{ranks}, and the assessment carries "
            f"it along{decide}."
        )
    if shown.rivals and all(one.aicc is None for one in shown.rivals):
        said.append(
            f"{shown.girder}: too few readings to rank rival explanations; a good fit here may be one for the wrong reason."
        )
    if not shown.rivals:
        said.append(f"{shown.girder}: rival explanations could not be fitted; none was compared.")
    return said


def _of_causes(shown: GirderCalibration) -> list[str]:
    if not shown.settlements_mm:
        return []
    untold = [f'"{one.support}"' for one in shown.causes if one.cause in (UNTOLD, PAD_AT_LEAST)]
    both = [f'"{one.support}"' for one in shown.causes if one.cause == PAD_AND_SEAT]
    said = []
    if untold and any(one.name == "datum shift" for one in shown.others):
        said.append(
            f"{shown.girder}: with an unknown datum it cannot be told which seats fell and which rose, nor so whether pad or seat "
            f"has moved at {', '.join(untold)}; what bends the girder, the distances of the seats from the line through the end "
            "seats, is told without the datum."
        )
    elif untold:
        said.append(
            f"{shown.girder}: it cannot be told from these readings whether pad or seat has moved at {', '.join(untold)}: read the "
            "seat's level and the pad's gap together."
        )
    if both:
        said.append(f"{shown.girder}: both the pad has changed and its seat has moved at {', '.join(both)}.")
    return said


def _of_misfit(shown: GirderCalibration, readings: Sequence[ReadingDoc], found: Fit) -> list[str]:
    said = []
    girder = shown.girder
    suspects = [
        (abs(found.standardised[j]), reading) for j, reading in enumerate(readings) if found.suspect[j]
    ]
    if suspects and shown.degrees_of_freedom == 0:
        worst, reading = max(suspects, key=lambda pair: pair[0])
        said.append(
            f"{girder}: {_named(reading)} stands {worst:.1f} standard deviations off what is believed of the pads, and no other "
            "reading checks it: the pad may have changed, or the reading may be wrong. Read it again, and read more beside it."
        )
    elif suspects:
        worst, reading = max(suspects, key=lambda pair: pair[0])
        others = (
            f"; {len(suspects) - 1} more pass it too, perhaps because of this one"
            if len(suspects) > 1
            else ""
        )
        said.append(
            f"{girder}: suspect reading: {_named(reading)} stands {worst:.1f} standard deviations off "
            f"(limit {SUSPECT}){others}. It is still in the fit, which it biases: repeat it, or find the slip."
        )
    if shown.degrees_of_freedom == 0:
        said.append(
            f"{girder}: no reading is left over to check the fit: an error in any of them goes straight into a stiffness."
        )
    elif shown.p_value is not None and shown.p_value < MISFIT:
        said.append(
            f"{girder}: misfit: the readings do not agree with this girder within their standard deviations "
            f"(chi-square {shown.chi_square:.3g} on {shown.degrees_of_freedom} degrees of freedom, p {shown.p_value:.2g}); "
            "the intervals are then too narrow, and something else may be moving (seats, girder stiffness, temperature)."
        )
    unchecked = [reading for j, reading in enumerate(readings) if found.redundancy[j] < 0.05]
    if unchecked and shown.degrees_of_freedom:
        names = "; ".join(_named(reading) for reading in unchecked[:3])
        more = f" and {len(unchecked) - 3} more" if len(unchecked) > 3 else ""
        said.append(
            f"{girder}: hardly checked by any other reading, so that a slip would not show: {names}{more}."
        )
    return said


def _of_numbers(shown: GirderCalibration) -> list[str]:
    said = []
    tied = [one for one in shown.correlations if abs(one.r) > STRONG]
    if tied:
        pairs = "; ".join(f"{one.a} and {one.b} ({one.r:.2f})" for one in tied[:4])
        more = f" and {len(tied) - 4} more pairs" if len(tied) > 4 else ""
        said.append(f"{shown.girder}: these readings hardly tell apart: {pairs}{more}.")
    off = [one for one in shown.robust if abs(one.off_by_sd) > 1.0]
    if off:
        pads = "; ".join(f'"{one.support}" by {one.off_by_sd:+.1f}' for one in off)
        said.append(
            f"{shown.girder}: a robust fit, which gross errors pull less, moves the pads by more than a standard deviation: {pads}. "
            "Some reading pulls hard: look at the suspects before relying on these stiffnesses."
        )
    if shown.pads and shown.effective_sample_size is None:
        said.append(
            f"{shown.girder}: bands and probabilities of this fit come from its normal approximation; draws of the whole "
            "posterior could not be made (without the prior nothing bounds them), so that their tails may be wrong."
        )
    if shown.effective_sample_size is not None and shown.effective_sample_size < _FEW_DRAWS:
        said.append(
            f"{shown.girder}: the draws behind bands and probabilities are worth only {shown.effective_sample_size:.0f} "
            "independent ones: their tails are rough."
        )
    return said


def of_visit(visit: VisitDoc) -> list[str]:
    """Cautions on a visit as a whole."""
    said = []
    moved = [
        r for r in visit.readings if r.quantity == "settlement" and visit.state(r.state).vehicle is not None
    ]
    for r in moved:
        said.append(
            f'{r.girder}: the seat "{r.support}" was read to move in test state {r.state}; it is fitted as a movement of '
            "that state only. If the ground gives under a test load, ask why before testing again."
        )
    t = visit.pad_temperature
    if t is None:
        said.append(
            "No pad temperature was recorded; cold rubber is stiffer, and this visit cannot be corrected for it."
        )
    elif is_far_from_reference(t):
        said.append(
            f"The pads were at {t:.3g} degC; the stiffnesses hold at that temperature and are not brought to "
            f"{REFERENCE_TEMPERATURE:.0f} degC. Cold pads read stiffer than they are in summer."
        )
    return said


def _named(reading: ReadingDoc) -> str:
    where = f'at "{reading.support}"' if reading.support is not None else f"at {reading.at:.4g} m"
    remark = f" ({reading.remark})" if reading.remark else ""
    return f"{reading.state} {reading.quantity} {where}, {reading.value_entered}{remark}"
