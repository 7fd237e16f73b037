"""The `[girder.support.pad]` table of a bridge file: the geometry of an elastomeric pad."""

from __future__ import annotations

from db.exchange.fields import Fields
from db.pad_doc import PAD_COMPOUNDS, PAD_FORMULAS, PAD_LIMITS, PAD_SHAPES, PadDoc
from db.wording import shown

PAD = (
    "shape length width diameter side_cover layers layer_thickness top_bottom_cover plate_thickness height "
    "shear_modulus hardness bulk_modulus compound formula batch batch_correlation shear_modulus_tolerance "
    "height_tolerance fixed limits limit"
)
_LIMIT = "permanent_pressure total_pressure permanent_strain total_strain live_compression least_permanent_pressure"

_SHORT = {"NR": "natural rubber", "CR": "chloroprene", "polychloroprene": "chloroprene"}

MOST_LAYERS = 60
LARGEST_PLAN_M = 3.0
SMALLEST_PLAN_M = 0.02
THICKEST_SHARE = 0.5  # of the plan's shorter side
SHEAR_KN_PER_M2 = (200.0, 5000.0)
BULK_KN_PER_M2 = (2e5, 1e7)
HARDNESS = (30.0, 90.0)
SLACK_M = 5e-4  # heights on drawings are written in whole or half millimetres
LARGEST_CORRELATION = 0.99


def pad(fields: Fields) -> PadDoc:
    """Return a pad from its table.

    Raises
    ------
    BedstoneError
        If anything in it is wrong or no such pad can be.
    """
    shape = fields.one_of("shape", PAD_SHAPES)
    sides = _plan(fields, shape)
    layers, thickness, cover = _layers(fields, shape)
    side_cover = _not_negative(fields, "side_cover")
    _refuse_thick(fields, sides, side_cover, thickness, cover)
    plate, height = (fields.optional_positive(name, "length") for name in ("plate_thickness", "height"))
    rubber = layers * thickness + 2.0 * cover
    if plate is not None and height is None:
        problem = "it checks the layers against the height, and there is none"
        raise fields.error("plate_thickness", problem, 'add the height of the whole pad, for example "72 mm"')
    _refuse_height(fields, shape, layers, rubber, plate, height)
    own, least = _own_limits(fields)
    return PadDoc(
        shape=shape,
        **sides,
        side_cover=side_cover,
        layers=layers,
        layer_thickness=thickness,
        top_bottom_cover=cover,
        plate_thickness=plate,
        height=height,
        shear_modulus=_shear_modulus(fields),
        hardness=_hardness(fields),
        bulk_modulus=_modulus(fields, "bulk_modulus", BULK_KN_PER_M2, "2000 MPa"),
        compound=_compound(fields),
        formula=fields.one_of("formula", PAD_FORMULAS, PAD_FORMULAS[0]),
        batch=fields.id("batch") if fields.has("batch") else None,
        batch_correlation=_correlation(fields),
        shear_modulus_tolerance=_share(fields, "shear_modulus_tolerance", 0.5, "0.15"),
        height_tolerance=_height_tolerance(fields, rubber),
        fixed=fields.flag("fixed"),
        limits=fields.one_of("limits", PAD_LIMITS) if fields.has("limits") else None,
        own_limits=own,
        least_permanent_pressure=least,
    )


def _plan(fields: Fields, shape: str) -> dict[str, float]:
    """The sides, or the diameter, of the whole pad."""
    round_ = shape == "circular" or (shape == "plain" and fields.has("diameter"))
    wanted = ("diameter",) if round_ else ("length", "width")
    for name in ("length", "width", "diameter"):
        if name not in wanted and fields.has(name):
            kind = "circular" if round_ else "rectangular"
            problem = f"a {kind} pad has none"
            raise fields.error(name, problem, f"give {' and '.join(wanted)} alone, or mend the shape")
    sides = {name: fields.positive(name, "length", example="300 mm") for name in wanted}
    for name, side in sides.items():
        if not SMALLEST_PLAN_M <= side <= LARGEST_PLAN_M:
            problem = f'"{shown(fields.table[name])}" is no side of a pad'
            raise fields.error(name, problem, 'check the unit (20 mm to 3 m), for example "300 mm"')
    return sides


def _layers(fields: Fields, shape: str) -> tuple[int, float, float]:
    """Number and thickness of the layers, and the rubber outside the outermost plates."""
    if shape == "plain":
        for name in ("layers", "side_cover", "top_bottom_cover", "plate_thickness"):
            if fields.has(name) and not (name == "layers" and fields.table[name] == 1):
                problem = "a plain pad is one layer without plates and covers"
                raise fields.error(name, problem, "leave it out, or mend the shape")
        return 1, fields.positive("layer_thickness", "length", example="20 mm"), 0.0
    fields.need("layers", "5")
    layers = fields.whole("layers", 0, least=1, most=MOST_LAYERS)
    thickness = fields.positive("layer_thickness", "length", example="8 mm")
    return layers, thickness, _not_negative(fields, "top_bottom_cover")


def _not_negative(fields: Fields, name: str) -> float:
    value = fields.si(name, "length", 0.0, example="4 mm")
    if value < 0.0:
        problem = f'"{shown(fields.table[name])}" is negative'
        raise fields.error(name, problem, 'write the thickness of the rubber there, for example "4 mm"')
    return value


def _refuse_thick(
    fields: Fields, sides: dict[str, float], side_cover: float, thickness: float, cover: float
) -> None:
    """Refuse covers that leave no plate, and layers too thick for the plan."""
    short = min(sides.values())
    left = short - 2.0 * side_cover
    if not left > 0.0:
        problem = f"covers of {1e3 * side_cover:g} mm leave nothing of a side of {1e3 * short:g} mm"
        raise fields.error("side_cover", problem, 'write the rubber beside the plates, for example "4 mm"')
    for name, value in (("layer_thickness", thickness), ("top_bottom_cover", cover)):
        if value > THICKEST_SHARE * left:
            problem = f"{1e3 * value:g} mm of rubber is too thick for a plan of {1e3 * left:g} mm"
            raise fields.error(name, problem, 'check the unit, for example "8 mm"')


def _refuse_height(
    fields: Fields, shape: str, layers: int, rubber: float, plate: float | None, height: float | None
) -> None:
    """Refuse layers and plates that do not stack up to the height, if that is given."""
    if height is None:
        return
    steel = 0.0 if shape == "plain" or plate is None else (layers + 1) * plate
    stack = rubber + steel
    what = f"{1e3 * rubber:g} mm of rubber and {1e3 * steel:g} mm of plates"
    if stack > height + SLACK_M or (plate is None and shape != "plain" and stack >= height):
        problem = f"{what} are thicker than the pad ({1e3 * height:g} mm)"
        raise fields.error("height", problem, "mend layers, plate_thickness or height")
    complete = shape == "plain" or plate is not None
    if complete and stack < height - SLACK_M:
        problem = f"{what} do not fill the pad ({1e3 * height:g} mm)"
        raise fields.error("height", problem, "mend layers, top_bottom_cover, plate_thickness or height")


def _shear_modulus(fields: Fields) -> float | None:
    if fields.has("shear_modulus") and fields.has("hardness"):
        raise fields.error("hardness", "the shear modulus is given too", "give one of them")
    if not fields.has("shear_modulus") and not fields.has("hardness"):
        remedy = 'write shear_modulus = "0.9 MPa", or hardness = 60'
        raise fields.error("shear_modulus", "neither it nor the hardness is given", remedy)
    return _modulus(fields, "shear_modulus", SHEAR_KN_PER_M2, "0.9 MPa")


def _modulus(fields: Fields, name: str, bounds: tuple[float, float], example: str) -> float | None:
    if not fields.has(name):
        return None
    value = fields.positive(name, "stress", example=example)
    if not bounds[0] <= value <= bounds[1]:
        problem = f'"{shown(fields.table[name])}" is no {name.replace("_", " ")} of rubber'
        reach = f"{bounds[0] / 1e3:g} to {bounds[1] / 1e3:g} MPa"
        raise fields.error(name, problem, f'check the unit ({reach}), for example "{example}"')
    return value


def _compound(fields: Fields) -> str | None:
    if not fields.has("compound"):
        return None
    word = fields.one_of("compound", (*PAD_COMPOUNDS, *_SHORT))
    return _SHORT.get(word, word)


def _hardness(fields: Fields) -> float | None:
    if not fields.has("hardness"):
        return None
    value = fields.number("hardness", over=0.0)
    if not HARDNESS[0] <= value <= HARDNESS[1]:
        raise fields.error("hardness", f"{value:g} is no hardness of a bearing", "write IRHD, for example 60")
    return value


def _correlation(fields: Fields) -> float | None:
    name = "batch_correlation"
    if not fields.has(name):
        return None
    if not fields.has("batch"):
        raise fields.error(name, "the pad belongs to no batch", 'add batch = "name of the batch"')
    value = fields.number(name)
    if not 0.0 <= value <= LARGEST_CORRELATION:
        remedy = f"write a number from 0 to {LARGEST_CORRELATION:g}, for example 0.6"
        raise fields.error(name, f"{value:g} is no correlation of pads of one batch", remedy)
    return value


def _share(fields: Fields, name: str, below: float, example: str) -> float | None:
    if not fields.has(name):
        return None
    value = fields.number(name)
    if not 0.0 <= value < below:
        remedy = f"write a share of the value from 0 to {below:g}, for example {example}"
        raise fields.error(name, f"{value:g} is no tolerance", remedy)
    return value


def _height_tolerance(fields: Fields, rubber: float) -> float | None:
    name = "height_tolerance"
    if not fields.has(name):
        return None
    value = fields.si(name, "length", example="2 mm")
    if not 0.0 <= value < 0.5 * rubber:
        problem = f'"{shown(fields.table[name])}" is no tolerance of {1e3 * rubber:g} mm of rubber'
        raise fields.error(name, problem, 'write for example "2 mm"')
    return value


def _own_limits(fields: Fields) -> tuple[tuple[tuple[str, float], ...], float | None]:
    """The owner's limits by name, and the least permanent pressure."""
    if not fields.has("limit"):
        return (), None
    table = fields.subtable("limit", _LIMIT, "the owner's limits")
    own = []
    for name, dimension, example in (
        ("permanent_pressure", "stress", "8 MPa"),
        ("total_pressure", "stress", "10 MPa"),
        ("permanent_strain", "strain", "5 percent"),
        ("total_strain", "strain", "7 percent"),
        ("live_compression", "length", "3 mm"),
    ):
        value = table.optional_positive(name, dimension, example=example)
        if value is not None:
            own.append((name.replace("_", " "), value))
    if table.has("least_permanent_pressure") and fields.flag("fixed"):
        problem = "a pad that is fixed needs none"
        raise table.error("least_permanent_pressure", problem, "leave it out, or fixed = true")
    return tuple(own), table.optional_positive("least_permanent_pressure", "stress", example="3 MPa")


def refuse_idle(pad_fields: Fields, support: Fields) -> None:
    """Refuse fields of a pad that others of its support leave without effect.

    Raises
    ------
    BedstoneError
        For the first of them.
    """
    for name in ("shear_modulus_tolerance", "height_tolerance"):
        own = "stiffness_cv" if support.has("stiffness_cv") else "stiffness"
        if pad_fields.has(name) and support.has(own):
            problem = f"the doubt of this pad is that of its {own}, and not that of its geometry"
            raise pad_fields.error(name, problem, f"leave it out, or leave {own} out")
    if pad_fields.has("compound") and support.has("temperature_coefficient"):
        problem = "the support has its own temperature_coefficient"
        raise pad_fields.error("compound", problem, "leave out the one or the other")
