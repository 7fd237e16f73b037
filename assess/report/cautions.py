"""The cautions at the end of the page: every one stands there, none stands there twice."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from assess.report import words
from assess.results import ReportView, grouped


@dataclass(frozen=True, kw_only=True)
class Group:
    """Cautions that were raised on one part of the work."""

    name: str
    said: list[str]


def of_page(view: ReportView) -> list[Group]:
    """Return every caution once, where it was raised first, besides the page's fixed ones.

    A caution of the results that says what a fixed one says is left to that one. What is said alike of
    several girders is said once, of all of them.
    """
    parts: list[tuple[str, list[str]]] = [
        (name, result.cautions if result is not None else [])
        for name, result in (
            ("On the readings and their fit", view.calibration),
            ("On the assessment", view.assessment),
            ("On the years", view.trend),
        )
    ]
    parts.append(("Besides", [*view.cautions, *(c for own in view.verdict_cautions.values() for c in own)]))
    names = support_names(view)
    girders = list(
        dict.fromkeys([*(g.girder for g in view.girders), *(g.girder for g in view.assessment.girders)])
    )
    groups: list[Group] = []
    seen: set[str] = set()
    for name, raised in parts:
        told = [words.prose(c, names) for c in raised if not c.startswith(words.SAID_BY_FIXED)]
        new = [c for c in dict.fromkeys(told) if c not in seen]
        seen.update(new)
        if new:
            groups.append(Group(name=name, said=grouped(_by_girder(new, girders), girders)))
    return groups


def _by_girder(cautions: Sequence[str], girders: Sequence[str]) -> list[str]:
    """Cautions of one girder after those of the other, those of the bridge first."""
    order = {f"{girder}:": i for i, girder in enumerate(girders, 1)}
    return sorted(
        cautions, key=lambda said: next((i for mark, i in order.items() if said.startswith(mark)), 0)
    )


def support_names(view: ReportView) -> list[str]:
    """Return the names of all supports that the page speaks of."""
    drawn = [s.support for g in view.girders for s in g.supports]
    return list(dict.fromkeys(drawn + [r.support for g in view.assessment.girders for r in g.reactions]))
