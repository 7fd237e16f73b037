"""Calibrate visits and keep what comes out."""

from __future__ import annotations

import datetime as dt
from dataclasses import asdict, dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Z95, Fit, NotDetermined, Observation, ObservationModel, fit
from assess.results import CalibrationResult, GirderCalibration, PadResult, ReadingResult
from assess.workflow import cautions, contact_cautions, pad_cautions
from assess.workflow.building import GirderModel
from assess.workflow.lifting import Lifting, lifting_states
from assess.workflow.study import VERSION, Progress, Study, is_test, quiet, test_readings
from db.documents import ReadingDoc, VisitDoc
from db.errors import BedstoneError
from db.quantities import to_unit
from db.records import KeptResult
from db.store import open_record

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True)
class GirderFit:
    """One girder's fit in one visit, as kept: arrays in the order of `supports`."""

    girder: str
    supports: list[str]
    log_stiffness: Floats
    covariance: Floats
    information: Floats
    information_vector: Floats
    data_share: Floats

    @property
    def sd(self) -> Floats:
        """Standard deviations of ln k, (q,)."""
        return np.sqrt(np.diag(self.covariance))


@dataclass(frozen=True, kw_only=True)
class VisitFit:
    """One visit's calibration: what is shown, and the fits by girder."""

    visit: dt.date
    result: CalibrationResult
    fits: dict[str, GirderFit]

    def of(self, model: GirderModel) -> GirderFit | None:
        """The fit of a girder, if this visit calibrated it with the pads it has today."""
        found = self.fits.get(model.doc.id)
        return found if found is not None and found.supports == model.pad_ids else None


def calibrate(
    url: str,
    bridge: str,
    *,
    visit: dt.date | None = None,
    every: bool = False,
    prior: bool = True,
    progress: Progress | None = None,
) -> list[CalibrationResult]:
    """Calibrate the latest visit, one visit, or every visit with readings in test states, and keep the results."""
    tell = progress or quiet
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
        chosen, left_out = _choose(study, visit, every)
        results = []
        for i, one in enumerate(chosen):
            tell(f"calibrating {one.date.isoformat()}", i, len(chosen))
            done = calibrate_visit(study, one, prior=prior, left_out=left_out if one is chosen[-1] else [])
            if not every:
                _require_a_fit(done, one)
            record.keep(as_kept(study, done, prior=prior))
            results.append(done.result)
        tell("calibrated", len(chosen), len(chosen))
    return results


def _choose(study: Study, date: dt.date | None, every: bool) -> tuple[list[VisitDoc], list[VisitDoc]]:
    """Visits to calibrate, and visits left out of `--all` because nothing was read under a test load."""
    if not study.visits:
        raise BedstoneError(
            f"{study.bridge.id} has no visits yet", remedy="log one: bedstone visit log VISIT.toml"
        )
    if every:
        chosen = [visit for visit in study.visits if test_readings(visit)]
        left_out = [visit for visit in study.visits if not test_readings(visit)]
    else:
        chosen, left_out = [study.visits[-1] if date is None else study.visit(date)], []
    if not chosen or not test_readings(chosen[0]):
        which = "no visit" if every else f"the visit of {chosen[0].date.isoformat()} does not have"
        what = "has" if every else ""
        problem = f"{which} {what} a reading in a test state".replace("  ", " ")
        raise BedstoneError(
            f"{study.bridge.id}: {problem}, so no stiffness can be calibrated",
            remedy="log readings taken under a placed test vehicle, or choose another visit with --visit DATE",
        )
    return chosen, left_out


def calibrate_visit(
    study: Study, visit: VisitDoc, *, prior: bool, left_out: list[VisitDoc] | None = None
) -> VisitFit:
    """Calibrate every girder that was read under a test load in this visit."""
    shown: list[GirderCalibration] = []
    fits: dict[str, GirderFit] = {}
    said = []
    for girder in study.bridge.girders:
        if not test_readings(visit, girder.id):
            said.append(cautions.not_read(girder.id, visit.date))
            continue
        model = study.model(girder.id, visit.date)
        if not model.pads.size:
            said.append(cautions.no_pads(girder.id))
            continue
        readings = [r for r in visit.readings if r.girder == girder.id and is_test(visit, r.state)]
        found, lifting = _fit_in_contact(model, visit, readings, prior=prior)
        said += contact_cautions.of_states(girder.id, lifting, nothing_left=found is None)
        said += [] if model.permanent.given else [contact_cautions.unknown(girder.id)]
        shown.append(_shown(model, readings, found, lifting))
        if found is None:
            continue
        fits[girder.id] = GirderFit(
            girder=girder.id,
            supports=model.pad_ids,
            log_stiffness=found.log_stiffness,
            covariance=found.covariance,
            information=found.information,
            information_vector=found.information_vector,
            data_share=found.data_share,
        )
        said += cautions.of_fit(girder.id, shown[-1], _without(readings, lifting), found)
        said += pad_cautions.of_prior(model) if prior else []
    said += cautions.of_visit(visit)
    said += [cautions.left_out(one.date) for one in left_out or []]
    result = CalibrationResult(
        bridge=study.bridge.id,
        visit=visit.date,
        version=VERSION,
        input_digest=study.digest(visit.digest),
        girders=shown,
        cautions=[*said, *cautions.STANDING],
    )
    return VisitFit(visit=visit.date, result=result, fits=fits)


def _require_a_fit(done: VisitFit, visit: VisitDoc) -> None:
    """Refuse a visit of which no reading could be fitted because the girders leave their pads."""
    if done.fits or not done.result.girders:
        return
    girders = ", ".join(f'"{one.girder}"' for one in done.result.girders)
    states = ", ".join(dict.fromkeys(r.state for one in done.result.girders for r in one.readings))
    raise BedstoneError(
        f"no reading is left to fit: in every test state read ({states}) the girder is off a pad",
        field=f"girder {girders}, visit {visit.date.isoformat()}",
        remedy="stand the vehicle where the girder stays down; write hold_down = true at a support that is tied down",
    )


def observation_model(model: GirderModel, visit: VisitDoc, readings: list[ReadingDoc]) -> ObservationModel:
    """Observation equations of a girder's readings in test states."""
    states = [state for state in visit.states if state.vehicle is not None]
    index = {state.id: i for i, state in enumerate(states)}
    return ObservationModel(
        model.condensed,
        model.pads,
        [model.placed(state) for state in states],
        [_observation(model, index[reading.state], reading) for reading in readings],
    )


def _observation(model: GirderModel, state: int, reading: ReadingDoc) -> Observation:
    support = -1 if reading.support is None else model.doc.support_index(reading.support)
    x = reading.at if reading.at is not None else model.doc.support_positions[support]
    return Observation(
        quantity=reading.quantity,
        state=state,
        value=reading.value,
        sd=reading.sd,
        support=support,
        x=x,
        height=reading.height or 0.0,
        flexural=model.flexural_at(x),
    )


def _without(readings: list[ReadingDoc], lifting: Lifting) -> list[ReadingDoc]:
    return [reading for reading in readings if reading.state not in lifting]


def _fit_in_contact(
    model: GirderModel, visit: VisitDoc, readings: list[ReadingDoc], *, prior: bool
) -> tuple[Fit | None, Lifting]:
    """Fit the readings of the states in which the girder stays on its pads, at nominal and at fitted stiffness.

    None where no reading is left.
    """
    read = {reading.state for reading in readings}

    def opens(log_stiffness: Floats) -> Lifting:
        found = lifting_states(model, visit, log_stiffness)
        return {state: supports for state, supports in found.items() if state in read}

    lifting = opens(model.nominal)
    while kept := _without(readings, lifting):
        found = _fit(model, visit, kept, prior=prior)
        more = opens(found.log_stiffness)
        if more.keys() <= lifting.keys():
            return found, lifting
        lifting = more | lifting
    return None, lifting


def _fit(model: GirderModel, visit: VisitDoc, readings: list[ReadingDoc], *, prior: bool) -> Fit:
    equations = observation_model(model, visit, readings)
    where = f'girder "{model.doc.id}", visit {visit.date.isoformat()}'
    try:
        return fit(equations, start=model.nominal, prior=model.prior if prior else None)
    except NotDetermined as missing:
        raise _what_is_missing(model, missing, where) from missing
    except RuntimeError as failure:
        raise BedstoneError(
            str(failure), field=where, remedy="check the readings for slips of unit, sign or place"
        ) from failure


def _what_is_missing(model: GirderModel, missing: NotDetermined, where: str) -> BedstoneError:
    pads = ", ".join(f'"{model.pad_ids[i]}"' for i in missing.pads)
    counts = f"{missing.readings} readings in test states for {missing.unknowns} unknowns"
    if missing.readings < missing.unknowns:
        untold = f"; nothing tells the pad at {pads}" if pads else ""
        problem = f"{counts}: without the prior the stiffnesses are not determined{untold}"
        remedy = (
            f"add at least {missing.unknowns - missing.readings} more, best a compression at each pad; "
            "or calibrate with the prior (leave out --no-prior)"
        )
    elif missing.unbounded:
        problem = f"{counts}, but they do not bound the stiffness of the pad at {pads}"
        remedy = (
            "look for a slip of sign, unit or load state in its readings, or read it under more load; "
            "or calibrate with the prior (leave out --no-prior)"
        )
    else:
        untold = f"but they do not tell the pad at {pads}" if pads else "but they do not tell the pads apart"
        problem = f"{counts}, {untold}"
        remedy = "read its compression with the vehicle near it, or calibrate with the prior (leave out --no-prior)"
    return BedstoneError(problem, field=where, remedy=remedy)


def _shown(
    model: GirderModel, readings: list[ReadingDoc], found: Fit | None, lifting: Lifting
) -> GirderCalibration:
    place = {id(reading): j for j, reading in enumerate(_without(readings, lifting))}
    rows = [_reading(reading, found, place.get(id(reading))) for reading in readings]
    return GirderCalibration(
        girder=model.doc.id,
        pads=[] if found is None else _pads(model, found),
        chi_square=0.0 if found is None else found.chi_square,
        degrees_of_freedom=0 if found is None else found.degrees_of_freedom,
        p_value=None if found is None else _finite(found.p_value),
        readings=rows,
    )


def _pads(model: GirderModel, found: Fit) -> list[PadResult]:
    sd = found.sd
    low, high = np.exp(found.log_stiffness - Z95 * sd), np.exp(found.log_stiffness + Z95 * sd)
    estimate = np.exp(found.log_stiffness)
    nominal = model.nominal_stiffness
    return [
        PadResult(
            support=support,
            stiffness_kN_per_m=float(estimate[i]),
            low95_kN_per_m=float(low[i]),
            high95_kN_per_m=float(high[i]),
            nominal_kN_per_m=float(nominal[i]),
            ratio_to_nominal=float(estimate[i] / nominal[i]),
            data_share=float(found.data_share[i]),
        )
        for i, support in enumerate(model.pad_ids)
    ]


def _reading(reading: ReadingDoc, found: Fit | None, place: int | None) -> ReadingResult:
    """A reading beside the fit; `place` is where it stands there, None if it was left out."""
    beside = None if found is None or place is None else (found.predicted, found.standardised, found.suspect)
    return ReadingResult(
        state=reading.state,
        quantity=reading.quantity,
        support=reading.support,
        at_m=reading.at,
        observed=to_unit(reading.value, reading.unit),
        predicted=None if beside is None else to_unit(float(beside[0][place]), reading.unit),
        unit=reading.unit,
        sd=to_unit(reading.sd, reading.unit),
        standardised_residual=None if beside is None else _finite(float(beside[1][place])),
        suspect=beside is not None and bool(beside[2][place]),
    )


def _finite(value: float) -> float | None:
    return float(value) if np.isfinite(value) else None


# keeping -----------------------------------------------------------------------------------------


def as_kept(study: Study, done: VisitFit, *, prior: bool) -> KeptResult:
    """A calibration as the record keeps it: what was shown, and the parameters with their covariance."""
    shown = asdict(done.result)
    shown["visit"] = done.visit.isoformat()
    fits = {
        name: {
            "supports": one.supports,
            "log_stiffness": one.log_stiffness.tolist(),
            "covariance": one.covariance.tolist(),
            "information": one.information.tolist(),
            "information_vector": one.information_vector.tolist(),
            "data_share": one.data_share.tolist(),
        }
        for name, one in done.fits.items()
    }
    return KeptResult(
        kind="calibration",
        bridge=study.bridge.id,
        visit=done.visit,
        revision=study.kept.revision,
        input_digest=done.result.input_digest,
        options={"prior": prior},
        version=VERSION,
        result={"shown": shown, "fits": fits},
    )


def from_kept(kept: KeptResult) -> VisitFit:
    """A calibration back from the record."""
    if kept.visit is None:
        raise ValueError("a kept calibration belongs to a visit")
    shown: dict[str, Any] = kept.result["shown"]
    girders = [
        GirderCalibration(
            girder=one["girder"],
            pads=[PadResult(**pad) for pad in one["pads"]],
            chi_square=one["chi_square"],
            degrees_of_freedom=one["degrees_of_freedom"],
            p_value=one["p_value"],
            readings=[ReadingResult(**reading) for reading in one["readings"]],
        )
        for one in shown["girders"]
    ]
    result = CalibrationResult(
        bridge=shown["bridge"],
        visit=kept.visit,
        version=shown["version"],
        input_digest=shown["input_digest"],
        girders=girders,
        cautions=list(shown["cautions"]),
    )
    arrays = ("log_stiffness", "covariance", "information", "information_vector", "data_share")
    fits = {
        name: GirderFit(
            girder=name,
            supports=list(one["supports"]),
            **{key: np.array(one[key], dtype=np.float64) for key in arrays},
        )
        for name, one in kept.result["fits"].items()
    }
    return VisitFit(visit=kept.visit, result=result, fits=fits)
