"""Resistances of a built section, as built and after losses."""

from __future__ import annotations

from dataclasses import dataclass, replace

from assess.section.built import HOGGING, SAGGING, BuiltSection

ELASTIC, PLASTIC = "elastic", "plastic"


@dataclass(frozen=True, kw_only=True)
class BuiltResistance:
    """Moments in kN m and shear in kN, all positive, before any factor; None where not determined."""

    sagging: float | None
    hogging: float | None
    shear: float | None


def resistance(section: BuiltSection, *, method: str = ELASTIC) -> BuiltResistance:
    """Resistance of a section with the losses it has.

    A loss never raises a resistance. First yield alone could: wear of a plate near the axis draws the axis towards the
    fibre that yields first, and an outer plate that wears takes its edge inward. A plate whose wear would raise the
    moment counts as built.

    Parameters
    ----------
    section : BuiltSection
    method : str
        "elastic": first yield of any fibre. "plastic": yield throughout, for sections said to be compact.
    """
    sagging, hogging = (_lowest(section, sign, method) for sign in (SAGGING, HOGGING))
    return BuiltResistance(sagging=sagging, hogging=hogging, shear=section.shear_resistance)


def _lowest(section: BuiltSection, sign: str, method: str) -> float | None:
    """The moment with those losses that lower it: worn plates are made good one by one as long as it falls."""
    found = _moment(section, sign, method)
    while found is not None:
        tried = [(_moment(one, sign, method), one) for one in _made_good(section)]
        lower, better = min(
            ((m, one) for m, one in tried if m is not None), key=_first, default=(found, section)
        )
        if not lower < found:
            break
        found, section = lower, better
    return found


def _made_good(section: BuiltSection) -> list[BuiltSection]:
    """The section with each of its worn plates in turn as built."""
    plates = section.plates
    return [
        replace(section, plates=(*plates[:i], replace(plate, loss=0.0), *plates[i + 1 :]))
        for i, plate in enumerate(plates)
        if plate.loss > 0.0
    ]


def _first(pair: tuple[float, BuiltSection]) -> float:
    return pair[0]


def _moment(section: BuiltSection, sign: str, method: str) -> float | None:
    if method == ELASTIC:
        return section.yield_moment(sign)
    found = section.plastic(sign)
    return None if found is None else found.moment
