"""Cautions on suppositions."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from assess.results import ReactionResult
from assess.workflow.suppose import Supposition


def of_suppositions(supposed: Sequence[Supposition]) -> list[str]:
    """Cautions: what the supposed case is, and what of it does not follow from the readings."""
    if not supposed:
        return []
    said = [_CASE.format(_listed(one.text for one in supposed))]
    if any(one.kind in ("loss", "girder") for one in supposed):
        said.append(
            "The pads of the supposed case are those calibrated on the sections of the bridge file: other "
            "sections would have told other pads."
        )
    if any(one.kind in ("live", "permanent") for one in supposed):
        said.append(
            "A supposed factor on a load stands beside the partial factors and does not replace them."
        )
    return said


def of_reactions(girder: str, reactions: Sequence[ReactionResult]) -> list[str]:
    """Cautions on supports that lift in the supposed case and do not today."""
    return [
        f'{girder}: as supposed, "{row.support}" lifts under {_WORDS[row.supposed_lifts_under]}.'
        for row in reactions
        if row.supposed_lifts_under is not None and row.supposed_lifts_under != row.calibrated_lifts_under
    ]


_CASE = (
    "The supposed case takes {} and all else as calibrated. It is no finding: it has no band, nothing of it is "
    "kept, and the record does not change."
)
_WORDS = {
    "permanent": "permanent load alone",
    "live": "permanent and live load as they are",
    "factored": "the factored loads",
}


def _listed(texts: Iterable[str]) -> str:
    return ", ".join(f'"{text}"' for text in texts)
