"""What a girder may be made of."""

from __future__ import annotations

import numpy as np
import pytest

from assess.girder import Girder, Piece


@pytest.mark.parametrize("length", [0.0, -1.0, np.nan, np.inf])
def test_a_piece_has_a_positive_length(length: float) -> None:
    with pytest.raises(ValueError, match="positive length"):
        Piece(length=length, flexural=1e5)


@pytest.mark.parametrize("flexural", [0.0, -1.0, np.nan, np.inf])
def test_a_piece_has_a_positive_flexural_stiffness(flexural: float) -> None:
    with pytest.raises(ValueError, match="positive EI"):
        Piece(length=1.0, flexural=flexural)


@pytest.mark.parametrize("shear", [0.0, -1.0, np.nan])
def test_a_piece_has_a_positive_shear_stiffness(shear: float) -> None:
    with pytest.raises(ValueError, match="positive GA"):
        Piece(length=1.0, flexural=1e5, shear=shear)


def test_a_girder_has_spans_and_spans_have_pieces() -> None:
    for spans in ((), ((),)):
        with pytest.raises(ValueError, match="at least one"):
            Girder(spans)


@pytest.mark.parametrize("rotation", [[0.0], [0.0, -1.0], [0.0, np.nan]])
def test_a_restraint_stands_at_every_support_or_none(rotation: list[float]) -> None:
    with pytest.raises(ValueError, match="each of 2 supports"):
        Girder(((Piece(length=5.0, flexural=1e5),),), np.array(rotation))


def test_supports_stand_at_the_ends_of_pieces() -> None:
    span = (Piece(length=0.1, flexural=1e5), Piece(length=0.2, flexural=2e5))
    girder = Girder((span, span, span))
    assert girder.n_supports == 4
    assert np.array_equal(girder.support_positions, girder.breakpoints[::2])
    assert girder.length == girder.support_positions[-1] == pytest.approx(0.9)
    assert girder.span_lengths == pytest.approx([0.3, 0.3, 0.3])
