"""What is asked of the readings and believed before them: `unknowns` lists and the `[prior]` table."""

from __future__ import annotations

from db.documents import UNKNOWNS
from db.exchange.fields import Fields
from db.prior_doc import PriorDoc
from db.wording import listed, shown, suggestion, written

PRIOR = (
    "settlement_sd girder_sd share_sd datum_shift_sd datum_tilt_sd gradient_sd test_gradient_sd "
    "sustained_ratio sustained_sd"
)
LARGEST_LEVEL_SD_M = 1.0
LARGEST_SD_LN = 3.0
LARGEST_DIFFERENCE_K = 60.0

_LEVELS = {"settlement_sd": "20 mm", "datum_shift_sd": "2 mm", "datum_tilt_sd": "2 mm"}
_LOGS = ("girder_sd", "share_sd", "sustained_sd")
_DIFFERENCES = {"gradient_sd": "5 K", "test_gradient_sd": "1 K"}


def unknowns(fields: Fields, name: str) -> tuple[str, ...]:
    """Return a list of unknowns, in the order of `UNKNOWNS`.

    Raises
    ------
    BedstoneError
        If it is no list of them, names one twice or leaves out the pads.
    """
    given = fields.table[name]
    right = f'write for example {name} = ["pads", "settlements"]; known: {listed(UNKNOWNS)}'
    if not isinstance(given, list):
        raise fields.error(name, f"{written(given)} is not a list", right)
    for one in given:
        if one not in UNKNOWNS:
            hint = suggestion(one, UNKNOWNS) if isinstance(one, str) else ""
            raise fields.error(name, f"{written(one)} is no unknown{hint}", right)
        if given.count(one) > 1:
            raise fields.error(name, f'"{one}" stands in it twice', "name each of them once")
    if "pads" not in given:
        raise fields.error(name, '"pads" is not among them', right)
    return tuple(one for one in UNKNOWNS if one in given)


def prior(top: Fields) -> PriorDoc:
    """Return the `[prior]` table; what it leaves out is that of `PriorDoc`.

    Raises
    ------
    BedstoneError
        If a value cannot be a standard deviation, or a ratio is none.
    """
    if not top.has("prior"):
        return PriorDoc()
    fields = top.subtable("prior", PRIOR, "settlement_sd")
    made: dict[str, float] = {}
    for name, example in _LEVELS.items():
        _take(made, fields, name, "length", example, LARGEST_LEVEL_SD_M)
    for name, example in _DIFFERENCES.items():
        _take(made, fields, name, "temperature difference", example, LARGEST_DIFFERENCE_K)
    for name in _LOGS:
        if fields.has(name):
            made[name] = fields.number(name, over=0.0)
            if made[name] > LARGEST_SD_LN:
                problem = f"{made[name]:g} is no standard deviation of a logarithm"
                raise fields.error(name, problem, f"write for example {name} = 0.1")
    if fields.has("sustained_ratio"):
        made["sustained_ratio"] = fields.number("sustained_ratio", over=0.0)
        if made["sustained_ratio"] > 1.0:
            remedy = "write sustained over short-term stiffness, for example 0.7"
            raise fields.error("sustained_ratio", f"{made['sustained_ratio']:g} is greater than 1", remedy)
    return PriorDoc(**made)


def _take(
    made: dict[str, float], fields: Fields, name: str, dimension: str, example: str, largest: float
) -> None:
    """Take a written standard deviation, if it is there."""
    if not fields.has(name):
        return
    made[name] = fields.positive(name, dimension, example=example)
    if made[name] > largest:
        problem = f'"{shown(fields.table[name])}" is no such standard deviation'
        raise fields.error(name, problem, f'check the unit, for example "{example}"')
