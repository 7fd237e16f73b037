"""Every sentence of caution on internal hinges."""

from __future__ import annotations

from assess.workflow.live_loads import models_by_length
from db.documents import BridgeDoc, GirderDoc


def of_bridge(bridge: BridgeDoc) -> list[str]:
    """Cautions on the girders that have internal hinges."""
    hinged = [girder for girder in bridge.girders if girder.hinges]
    said = [_not_checked(girder) for girder in hinged]
    models = models_by_length(bridge) if hinged else []
    if models:
        names = ", ".join(f'"{girder.id}"' for girder in hinged)
        said.append(
            f"Girder {names}: the dynamic allowance of {', '.join(models)} follows from the span lengths as if the "
            "girder ran on over its hinges; write dynamic in the bridge file if the code asks for other lengths there."
        )
    return said


def _not_checked(girder: GirderDoc) -> str:
    where = ", ".join(f"{x:g} m" for x in girder.hinges)
    count = "an internal hinge" if len(girder.hinges) == 1 else "internal hinges"
    return (
        f'Girder "{girder.id}" has {count} at {where}: the moment there is taken as nothing and the shear as carried '
        "on in full; the half-joints or hangers themselves, their seats and the friction in them are not checked."
    )
