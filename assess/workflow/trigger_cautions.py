"""Cautions on trigger readings."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.workflow.cautions import REFERENCE_TEMPERATURE
from db.documents import LoadStateDoc, VisitDoc

STANDING = (
    (
        "A trigger reading moves one pad or one seat and leaves all else as calibrated. Two small changes together can "
        "bring a section to its limit with neither of them at its trigger: calibrate and assess after every visit."
    ),
    (
        "Trigger values are agreed before the readings are taken, with who acts and how soon; raising one needs a named "
        "person and a reason."
    ),
)


def of_visit(visit: VisitDoc | None, states: Sequence[LoadStateDoc]) -> list[str]:
    """Cautions: under which load, and at which temperature the readings hold."""
    if visit is None or not states:
        return [
            "There is no visit with a test state: no compression or deflection can be told, only seats. Log such a visit."
        ]
    vehicles = "; ".join(
        f'"{vehicle}" with its leading axle at '
        + ", ".join(f"{one.leading_axle_at:g} m ({one.id})" for one in states if one.vehicle == vehicle)
        for vehicle in dict.fromkeys(one.vehicle for one in states)
    )
    warm = visit.pad_temperature
    if warm is None:
        told = "At which temperature of the pads they hold is not known: that visit took none."
    else:
        told = (
            f"They hold for pads at {warm:g} degC, as on that visit; a colder pad reads stiffer"
            f"{'' if warm == REFERENCE_TEMPERATURE else ', a warmer one softer'}."
        )
    return [
        f"Compressions and deflections are loaded minus unloaded, in the load states of {visit.date}: {vehicles}. {told}"
    ]


def of_girder(girder: str, today: NDArray[np.float64], permanent: bool) -> list[str]:
    """Cautions: sections without a resistance, and a girder of which nothing tells whether it lifts."""
    said = []
    if np.isnan(today).any():
        said.append(
            f"{girder}: {int(np.isnan(today).sum())} of its sections have no resistance in the bridge file; no trigger speaks "
            "for them."
        )
    if not permanent:
        said.append(f"{girder}: without permanent loads in the bridge file nothing tells where it lifts.")
    return said
