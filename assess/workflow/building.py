"""From a bridge file's girder to the mechanics: pieces, supports, loads, resistances."""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import PadPrior
from assess.capacity import CheckPlan, Effects, Factors, GirderLoads, Resistance, plan_checks
from assess.girder import Condensed, Girder, Piece
from assess.loads import LoadCase, ModelLoad, Train
from assess.workflow.live_loads import model_loads
from db.documents import BridgeDoc, GirderDoc, LoadStateDoc, SectionDoc, SpanDoc

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_STEEL_SHEAR_RATIO = 2.6  # E / G where G is not given: 2 (1 + nu) with nu 0.3
_END_SLACK_M = 1e-6  # an axle this close to an end of the girder stands on it


class GirderModel:
    """One girder line of a bridge file, ready to compute with; everything costly is made once, when first asked for."""

    def __init__(self, bridge: BridgeDoc, girder: GirderDoc) -> None:
        self.bridge = bridge
        self.doc = girder
        self.sections: list[list[tuple[float, SectionDoc]]] = [_split(bridge, span) for span in girder.spans]
        self.pads: Ints = np.array(
            [i for i, support in enumerate(girder.supports) if support.kind == "pad"], dtype=np.intp
        )
        self.pad_ids = [girder.supports[i].id for i in self.pads]
        self.n = len(girder.supports)

    @cached_property
    def girder(self) -> Girder:
        """The girder as the mechanics know it."""
        spans = tuple(tuple(_piece(length, section) for length, section in span) for span in self.sections)
        return Girder(spans, np.array([support.rotation for support in self.doc.supports]))

    @cached_property
    def condensed(self) -> Condensed:
        """Its condensed form."""
        return Condensed(self.girder)

    @cached_property
    def nominal(self) -> Floats:
        """Nominal ln k of the pads, (q,)."""
        return np.log(np.array([self.doc.supports[i].stiffness for i in self.pads], dtype=np.float64))

    @cached_property
    def prior(self) -> PadPrior:
        """ln k ~ N(ln k_nominal, tau) with tau^2 = ln(1 + cv^2), the lognormal with that coefficient of variation."""
        cv = np.array([self.doc.supports[i].stiffness_cv for i in self.pads], dtype=np.float64)
        return PadPrior(mean=self.nominal, sd=np.sqrt(np.log1p(cv**2)))

    def compliance(self, log_stiffness: Floats) -> Floats:
        """Support compliances (..., n) from ln k of the pads (..., q); the other supports hold their level."""
        result = np.zeros((*log_stiffness.shape[:-1], self.n))
        result[..., self.pads] = np.exp(-log_stiffness)
        return result

    @property
    def unyielding(self) -> Floats:
        """Compliances (n,) of supports that all hold their level."""
        return np.zeros(self.n)

    # loads -----------------------------------------------------------------------------------

    @cached_property
    def permanent(self) -> LoadCase:
        """The permanent loads."""
        points = tuple(
            (p.at, p.point) for p in self.doc.permanent if p.point is not None and p.at is not None
        )
        uniforms = tuple((p.start, p.end, p.uniform) for p in self.doc.permanent if p.uniform is not None)
        return LoadCase(points=points, uniforms=uniforms)

    @cached_property
    def trains(self) -> tuple[Train, ...]:
        """The live loads of vehicles with the girder's share and the dynamic allowance in them."""
        trains = []
        for live in self.bridge.live:
            if live.model is None:
                train = _train(self.bridge, live.vehicle).coupled(live.count, live.pitch)
                trains.append(train.scaled(self.doc.live_share * (1.0 + (live.dynamic or 0.0))))
        return tuple(trains)

    @cached_property
    def models(self) -> tuple[ModelLoad, ...]:
        """The published live load models with the girder's share in them."""
        return model_loads(self.bridge, self.doc)

    def placed(self, state: LoadStateDoc) -> LoadCase:
        """The girder's share of a placed test vehicle, without dynamic allowance; axles off the girder left out."""
        if state.vehicle is None or state.leading_axle_at is None:
            raise ValueError(f"load state {state.id} has no vehicle")
        train = _train(self.bridge, state.vehicle)
        way = -1.0 if state.towards == "larger x" else 1.0
        x = state.leading_axle_at + way * train.offsets
        length = self.doc.length  # rounding of converted units takes no axle off an end support
        on = (x >= -_END_SLACK_M) & (x <= length + _END_SLACK_M)
        x = np.clip(x[on], 0.0, length)
        loads = train.loads[on] * self.doc.live_share
        return LoadCase(points=tuple((float(a), float(p)) for a, p in zip(x, loads, strict=True)))

    # resistance ------------------------------------------------------------------------------

    @cached_property
    def factors(self) -> Factors:
        """The owner's factors; a relieving permanent effect counts at most once unless the file says otherwise."""
        given = self.bridge.factors
        relieving = given.permanent_relieving
        return Factors(
            permanent=given.permanent,
            permanent_relieving=min(1.0, given.permanent) if relieving is None else relieving,
            live=given.live,
            resistance=given.resistance,
        )

    @cached_property
    def plan(self) -> CheckPlan:
        """Stations and rows."""
        resistances = [[_resistance(section) for _, section in span] for span in self.sections]
        return plan_checks(self.girder, resistances, self.factors)

    @cached_property
    def effects(self) -> Effects:
        """Permanent and live effects at the stations."""
        loads = GirderLoads(permanent=self.permanent, trains=self.trains, models=self.models)
        return Effects(self.condensed, self.plan, loads)

    def flexural_at(self, x: float) -> float:
        """EI at x, kN m2; at a change of section the piece to the right."""
        edges = self.girder.breakpoints
        i = int(np.clip(np.searchsorted(edges, x, side="right") - 1, 0, edges.size - 2))
        flat = [piece for span in self.girder.spans for piece in span]
        return flat[i].flexural


def _split(bridge: BridgeDoc, span: SpanDoc) -> list[tuple[float, SectionDoc]]:
    """Lengths and sections of a span from left to right, the overriding pieces put in."""
    parts: list[tuple[float, SectionDoc]] = []
    at = 0.0
    slack = 1e-9 * max(1.0, span.length)
    for piece in sorted(span.pieces, key=lambda p: p.start):
        start = piece.start if piece.start - at > slack else at
        if start > at:
            parts.append((start - at, bridge.section(span.section)))
        parts.append((piece.end - start, bridge.section(piece.section)))
        at = piece.end
    if span.length - at > slack:
        parts.append((span.length - at, bridge.section(span.section)))
    return parts


def _piece(length: float, section: SectionDoc) -> Piece:
    shear = np.inf
    if section.shear_area is not None:
        modulus = section.shear_modulus or section.youngs_modulus / _STEEL_SHEAR_RATIO
        shear = modulus * section.shear_area
    return Piece(length=length, flexural=section.youngs_modulus * section.second_moment, shear=shear)


def _resistance(section: SectionDoc) -> Resistance:
    given = (section.sagging_capacity, section.hogging_capacity, section.shear_capacity)
    sagging, hogging, shear = (np.nan if value is None else value for value in given)
    return Resistance(sagging=sagging, hogging=hogging, shear=shear)


def _train(bridge: BridgeDoc, vehicle_id: str) -> Train:
    offsets, loads = np.array(bridge.vehicle(vehicle_id).axles, dtype=np.float64).T
    return Train(offsets, loads)
