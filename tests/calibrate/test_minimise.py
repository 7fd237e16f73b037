"""Least squares where the linear picture does badly."""

from __future__ import annotations

import numpy as np
import pytest

from assess.calibrate import PadPrior, causes
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase
from tests.calibrate.bridges import MM, Bridge, at_supports, believed, start_of, visited
from tests.factories import with_values

# a short span beside a long one, its abutment hardly pressed, over a pier that settled 5 mm: with the pier's seat held
# still nothing fits, and the fit creeps along a bent valley
SPANS = (
    (Piece(length=1.75, flexural=5.723e6), Piece(length=6.56, flexural=4.402e6), Piece(length=1.75, flexural=5.723e6)),
    (Piece(length=3.25, flexural=5.723e6), Piece(length=17.57, flexural=4.402e6), Piece(length=3.25, flexural=5.723e6)),
)  # fmt: skip
LEVELS = (0.537, 9.218, 2.625)  # mm
GAPS = (0.774, 4.076, 2.837)


def test_an_explanation_that_hardly_fits_is_fitted_near_enough(monkeypatch: pytest.MonkeyPatch) -> None:
    girder = Girder(SPANS)
    bridge = Bridge(
        condensed=Condensed(girder),
        prior=PadPrior(mean=np.array([10.68, 12.29, 11.80]), sd=np.full(3, 0.20)),
        dead=LoadCase(uniforms=((0.0, girder.length, 29.2),)),
    )
    read = at_supports(bridge, "deflection", 0.3 * MM, 0) + at_supports(bridge, "compression", 0.05 * MM, 0)
    model = with_values(visited(bridge, read, test=False), MM * np.array([*LEVELS, *GAPS]))
    prior = believed(bridge, model)
    found = causes(model, prior, start_of(prior))
    assert [one.cause for one in found] == ["neither", "seat", "neither"]
    assert found[1].without_seat > 300.0
    monkeypatch.setattr("assess.calibrate.minimise._STILL", 0.0)
    with pytest.raises(RuntimeError, match="did not converge"):
        causes(model, prior, start_of(prior))
