"""Pads for the tests: sizes in mm and MPa, handed over in m and kN/m2."""

from __future__ import annotations

from typing import Any

from hypothesis import settings
from hypothesis import strategies as st

from assess.pad import FORMULAS, Pad, PadGeometry, elastomer

PLAIN = settings(max_examples=60, deadline=None, derandomize=True)
MM, MPA = 1e-3, 1e3
USUAL = {"length": 0.4, "width": 0.3, "side_cover": 0.004, "layers": 5, "layer_thickness": 0.008}


def made(formula: str = "en1337-3", *, rubber: dict[str, float] | None = None, **changes: Any) -> Pad:
    """The usual pad (300 x 400, five layers of 8 mm, G 0.9 MPa) with changes to its geometry; None leaves out."""
    geometry = {key: value for key, value in {**USUAL, **changes}.items() if value is not None}
    return Pad(
        geometry=PadGeometry(**geometry),
        rubber=elastomer(formula, **({"shear_modulus": 900.0} if rubber is None else rubber)),
        formula=formula,
    )


def round_pad(formula: str = "en1337-3", diameter: float = 0.35, **changes: Any) -> Pad:
    """The usual layers with a circular plan."""
    return made(formula, length=None, width=None, diameter=diameter, **changes)


@st.composite
def pads(draw: st.DrawFn, formulas: tuple[str, ...] = FORMULAS) -> Pad:
    """Believable laminated pads; whole millimetres."""
    plan: dict[str, Any] = {
        "length": MM * draw(st.integers(150, 900)),
        "width": MM * draw(st.integers(150, 900)),
    }
    if draw(st.booleans()):
        plan = {"length": None, "width": None, "diameter": MM * draw(st.integers(200, 900))}
    return made(
        draw(st.sampled_from(formulas)),
        **plan,
        side_cover=MM * draw(st.integers(0, 10)),
        layers=draw(st.integers(1, 12)),
        layer_thickness=MM * draw(st.integers(5, 25)),
        top_bottom_cover=MM * draw(st.sampled_from([0, 2, 3, 5])),
        rubber={"shear_modulus": MPA * draw(st.floats(0.5, 1.6))},
    )
