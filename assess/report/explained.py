"""What stands beside the stiffnesses of a fit: seats, other unknowns, what moved, explanations, readings in doubt."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field

from assess.report import words
from assess.results import CauseResult, GirderCalibration, RivalResult, SettlementResult

ROBUST_OFF = 1.0  # standard deviations by which a robust fit must move a pad to be spoken of


@dataclass(frozen=True, kw_only=True)
class Table:
    """A table with its caption; every cell in words."""

    caption: str
    heads: list[str]
    rows: list[list[str]]


@dataclass(frozen=True, kw_only=True)
class Explained:
    """How the fit was made, its tables, and readings to look at; empty where there are none."""

    asked: str = ""
    tables: list[Table] = field(default_factory=list)
    explanations: Table | None = None
    deciding: list[str] = field(default_factory=list)
    in_doubt: list[str] = field(default_factory=list)


def explained(fit: GirderCalibration, names: Iterable[str]) -> Explained:
    """Gather all of it for one girder; `names` are those of the supports, printed without quotes."""
    of = f"of girder {fit.girder}"
    tables = [
        Table(
            caption=f"Seats {of}: settlement since the datum",
            heads=[
                "Seat at",
                "Settlement (95 % interval)",
                "Told by",
                "Out of the line of the end seats: what bends the girder (95 % interval)",
            ],
            rows=seat_rows(fit),
        ),
        Table(
            caption=f"What else was asked of the readings {of}",
            heads=["Unknown", "Value (95 % interval)", "Told by"],
            rows=other_rows(fit),
        ),
        Table(
            caption=f"What moved at each pad {of}",
            heads=[
                "Pad at",
                "Moved",
                "How far off the readings would be, had the seat not moved",
                "The same, were the pad within its nominal scatter",
            ],
            rows=cause_rows(fit),
        ),
    ]
    ranked = Table(
        caption=f"Explanations of the readings {of}, the best first",
        heads=["Explanation", "AICc", "Chi-square", "Unknowns told", "Standing"],
        rows=[[words.prose(cell, names) for cell in row] for row in rival_rows(fit)],
    )
    return Explained(
        asked=asked(fit),
        tables=[table for table in tables if table.rows],
        explanations=ranked if ranked.rows else None,
        deciding=[words.prose(one, names) for one in deciding(fit)],
        in_doubt=in_doubt(fit),
    )


def asked(fit: GirderCalibration) -> str:
    """Say what was asked of the readings, by whom, and what the draws behind the bands are worth."""
    if not fit.pads:
        return ""
    told = f"Asked for by {fit.unknowns_from}: {words.listed(fit.unknowns)}. " if fit.unknowns else ""
    if fit.effective_sample_size is None:
        return told + "Bands and probabilities come from the normal picture of this fit."
    how = {
        "weighted": "weighed draws of the posterior",
        "ensemble": "draws of the posterior by an ensemble sampler",
    }.get(fit.draws_from, "draws of the normal picture, which fits the posterior")
    return told + (
        f"Bands and probabilities come from {how}, worth {words.number(fit.effective_sample_size)} independent ones."
    )


def seat_rows(fit: GirderCalibration) -> list[list[str]]:
    """Return how far each seat has dropped in all, and out of the line through the two end seats."""
    return [
        [
            one.support,
            words.interval(one.value, one.low95, one.high95, "mm"),
            words.told_by(one.data_share),
            _out_of_line(one),
        ]
        for one in fit.settlements_mm
    ]


def _out_of_line(one: SettlementResult) -> str:
    if one.moment_relevant_low95 == one.moment_relevant_high95 == 0.0:
        return "end seat: the line runs through it"
    told = words.interval(one.moment_relevant, one.moment_relevant_low95, one.moment_relevant_high95, "mm")
    return (
        told
        if one.moment_relevant_data_share >= 0.5
        else f"{told}; {words.told_by(one.moment_relevant_data_share)}"
    )


def other_rows(fit: GirderCalibration) -> list[list[str]]:
    """Return the unknowns beside pads and seats: sustained ratio, girder stiffness, datum, load share, temperature."""
    return [
        [
            words.plain(one.name),
            words.interval(one.value, one.low95, one.high95, one.unit),
            words.told_by(one.data_share),
        ]
        for one in fit.others
    ]


def cause_rows(fit: GirderCalibration) -> list[list[str]]:
    """Return what moved at each pad; nothing where no seat was asked for."""
    if not fit.settlements_mm:
        return []
    return [
        [one.support, one.cause, _off(one.off_if_seat_still_sd), _off(one.off_if_pad_nominal_sd)]
        for one in sorted(fit.causes, key=lambda one: _place(fit, one))
    ]


def _place(fit: GirderCalibration, one: CauseResult) -> int:
    order = [pad.support for pad in fit.pads]
    return order.index(one.support) if one.support in order else len(order)


def _off(sd: float | None) -> str:
    return words.quantity(sd, "sd", "nothing was read of this seat")


def rival_rows(fit: GirderCalibration) -> list[list[str]]:
    """Return the explanations, the best first, and how each stands."""
    best = min((one.aicc for one in fit.rivals if one.aicc is not None), default=None)
    return [
        [
            words.plain(one.name),
            words.quantity(one.aicc, "", "too few readings"),
            words.number(one.chi_square),
            words.number(one.effective_unknowns),
            standing(fit, one, best),
        ]
        for one in ranked(fit.rivals)
    ]


def ranked(rivals: Iterable[RivalResult]) -> list[RivalResult]:
    """Return explanations by AICc, those without one last."""
    return sorted(rivals, key=lambda one: float("inf") if one.aicc is None else one.aicc)


def standing(fit: GirderCalibration, one: RivalResult, best: float | None) -> str:
    """Word how an explanation stands beside the best and beside the calibration."""
    said = ["calibrated"] if one.name == fit.calibrated_as else []
    if not one.told:
        said.append("not told by the readings")
    elif one.within_2:
        said.append("within 2 of the best")
    elif one.carried:
        said.append("within 2 by AIC")
    elif one.aicc is not None and best is not None:
        said.append(f"{words.number(one.aicc - best)} above the best")
    if one.simpler and one.carried:
        said.append("simpler")
    return ", ".join(said) or words.not_determined("too few readings to rank it")


def deciding(fit: GirderCalibration) -> list[str]:
    """Name the reading that would tell each close explanation from the calibration."""
    close = [one for one in ranked(fit.rivals) if one.carried and one.told_apart_by]
    return [
        f"This reading would decide between the calibration and the explanation by {one.name}: {one.told_apart_by} "
        "(the first as calibrated)."
        for one in close
    ]


def in_doubt(fit: GirderCalibration) -> list[str]:
    """Say which readings to look at again, which were left out by hand, and what a robust fit would move."""
    said = []
    for one in fit.proposed_removals:
        alike = f" (or {words.listed(one.alike)}: they cannot be told apart)" if one.alike else ""
        said.append(
            f"Look again at {one.reading}{alike}: {words.number(one.standardised_residual)} standard deviations off; "
            f"without it the p value would be {words.quantity(one.p_value, '', 'no degrees of freedom are left')}."
        )
    said += [f"Left out by hand: {one.reading}: {one.reason}." for one in fit.left_out]
    for pad in fit.robust:
        if abs(pad.off_by_sd) > ROBUST_OFF:
            value = words.quantity(pad.stiffness_kN_per_m / 1000.0, "kN/mm")
            said.append(
                f"A robust fit, which gross errors pull less, puts the pad at {pad.support} at {value}, "
                f"{words.signed(pad.off_by_sd)} standard deviations from the calibration."
            )
    return [words.plain(one) for one in said]
