"""What a bridge file says of an elastomeric pad: its geometry and rubber, in SI, checked once when made."""

from __future__ import annotations

from dataclasses import dataclass

PAD_SHAPES = ("rectangular", "circular", "plain")
PAD_FORMULAS = ("en1337-3", "aashto-lrfd", "gent-lindley", "pressure-solution")
PAD_COMPOUNDS = ("natural rubber", "chloroprene")
PAD_LIMITS = ("en1337-3", "aashto-lrfd", "aashto-lrfd-b-stress", "texas")


@dataclass(frozen=True, kw_only=True)
class PadDoc:
    """A pad: plan, layers, rubber, and the formula and limits that the owner wants.

    A rectangular or plain pad has length and width, a circular one its diameter (a plain one may have either).
    Exactly one of shear_modulus and hardness is given.
    """

    shape: str  # one of PAD_SHAPES; "plain": one layer without plates
    length: float | None = None  # m, of the whole pad
    width: float | None = None  # m
    diameter: float | None = None  # m
    side_cover: float = 0.0  # m, from the edge of the pad to the edge of the plates
    layers: int = 1  # between plates
    layer_thickness: float  # m
    top_bottom_cover: float = 0.0  # m of rubber outside the outermost plates, each side
    plate_thickness: float | None = None  # m; with the height it checks the layers
    height: float | None = None  # m, of the whole pad
    shear_modulus: float | None = None  # kN/m2
    hardness: float | None = None  # IRHD
    bulk_modulus: float | None = None  # kN/m2; None: the formula's own
    compound: str | None = None  # one of PAD_COMPOUNDS
    formula: str = "en1337-3"  # one of PAD_FORMULAS
    batch: str | None = None  # pads of one batch share a correlated prior
    batch_correlation: float | None = None  # of ln k; None: the default of the mechanics
    shear_modulus_tolerance: float | None = None  # share of it, at 95 %
    height_tolerance: float | None = None  # m of rubber height, at 95 %
    fixed: bool = False  # held against sliding by dowels, bond or keepers
    limits: str | None = None  # one of PAD_LIMITS; None: those of the formula
    own_limits: tuple[tuple[str, float], ...] = ()  # the owner's, by name; kN/m2, a strain, or m
    least_permanent_pressure: float | None = (
        None  # kN/m2, of an unfixed pad; None: the default of the mechanics
    )
