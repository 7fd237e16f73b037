"""Resistances of a built section, as built and after losses."""

from __future__ import annotations

from dataclasses import dataclass

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

    A loss never raises a resistance. First yield alone could: where a thin outer plate wears away, the fibre that
    yields first moves inward faster than the section weakens. The lower of now and as built counts.

    Parameters
    ----------
    section : BuiltSection
    method : str
        "elastic": first yield of any fibre. "plastic": yield throughout, for sections said to be compact.
    """
    now, new = _of(section, method), _of(section.as_built, method)
    return BuiltResistance(
        sagging=_least(now.sagging, new.sagging),
        hogging=_least(now.hogging, new.hogging),
        shear=_least(now.shear, new.shear),
    )


def _of(section: BuiltSection, method: str) -> BuiltResistance:
    sagging, hogging = (_moment(section, sign, method) for sign in (SAGGING, HOGGING))
    return BuiltResistance(sagging=sagging, hogging=hogging, shear=section.shear_resistance)


def _moment(section: BuiltSection, sign: str, method: str) -> float | None:
    if method == ELASTIC:
        return section.yield_moment(sign)
    found = section.plastic(sign)
    return None if found is None else found.moment


def _least(first: float | None, second: float | None) -> float | None:
    return None if first is None or second is None else min(first, second)
