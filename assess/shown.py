"""What a bridge file comes to: its sections, resolved on a day, and its supports. Keys of `bridge show --json`."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass


@dataclass(frozen=True, kw_only=True)
class SectionShown:
    """A section with the losses measured so far; None where it is not determined.

    Area and second moment are those of the stiffness: of the whole section, a deck in terms of steel under short
    load, holes not taken out; a second moment given in the file counts, less the losses. The elastic moduli are those
    of the top and bottom edge of the steel, holes taken out, the deck acting; the plastic modulus is that of the steel
    alone about its equal-area axis. Capacities are before the factor on resistance, the lower of given and from plates.
    """

    id: str
    area_m2: float | None
    second_moment_m4: float
    elastic_modulus_top_m3: float | None
    elastic_modulus_bottom_m3: float | None
    plastic_modulus_m3: float | None
    sagging_capacity_kNm: float | None
    hogging_capacity_kNm: float | None
    shear_capacity_kN: float | None


@dataclass(frozen=True, kw_only=True)
class SupportShown:
    """A support as designed; a pin has no stiffness."""

    support: str
    kind: str
    x_m: float
    nominal_kN_per_m: float | None
    cv: float | None


@dataclass(frozen=True, kw_only=True)
class GirderShown:
    """The supports of a girder line."""

    girder: str
    supports: list[SupportShown]


@dataclass(frozen=True, kw_only=True)
class BridgeShown:
    """`bridge show --json`."""

    bridge: str
    sections: list[SectionShown]
    girders: list[GirderShown]


@dataclass(frozen=True, kw_only=True)
class CapacityShown:
    """A capacity and where it comes from; kN m, or kN for shear. `source` is "given", "plates" or empty."""

    effect: str
    value: float | None
    given: float | None
    built: float | None
    source: str


@dataclass(frozen=True, kw_only=True)
class PlateShown:
    """A plate as built, mm, levels above the underside of the stack; `loss_mm` off its thickness in all."""

    name: str
    width_mm: float
    height_mm: float
    bottom_mm: float
    loss_mm: float
    lost: str  # the loss in words, empty without one
    web: bool

    @property
    def top_mm(self) -> float:
        """Level of its upper edge as built, mm."""
        return self.bottom_mm + self.height_mm

    @property
    def upright(self) -> bool:
        """Whether its height exceeds its width: then it loses width."""
        return self.height_mm > self.width_mm


@dataclass(frozen=True, kw_only=True)
class SectionView:
    """All that is shown and drawn of one section.

    Attributes
    ----------
    plates : as listed in the file; empty where the section is given by numbers alone
    holes : (plate, level of the middle in mm or None, width in mm) of each
    deck : the deck, None without one
    elastic_axis_mm : under short load, of the stiffness; plastic_axis_mm : equal areas of the steel
    shear_area_m2 : of the stiffness; None leaves shear flexibility out
    losses : the losses that count, in words; empty without any
    method : "elastic" | "plastic", how plates give a moment
    """

    section: str
    shown: SectionShown
    capacities: list[CapacityShown]
    plates: list[PlateShown]
    holes: list[tuple[str, float | None, float]]
    deck: PlateShown | None
    elastic_axis_mm: float | None
    plastic_axis_mm: float | None
    shear_area_m2: float | None
    losses: str
    method: str


@dataclass(frozen=True, kw_only=True)
class PadShown:
    """A pad as its geometry gives it; `nominal_from` is "geometry" or "stiffness"."""

    girder: str
    support: str
    nominal_from: str
    formula: str
    shape_factor: float
    rubber_mm: float  # all layers and covers
    layer_modulus_MPa: float  # of an inner layer
    geometry_kN_per_m: float
    batch: str | None


@dataclass(frozen=True, kw_only=True)
class BridgeView:
    """`bridge show` for a person; losses up to `as_of`, all of them for None; `pads` are those with a geometry."""

    shown: BridgeShown
    sections: list[SectionView]
    pads: list[PadShown]
    as_of: dt.date | None
    models: list[str]  # published live loads, in words
    temperature: list[str]  # temperature cases, in words
    factors: str  # in words
    cautions: list[str]
