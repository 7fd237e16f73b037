"""Measured and fitted movements of a test state, for the elevation."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from assess.girder import forces_of, places
from assess.loads import LoadCase
from assess.results import MeasuredPoint, ReadingResult
from assess.workflow.building import GirderModel
from db.documents import VisitDoc
from db.quantities import to_si

Floats = NDArray[np.float64]

_STATIONS = 241
_LENGTHS = ("deflection", "compression", "settlement")


def line_of(model: GirderModel, log_stiffness: Floats, load: LoadCase) -> tuple[Floats, Floats]:
    """Places (stations,) in m and fitted deflection there in mm, downward, seats standing still."""
    condensed, x = model.condensed, _along(model)
    place = places(condensed, "deflection", x)
    level = condensed.solve(model.compliance(log_stiffness), forces_of(condensed, load)).displacement
    return x, 1e3 * (place.held(load) + place.rows @ level)


def lie_of(model: GirderModel) -> tuple[Floats, Floats] | None:
    """Places (p,) in m and how far the girder sinks there by unit drop of each seat (p, n); None without hinges.

    A girder without hinges lies on its seats in a smooth line, which the drawing finds from the seats alone.
    """
    if not model.doc.hinges:
        return None
    x = _along(model)
    return x, places(model.condensed, "deflection", x).rows


def _along(model: GirderModel) -> Floats:
    nodes = model.condensed.nodes
    x = np.unique(np.concatenate([np.linspace(0.0, model.doc.length, _STATIONS), nodes]))
    return np.asarray(np.clip(x, 0.0, nodes[-1]))


def points_of(
    model: GirderModel, visit: VisitDoc, state: str, readings: Sequence[ReadingResult]
) -> list[MeasuredPoint]:
    """Measured movements of a state that are lengths, each with its fitted value, in mm."""
    points = []
    for reading in readings:
        if reading.state != state or reading.quantity not in _LENGTHS or reading.predicted is None:
            continue
        at = reading.at_m
        if at is None:
            at = model.doc.support_positions[model.doc.support_index(str(reading.support))]
        value, sd, fitted = (
            1e3 * to_si(v, reading.unit, "length") for v in (reading.observed, reading.sd, reading.predicted)
        )
        points.append(
            MeasuredPoint(
                x_m=at,
                value_mm=value,
                sd_mm=sd,
                fitted_mm=fitted,
                kind=reading.quantity,
                suspect=reading.suspect,
            )
        )
    return points
