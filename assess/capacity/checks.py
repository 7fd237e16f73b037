"""Where a girder is checked, against what resistance, with which factors."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity.factors import Factors
from assess.girder import Girder

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

STATIONS_PER_SPAN = 120


@dataclass(frozen=True, kw_only=True)
class Resistance:
    """Resistance of one piece: kN m, kN m, kN; NaN where it is not given."""

    sagging: float
    hogging: float
    shear: float


@dataclass(frozen=True, kw_only=True)
class Check:
    """One row of an assessment.

    Attributes
    ----------
    effect : "sagging" | "hogging" | "shear"
    span : span index, -1 where the row belongs to a support
    support : support index, -1 where the row belongs to a span
    stations : (c,) indices of the stations among which it governs, nearest its support (or midspan) first
    """

    effect: str
    span: int
    support: int
    stations: Ints


@dataclass(frozen=True, kw_only=True)
class CheckPlan:
    """Stations along a girder with their resistances, and the rows that look at them.

    Attributes
    ----------
    x : (p,) m; side : (p,) -1 or +1, the face meant; span : (p,)
    sagging, hogging, shear : (p,) resistance after the resistance factor, positive; NaN where not given
    checks : the rows, span by span from the left
    """

    x: Floats
    side: Ints
    span: Ints
    sagging: Floats
    hogging: Floats
    shear: Floats
    checks: tuple[Check, ...]

    def resistance(self, effect: str) -> Floats:
        """Resistance at all stations for an effect, (p,)."""
        return {"sagging": self.sagging, "hogging": self.hogging, "shear": self.shear}[effect]


def plan_checks(
    girder: Girder,
    resistances: Sequence[Sequence[Resistance]],
    factors: Factors,
    *,
    per_span: int = STATIONS_PER_SPAN,
) -> CheckPlan:
    """Lay out stations and rows.

    Parameters
    ----------
    girder : Girder
    resistances : one Resistance for each piece of each span
    factors : Factors; the resistance factor multiplies the resistances
    per_span : number of intervals a span is divided into; both faces of every piece end are stations too

    Returns
    -------
    CheckPlan: a sagging row for each span, a hogging row for each support that can hog (interior, or an end that
    holds rotation), a shear row for each support side. Hogging and shear rows look from their support to the
    middle of the adjoining span(s), so that a weaker piece near a support is not passed over.
    """
    x, side, span, which = [], [], [], []
    start = 0.0
    for j, pieces in enumerate(girder.spans):
        edges = np.concatenate([[0.0], np.cumsum([piece.length for piece in pieces])])
        grid = np.linspace(0.0, edges[-1], per_span + 1)
        for i in range(len(pieces)):
            inner = grid[(grid > edges[i]) & (grid < edges[i + 1])]
            local = np.concatenate([[edges[i]], inner, [edges[i + 1]]])
            x.append(start + local)
            side.append(np.concatenate([np.ones(local.size - 1), [-1]]).astype(np.intp))
            span.append(np.full(local.size, j))
            which.append(np.full(local.size, i))
        start = float(girder.support_positions[j + 1])
    places, spans = np.concatenate(x), np.concatenate(span)
    places = np.clip(places, 0.0, girder.support_positions[-1])
    index = np.concatenate(which)
    values = np.array(
        [
            (resistances[j][i].sagging, resistances[j][i].hogging, resistances[j][i].shear)
            for j, i in zip(spans, index, strict=True)
        ]
    )
    values = values * factors.resistance
    return CheckPlan(
        x=places,
        side=np.concatenate(side),
        span=spans.astype(np.intp),
        sagging=values[:, 0],
        hogging=values[:, 1],
        shear=values[:, 2],
        checks=tuple(_rows(girder, places, spans)),
    )


def _rows(girder: Girder, x: Floats, span: Ints) -> list[Check]:
    supports = girder.support_positions
    middle = (supports[1:] + supports[:-1]) / 2.0
    last = girder.n_supports - 1
    slack = 1e-9 * girder.length

    def row(effect: str, j: int, i: int, among: NDArray[np.bool_], home: float) -> Check:
        stations = np.flatnonzero(among)
        nearest = np.argsort(np.abs(x[stations] - home), kind="stable")
        return Check(effect=effect, span=j, support=i, stations=stations[nearest])

    rows = [row("sagging", j, -1, span == j, middle[j]) for j in range(last)]
    for i in range(girder.n_supports):
        if 0 < i < last or girder.rotation[i] > 0.0:
            before = (span == i - 1) & (x >= middle[max(i - 1, 0)] - slack)
            after = (span == i) & (x <= middle[min(i, last - 1)] + slack)
            rows.append(row("hogging", -1, i, before | after, supports[i]))
    for j in range(last):
        rows.append(row("shear", j, j, (span == j) & (x <= middle[j] + slack), supports[j]))
        rows.append(row("shear", j, j + 1, (span == j) & (x >= middle[j] - slack), supports[j + 1]))
    return rows
