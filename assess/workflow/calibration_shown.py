"""A girder's fit as it is shown."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Z95, Fit, Posterior, minimal_detectable
from assess.results import (
    CorrelationResult,
    GirderCalibration,
    LeftOut,
    PadResult,
    ProposedRemoval,
    ReadingResult,
    RobustPad,
    SettlementResult,
    UnknownResult,
)
from assess.workflow.explaining import Explained
from assess.workflow.fitting import Fitting
from assess.workflow.pads import cold_shift, corrected
from assess.workflow.status import known
from assess.workflow.unknowns import Setup
from db.documents import ReadingDoc
from db.quantities import to_unit

Floats = NDArray[np.float64]

MM = 1e3
_UNITS = {"datum": "mm", "shared": "mm", "seats": "mm", "gradient": "K"}
_SHOWN_APART = ("pads", "settlements", "as built")


def shown_girder(
    fitting: Fitting,
    *,
    intervals: tuple[Floats, Floats, NDArray[np.bool_]] | None,
    drawn: Posterior | None,
    explained: Explained,
    robust: list[RobustPad],
    proposals: list[ProposedRemoval],
) -> GirderCalibration:
    """A girder's fit with all that is said beside it; `intervals` are low and high (size,) of every unknown, 95 %."""
    setup, found = fitting.setup, fitting.found
    rows = _readings(fitting)
    by_hand = [LeftOut(reading=key, reason=reason) for key, reason in fitting.by_hand]
    if setup is None or found is None or intervals is None:
        return GirderCalibration(
            girder=fitting.model.doc.id,
            pads=[],
            chi_square=0.0,
            degrees_of_freedom=0,
            p_value=None,
            left_out=by_hand,
            readings=rows,
        )
    others = _others(setup, found, intervals)
    return GirderCalibration(
        girder=fitting.model.doc.id,
        pads=_pads(fitting, found, intervals),
        settlements_mm=_settlements(setup, found, intervals),
        stiffness_factor=_value(others, "girder stiffness"),
        sustained_ratio=_value(others, "sustained ratio"),
        unknowns=list(fitting.asked.names),
        unknowns_from=fitting.asked.source,
        calibrated_as=explained.own,
        others=others,
        chi_square=found.chi_square,
        degrees_of_freedom=found.degrees_of_freedom,
        p_value=known(found.p_value),
        correlations=_correlations(setup, found),
        singular_values=[float(value) for value in found.singular_values],
        rivals=explained.rivals,
        causes=explained.causes,
        robust=robust,
        proposed_removals=proposals,
        effective_sample_size=drawn.effective if drawn is not None and drawn.converged else None,
        draws_from=drawn.kind if drawn is not None and drawn.converged else "normal",
        left_out=by_hand,
        readings=rows,
    )


def _pads(
    fitting: Fitting, found: Fit, intervals: tuple[Floats, Floats, NDArray[np.bool_]]
) -> list[PadResult]:
    model = fitting.model
    low, high, profiled = intervals
    estimate, nominal = np.exp(found.log_stiffness), model.nominal_stiffness
    cold = cold_shift(model.doc, list(model.pads), fitting.visit.pad_temperature)
    untold = {support for support, _ in cold.outside}
    read = fitting.visit.pad_temperature is not None
    return [
        PadResult(
            support=support,
            stiffness_kN_per_m=float(estimate[i]),
            low95_kN_per_m=float(np.exp(low[i])),
            high95_kN_per_m=known(float(np.exp(high[i]))),
            nominal_kN_per_m=float(nominal[i]),
            ratio_to_nominal=float(estimate[i] / nominal[i]),
            data_share=float(found.data_share[i]),
            interval_from="profile" if profiled[i] else "normal",
            stiffness_20degC_kN_per_m=(
                float(estimate[i] * np.exp(-cold.shift[i]))
                if read and support not in untold and corrected(model.doc.supports[model.pads[i]])
                else None
            ),
        )
        for i, support in enumerate(model.pad_ids)
    ]


def _settlements(
    setup: Setup, found: Fit, intervals: tuple[Floats, Floats, NDArray[np.bool_]]
) -> list[SettlementResult]:
    places = list(setup.layout.places("settlements"))
    if not places:
        return []
    low, high, _ = intervals
    seats = [setup.layout.entries[j].index for j in places]
    bend = out_of_line(setup.model.condensed.positions)[
        np.ix_(seats, seats)
    ]  # seats not asked of stand still
    drops, joint = found.theta[places], found.joint[np.ix_(places, places)]
    relevant = bend @ drops
    sd = np.sqrt(np.clip(np.diag(bend @ joint @ bend.T), 0.0, None))
    believed = np.broadcast_to(found.believed[places], bend.shape)  # infinite where nothing is believed
    before = np.where(bend != 0.0, bend**2 * np.where(bend != 0.0, believed, 0.0), 0.0).sum(axis=1)
    share = np.where(before > 0.0, 1.0 - sd**2 / np.where(before > 0.0, before, 1.0), 1.0)
    return [
        SettlementResult(
            support=setup.model.doc.supports[setup.layout.entries[j].index].id,
            value=MM * float(found.theta[j]),
            low95=MM * float(low[j]),
            high95=MM * float(high[j]),
            data_share=float(found.shares[j]),
            moment_relevant=MM * float(relevant[i]),
            moment_relevant_low95=MM * float(relevant[i] - Z95 * sd[i]),
            moment_relevant_high95=MM * float(relevant[i] + Z95 * sd[i]),
            moment_relevant_data_share=float(np.clip(share[i], 0.0, 1.0)),
        )
        for i, j in enumerate(places)
    ]


def out_of_line(x: Floats) -> Floats:
    """Matrix (n, n) that turns seat drops into their distances from the line through the two end seats.

    A common drop and a tilt are in the null space of the girder: they bend nothing, and no level off a doubtful
    datum tells them.
    """
    share = (x - x[0]) / (x[-1] - x[0])
    bend = np.eye(x.size)
    bend[:, 0] -= 1.0 - share
    bend[:, -1] -= share
    return bend


def _others(
    setup: Setup, found: Fit, intervals: tuple[Floats, Floats, NDArray[np.bool_]]
) -> list[UnknownResult]:
    rows = []
    for j, entry in enumerate(setup.layout.entries):
        if entry.block in _SHOWN_APART:
            continue
        unit = _UNITS.get(entry.block, "")
        values = np.array([found.theta[j], intervals[0][j], intervals[1][j]])
        values = np.exp(values) if unit == "" else values * (MM if unit == "mm" else 1.0)
        rows.append(
            UnknownResult(
                name=setup.label(entry),
                value=float(values[0]),
                low95=float(values[1]),
                high95=float(values[2]),
                data_share=float(found.shares[j]),
                unit=unit,
            )
        )
    return rows


def _value(others: list[UnknownResult], name: str) -> float | None:
    return next((one.value for one in others if one.name == name), None)


def _correlations(setup: Setup, found: Fit) -> list[CorrelationResult]:
    sd = np.sqrt(np.diag(found.joint))
    matrix = found.joint / np.outer(sd, sd)
    first, second = np.triu_indices(sd.size, 1)
    order = np.argsort(-np.abs(matrix[first, second]), kind="stable")
    names = [setup.label(entry) for entry in setup.layout.entries]
    return [
        CorrelationResult(a=names[first[p]], b=names[second[p]], r=float(matrix[first[p], second[p]]))
        for p in order
    ]


def _readings(fitting: Fitting) -> list[ReadingResult]:
    place = {id(reading): j for j, reading in enumerate(fitting.fitted)}
    detectable = None
    if fitting.setup is not None and fitting.found is not None:
        detectable = minimal_detectable(fitting.setup.equations.sd, fitting.found.redundancy)
    return [
        _reading(fitting, reading, place.get(id(reading)), detectable, fitting.left_out.get(i))
        for i, reading in enumerate(fitting.readings)
    ]


def _reading(
    fitting: Fitting, reading: ReadingDoc, j: int | None, detectable: Floats | None, reason: str | None
) -> ReadingResult:
    """A reading as it stands in the fit; `j` is its place there, None if it was left out."""
    row = ReadingResult(
        state=reading.state,
        quantity=reading.quantity,
        support=reading.support,
        at_m=reading.at,
        observed=to_unit(reading.value, reading.unit),
        predicted=None,
        unit=reading.unit,
        sd=to_unit(reading.sd, reading.unit),
        standardised_residual=None,
        suspect=False,
        left_out=reason,
    )
    found = fitting.found
    if found is None or j is None or detectable is None:
        return row
    return replace(
        row,
        predicted=to_unit(float(found.predicted[j]), reading.unit),
        standardised_residual=known(float(found.standardised[j])),
        suspect=bool(found.suspect[j]),
        redundancy=float(found.redundancy[j]),
        minimal_detectable=_in_unit(float(detectable[j]), reading.unit),
    )


def _in_unit(value: float, unit: str) -> float | None:
    return to_unit(value, unit) if np.isfinite(value) else None
