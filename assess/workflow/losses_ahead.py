"""Section losses carried forward: how fast each plate thins, and the girder as it will be on a day."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.results import LossTrend
from assess.trend import LossLaw, fit_loss
from assess.workflow.building import GirderModel
from assess.workflow.dates import years_between
from assess.workflow.sections import used_sections
from db.documents import BridgeDoc, LossDoc, SectionDoc

Floats = NDArray[np.float64]

_MOST = 0.9  # of a plate's thickness, that a forecast takes at most
_WIDEST = 1.0  # relative standard deviation of the rates, at most


@dataclass(frozen=True, kw_only=True)
class PlateLoss:
    """One plate's law, the day of its last measurement, its thickness in m; no law where the building has no date."""

    section: str
    plate: str
    law: LossLaw | None
    last: float
    measured: dt.date
    thickness: float
    visits: int

    def on(self, day: dt.date) -> float:
        """Loss on a day after the last measurement, m."""
        if self.law is None:
            return self.last
        grown = float(self.law.ahead(np.array([max(0.0, years_between(self.measured, day))]))[0])
        return min(grown, max(self.last, _MOST * self.thickness))

    @property
    def row(self) -> LossTrend:
        """As shown."""
        low, high = (None, None) if self.law is None else self.law.interval
        return LossTrend(
            section=self.section,
            plate=self.plate,
            visits=self.visits,
            loss_mm=1e3 * self.last,
            rate_mm_per_year=None if self.law is None else 1e3 * self.law.rate,
            low95=None if low is None else 1e3 * low,
            high95=None if high is None else 1e3 * high,
        )


def plate_losses(bridge: BridgeDoc) -> list[PlateLoss]:
    """All plates of used sections whose losses have been measured."""
    used = used_sections(bridge)
    return [
        found
        for section in bridge.sections
        if section.id in used
        for plate in section.plates
        if (found := _of_plate(bridge, section, plate.name)) is not None
    ]


def spread_of(losses: list[PlateLoss]) -> float:
    """Relative standard deviation that the rates of all plates share: the largest of them."""
    told = [one.law.rate_sd / one.law.rate for one in losses if one.law is not None and one.law.rate > 0.0]
    return min(max(told, default=0.0), _WIDEST)


def grow(losses: list[PlateLoss]) -> bool:
    """Whether any plate goes on thinning."""
    return any(one.law is not None and one.law.rate > 0.0 for one in losses)


def model_on(model: GirderModel, losses: list[PlateLoss], day: dt.date) -> GirderModel:
    """A girder with the losses of a day."""
    of = {(one.section, one.plate): one for one in losses}
    sections = tuple(
        replace(
            section,
            losses=(
                *section.losses,
                *(
                    LossDoc(plate=plate.name, faces=1, depth=of[section.id, plate.name].on(day), visit=day)
                    for plate in section.plates
                    if (section.id, plate.name) in of and of[section.id, plate.name].measured < day
                ),
            ),
        )
        for section in model.bridge.sections
    )
    return GirderModel(replace(model.bridge, sections=sections), model.doc, day)


def _of_plate(bridge: BridgeDoc, section: SectionDoc, plate: str) -> PlateLoss | None:
    own = [one for one in section.losses if one.plate == plate]
    if not own:
        return None
    days = sorted({one.visit for one in own})
    lost = np.array([sum(one.faces * one.depth for one in own if one.visit == day) for day in days])
    law = None
    if bridge.built is not None and bridge.built < days[0]:
        law = fit_loss(np.array([years_between(bridge.built, day) for day in days]), lost)
    drawn = next(one for one in section.plates if one.name == plate)
    return PlateLoss(
        section=section.id,
        plate=plate,
        law=law,
        last=float(lost[-1]),
        measured=days[-1],
        thickness=min(drawn.width, drawn.height),
        visits=len(days),
    )


def between(first: Floats, later: Floats, share: Floats) -> Floats:
    """Utilisations between those of two days, `share` of the way: what carries goes in a straight line.

    Parameters
    ----------
    first, later : (draws, times) with the losses of the two days
    share : (draws, times), past 1 beyond the later day
    """
    both = (first > 0.0) & (later > 0.0)
    below = np.maximum((1.0 - share) * later + share * first, 0.02 * np.maximum(first, later))
    straight = first + share * (later - first)
    return np.where(both, np.divide(first * later, below, out=straight.copy(), where=both), straight)
