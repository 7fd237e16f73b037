"""Cautions on pads that give their geometry."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING

from assess.results import PadCheck
from assess.workflow.pads import batches, cold_shift, correlation_of
from db.documents import BridgeDoc, GirderDoc

if TYPE_CHECKING:
    from assess.workflow.building import GirderModel

FROM_MEMORY = (
    "The pad formulas, elastomer tables and pad limits are from memory of the texts they name and are to be confirmed against "
    "them; pads are checked for compression alone, as shear and rotation of the pads are not in the bridge file."
)
_APART = 1.5


_ASSUMPTIONS = (
    "computed from geometry by",
    "share a prior",
    "its geometry serves the checks",
    "creep not determined",
)


def is_assumption(caution: str) -> bool:
    """Tell a caution on what is assumed of pads from one on what was found: it changes no first sentence."""
    return any(mark in caution for mark in _ASSUMPTIONS)


def of_prior(model: GirderModel) -> list[str]:
    """Cautions on what is believed of a girder's pads before anything is read."""
    name, said = model.doc.id, []
    supports = [model.doc.supports[i] for i in model.pads]
    made = [(s, pad) for s, pad in zip(supports, model.pad_models, strict=True) if pad is not None]
    for formula in sorted({pad.formula for s, pad in made if s.stiffness is None}):
        own = [(s, pad) for s, pad in made if s.stiffness is None and pad.formula == formula]
        cvs = [float(model.stiffness_cv[supports.index(s)]) for s, _ in own]
        spread = f"{min(cvs):.2g}" if max(cvs) - min(cvs) < 0.005 else f"{min(cvs):.2g} to {max(cvs):.2g}"
        said.append(
            f"{name}: the nominal stiffness of the pads at {_listed(s.id for s, _ in own)} is computed from geometry by "
            f'"{formula}" (coefficient of variation {spread}); published formulas differ by up to half, and pads on site '
            "often show less than the formula."
        )
    for support, pad in made:
        if support.stiffness is None:
            continue
        ratio = pad.stiffness / support.stiffness
        far = not 1.0 / _APART < ratio < _APART
        said.append(
            f'{name}: the stiffness given for the pad at "{support.id}" is its nominal one; its geometry serves the checks, '
            f'and by "{pad.formula}" would give {ratio:.3g} times as much'
            + (": one of the two is likely wrong, look at the drawing." if far else ".")
        )
    return said + _of_batches(model)


def _of_batches(model: GirderModel) -> list[str]:
    """Caution on batches: what they narrow by assumption, and what they do not across girders."""
    name = model.doc.id
    supports = [model.doc.supports[i] for i in model.pads]
    said = []
    for batch, members in batches(supports).items():
        docs = [pad for i in members if (pad := supports[i].pad) is not None]
        said.append(
            f'"{batch}" ({_listed(supports[i].id for i in members)}; {correlation_of(batch, docs):.2g})'
        )
    if not said:
        return []
    also = [g.id for g in model.bridge.girders if g.id != name and _batch_names(g) & _batch_names(model.doc)]
    sentence = (
        f"{name}: pads of one batch share a prior (batch, pads and correlation: {', '.join(said)}): a reading at one of them "
        "narrows the others by assumption"
    )
    if also:
        sentence += (
            f"; girders are fitted one by one, so what is read under {_listed(also)} does not narrow them"
        )
    return [f"{sentence}."]


def _batch_names(girder: GirderDoc) -> set[str]:
    return {s.pad.batch for s in girder.supports if s.pad is not None and s.pad.batch is not None}


def of_check(girder: str, pad: PadCheck, least: float | None) -> list[str]:
    """Cautions on a pad's pressures and strains; `least` is the permanent pressure wanted, MPa."""
    where = f'{girder}: the pad at "{pad.support}"'
    said = []
    for limit in pad.limits:
        if limit.utilisation > 1.0:
            unit = f" {limit.unit}" if limit.unit else ""
            said.append(
                f"{where} is over its limit of {limit.name}: {limit.value:.3g}{unit} against {limit.limit:.3g}{unit} "
                f"({limit.source})."
            )
    if least is not None and pad.permanent_pressure_MPa < least:
        said.append(
            f"{where} is not said to be fixed and has a permanent pressure of {pad.permanent_pressure_MPa:.3g} MPa only, less "
            f"than {least:.3g} MPa: it may slide or walk out (common practice, no source)."
        )
    if pad.creep_share_25_years is None:
        said.append(
            f"{where}: creep not determined: its hardness is not known or outside the table of creep."
        )
    return said


def of_cold(bridge: BridgeDoc, temperatures: Mapping[dt.date, float | None]) -> list[str]:
    """Cautions on visits at temperatures that a compound's curve does not reach."""
    said = []
    for date, temperature in temperatures.items():
        for girder in bridge.girders:
            pads = [i for i, support in enumerate(girder.supports) if support.kind == "pad"]
            reasons: dict[str, list[str]] = {}
            for support, reason in cold_shift(girder, pads, temperature).outside:
                reasons.setdefault(reason, []).append(support)
            said += [
                f"{girder.id}: visit of {date}: {reason}; the stiffness of the pads at {_listed(supports)} is not brought to "
                "20 degC on that visit, and cold shows there as stiffening."
                for reason, supports in reasons.items()
            ]
    return said


def _listed(names: Iterable[str] | Sequence[str]) -> str:
    return ", ".join(f'"{name}"' for name in names)
