"""From a bridge file's girder to the mechanics: pieces, supports, loads, resistances."""

from __future__ import annotations

import copy
import datetime as dt
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import PadPrior
from assess.capacity import (
    CheckPlan,
    Effects,
    Factors,
    GirderLoads,
    PermanentLoads,
    Resistance,
    evaluate,
    permanent_loads,
    plan_checks,
)
from assess.girder import REACTION, Condensed, Girder, Piece, Tips
from assess.loads import LoadCase, ModelLoad, Train
from assess.pad import Pad
from assess.workflow import pads
from assess.workflow.combination import dead_loads, factors_of, thermal_cases
from assess.workflow.live_loads import model_loads
from assess.workflow.sections import EFFECTS, SectionState, section_on
from assess.workflow.stretches import stretches
from db.documents import BridgeDoc, GirderDoc, LoadStateDoc, SectionDoc

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_END_SLACK_M = 1e-6  # an axle this close to an end of the girder stands on it


class GirderModel:
    """One girder line of a bridge file, ready to compute with; everything costly is made once, when first asked for.

    Its sections have the losses measured up to `as_of`; None: all of them. Where it would tip under the loads it is
    assessed for, it is taken as held down everywhere and `tips_off` names the supports that it would leave.
    """

    def __init__(self, bridge: BridgeDoc, girder: GirderDoc, as_of: dt.date | None = None) -> None:
        self.bridge = bridge
        self.doc = girder
        self.as_of = as_of
        self.sections: list[list[tuple[float, SectionDoc]]] = [
            stretches(bridge, span) for span in girder.spans
        ]
        self.pads: Ints = np.array(
            [i for i, support in enumerate(girder.supports) if support.kind == "pad"], dtype=np.intp
        )
        self.pad_ids = [girder.supports[i].id for i in self.pads]
        self.n = len(girder.supports)
        self.tips_off: list[str] = []

    @cached_property
    def section_states(self) -> dict[str, SectionState]:
        """The sections of this girder by id, with their losses."""
        used = {section.id: section for span in self.sections for _, section in span}
        return {name: section_on(section, self.as_of) for name, section in used.items()}

    @cached_property
    def girder(self) -> Girder:
        """The girder as the mechanics know it."""
        states = self.section_states
        spans = tuple(tuple(_piece(length, states[s.id]) for length, s in span) for span in self.sections)
        rotation = np.array([support.rotation for support in self.doc.supports])
        return Girder(spans, rotation, self.doc.hinges)

    @cached_property
    def condensed(self) -> Condensed:
        """Its condensed form."""
        return Condensed(self.girder)

    @cached_property
    def nominal(self) -> Floats:
        """Nominal ln k of the pads, (q,)."""
        return np.log(self.nominal_stiffness)

    @cached_property
    def nominal_stiffness(self) -> Floats:
        """Nominal stiffness of the pads, (q,), kN/m: given, else from the geometry."""
        pairs = zip(self.pads, self.pad_models, strict=True)
        return np.array([pads.nominal_of(self.doc.supports[i], pad) for i, pad in pairs], dtype=np.float64)

    @cached_property
    def pad_models(self) -> list[Pad | None]:
        """The pads from their geometry, in the order of `pads`; None where the file gives none."""
        return [pads.pad_of(self.doc.id, self.doc.supports[i]) for i in self.pads]

    @cached_property
    def stiffness_cv(self) -> Floats:
        """Coefficient of variation of the nominal stiffnesses, (q,): given, else from the geometry's tolerances."""
        pairs = zip(self.pads, self.pad_models, strict=True)
        return np.array([pads.variation_of(self.doc.supports[i], pad) for i, pad in pairs], dtype=np.float64)

    @cached_property
    def prior(self) -> PadPrior:
        """ln k ~ N(ln k_nominal, tau) with tau^2 = ln(1 + cv^2), the lognormal with that coefficient of variation.

        Pads of one batch are correlated.
        """
        supports = [self.doc.supports[i] for i in self.pads]
        return pads.prior_of(supports, self.nominal, self.stiffness_cv)

    def compliance(self, log_stiffness: Floats) -> Floats:
        """Support compliances (..., n) from ln k of the pads (..., q); the other supports hold their level."""
        result = np.zeros((*log_stiffness.shape[:-1], self.n))
        result[..., self.pads] = np.exp(-log_stiffness)
        return result

    def creeping(self, log_sustained: float) -> GirderModel:
        """The same girder on pads whose sustained stiffness is that many (ln) times the short-term one."""
        if log_sustained == 0.0:
            return self
        other = copy.copy(self)
        lasting = float(np.exp(-log_sustained))
        other.__dict__["effects"] = self.effects.creeping(lasting)
        other.__dict__["permanent"] = self.permanent.creeping(lasting)
        return other

    @property
    def unyielding(self) -> Floats:
        """Compliances (n,) of supports that all hold their level."""
        return np.zeros(self.n)

    @cached_property
    def held_down(self) -> NDArray[np.bool_]:
        """Supports (n,) that take tension."""
        return np.array([support.takes_tension for support in self.doc.supports], dtype=bool)

    # loads -----------------------------------------------------------------------------------

    @cached_property
    def permanent(self) -> PermanentLoads:
        """The permanent loads, as the supports see them."""
        return permanent_loads(self.condensed, GirderLoads(dead=dead_loads(self.doc)))

    @cached_property
    def trains(self) -> tuple[Train, ...]:
        """The live loads of vehicles with the girder's share and the dynamic allowance in them."""
        trains = []
        for live in self.bridge.live:
            if live.model is None:
                train = _train(self.bridge, live.vehicle).coupled(live.count, live.pitch)
                share = self.doc.live_share * live.factor
                trains.append(train.scaled(share * (1.0 + (live.dynamic or 0.0))))
        return tuple(trains)

    @cached_property
    def models(self) -> tuple[ModelLoad, ...]:
        """The published live load models with the girder's share in them."""
        return model_loads(self.bridge, self.doc)

    def placed(self, state: LoadStateDoc, shift: float = 0.0) -> LoadCase:
        """The girder's share of a placed test vehicle, without dynamic allowance; axles off the girder left out.

        It stands `shift` m further than written.
        """
        if state.vehicle is None or state.leading_axle_at is None:
            raise ValueError(f"load state {state.id} has no vehicle")
        train = _train(self.bridge, state.vehicle)
        way = -1.0 if state.towards == "larger x" else 1.0
        x = state.leading_axle_at + shift + way * train.offsets
        length = self.doc.length  # rounding of converted units takes no axle off an end support
        on = (x >= -_END_SLACK_M) & (x <= length + _END_SLACK_M)
        x = np.clip(x[on], 0.0, length)
        loads = train.loads[on] * self.doc.live_share
        return LoadCase(points=tuple((float(a), float(p)) for a, p in zip(x, loads, strict=True)))

    # resistance ------------------------------------------------------------------------------

    @cached_property
    def factors(self) -> Factors:
        """The owner's factors, or those of the set the file names."""
        return factors_of(self.bridge)

    @cached_property
    def plan(self) -> CheckPlan:
        """Stations and rows."""
        states = self.section_states
        resistances = [[_resistance(states[s.id]) for _, s in span] for span in self.sections]
        return plan_checks(self.girder, resistances, self.factors)

    @cached_property
    def effects(self) -> Effects:
        """Permanent and live effects at the stations."""
        loads = GirderLoads(
            dead=dead_loads(self.doc),
            trains=self.trains,
            models=self.models,
            thermal=thermal_cases(self.bridge, self.doc),
        )
        made = Effects(self.condensed, self.plan, loads, self.held_down)
        try:
            if self._may_tip:  # what holds a girder is a matter of equilibrium alone: any pads tell
                evaluate(made, self.factors, self.compliance(self.nominal), np.zeros(self.n))
                made.passing(
                    self.factors, self.compliance(self.nominal)[None], np.zeros((1, self.n))
                ).envelope(REACTION)
        except Tips as error:
            self.tips_off = [self.doc.supports[i].id for i in sorted(error.lifted)]
            return Effects(self.condensed, self.plan, loads)
        return made

    @property
    def _may_tip(self) -> bool:
        """Whether hinges or upward loads may tip it; else a girder under its loads stands on two supports at least."""
        upward = any((p.uniform or p.point or 0.0) < 0.0 for p in self.doc.permanent)
        return not bool(self.held_down.all()) and (upward or any(span.hinges for span in self.doc.spans))

    def flexural_at(self, x: float) -> float:
        """EI at x, kN m2; at a change of section the piece to the right."""
        edges = self.girder.breakpoints
        i = int(np.clip(np.searchsorted(edges, x, side="right") - 1, 0, edges.size - 2))
        flat = [piece for span in self.girder.spans for piece in span]
        return flat[i].flexural


def _piece(length: float, section: SectionState) -> Piece:
    return Piece(length=length, flexural=section.flexural, shear=section.shear)


def _resistance(section: SectionState) -> Resistance:
    values = (section.capacities[effect].value for effect in EFFECTS)
    sagging, hogging, shear = (np.nan if value is None else value for value in values)
    return Resistance(sagging=sagging, hogging=hogging, shear=shear)


def _train(bridge: BridgeDoc, vehicle_id: str) -> Train:
    offsets, loads = np.array(bridge.vehicle(vehicle_id).axles, dtype=np.float64).T
    return Train(offsets, loads)
