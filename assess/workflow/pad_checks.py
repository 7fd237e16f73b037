"""Hold the pads that give their geometry against pressure and strain limits."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.pad import (
    LimitCheck,
    Pad,
    PadError,
    PadLoads,
    check_limits,
    creep_share,
    default_set,
    least_permanent_pressure,
)
from assess.results import PadCheck, PadLimit, ReactionResult
from assess.workflow import pad_cautions
from assess.workflow.building import GirderModel
from assess.workflow.status import status_of
from db.documents import SupportDoc

Floats = NDArray[np.float64]

_ROUNDING = 1e-9  # of the permanent reaction: less than it is none
_UNITS = {  # of a limit's kind: unit shown, and how many of it make one in SI
    "pressure": ("MPa", 1e-3),
    "stability": ("MPa", 1e-3),
    "strain": ("", 1.0),
    "shear strain": ("", 1.0),
    "compression": ("mm", 1e3),
}


def check_pads(
    model: GirderModel, log_stiffness: Floats, reactions: Sequence[ReactionResult]
) -> tuple[list[PadCheck], list[str]]:
    """Pressures and strains of every pad with a geometry, under the calibrated reactions, and the cautions on them.

    Pressures are reactions over the plan of the formula; live load has its dynamic allowance in it. Strains are those
    of the formula times the stiffness by geometry over the calibrated one, so that a pad found soft strains more.

    Parameters
    ----------
    log_stiffness : (q,) calibrated ln k of the pads
    reactions : of all supports, unfactored
    """
    rows, said = [], []
    for i, (index, pad) in enumerate(zip(model.pads, model.pad_models, strict=True)):
        support = model.doc.supports[index]
        if pad is None or support.pad is None:
            continue
        softness = pad.stiffness / float(np.exp(log_stiffness[i]))
        loads = loads_of(reactions[index])
        row = _check(model, i, support, pad, loads, softness)
        rows.append(row)
        said += pad_cautions.of_check(model.doc.id, row, _least(support))
    return rows, said


def loads_of(reaction: ReactionResult) -> PadLoads:
    """Forces of a pad, kN: calibrated and unfactored, but for the factored one; the least one cleared of rounding."""
    permanent = reaction.calibrated_permanent_kN
    live = max(reaction.calibrated_live_max_kN, 0.0)
    least = permanent + min(reaction.calibrated_live_min_kN, 0.0)
    return PadLoads(
        permanent=permanent,
        total=permanent + live,
        minimum=0.0 if abs(least) < _ROUNDING * abs(permanent) else least,
        factored=reaction.calibrated_factored_max_kN,
    )


def _least(support: SupportDoc) -> float | None:
    """Permanent pressure, MPa, that a pad not fixed against sliding wants; None for a fixed one."""
    doc = support.pad
    if doc is None or doc.fixed:
        return None
    given = doc.least_permanent_pressure
    return 1e-3 * (least_permanent_pressure() if given is None else given)


def _check(
    model: GirderModel, i: int, support: SupportDoc, pad: Pad, loads: PadLoads, softness: float
) -> PadCheck:
    doc = support.pad
    assert doc is not None
    checks = check_limits(pad, loads, rules=doc.limits, own=dict(doc.own_limits), softness=softness)
    limits = [_limit(check) for check in checks]
    area = 1e3 * pad.plan.area  # kN over this is MPa
    share = _creep(pad)
    permanent = max(loads.permanent, 0.0) * softness
    return PadCheck(
        support=support.id,
        formula=pad.formula,
        limits_from=default_set(pad.formula) if doc.limits is None else doc.limits,
        shape_factor=pad.shape_factor,
        geometry_kN_per_m=pad.stiffness,
        nominal_kN_per_m=float(model.nominal_stiffness[i]),
        nominal_from="geometry" if support.stiffness is None else "stiffness",
        cv=float(model.stiffness_cv[i]),
        batch=doc.batch,
        permanent_kN=loads.permanent,
        total_kN=loads.total,
        minimum_kN=loads.minimum,
        permanent_pressure_MPa=loads.permanent / area,
        total_pressure_MPa=loads.total / area,
        minimum_pressure_MPa=loads.minimum / area,
        permanent_strain=softness * pad.layer_strain(loads.permanent),
        total_strain=softness * pad.layer_strain(loads.total),
        permanent_compression_mm=1e3 * permanent / pad.stiffness,
        creep_share_25_years=share,
        creep_compression_25_years_mm=None if share is None else 1e3 * share * permanent / pad.stiffness,
        limits=limits,
        status=status_of(max((limit.utilisation for limit in limits), default=None)),
    )


def _creep(pad: Pad) -> float | None:
    """Creep over initial compression after 25 years; None where the table of creep does not reach the hardness."""
    if pad.rubber.hardness is None:
        return None
    try:
        return creep_share(pad.rubber.hardness)
    except PadError:
        return None


def _limit(check: LimitCheck) -> PadLimit:
    unit, scale = _UNITS[check.kind]
    value = max(check.value, 0.0)  # a pad that lifts is under no compression; uplift has its own word
    used = value / check.limit
    return PadLimit(
        name=check.name,
        load=check.load,
        value=scale * value,
        limit=scale * check.limit,
        unit=unit,
        utilisation=used,
        status=status_of(used),
        source=check.source,
    )
