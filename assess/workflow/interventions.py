"""What has been done at supports, and what it cuts."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from assess.workflow.building import GirderModel
from assess.workflow.kept_fits import GirderFit
from db.documents import BridgeDoc
from db.intervention_doc import InterventionDoc

UNREAD = "by assumption, until a visit reads it"


def replaced(bridge: BridgeDoc, girder: str) -> list[InterventionDoc]:
    """Pads of a girder that were replaced, by date."""
    return [one for one in bridge.interventions if one.girder == girder and one.kind == "replaced"]


def since_of(
    bridge: BridgeDoc, girder: str, support: str, kinds: Sequence[str], until: dt.date | None = None
) -> dt.date | None:
    """The last day up to `until` on which something of some kinds was done at a support; None if it never was."""
    days = [
        one.date
        for one in bridge.interventions
        if (one.girder, one.support) == (girder, support)
        and one.kind in kinds
        and (until is None or one.date <= until)
    ]
    return max(days, default=None)


def with_new_pads(
    model: GirderModel, fit: GirderFit, calibrated: dt.date, until: dt.date | None
) -> tuple[GirderFit, list[str]]:
    """A fit in which pads replaced since stand at nominal with the spread assumed for them; and what to say of it."""
    said = []
    log_stiffness, covariance = fit.log_stiffness.copy(), fit.covariance.copy()
    theta, joint, share = fit.theta.copy(), fit.joint.copy(), fit.data_share.copy()
    for i, support in enumerate(model.pad_ids):
        day = since_of(model.bridge, model.doc.id, support, ("replaced",), until)
        if day is None or day <= calibrated:
            continue
        variance = model.prior.covariance[i, i]
        for values, spread in ((log_stiffness, covariance), (theta, joint)):
            values[i] = model.nominal[i]
            spread[i, :] = spread[:, i] = 0.0
            spread[i, i] = variance
        share[i] = 0.0
        said.append(
            f'{model.doc.id}: the pad at "{support}" was replaced on {day}, after the calibration of {calibrated}: '
            f"it stands at nominal here, {UNREAD}."
        )
    if not said:
        return fit, []
    made = replace(
        fit, log_stiffness=log_stiffness, covariance=np.asarray(covariance), theta=theta, joint=joint,
        data_share=share, draws=None,
    )  # fmt: skip
    return made, said
