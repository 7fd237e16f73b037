"""Calibrate visits and keep what comes out."""

from __future__ import annotations

import datetime as dt
from dataclasses import replace

from assess.calibrate import Entry
from assess.results import CalibrationResult, GirderCalibration
from assess.workflow import calibration_cautions, cautions, contact_cautions, pad_cautions
from assess.workflow.beside import draws_of, intervals_of, proposals_of, robust_of
from assess.workflow.building import GirderModel
from assess.workflow.calibration_shown import shown_girder
from assess.workflow.compensating import compensating_errors
from assess.workflow.explaining import explain
from assess.workflow.fitting import Fitting, Options, fit_girder, key_of
from assess.workflow.kept_fits import GirderFit, VisitFit, as_kept
from assess.workflow.study import VERSION, Progress, Study, quiet, telling_readings
from db.documents import VisitDoc
from db.errors import BedstoneError
from db.store import open_record
from db.wording import listed, shown


def calibrate(
    url: str,
    bridge: str,
    *,
    visit: dt.date | None = None,
    every: bool = False,
    options: Options | None = None,
    compensating: bool = False,
    progress: Progress | None = None,
) -> list[CalibrationResult]:
    """Calibrate the latest visit, one visit, or every visit that tells a stiffness, and keep the results.

    With `compensating` every pad is found again under errors of the model (`compensating.py`); that is shown, not kept.
    """
    tell, how = progress or quiet, options or Options()
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
        chosen, left_out = _choose(study, visit, every)
        _check_without(chosen, how)
        results = []
        for i, one in enumerate(chosen):
            tell(f"calibrating {one.date.isoformat()}", i, len(chosen))
            done, fittings = _calibrated(study, one, how, left_out if one is chosen[-1] else [])
            if not every:
                _require_a_fit(done, one)
            record.keep(as_kept(study, done, how))
            shown_one = done.result
            if compensating:
                errors = {name: compensating_errors(fitting) for name, fitting in fittings.items()}
                girders = [
                    replace(g, compensating_errors=errors.get(g.girder, [])) for g in shown_one.girders
                ]
                shown_one = replace(shown_one, girders=girders)
            results.append(shown_one)
        tell("calibrated", len(chosen), len(chosen))
    return results


def _check_without(chosen: list[VisitDoc], options: Options) -> None:
    """Refuse to leave out a reading that is not there."""
    for key, _ in options.without:
        known = [key_of(reading) for visit in chosen for reading in visit.readings]
        if key not in known:
            near = [one for one in known if one.split("/")[:2] == key.split("/")[:2]] or known
            raise BedstoneError(
                f'there is no reading "{shown(key)}" in this visit',
                field="--without",
                remedy=f"readings are named girder/state/quantity/place, for example {listed(near[:3])}",
            )


def _choose(study: Study, date: dt.date | None, every: bool) -> tuple[list[VisitDoc], list[VisitDoc]]:
    """Visits to calibrate, and visits left out of `--all` because nothing was read under a test load."""
    if not study.visits:
        raise BedstoneError(
            f"{study.bridge.id} has no visits yet", remedy="log one: bedstone visit log VISIT.toml"
        )
    if every:
        chosen = [visit for visit in study.visits if telling_readings(visit)]
        left_out = [visit for visit in study.visits if not telling_readings(visit)]
    else:
        chosen, left_out = [study.visits[-1] if date is None else study.visit(date)], []
    if not chosen or not telling_readings(chosen[0]):
        which = "no visit" if every else f"the visit of {chosen[0].date.isoformat()} does not have"
        what = "has" if every else ""
        problem = f"{which} {what} a reading in a test state".replace("  ", " ")
        raise BedstoneError(
            f"{study.bridge.id}: {problem}, so no stiffness can be calibrated",
            remedy="log readings taken under a placed test vehicle, or choose another visit with --visit DATE",
        )
    return chosen, left_out


def calibrate_visit(study: Study, visit: VisitDoc, options: Options | None = None) -> VisitFit:
    """Calibrate every girder of which this visit tells a stiffness."""
    return _calibrated(study, visit, options or Options(), [])[0]


def _calibrated(
    study: Study, visit: VisitDoc, options: Options, left_out: list[VisitDoc]
) -> tuple[VisitFit, dict[str, Fitting]]:
    rows: list[GirderCalibration] = []
    fits: dict[str, GirderFit] = {}
    fittings: dict[str, Fitting] = {}
    said = []
    for girder in study.bridge.girders:
        if not telling_readings(visit, girder.id):
            said.append(cautions.not_read(girder.id, visit.date))
            continue
        model = study.model(girder.id, visit.date)
        if not model.pads.size:
            said.append(cautions.no_pads(girder.id))
            continue
        readings = [r for r in visit.readings if r.girder == girder.id]
        fitting = fit_girder(model, visit, readings, options)
        found = fitting.found
        said += contact_cautions.of_states(girder.id, fitting.lifting, nothing_left=found is None)
        said += [] if model.permanent.given else [contact_cautions.unknown(girder.id)]
        shown_one, kept = _girder(fitting, options)
        rows.append(shown_one)
        if found is None or kept is None:
            continue
        fittings[girder.id], fits[girder.id] = fitting, kept
        said += calibration_cautions.of_fit(shown_one, fitting)
        said += pad_cautions.of_prior(model) if options.prior else []
    said += calibration_cautions.of_visit(visit)
    said += [cautions.left_out(one.date) for one in left_out]
    result = CalibrationResult(
        bridge=study.bridge.id,
        visit=visit.date,
        version=VERSION,
        input_digest=study.digest(visit.digest),
        girders=rows,
        cautions=[*said, *cautions.STANDING],
    )
    return VisitFit(visit=visit.date, result=result, fits=fits), fittings


def _girder(fitting: Fitting, options: Options) -> tuple[GirderCalibration, GirderFit | None]:
    """What is shown of a girder, and what is kept."""
    found, setup = fitting.found, fitting.setup
    drawn = draws_of(fitting, options)
    explained = explain(fitting)
    row = shown_girder(
        fitting,
        intervals=intervals_of(fitting, options),
        drawn=drawn,
        explained=explained,
        robust=robust_of(fitting, options),
        proposals=proposals_of(fitting, options),
    )
    if found is None or setup is None:
        return row, None
    kept = GirderFit(
        girder=fitting.model.doc.id,
        supports=fitting.model.pad_ids,
        log_stiffness=found.log_stiffness,
        covariance=found.covariance,
        information=found.information,
        information_vector=found.information_vector,
        data_share=found.data_share,
        unknowns=_names(fitting.model, setup.layout.entries),
        theta=found.theta,
        joint=found.joint,
        draws=drawn.draws if drawn is not None and drawn.converged and drawn.kind != "normal" else None,
        rivals=explained.carried,
    )
    return row, kept


def _names(model: GirderModel, entries: tuple[Entry, ...]) -> list[tuple[str, str]]:
    """Unknowns by block, and by support where they belong to one."""
    of_support = ("pads", "settlements", "as built")
    supports = model.doc.supports
    return [
        (entry.block, supports[entry.index].id if entry.block in of_support else str(entry.index))
        for entry in entries
    ]


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
