"""Trigger readings: what an inspector would read when a section reaches watch or its limit, all else as calibrated."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from assess.calibrate import Observation, ObservationModel, Unknowns
from assess.capacity import Crossing, Scan, scan
from assess.capacity import Driver as Moving
from assess.girder import Tips
from assess.results import PastSection, TriggerReading, TriggersResult
from assess.workflow import cautions, contact_cautions, trigger_cautions
from assess.workflow.building import GirderModel
from assess.workflow.lifting import lifting_states, tipping_named
from assess.workflow.status import LIMIT, WATCH, status_of
from assess.workflow.study import VERSION, Progress, Study, quiet
from assess.workflow.supports import Supports, acting, kept_fits, supports_of
from db.documents import PERMANENT, LoadStateDoc, VisitDoc
from db.errors import BedstoneError
from db.store import open_record
from db.wording import listed, shown

Floats = NDArray[np.float64]

TIMES = 20.0  # a pad is followed from a twentieth of its stiffness to twenty times
REACH = 0.05  # m, a seat is followed so far either way
_HALVINGS = 6  # of a range on which the girder would tip
WAYS = {"pad": {-1: "softer", 1: "stiffer"}, "seat": {1: "down", -1: "up"}}


def triggers(
    url: str, bridge: str, *, state: str | None = None, progress: Progress | None = None
) -> TriggersResult:
    """Find the trigger readings of a bridge with its latest kept calibration.

    Parameters
    ----------
    state : test state in which compressions and deflections are read; None: for each pad the one that presses it most
    """
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
    return triggers_study(study, state=state, progress=progress or quiet)


def triggers_study(study: Study, *, state: str | None, progress: Progress) -> TriggersResult:
    """Find the trigger readings of a fetched bridge."""
    fits = kept_fits(study, None)
    visit = _visit(study, max(fits, default=None))
    states = _states(study, visit, state)
    said = [] if fits else [cautions.no_calibration(study.bridge.id)]
    found: list[TriggerReading] = []
    past: list[PastSection] = []
    for i, girder in enumerate(study.bridge.girders):
        progress(f"triggers of {girder.id}", i, len(study.bridge.girders))
        model = study.model(girder.id)
        supports, about = supports_of(study, model, fits, None)
        one = _Girder(model, supports, visit, states)
        with tipping_named(model):
            scanned = one.scan()
            found += one.readings(scanned)
        past += one.past(scanned)
        said += contact_cautions.tipping(girder.id, model.tips_off) + about
        said += trigger_cautions.of_girder(girder.id, scanned.today, model.permanent.given)
    progress("triggers found", len(study.bridge.girders), len(study.bridge.girders))
    said += trigger_cautions.of_visit(visit, states)
    sources = [f"{kept.input_digest} {sorted(kept.options.items())}" for _, kept in fits.values()]
    return TriggersResult(
        bridge=study.bridge.id,
        name=study.bridge.name,
        calibration_visit=max(fits, default=None),
        version=VERSION,
        input_digest=study.digest(*sources, visit.digest if visit else "", state or ""),
        watch=WATCH,
        limit=LIMIT,
        triggers=found,
        past=past,
        cautions=list(dict.fromkeys([*said, *trigger_cautions.STANDING, *cautions.STANDING])),
    )


def _visit(study: Study, calibrated: dt.date | None) -> VisitDoc | None:
    """The visit whose load states are read again: that of the calibration, else the last one."""
    if calibrated is not None:
        return study.visit(calibrated)
    return study.visits[-1] if study.visits else None


def _states(study: Study, visit: VisitDoc | None, wanted: str | None) -> list[LoadStateDoc]:
    """The test states to look at."""
    tests = [one for one in visit.states if one.vehicle is not None] if visit is not None else []
    if wanted is None:
        return tests
    chosen = [one for one in tests if one.id == wanted]
    if not chosen:
        there = listed(one.id for one in tests)
        raise BedstoneError(
            f'there is no test state "{shown(wanted)}"',
            field="--state",
            remedy="log a visit first" if visit is None else f"those of the visit of {visit.date}: {there}",
        )
    return chosen


@dataclass(frozen=True, kw_only=True)
class _What:
    """What moves: a pad (by its place among the pads) or a seat, of a support."""

    kind: str  # "pad" | "seat"
    support: int
    place: int


class _Girder:
    """One girder line and what would be read of it."""

    def __init__(
        self,
        model: GirderModel,
        supports: Supports,
        visit: VisitDoc | None,
        states: Sequence[LoadStateDoc],
    ) -> None:
        self.model, self.known, self.visit, self.states = supports.on(model), supports, visit, states
        self.seats = supports.seats(model)
        pads = [_What(kind="pad", support=int(i), place=p) for p, i in enumerate(model.pads)]
        self.what = pads + [_What(kind="seat", support=i, place=i) for i in range(model.n)]
        starts = np.array(model.doc.support_positions)
        self.middles: Floats = (starts[1:] + starts[:-1]) / 2.0
        self._equations = self._observed() if states and model.pads.size else None

    # utilisation -------------------------------------------------------------------------------

    def scan(self) -> Scan:
        """Utilisations as each pad and each seat moves by itself."""
        effects, factors = self.model.effects, self.model.factors
        today = self.known.acting(self.model)
        moving = [self._moving(one) for one in self.what]
        try:
            return scan(effects, factors, moving, today)
        except Tips:
            moving = [self._held(one, today) for one in moving]
            return scan(effects, factors, moving, today)

    def _held(self, one: Moving, today: tuple[Floats, Floats]) -> Moving:
        """A shorter range, on which the girder does not tip."""
        for _ in range(_HALVINGS):
            try:
                scan(self.model.effects, self.model.factors, [one], today)
            except Tips:
                low, high = (one.now + 0.5 * (end - one.now) for end in (one.low, one.high))
                one = replace(one, low=low, high=high)
            else:
                return one
        return one

    def _moving(self, what: _What) -> Moving:
        known = self.known
        reach = np.log(TIMES) if what.kind == "pad" else REACH
        now = float(known.log_stiffness[what.place] if what.kind == "pad" else self.seats[what.place])

        def supports(values: Floats) -> tuple[Floats, Floats]:
            log_stiffness = np.tile(known.log_stiffness, (values.size, 1))
            seats = np.tile(self.seats, (values.size, 1))
            (log_stiffness if what.kind == "pad" else seats)[:, what.place] = values
            compliance, drops = acting(self.model, log_stiffness, seats, known.log_factor)
            return compliance, np.broadcast_to(drops, compliance.shape)

        return Moving(now=now, low=now - reach, high=now + reach, supports=supports)

    # readings ----------------------------------------------------------------------------------

    def _observed(self) -> ObservationModel:
        """Compression of every pad and deflection of every midspan, in every state."""
        read = [
            Observation(quantity="compression", state=j, value=0.0, sd=1.0, support=int(i))
            for j in range(len(self.states))
            for i in self.model.pads
        ]
        read += [
            Observation(quantity="deflection", state=j, value=0.0, sd=1.0, x=float(x))
            for j in range(len(self.states))
            for x in self.middles
        ]
        loads = [self.model.placed(state) for state in self.states]
        asked = Unknowns(girder=True)
        return ObservationModel(self.model.condensed, self.model.pads, loads, read, asked)

    def _shown(self, log_stiffness: Floats) -> tuple[Floats, Floats]:
        """Compressions (..., states, q) and midspan deflections (..., states, spans) on pads of ln k (..., q), mm."""
        assert self._equations is not None
        factor = np.full((*log_stiffness.shape[:-1], 1), self.known.log_factor)
        value = 1e3 * self._equations.predict(np.concatenate([log_stiffness, factor], axis=-1))
        split = len(self.states) * self.model.pads.size
        lead = log_stiffness.shape[:-1]
        return (
            value[..., :split].reshape(*lead, len(self.states), -1),
            value[..., split:].reshape(*lead, len(self.states), -1),
        )

    def readings(self, scanned: Scan) -> Iterator[TriggerReading]:
        """All trigger readings of the girder, support by support."""
        order = sorted(range(len(self.what)), key=lambda d: (self.what[d].support, self.what[d].kind))
        for d in order:
            for way in (-1, 1) if self.what[d].kind == "pad" else (1, -1):
                pair = [scanned.crossing(d, way, level) for level in (WATCH, LIMIT)]
                end = scanned.drivers[d].low if way < 0 else scanned.drivers[d].high
                if self.what[d].kind == "seat":
                    yield self._of_seat(self.what[d], way, pair, end)
                elif self._equations is not None:
                    yield from self._of_pad(self.what[d], way, pair, end)

    def _of_seat(self, what: _What, way: int, pair: Sequence[Crossing | None], end: float) -> TriggerReading:
        values = [None if one is None else 1e3 * one.value for one in pair]
        return self._reading(
            what,
            way,
            pair,
            quantity="settlement",
            state=self._permanent,
            at=None,
            now=1e3 * float(self.seats[what.place]),
            values=values,
            end=1e3 * end,
            reasons=[None, None],
        )

    @property
    def _permanent(self) -> str:
        states = self.visit.states if self.visit is not None else ()
        return next((one.id for one in states if one.vehicle is None), PERMANENT)

    def _of_pad(
        self, what: _What, way: int, pair: Sequence[Crossing | None], end: float
    ) -> Iterator[TriggerReading]:
        ends = [end, *(end if one is None else one.value for one in pair)]
        pads = np.tile(self.known.log_stiffness, (5, 1))
        pads[1:4, what.place] = ends
        pads[4, what.place] -= np.log(2.0)
        pressed, sagged = self._shown(pads)  # today, end of the range, watch, limit, half as stiff
        state = int(np.argmax(pressed[0, :, what.place]))
        middle = int(np.argmax(np.abs(sagged[4, state] - sagged[0, state])))
        reasons = [self._left(state, pads[2 + j]) for j in range(2)]
        for quantity, column, at in (
            ("compression", pressed[:, state, what.place], None),
            ("deflection", sagged[:, state, middle], float(self.middles[middle])),
        ):
            values = [
                None if one is None or reason is not None else float(column[2 + j])
                for j, (one, reason) in enumerate(zip(pair, reasons, strict=True))
            ]
            yield self._reading(
                what,
                way,
                pair,
                quantity=quantity,
                state=self.states[state].id,
                at=at,
                now=float(column[0]),
                values=values,
                end=float(column[1]),
                reasons=reasons,
            )

    def _left(self, state: int, log_stiffness: Floats) -> str | None:
        """Why nothing is told by a reading there: the girder leaves a pad in that state."""
        assert self.visit is not None
        lifting = lifting_states(self.model, self.visit, log_stiffness)
        name = self.states[state].id
        if name not in lifting:
            return None
        return f"in {name} the girder leaves {listed(lifting[name])} there, and no reading tells it"

    def _reading(
        self,
        what: _What,
        way: int,
        pair: Sequence[Crossing | None],
        *,
        quantity: str,
        state: str,
        at: float | None,
        now: float,
        values: Sequence[float | None],
        end: float,
        reasons: Sequence[str | None],
    ) -> TriggerReading:
        none = f"none in range: looked as far as {end:.3g} mm"
        if what.kind == "pad":
            none += f", the pad {TIMES:g} times {WAYS['pad'][way]}"
        governs = [None if one is None else self._section(one.check) for one in pair]
        why = [
            None if value is not None else none if one is None else reason
            for value, one, reason in zip(values, pair, reasons, strict=True)
        ]
        stiffness = [None if one is None or what.kind != "pad" else float(np.exp(one.value)) for one in pair]
        return TriggerReading(
            girder=self.model.doc.id,
            support=self.model.doc.supports[what.support].id,
            quantity=quantity,
            state=state,
            now_mm=now,
            watch_mm=values[0],
            limit_mm=values[1],
            governs=governs[1] or governs[0],
            way=WAYS[what.kind][way],
            at_m=at,
            range_mm=end,
            watch_governs=governs[0],
            limit_governs=governs[1],
            watch_reason=why[0],
            limit_reason=why[1],
            watch_kN_per_m=stiffness[0],
            limit_kN_per_m=stiffness[1],
        )

    def past(self, scanned: Scan) -> list[PastSection]:
        """Sections that are on watch or over as calibrated, the most used first."""
        rows = sorted(scanned.past(WATCH), key=lambda row: -scanned.today[row])
        return [
            PastSection(
                girder=self.model.doc.id,
                section=self._section(int(row)),
                utilisation=float(scanned.today[row]),
                status=status_of(float(scanned.today[row])),
            )
            for row in rows
        ]

    def _section(self, row: int) -> str:
        check = self.model.plan.checks[row]
        support = self.model.doc.supports[check.support].id if check.support >= 0 else None
        return cautions.section_name(check.effect, check.span + 1 if check.span >= 0 else None, support)
