"""What is asked of a girder's readings, what is believed of it beforehand, and its name in words."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import (
    Entry,
    Layout,
    Observation,
    ObservationModel,
    PermanentState,
    Prior,
    Unknowns,
)
from assess.loads import LoadCase
from assess.pad import creep_share
from assess.workflow.building import GirderModel
from assess.workflow.combination import curvatures_of, dead_loads
from db.documents import ReadingDoc, VisitDoc

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

CREEP = 0.35  # of the initial deflection in 25 years, hardness 60: AASHTO LRFD table 14.7.6.2-1, from memory
LEVELS = ("settlement", "deflection")
GRADIENTS = ("temperature difference in the test states", "temperature difference in the permanent state")


@dataclass(frozen=True, kw_only=True)
class Asked:
    """Names of the unknowns of a girder, and who asked for them: "the call", "the visit file", ... "the readings"."""

    names: tuple[str, ...]
    source: str


def asked_of(
    model: GirderModel, visit: VisitDoc, readings: Sequence[ReadingDoc], call: tuple[str, ...] | None
) -> Asked:
    """The unknowns of a girder: as asked for, else what each kind of reading directly tells.

    Settlements where seats or girder levels were read in the permanent state; the sustained ratio where anything but
    seats was. The girder's stiffness, the datum, the load share and temperature are tried as rivals instead.
    """
    for names, source in (
        (call, "the call"),
        (visit.unknowns_of(model.doc.id), "the visit file"),
        (model.doc.unknowns, "the bridge file"),
    ):
        if names is not None:
            return Asked(names=names, source=source)
    lasting = {r.quantity for r in readings if visit.state(r.state).vehicle is None}
    names = ("pads",)
    if lasting - {"settlement"}:
        names += ("sustained",)
    if lasting & set(LEVELS):
        names += ("settlements",)
    return Asked(names=names, source="the readings")


class Setup:
    """A girder's readings in one visit with the unknowns asked for.

    Parameters
    ----------
    model, visit : the girder, and the visit whose load states it stood in
    readings : those to fit
    names : of `db.documents.UNKNOWNS`
    shift : m that every test vehicle stood further than written
    """

    def __init__(
        self,
        model: GirderModel,
        visit: VisitDoc,
        readings: Sequence[ReadingDoc],
        names: Sequence[str],
        *,
        shift: float = 0.0,
    ) -> None:
        self.model, self.visit, self.readings, self.names = model, visit, list(readings), tuple(names)
        self.shift = shift
        shares = dict.fromkeys((r.state, r.benchmark) for r in self.readings if r.benchmark)
        self._benchmarks = list(shares)
        self.vehicles = list(
            dict.fromkeys(state.vehicle for state in visit.states if state.vehicle is not None)
        )

    @property
    def lasting(self) -> set[str]:
        """Quantities read in the permanent state."""
        return {r.quantity for r in self.readings if self.visit.state(r.state).vehicle is None}

    @property
    def tested(self) -> bool:
        """Whether anything was read in a test state."""
        return any(self.visit.state(r.state).vehicle is not None for r in self.readings)

    @cached_property
    def equations(self) -> ObservationModel:
        """The observation equations."""
        index = {state.id: i for i, state in enumerate(self.visit.states)}
        read = [self._observation(index[reading.state], reading) for reading in self.readings]
        return ObservationModel(
            self.model.condensed, self.model.pads, self.states, read, self.unknowns_of(read)
        )

    @cached_property
    def states(self) -> list[LoadCase | PermanentState]:
        """The load states of the visit, to the mechanics."""
        return [self._state(i) for i in range(len(self.visit.states))]

    def _state(self, i: int) -> LoadCase | PermanentState:
        state = self.visit.states[i]
        if state.vehicle is not None:
            return self.model.placed(state, self.shift)
        dead = dead_loads(self.model.doc)
        return PermanentState(
            loads=_joined([one.loads for one in dead if one.continuous]),
            span_by_span=_joined([one.loads for one in dead if not one.continuous]),
            since_loaded=self.visit.datum_load == "permanent",
        )

    def _observation(self, state: int, reading: ReadingDoc) -> Observation:
        model = self.model
        support = -1 if reading.support is None else model.doc.support_index(reading.support)
        x = reading.at if reading.at is not None else model.doc.support_positions[support]
        shared = (reading.state, reading.benchmark)
        return Observation(
            quantity=reading.quantity,
            state=state,
            value=reading.value,
            sd=reading.sd,
            support=support,
            x=x,
            height=reading.height or 0.0,
            flexural=model.flexural_at(x),
            shared=self._benchmarks.index(shared) if reading.benchmark else -1,
        )

    def unknowns_of(self, observations: Sequence[Observation]) -> Unknowns:
        """The unknowns that these observations could tell of those asked for."""
        names, lasting = self.names, self.lasting
        share: tuple[int, ...] = ()
        if "share" in names and self.tested:
            vehicles = [state.vehicle for state in self.visit.states]
            share = tuple(-1 if v is None else self.vehicles.index(v) for v in vehicles)
        return Unknowns(
            sustained="sustained" in names and bool(lasting),
            settlements=self._seats if "settlements" in names else (),
            girder="girder" in names,
            datum="datum" in names and bool(lasting & set(LEVELS)),
            share=share,
            gradient=curvatures_of(self.model.bridge, self.model.doc, 1.0) if "gradient" in names else (),
        )

    @property
    def _seats(self) -> tuple[int, ...]:
        """Supports whose settlement something read in the permanent state speaks of: a seat's level of itself alone."""
        lasting = [r for r in self.readings if self.visit.state(r.state).vehicle is None]
        if any(r.quantity != "settlement" for r in lasting):
            return tuple(range(self.model.n))
        read = {r.support for r in lasting}
        return tuple(i for i, support in enumerate(self.model.doc.supports) if support.id in read)

    # beliefs ------------------------------------------------------------------------------------

    def prior(self, *, believed: bool = True) -> Prior:
        """What is believed of the unknowns; with `believed` False only what was measured or made so."""
        model, layout = self.model, self.equations.layout
        doc, q = model.bridge.prior, model.pads.size
        sds = {
            "sustained": doc.sustained_sd,
            "settlements": doc.settlement_sd,
            "girder": doc.girder_sd,
            "share": doc.share_sd,
            "seats": np.inf,
        }
        pads = {int(support): i for i, support in enumerate(model.pads)}
        mean, sd = np.zeros(layout.size - q), np.empty(layout.size - q)
        for j, entry in enumerate(layout.entries[q:]):
            if entry.block == "shared":
                sd[j] = self.visit.benchmark(self._benchmarks[entry.index][1]).sd
            elif entry.block == "as built":
                i = pads[entry.index]
                mean[j], sd[j] = model.nominal[i], model.prior.sd[i]
            elif entry.block == "datum":
                sd[j] = (doc.datum_shift_sd, doc.datum_tilt_sd)[entry.index]
            elif entry.block == "gradient":
                sd[j] = (doc.test_gradient_sd, doc.gradient_sd)[entry.index]
            else:
                sd[j] = sds[entry.block]
            if entry.block == "sustained":
                mean[j] = np.log(sustained_ratio(model))
            if not believed and entry.block not in ("shared", "as built"):
                sd[j] = np.inf
        return Prior(pads=model.prior if believed else None, mean=mean, sd=sd)

    @property
    def start(self) -> Floats:
        """Where a fit starts (size,)."""
        return np.concatenate([self.model.nominal, self.prior().mean])

    # names --------------------------------------------------------------------------------------

    @property
    def layout(self) -> Layout:
        """Where each unknown stands."""
        return self.equations.layout

    def label(self, entry: Entry) -> str:
        """An unknown in words."""
        supports = self.model.doc.supports
        if entry.block == "shared":
            state, benchmark = self._benchmarks[entry.index]
            return f"benchmark {benchmark} in {state}"
        if entry.block == "seats":
            index, support = self.equations.seats[entry.index]
            return f"seat of {supports[support].id} in {self.visit.states[index].id}"
        named = {
            "pads": "stiffness",
            "settlements": "settlement",
            "as built": "stiffness as built",
        }
        if entry.block in named:
            return f"{supports[entry.index].id} {named[entry.block]}"
        if entry.block == "share":
            return f"load share of {self.vehicles[entry.index]}"
        if entry.block == "datum":
            return ("datum shift", "datum tilt")[entry.index]
        if entry.block == "gradient":
            return GRADIENTS[entry.index]
        return {"sustained": "sustained ratio", "girder": "girder stiffness"}[entry.block]


def sustained_ratio(model: GirderModel) -> float:
    """Sustained over short-term stiffness as believed: the file's, else by published creep of the pads in 25 years."""
    given = model.bridge.prior.sustained_ratio
    if given is not None:
        return given
    docs = [model.doc.supports[i].pad for i in model.pads]
    shares = [creep_share(doc.hardness) for doc in docs if doc is not None and doc.hardness is not None]
    return 1.0 / (1.0 + (float(np.mean(shares)) if shares else CREEP))


def _joined(loads: Sequence[LoadCase]) -> LoadCase:
    return LoadCase(
        points=tuple(p for one in loads for p in one.points),
        uniforms=tuple(u for one in loads for u in one.uniforms),
    )
