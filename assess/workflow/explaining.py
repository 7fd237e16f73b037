"""Rival explanations of a girder's readings, and what moved at each support."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import PAD_AND_SEAT, PAD_AT_LEAST, SEAT, UNTOLD, Cause, Layout, Rival, causes, rivals
from assess.calibrate.unknowns import NUISANCE
from assess.results import CauseResult, RivalResult
from assess.workflow.deciding import deciding_reading
from assess.workflow.fitting import Fitting
from assess.workflow.kept_fits import RivalFit
from assess.workflow.unknowns import LEVELS, Setup

Floats = NDArray[np.float64]

DATUM = "pads and datum"
SEEN = 0.05  # of an unknown's loosened variance that the readings must take away to speak of it at all


@dataclass(frozen=True, kw_only=True)
class Explained:
    """Rivals as shown and as carried to the assessment, causes, and the calibration's own name among the rivals."""

    rivals: list[RivalResult]
    carried: list[RivalFit]
    causes: list[CauseResult]
    own: str | None


def explain(fitting: Fitting) -> Explained:
    """Try rivals of a girder's fit on the same readings.

    Where one of their fits does not converge there are none, and the cautions say so.
    """
    if fitting.setup is None:
        return Explained(rivals=[], carried=[], causes=[], own=None)
    whole = _whole(fitting.setup)
    sets, own = _sets(whole, fitting.setup)
    try:
        ranked = rivals(whole.equations, whole.prior(), whole.start, sets)
        told = _causes(fitting.setup)
    except RuntimeError:
        return Explained(rivals=[], carried=[], causes=[], own=None)
    main = next(one for one in ranked if one.name == own)
    shown, carried = [], []
    for one in ranked:
        apart = None if one is main else deciding_reading(whole, main.theta, one.theta)
        simpler = one is not main and set(one.free.tolist()) < set(main.free.tolist())
        shown.append(_shown(one, apart, simpler))
        if one is not main and one.close and one.share >= SEEN:
            carried.append(_carried(whole, one, apart))
    shifted = any(one.name == DATUM and one.close for one in ranked) and own != DATUM
    return Explained(
        rivals=shown,
        carried=carried,
        causes=[_cause(fitting.setup, one, shifted=shifted) for one in told],
        own=own,
    )


def _whole(setup: Setup) -> Setup:
    """The same readings with every unknown that any rival has."""
    names = ["pads", *(name for name in setup.names if name in ("share", "gradient"))]
    if setup.lasting - {"settlement"}:
        names.append("sustained")
    if setup.lasting:
        names.append("settlements")
    if setup.lasting & set(LEVELS):
        names.append("datum")
    return Setup(setup.model, setup.visit, setup.readings, [*names, "girder"])


def _sets(whole: Setup, setup: Setup) -> tuple[dict[str, list[int]], str]:
    """The rivals' unknowns beside the pads, and the name of the one that was calibrated."""
    layout = whole.layout
    base = [j for block in ("sustained", "share", "gradient") for j in layout.places(block)]
    sets = {"pads only": base}
    for j in layout.places("settlements"):
        support = whole.model.doc.supports[layout.entries[j].index].id
        sets[f'pads and settlement at "{support}"'] = [*base, j]
    sets["pads and girder stiffness"] = [*base, *layout.places("girder")]
    if "datum" in layout:
        sets[DATUM] = [*base, *layout.places("datum")]
    # nuisances are in every rival: they tell none from another
    entries = [entry for entry in setup.layout.entries if entry.block not in NUISANCE]
    asked = {entry_of(whole.layout, entry.block, entry.index) for entry in entries}
    own = sorted(j for j in asked if j is not None and j >= whole.model.pads.size)
    for name, places in sets.items():
        if sorted(places) == own:
            return sets, name
    name = f"as calibrated ({', '.join(setup.names)})"
    sets[name] = own
    return sets, name


def entry_of(layout: Layout, block: str, index: int) -> int | None:
    """Where an unknown stands in a layout, if it is there."""
    return next((j for j in layout.places(block) if layout.entries[j].index == index), None)


def _shown(one: Rival, apart: str | None, simpler: bool) -> RivalResult:
    return RivalResult(
        name=one.name,
        aicc=one.aicc,
        chi_square=one.chi_square,
        within_2=one.within_2,
        carried=one.close and one.share >= SEEN,
        log_likelihood=one.log_likelihood,
        effective_unknowns=one.told,
        told=one.share >= SEEN,
        simpler=simpler,
        told_apart_by=apart,
    )


def _carried(whole: Setup, one: Rival, apart: str | None) -> RivalFit:
    layout, theta = whole.layout, one.theta
    supports = whole.model.doc.supports
    free = set(one.free.tolist())
    drops = {
        supports[layout.entries[j].index].id: float(theta[j])
        for j in layout.places("settlements")
        if j in free
    }

    def single(block: str) -> float:
        return next((float(theta[j]) for j in layout.places(block) if j in free), 0.0)

    return RivalFit(
        name=one.name,
        log_stiffness=theta[: whole.model.pads.size],
        settlements=drops,
        log_factor=single("girder"),
        log_sustained=single("sustained"),
        told_apart_by=apart,
    )


# causes ------------------------------------------------------------------------------------------


def _causes(setup: Setup) -> list[Cause]:
    names = ["pads", *(name for name in setup.names if name not in ("pads", "settlements"))]
    if setup.lasting - {"settlement"} and "sustained" not in names:
        names.append("sustained")
    if setup.lasting:
        names.append("settlements")
    own = Setup(setup.model, setup.visit, setup.readings, names)
    return causes(own.equations, own.prior(), own.start)


def _cause(setup: Setup, one: Cause, *, shifted: bool) -> CauseResult:
    """A cause as shown; where the levels' datum may have moved instead (`shifted`), no seat is said to have."""
    cause = one.cause
    if shifted and cause == SEAT:
        cause = UNTOLD
    elif shifted and cause == PAD_AND_SEAT:
        cause = PAD_AT_LEAST
    support = setup.model.doc.supports[one.support].id
    seat, pad = (float(np.sqrt(max(rise, 0.0))) for rise in (one.without_seat, one.without_pad))
    return CauseResult(
        support=support,
        cause=cause,
        off_if_seat_still_sd=seat if np.isfinite(one.seat_sd) else None,
        off_if_pad_nominal_sd=pad,
    )
