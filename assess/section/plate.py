"""What a section is built from: plates, the holes in them, a concrete deck on top."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace


@dataclass(frozen=True, kw_only=True)
class Plate:
    """A rectangle of a section.

    Parameters
    ----------
    name : str
    width : float
        Across the section, m.
    height : float
        Along the depth, m.
    bottom : float
        Level of its lower edge above the section's datum, m.
    yield_strength : float, optional
        kN/m2; None where it is not known.
    modular_ratio : float
        E of the section's steel over that of this plate: 1 for steel, more for concrete.
    web : bool, optional
        Whether it carries the shear; None: if its height exceeds its width.
    loss : float
        Thickness that it has lost, all faces together, m. `width` and `height` are as built.

    Raises
    ------
    ValueError
        If a size, a strength or a ratio is not finite and positive, or the loss reaches the thickness.
    """

    name: str
    width: float
    height: float
    bottom: float
    yield_strength: float | None = None
    modular_ratio: float = 1.0
    web: bool | None = None
    loss: float = 0.0

    def __post_init__(self) -> None:
        for what in ("width", "height", "modular_ratio", "yield_strength"):
            value = getattr(self, what)
            if value is not None and not 0.0 < value < math.inf:
                raise ValueError(
                    f"plate {self.name}: {what} must be finite and greater than zero, not {value}"
                )
        if not math.isfinite(self.bottom):
            raise ValueError(f"plate {self.name}: bottom must be finite, not {self.bottom}")
        if not 0.0 <= self.loss < self.thickness:
            raise ValueError(f"plate {self.name}: a loss of {self.loss} m is not less than its thickness")

    @property
    def upright(self) -> bool:
        """Whether it stands: its height exceeds its width."""
        return self.height > self.width

    @property
    def carries_shear(self) -> bool:
        """Whether it counts as a web."""
        return self.upright if self.web is None else self.web

    @property
    def thickness(self) -> float:
        """The smaller of width and height as built, m: what losses are taken off."""
        return min(self.width, self.height)

    @property
    def top(self) -> float:
        """Level of its upper edge, m."""
        return self.bottom + self.height

    @property
    def worn(self) -> Plate:
        """What is left of it, as a plate without loss.

        The loss is taken off the thickness and the plate keeps its middle: an upright plate becomes narrower, a
        flat one lower by half of the loss at its upper and at its lower edge, whichever face was measured.
        """
        if self.loss == 0.0:
            return self
        if self.upright:
            return replace(self, width=self.width - self.loss, loss=0.0)
        half = self.loss / 2.0
        return replace(self, height=self.height - self.loss, bottom=self.bottom + half, loss=0.0)


@dataclass(frozen=True, kw_only=True)
class Hole:
    """Holes through the thickness of a plate, in one cross-section.

    Parameters
    ----------
    plate : str
        Name of the plate.
    diameter : float
        m.
    count : int
        How many stand side by side across a flat plate; 1 in an upright one.
    level : float, optional
        Level of the hole's middle above the datum, m: needed in an upright plate, without meaning in a flat one.
    """

    plate: str
    diameter: float
    count: int = 1
    level: float | None = None

    def cut_from(self, plate: Plate) -> Plate:
        """Return the rectangle that is missing from the (worn) plate.

        Raises
        ------
        ValueError
            If the hole does not lie within the plate.
        """
        if plate.upright:
            if self.level is None or self.count != 1:
                raise ValueError(f"plate {plate.name} stands: each of its holes needs its own level")
            bottom, width, height = self.level - self.diameter / 2.0, plate.width, self.diameter
            if bottom < plate.bottom or bottom + height > plate.top:
                raise ValueError(f"plate {plate.name}: the hole at {self.level} m reaches past the plate")
        else:
            bottom, width, height = plate.bottom, self.count * self.diameter, plate.height
            if not width < plate.width:
                raise ValueError(f"plate {plate.name}: its holes are as wide as the plate")
        return replace(plate, width=width, height=height, bottom=bottom, loss=0.0, web=plate.carries_shear)


@dataclass(frozen=True, kw_only=True)
class Deck:
    """A concrete deck that acts with the steel in sagging.

    Parameters
    ----------
    width, thickness : float
        The part that acts with this girder, m.
    bottom : float
        Level of its underside, m.
    modular_ratio, modular_ratio_long : float
        E of the steel over E of the concrete, under short and under lasting load.
    strength : float, optional
        Stress that the concrete may carry at the limit, kN/m2; None: the concrete is not checked.
    """

    width: float
    thickness: float
    bottom: float
    modular_ratio: float
    modular_ratio_long: float
    strength: float | None = None

    def plate(self, *, lasting: bool = False) -> Plate:
        """Return the deck as a plate."""
        return Plate(
            name="deck",
            width=self.width,
            height=self.thickness,
            bottom=self.bottom,
            yield_strength=self.strength,
            modular_ratio=self.modular_ratio_long if lasting else self.modular_ratio,
        )
