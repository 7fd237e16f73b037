"""Cautions on a plan of the next visit, in words."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from assess.capacity.checks import Check
from assess.workflow import cautions
from assess.workflow.study import Study
from assess.workflow.supports import kept_fits
from db.documents import GirderDoc

PROMISE = (
    "The standard deviations promised hold, on average, if every reading is as good as the standard deviation it is given, the "
    "girder is as modelled and pads and seats are near what is known of them; where seats stand near their datum one visit may "
    "find more or less, because a settlement that relieves does not count. Read more than the least, so that readings check "
    "each other."
)
BY_ITSELF = (
    "The next visit is taken as it will be calibrated, by itself: before its readings the pads have their nominal values with "
    "the scatter assumed for them, and the seats may be anywhere within the settlement_sd of the bridge file, whatever earlier "
    "visits found."
)


def of_sources(study: Study) -> list[str]:
    """Cautions on the calibration a plan is made around."""
    fits = kept_fits(study, None)
    if not fits:
        return [
            f"No calibration is kept for {study.bridge.id}: the plan is made around nominal pads and seats at their datum."
        ]
    latest = max(fits)
    made_on = fits[latest][1].revision
    if made_on == study.kept.revision:
        return []
    return [
        (
            f"The calibration of {latest} was made on revision {made_on} of the bridge file, the plan is on revision "
            f"{study.kept.revision}: calibrate again."
        )
    ]


def of_lifting(girder: str, lifting: Mapping[float, Sequence[str]], permanent: Sequence[str]) -> list[str]:
    """Caution: positions left out because the girder leaves a support there."""
    said = []
    if permanent:
        said.append(
            f"{girder}: under the permanent load alone the girder is off {_quoted(permanent)}: nothing read on it tells a "
            "stiffness, and only the levels of its seats are planned."
        )
    elif lifting:
        places = ", ".join(f"{x:.4g}" for x in sorted(lifting))
        off = _quoted(sorted({support for supports in lifting.values() for support in supports}))
        said.append(
            f"{girder}: with the leading axle at {places} m the girder would leave {off}: no linear girder explains what is "
            "read then, and these positions are left out."
        )
    return said


def fewer(girder: str, found: int, asked: int) -> str:
    """Caution: fewer readings than asked for."""
    return f"{girder}: {found} readings are planned where {asked} were asked for: there is no more on offer that tells anything."


def no_test(girder: str, which: str) -> str:
    """Caution: a set of readings without one under a test load."""
    return f"{girder}: {which} has no reading under the vehicle: it tells the seats, and no pad can be calibrated by it."


def no_capacity(girder: str) -> str:
    """Caution: no utilisation to plan for."""
    return (
        f"{girder}: no section of it has a capacity, so no utilisation is known; the readings are chosen to tell all pads "
        "and seats together as well as can be."
    )


def seats_unread(girder: str, supports: Sequence[str]) -> list[str]:
    """Caution: seats that could be told, and are not by the readings chosen."""
    if not supports:
        return []
    return [
        (
            f"{girder}: the level of the seat at {_quoted(supports)} is not told by these readings, and what it may have dropped stays "
            "in the standard deviations; an assessment would take it as last levelled, and look surer than this."
        )
    ]


def seats_without_gauge(girder: str, supports: Sequence[str]) -> list[str]:
    """Caution: seats that nothing on offer tells of."""
    if not supports:
        return []
    return [
        (
            f"{girder}: nothing on offer tells whether the seat at {_quoted(supports)} has moved: it is taken as last levelled, at "
            "its datum if it never was."
        )
    ]


def overtaken(girder: str, doc: GirderDoc, check: Check, utilisation: float, sd: float) -> str:
    """Caution: another section would be the worst after the readings."""
    span = check.span + 1 if check.span >= 0 else None
    support = doc.supports[check.support].id if check.support >= 0 else None
    name = cautions.section_name(check.effect, span, support)
    return (
        f"{girder}: after these readings {name} may be the worst section instead, with a utilisation of {utilisation:.3g} "
        f"(standard deviation {sd:.2g})."
    )


def _quoted(supports: Sequence[str]) -> str:
    return ", ".join(f'"{support}"' for support in supports)
