"""Cautions on packing and jacking."""

from __future__ import annotations

from assess.capacity import ALLOWANCE
from assess.results import GirderShims

_GAIN = 5e-4  # in utilisation: less is not seen in three figures

STANDING = (
    (
        "Jacking needs a licensed engineer: the lifting points, end diaphragms and bearing stiffeners, webs over the jacks, and what the "
        "jacks stand on are checked apart, and none of that is checked here."
    ),
    (
        f"Reactions found on site are often well above calculated ones: jacks are to be good for {ALLOWANCE:g} times the load given, "
        "the load is watched as it comes on, and a lift that wants more is stopped."
    ),
    (
        "Live load is off the bridge while it stands on jacks. Lock-off and packing follow the jack at every step, and no one "
        "works under a load that is not packed."
    ),
    (
        "All supports of a stage rise together and evenly, across the girders too: girders that share a deck are packed here one by one, "
        "and what a difference between them does to the deck is not in these figures."
    ),
    (
        "Heights are counted from the lowest support up: a common lift or a straight tilt of all supports changes no moment. "
        "Read compressions and levels before and after, and log both visits: the seats' datum moves with the packing."
    ),
    "Packing answers the pads and seats of today. Where they go on moving it is to be found again.",
)


def of_stock(step: float, differential: float) -> list[str]:
    """Caution: a step that cannot be put in within the differential limit; mm."""
    if step <= differential * (1.0 + 1e-9):
        return []
    return [
        (
            f"One step of {step:g} mm is thicker than the {differential:g} mm that neighbours may rise apart in a stage: every stage "
            "passes that limit. Use thinner packing for the lift, or have the limit reviewed."
        )
    ]


def of_relief(counts: bool) -> list[str]:
    """Caution: what packing beyond the levels of the datum is taken for."""
    if counts:
        return [
            (
                "Relief by packing counts here, as the bridge file lets relief by settlement count: it is gone where a seat moves "
                "again or a pad creeps."
            )
        ]
    return [
        (
            "Seats packed above their level at the datum relieve some sections. As with settlements, that relief does not count: "
            "packing brings back what seats have lost, and no more."
        )
    ]


def of_girder(one: GirderShims, differential: float) -> list[str]:
    """Cautions on one girder's packing; the limit in mm."""
    name = one.girder
    if one.not_determined is not None:
        return [f"{name}: packing is not determined: {one.not_determined}."]
    said = []
    before, after = one.worst_utilisation_before or 0.0, one.worst_utilisation_after or 0.0
    if not one.stages:
        said.append(
            f"{name}: no packing within the limits brings the worst utilisation down; none is proposed."
        )
    elif before - after < _GAIN:
        said.append(
            f"{name}: this packing gains next to nothing ({before:.4g} to {after:.4g}): jacking has risks of its own."
        )
    if after >= 1.0:
        said.append(f"{name}: still over its factored capacity with the packing in ({after:.3g}).")
    beyond = [stage for stage in one.stages if stage.girder_differential_mm > differential]
    if beyond:
        most = max(stage.girder_differential_mm for stage in beyond)
        said.append(
            f"{name}: the pads unload as the jacks take over, so that the girder itself rises by up to {most:.3g} mm more at one "
            f"support than at the next, past the {differential:g} mm that bound the packing of a stage: the engineer decides "
            "whether more supports go on jacks together."
        )
    for stage in one.stages:
        if stage.lifts:
            supports = ", ".join(f'"{support}"' for support in stage.lifts)
            said.append(
                f"{name}: in stage {stage.stage} the girder comes off {supports}, which have no jack."
            )
        if stage.worst_utilisation >= 1.0:
            said.append(
                f"{name}: in stage {stage.stage} a section passes its factored capacity under permanent load alone "
                f"({stage.worst_utilisation:.3g}): do not lift so."
            )
    return said
