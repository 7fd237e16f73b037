"""From the pads of a bridge file to the mechanics: nominal stiffness, prior, temperature.

A pad is nominal by its `stiffness` where the file gives one, else by its geometry. Its coefficient of variation is
`stiffness_cv` where given, else that of the geometry (`assess.pad.stiffness_doubt`). Pads of one batch under one girder
share a correlated prior; girders are fitted one by one, so a batch under several of them is independent from one girder
to the next.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import PadPrior
from assess.pad import (
    Pad,
    PadError,
    PadGeometry,
    batch_correlation,
    check_limits,
    cold_curve,
    elastomer,
    stiffness_doubt,
)
from assess.pad.limits import PadLoads
from db.documents import BridgeDoc, GirderDoc, SupportDoc
from db.errors import BedstoneError
from db.pad_doc import PadDoc
from db.wording import shown

Floats = NDArray[np.float64]

REFERENCE_DEGC = 20.0


def pad_of(girder: str, support: SupportDoc) -> Pad | None:
    """The pad of a support from its geometry; None where the file gives none.

    Raises
    ------
    BedstoneError
        if the formula or its table does not cover this pad; names girder, support and field.
    """
    doc = support.pad
    if doc is None:
        return None
    try:
        made = Pad(
            geometry=PadGeometry(
                length=doc.length,
                width=doc.width,
                diameter=doc.diameter,
                side_cover=doc.side_cover,
                layers=doc.layers,
                layer_thickness=doc.layer_thickness,
                top_bottom_cover=doc.top_bottom_cover,
                plain=doc.shape == "plain",
            ),
            rubber=elastomer(
                doc.formula,
                shear_modulus=doc.shear_modulus,
                hardness=doc.hardness,
                bulk_modulus=doc.bulk_modulus,
                tolerance=doc.shear_modulus_tolerance,
            ),
            formula=doc.formula,
        )
        stiffness_doubt(made, doc.height_tolerance)
        check_limits(made, _NO_LOADS, rules=doc.limits, own=dict(doc.own_limits))
    except PadError as error:
        where = f'girder "{shown(girder)}", support "{shown(support.id)}", pad, {error.field}'
        raise BedstoneError(str(error), field=where, remedy=error.remedy) from error
    return made


_NO_LOADS = PadLoads(permanent=0.0, total=0.0, minimum=0.0, factored=0.0)


def nominal_of(support: SupportDoc, pad: Pad | None) -> float:
    """Nominal stiffness of a pad, kN/m: given, or from its geometry; NaN for neither."""
    if support.stiffness is not None:
        return support.stiffness
    return np.nan if pad is None else pad.stiffness


def variation_of(support: SupportDoc, pad: Pad | None) -> float:
    """Coefficient of variation of the nominal stiffness: given, or from tolerances and formula."""
    if support.stiffness_cv is not None:
        return support.stiffness_cv
    if pad is None or support.pad is None:
        return np.nan
    return stiffness_doubt(pad, support.pad.height_tolerance).cv


def prior_of(supports: Sequence[SupportDoc], nominal: Floats, cv: Floats) -> PadPrior:
    """ln k ~ N(nominal, tau), tau^2 = ln(1 + cv^2) (the lognormal of that cv), batches correlated in ln k.

    Parameters
    ----------
    supports : of the pads
    nominal : (q,) ln k
    cv : (q,) coefficient of variation of k
    """
    return PadPrior(mean=nominal, sd=np.sqrt(np.log1p(cv**2)), correlation=_correlation(supports))


def batches(supports: Sequence[SupportDoc]) -> dict[str, list[int]]:
    """Positions of the pads of each batch that has more than one."""
    found: dict[str, list[int]] = {}
    for i, support in enumerate(supports):
        if support.pad is not None and support.pad.batch is not None:
            found.setdefault(support.pad.batch, []).append(i)
    return {name: members for name, members in found.items() if len(members) > 1}


def correlation_of(batch: str, pads: Sequence[PadDoc]) -> float:
    """Correlation between the pads of a batch: the one the file gives, or the default.

    Raises
    ------
    BedstoneError
        if the pads of the batch give different ones.
    """
    given = {pad.batch_correlation for pad in pads if pad.batch_correlation is not None}
    if len(given) > 1:
        listed = " and ".join(f"{value:g}" for value in sorted(given))
        raise BedstoneError(
            f'pads of batch "{shown(batch)}" give the correlations {listed}',
            field="pad, batch_correlation",
            remedy="give it once, or the same for all of them",
        )
    return given.pop() if given else batch_correlation()


def _correlation(supports: Sequence[SupportDoc]) -> Floats | None:
    matrix = np.eye(len(supports))
    for name, members in batches(supports).items():
        value = correlation_of(name, [pad for i in members if (pad := supports[i].pad) is not None])
        matrix[np.ix_(members, members)] = value
    np.fill_diagonal(matrix, 1.0)
    return None if np.array_equal(matrix, np.eye(len(supports))) else matrix


def refuse_pads(bridge: BridgeDoc, file: str) -> None:
    """Refuse a bridge file whose pads the mechanics cannot compute.

    Raises
    ------
    BedstoneError
        naming file, girder, support and field.
    """
    try:
        for girder in bridge.girders:
            for support in girder.supports:
                pad_of(girder.id, support)
        every = [s.pad for g in bridge.girders for s in g.supports if s.pad is not None]
        for batch in {pad.batch for pad in every if pad.batch is not None}:
            correlation_of(batch, [pad for pad in every if pad.batch == batch])
    except BedstoneError as error:
        raise error.at(file=file) from error


# temperature -------------------------------------------------------------------------------------


@dataclass(frozen=True, kw_only=True)
class ColdShift:
    """What the temperature of a visit adds to ln k of the pads.

    Attributes
    ----------
    shift : (q,); 0 where it is not known
    outside : supports whose compound's curve does not reach that temperature, with the reason
    """

    shift: Floats
    outside: list[tuple[str, str]]


def corrected(support: SupportDoc) -> bool:
    """Tell whether a pad can be brought to the reference temperature: by its coefficient or its compound."""
    return support.temperature_coefficient is not None or (
        support.pad is not None and support.pad.compound is not None
    )


def cold_shift(girder: GirderDoc, pads: Sequence[int], temperature: float | None) -> ColdShift:
    """Shift of ln k from 20 degC to a pad temperature, by coefficient or else by the curve of the compound.

    A curve stiffens the shear modulus; the pad's stiffness follows it through its formula, volume change unaltered.
    """
    shift = np.zeros(len(pads))
    outside = []
    if temperature is None:
        return ColdShift(shift=shift, outside=[])
    for i, index in enumerate(pads):
        support = girder.supports[index]
        if support.temperature_coefficient is not None:
            shift[i] = support.temperature_coefficient * (REFERENCE_DEGC - temperature)
        elif support.pad is not None and support.pad.compound is not None:
            pad = pad_of(girder.id, support)
            assert pad is not None
            try:
                factor = cold_curve(support.pad.compound).factor(temperature)
            except PadError as error:
                outside.append((support.id, str(error)))
                continue
            shift[i] = np.log(pad.stiffened(factor).stiffness / pad.stiffness)
    return ColdShift(shift=shift, outside=outside)
