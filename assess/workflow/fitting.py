"""One girder's readings of one visit, fitted."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Fit, NotDetermined, fit
from assess.workflow.building import GirderModel
from assess.workflow.lifting import Lifting, lifting_states
from assess.workflow.unknowns import Asked, Setup, asked_of
from db.documents import ReadingDoc, VisitDoc
from db.errors import BedstoneError

Floats = NDArray[np.float64]

NO_PERMANENT = "the bridge file gives the girder no permanent load"


@dataclass(frozen=True, kw_only=True)
class Options:
    """How a visit is to be calibrated.

    Attributes
    ----------
    prior : whether the nominal values count
    unknowns : names asked for; None: as the files say, else what the readings can carry
    without : readings to leave out, as `key_of` names them, each with its reason
    """

    prior: bool = True
    unknowns: tuple[str, ...] | None = None
    without: tuple[tuple[str, str], ...] = ()


@dataclass(frozen=True, kw_only=True)
class Fitting:
    """A girder's fit in one visit.

    Attributes
    ----------
    readings : all of them, in the order of the visit
    setup, found : None where no reading is left to fit
    lifting : load states in which the girder leaves a support
    left_out : readings left out by hand or because nothing explains them, by place in `readings`, with the reason
    """

    model: GirderModel
    visit: VisitDoc
    readings: list[ReadingDoc]
    asked: Asked
    setup: Setup | None
    found: Fit | None
    lifting: Lifting
    left_out: dict[int, str]
    by_hand: list[tuple[str, str]]

    @property
    def fitted(self) -> list[ReadingDoc]:
        """The readings in the fit, in its order."""
        return [] if self.setup is None else self.setup.readings


def key_of(reading: ReadingDoc) -> str:
    """How a reading is named in a call: girder/state/quantity/place."""
    place = reading.support if reading.support is not None else f"{reading.at:.6g} m"
    return f"{reading.girder}/{reading.state}/{reading.quantity}/{place}"


def fit_girder(model: GirderModel, visit: VisitDoc, readings: list[ReadingDoc], options: Options) -> Fitting:
    """Fit the readings of the states in which the girder stays on its pads, at nominal and at fitted stiffness.

    Raises
    ------
    BedstoneError
        where the readings do not fix the unknowns, or the fit does not converge.
    """
    by_hand = [(key, reason) for key, reason in options.without if key in {key_of(r) for r in readings}]
    reasons = dict(by_hand)
    left_out = {i: reasons[key_of(r)] for i, r in enumerate(readings) if key_of(r) in reasons}
    if not model.permanent.given:
        for i, r in enumerate(readings):
            if visit.state(r.state).vehicle is None and r.quantity != "settlement":
                left_out.setdefault(i, NO_PERMANENT)
    usable = [r for i, r in enumerate(readings) if i not in left_out]
    read = {reading.state for reading in usable}

    def opens(log_stiffness: Floats) -> Lifting:
        found = lifting_states(model, visit, log_stiffness)
        return {state: supports for state, supports in found.items() if state in read}

    lifting = opens(model.nominal)
    setup, found = None, None
    asked = asked_of(model, visit, usable, options.unknowns)
    while any(_tells(visit, reading) for reading in usable if not _off(reading, lifting)):
        kept = [reading for reading in usable if not _off(reading, lifting)]
        asked = asked_of(model, visit, kept, options.unknowns)
        setup = Setup(model, visit, kept, asked.names)
        found = _fit(setup, prior=options.prior)
        more = opens(found.log_stiffness)
        if more.keys() <= lifting.keys():
            break
        lifting, setup, found = more | lifting, None, None
    for i, reading in enumerate(readings):
        if _off(reading, lifting):
            left_out.setdefault(i, "the girder is off a pad in this state")
    return Fitting(
        model=model,
        visit=visit,
        readings=readings,
        asked=asked,
        setup=setup,
        found=found,
        lifting=lifting,
        left_out=left_out,
        by_hand=by_hand,
    )


def _tells(visit: VisitDoc, reading: ReadingDoc) -> bool:
    """Whether a reading can tell a stiffness; the level of a seat in the permanent state cannot."""
    return reading.quantity != "settlement" or visit.state(reading.state).vehicle is not None


def _off(reading: ReadingDoc, lifting: Lifting) -> bool:
    """A seat's level is what it is, wherever the girder stands."""
    return reading.state in lifting and reading.quantity != "settlement"


def _fit(setup: Setup, *, prior: bool) -> Fit:
    where = f'girder "{setup.model.doc.id}", visit {setup.visit.date.isoformat()}'
    try:
        return fit(setup.equations, start=setup.start, prior=setup.prior(believed=prior))
    except NotDetermined as missing:
        raise _what_is_missing(setup, missing, where) from missing
    except RuntimeError as failure:
        raise BedstoneError(
            str(failure), field=where, remedy="check the readings for slips of unit, sign or place"
        ) from failure


def _what_is_missing(setup: Setup, missing: NotDetermined, where: str) -> BedstoneError:
    pads = ", ".join(f'"{setup.model.pad_ids[i]}"' for i in missing.pads)
    counts = f"{missing.readings} readings for {missing.unknowns} unknowns"
    if missing.others:
        names = ", ".join(setup.label(setup.layout.entries[place]) for place in missing.others)
        return BedstoneError(
            f"{counts}: without the prior these are not told: {names}",
            field=where,
            remedy="ask for fewer with --unknowns, read more, or calibrate with the prior (leave out --no-prior)",
        )
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
