"""The cautions at the end of the page: every one stands there, none stands there twice."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from assess.report import words
from assess.results import ReportView


def of_page(view: ReportView) -> list[str]:
    """Return every caution once, in the order in which they were raised, besides the page's fixed ones.

    A caution of the results that says what a fixed one says is left to that one. What is said alike of
    several girders is said once, of all of them.
    """
    raised: list[Iterable[str]] = [view.cautions, *view.verdict_cautions.values()]
    raised += [r.cautions for r in (view.calibration, view.assessment, view.trend) if r is not None]
    names = support_names(view)
    told = [words.prose(c, names) for group in raised for c in group if not c.startswith(words.SAID_BY_FIXED)]
    girders = [g.girder for g in view.girders] + [g.girder for g in view.assessment.girders]
    return grouped(list(dict.fromkeys(told)), list(dict.fromkeys(girders)))


def support_names(view: ReportView) -> list[str]:
    """Return the names of all supports that the page speaks of."""
    drawn = [s.support for g in view.girders for s in g.supports]
    return list(dict.fromkeys(drawn + [r.support for g in view.assessment.girders for r in g.reactions]))


def grouped(cautions: Sequence[str], girders: Sequence[str]) -> list[str]:
    """Say once what is said alike of several girders: "north: x" and "south: x" become "north and south: x"."""
    said: dict[str, list[str]] = {}  # what is said -> the girders of which it is said, none for the bridge
    for caution in cautions:
        own = next((g for g in girders if caution.startswith(f"{g}: ")), None)
        of = said.setdefault(caution if own is None else caution.removeprefix(f"{own}: "), [])
        if own is not None and own not in of:
            of.append(own)
    return [f"{_and(of)}: {told}" if of else told for told, of in said.items()]


def _and(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"
