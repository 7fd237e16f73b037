"""Cautions on pads that the girder leaves."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from assess.results import ReactionResult


def unknown(girder: str) -> str:
    """Caution: no permanent load tells what the girder stands on."""
    return (
        f"{girder}: the bridge file gives this girder no permanent load, so that nothing tells whether it stays on its "
        "pads: it is taken to stay on all of them. Write its permanent loads."
    )


def of_states(girder: str, lifting: Mapping[str, Sequence[str]], *, nothing_left: bool) -> list[str]:
    """Caution: load states that are not fitted because a support lifts."""
    if not lifting:
        return []
    each = "; ".join(f"{state} (lifts at {_listed(supports)})" for state, supports in lifting.items())
    left = "no reading is left, and its pads are not calibrated" if nothing_left else "the rest is fitted"
    said = (
        f"{girder}: left out of the fit, because the girder is off a pad under permanent load and the vehicle: "
        f"{each}; {left}. Look there for a gap, stand the vehicle elsewhere, or write hold_down = true at a support "
        "that is tied down."
    )
    return [said]


def tipping(girder: str, supports: Sequence[str]) -> list[str]:
    """Caution on a girder that would tip under the factored loads; `supports` are those it lifts off."""
    if not supports:
        return []
    said = (
        f"{girder}: would tip under factored loads: it lifts off {_listed(supports)}, and what is left does not hold it. Its figures "
        "are those of a girder held down at every support and hold for no other: find out on site what ties it down, and "
        "write hold_down = true there, or have a licensed engineer decide now on the load."
    )
    return [said]


def of_reactions(girder: str, reactions: Sequence[ReactionResult]) -> list[str]:
    """Cautions on supports that lift, or are pulled, under the loads assessed for."""
    return [f'{girder}: "{row.support}" {told}' for row in reactions if (told := _of_support(row))]


def _of_support(row: ReactionResult) -> str:
    if row.calibrated_lifts_under == "permanent":
        return (
            "lifts under permanent load alone: the girder is off this pad, carries its moments without it and may "
            "strike it as load passes. Look for the gap on site."
        )
    if row.calibrated_lifts_under == "live":
        return (
            "lifts as live load passes: the pad carries nothing then, the moments are those without it, and it is "
            "struck when the girder comes back."
        )
    if row.calibrated_lifts_under == "factored":
        return "lifts under factored loads; under the loads as they are it stays down."
    if row.calibrated_factored_min_kN < 0.0:
        return (
            f"is pulled upward by {-row.calibrated_factored_min_kN:.3g} kN under factored loads: it is counted as held "
            "down, so check what holds it."
        )
    return ""


def _listed(names: Sequence[str]) -> str:
    return ", ".join(f'"{name}"' for name in names)
