"""A pad as it stands on the drawing: plan, layers, shape factors."""

from __future__ import annotations

import math
from dataclasses import dataclass

from assess.pad.tables import PadError

THICKEST = 0.5  # of the plan's shorter side: a layer beyond this is no bearing pad


@dataclass(frozen=True, kw_only=True)
class Plan:
    """The plan that a formula reckons with; m and m2. For a circle both sides are the diameter."""

    area: float
    perimeter: float
    short: float
    long: float
    circular: bool

    def shape_factor(self, thickness: float) -> float:
        """Loaded area over the force-free area of a layer of that (effective) thickness, m."""
        return self.area / (self.perimeter * thickness)


@dataclass(frozen=True, kw_only=True)
class Layer:
    """Equal rubber layers: how many, how thick (m), and where: "inner", "outer" or "plain"."""

    count: int
    thickness: float
    place: str


@dataclass(frozen=True, kw_only=True)
class PadGeometry:
    """A rectangular or circular pad of rubber layers between steel plates, or one plain layer.

    Parameters
    ----------
    length, width : plan of the whole pad, m; or
    diameter : of a circular pad, m
    side_cover : from the edge of the pad to the edge of the plates, m
    layers : rubber layers between plates
    layer_thickness : of one of them, m
    top_bottom_cover : rubber outside the outermost plates, each side, m
    plain : one layer without plates; `layers` is 1 and there is no cover

    Raises
    ------
    PadError
        if no such pad can be.
    """

    length: float | None = None
    width: float | None = None
    diameter: float | None = None
    side_cover: float = 0.0
    layers: int = 1
    layer_thickness: float
    top_bottom_cover: float = 0.0
    plain: bool = False

    def __post_init__(self) -> None:
        _require_plan(self)
        if self.layers < 1:
            raise PadError("layers", f"{self.layers} is no number of layers", "write 1 or more")
        if self.plain and (self.layers != 1 or self.side_cover or self.top_bottom_cover):
            field = "layers" if self.layers != 1 else "side_cover" if self.side_cover else "top_bottom_cover"
            raise PadError(field, "a plain pad is one layer without plates and covers", f"leave out {field}")
        for field in ("side_cover", "top_bottom_cover"):
            if not 0.0 <= getattr(self, field) < math.inf:
                raise PadError(field, "it is negative", "write zero or more")
        plan = self.plan(gross=True)
        if not 2.0 * self.side_cover < plan.short:
            problem = (
                f"covers of {1e3 * self.side_cover:g} mm leave nothing of a side of {1e3 * plan.short:g} mm"
            )
            raise PadError("side_cover", problem, "write the rubber beside the plates, for example 4 mm")
        for field in ("layer_thickness", "top_bottom_cover"):
            thickness = getattr(self, field)
            short = self.plan().short
            if thickness > THICKEST * short:
                problem = f"a layer of {1e3 * thickness:g} mm is too thick for a plan of {1e3 * short:g} mm"
                raise PadError(field, problem, "check the unit, for example 8 mm")
        if not self.layer_thickness > 0.0:
            raise PadError("layer_thickness", "it is not greater than zero", "write for example 8 mm")

    @property
    def circular(self) -> bool:
        """Whether the plan is a circle."""
        return self.diameter is not None

    def plan(self, *, gross: bool = False) -> Plan:
        """The plan inside the side covers (of the plates), or of the whole pad."""
        off = 0.0 if gross else 2.0 * self.side_cover
        if self.diameter is not None:
            d = self.diameter - off
            return Plan(area=math.pi * d * d / 4.0, perimeter=math.pi * d, short=d, long=d, circular=True)
        a, b = sorted(((self.length or 0.0) - off, (self.width or 0.0) - off))
        return Plan(area=a * b, perimeter=2.0 * (a + b), short=a, long=b, circular=False)

    @property
    def rubber(self) -> tuple[Layer, ...]:
        """All rubber in compression, inner layers first."""
        if self.plain:
            return (Layer(count=1, thickness=self.layer_thickness, place="plain"),)
        inner = Layer(count=self.layers, thickness=self.layer_thickness, place="inner")
        if not self.top_bottom_cover:
            return (inner,)
        return inner, Layer(count=2, thickness=self.top_bottom_cover, place="outer")

    @property
    def rubber_thickness(self) -> float:
        """All rubber of the pad, m."""
        return sum(layer.count * layer.thickness for layer in self.rubber)

    def thicker(self, factor: float) -> PadGeometry:
        """The same pad with every rubber layer thicker by a factor."""
        return PadGeometry(
            length=self.length,
            width=self.width,
            diameter=self.diameter,
            side_cover=self.side_cover,
            layers=self.layers,
            layer_thickness=self.layer_thickness * factor,
            top_bottom_cover=self.top_bottom_cover * factor,
            plain=self.plain,
        )


def _require_plan(pad: PadGeometry) -> None:
    sides = {"length": pad.length, "width": pad.width, "diameter": pad.diameter}
    given = [field for field, value in sides.items() if value is not None]
    if given not in (["length", "width"], ["diameter"]):
        problem = f"a plan of {' and '.join(given) or 'nothing'} cannot be drawn"
        raise PadError("diameter", problem, "give length and width, or the diameter of a circular pad")
    for field in given:
        value = sides[field]
        if value is None or not 0.0 < value < math.inf:
            raise PadError(field, "it is not greater than zero", "write for example 300 mm")
