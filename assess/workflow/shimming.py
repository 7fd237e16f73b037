"""Shims: packing heights that give the least worst utilisation, and how the girder gets onto them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.capacity import (
    ALLOWANCE,
    DIFFERENTIAL,
    NoPacking,
    Row,
    Seats,
    evaluate,
    jacked,
    least_worst,
    programme,
    staged,
    standing_on,
)
from assess.results import (
    GirderShims,
    Jack,
    JackingStage,
    ShimHeight,
    ShimReaction,
    ShimResult,
    ShimSection,
)
from assess.workflow import cautions, contact_cautions, shim_cautions
from assess.workflow.building import GirderModel
from assess.workflow.lifting import tipping_named
from assess.workflow.status import known
from assess.workflow.study import VERSION, Progress, Study, quiet
from assess.workflow.supports import Supports, acting, kept_fits, supports_of
from db.errors import BedstoneError
from db.store import open_record

Floats = NDArray[np.float64]

MM = 1e3
_MOST_STEPS = 500
_UNIT = 1e-3  # m, of the difference that tells how packing moves the seats; that is linear
_ROUNDS = 4  # of taking the live envelope where the packing puts the girder
_AGREES = 1e-6  # between the programme and the assessment: more means that live load lifts the girder


@dataclass(frozen=True, kw_only=True)
class Stock:
    """What there is to pack with, m.

    Attributes
    ----------
    step : thickness of one sheet
    lift_max : most packing at a support
    differential : most that neighbours may rise apart in a stage
    worth : least gain in utilisation for which more packing goes in
    """

    step: float
    lift_max: float
    differential: float = DIFFERENTIAL
    worth: float = 0.0

    def __post_init__(self) -> None:
        for field, value in (("--step", self.step), ("--differential", self.differential)):
            if value <= 0.0:
                raise BedstoneError("it is not above 0", field=field, remedy='write for example "2 mm"')
        if not self.step <= self.lift_max * (1.0 + 1e-9):
            raise BedstoneError(
                f"{MM * self.lift_max:g} mm is less than one step of {MM * self.step:g} mm",
                field="--lift-max",
                remedy='write for example "25 mm"',
            )
        if self.lift_max > _MOST_STEPS * self.step:
            raise BedstoneError(
                f"{self.lift_max / self.step:.0f} steps are too many to try",
                field="--step",
                remedy=f"allow at most {_MOST_STEPS}: a thicker step or a smaller lift",
            )
        if self.worth < 0.0:
            raise BedstoneError("it is below 0", field="--worth", remedy="write for example 0.001")


def shim(url: str, bridge: str, stock: Stock, *, progress: Progress | None = None) -> ShimResult:
    """Find the packing of every girder of a bridge with its latest kept calibration."""
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
    return shim_study(study, stock, progress=progress or quiet)


def shim_study(study: Study, stock: Stock, *, progress: Progress) -> ShimResult:
    """Find the packing of every girder of a fetched bridge."""
    fits = kept_fits(study, None)
    said = [] if fits else [cautions.no_calibration(study.bridge.id)]
    girders = []
    for i, girder in enumerate(study.bridge.girders):
        progress(f"packing {girder.id}", i, len(study.bridge.girders))
        model = study.model(girder.id)
        supports, about = supports_of(study, model, fits, None)
        with tipping_named(model):
            one = _Packed(model, supports, stock).shown()
        girders.append(one)
        said += contact_cautions.tipping(girder.id, model.tips_off) + about
        said += shim_cautions.of_girder(one, MM * stock.differential)
        said += shim_cautions.of_relief(model.factors.relief_counts)
        said += [] if model.permanent.given else [contact_cautions.unknown(girder.id)]
    progress("packed", len(study.bridge.girders), len(study.bridge.girders))
    said += shim_cautions.of_stock(MM * stock.step, MM * stock.differential)
    sources = [f"{kept.input_digest} {sorted(kept.options.items())}" for _, kept in fits.values()]
    return ShimResult(
        bridge=study.bridge.id,
        calibration_visit=max(fits, default=None),
        version=VERSION,
        input_digest=study.digest(*sources, repr(stock)),
        step_mm=MM * stock.step,
        lift_max_mm=MM * stock.lift_max,
        differential_mm=MM * stock.differential,
        jack_allowance=ALLOWANCE,
        girders=girders,
        cautions=list(dict.fromkeys([*said, *shim_cautions.STANDING, *cautions.STANDING])),
    )


class _Packed:
    """One girder line and what packing does to it."""

    def __init__(self, model: GirderModel, supports: Supports, stock: Stock) -> None:
        self.new = model  # pads that have not crept yet
        self.model, self.known, self.stock = supports.on(model), supports, stock
        self.compliance, drops = supports.acting(model)
        self.seats = Seats(drops=drops, by_height=self._by_height(drops))

    def _by_height(self, drops: Floats) -> Floats:
        """How a unit of packing at each support moves the seats that the girder acts on."""
        known, seats = self.known, self.known.seats(self.model)
        packed = seats - _UNIT * np.eye(self.model.n)
        log_stiffness = np.tile(known.log_stiffness, (self.model.n, 1))
        moved = acting(self.model, log_stiffness, packed, known.log_factor)[1]
        return np.asarray((moved - drops).T / _UNIT)

    # search --------------------------------------------------------------------------------------

    def _rows(self, heights: Floats) -> list[Row]:
        drops = self.seats.drops + self.seats.by_height @ heights
        return evaluate(self.model.effects, self.model.factors, self.compliance, drops)

    def _best(self) -> tuple[Floats, float | None]:
        """Heights, and the least utilisation that packing of any thickness could give (None: the girder lifts).

        What the programme finds is judged by the assessment. Where live load lifts the girder its envelope is taken
        again with the packing in, and the neighbours of the best heights are tried.
        """
        model, stock, none = self.model, self.stock, np.zeros(self.model.n)
        judged = {none.tobytes(): (_worst(self._rows(none)), none)}
        live_at = none
        for _ in range(_ROUNDS):
            problem = programme(model.effects, model.factors, self.compliance, self.seats, live_at)
            found = least_worst(problem, step=stock.step, most=stock.lift_max, worth=stock.worth)
            used = self._judge(judged, found.heights)
            agrees = abs(used - found.worst) <= _AGREES
            if agrees and live_at is none:
                return found.heights, found.bound
            if agrees or np.array_equal(found.heights, live_at):
                break
            live_at = found.heights
        if not problem.holds(none):
            del judged[none.tobytes()]  # it is off a support today: to leave it so is no answer
        best = min(judged.values(), key=lambda one: one[0])
        while True:
            near = [best[1] + stock.step * row for row in (*np.eye(model.n), *-np.eye(model.n))]
            near = [h for h in near if h.min() >= -1e-12 and h.max() <= stock.lift_max * (1.0 + 1e-9)]
            for heights in near:
                if problem.holds(heights):
                    self._judge(judged, np.clip(heights, 0.0, None))
            better = min(judged.values(), key=lambda one: one[0])
            if better[0] >= best[0] - max(stock.worth, _AGREES):
                return best[1], None
            best = better

    def _judge(self, judged: dict[bytes, tuple[float, Floats]], heights: Floats) -> float:
        key = (np.round(heights / self.stock.step) + 0.0).tobytes()
        if key not in judged:
            judged[key] = (_worst(self._rows(heights)), heights)
        return judged[key][0]

    # shown ---------------------------------------------------------------------------------------

    def shown(self) -> GirderShims:
        """The packing of the girder, or why there is none."""
        model, none = self.model, np.zeros(self.model.n)
        nothing = self._rows(none)
        new, old_seats = self._replaced()
        replaced = evaluate(self.new.effects, model.factors, new, old_seats)
        before, with_new = known(_worst(nothing)), known(_worst(replaced))
        reason, heights, bound = None, none, None
        if before is None:
            reason = "no section of it has a resistance in the bridge file"
        else:
            try:
                heights, bound = self._best()
            except NoPacking as error:
                reason = str(error)
        shimmed = self._rows(heights) if reason is None else []
        return GirderShims(
            girder=model.doc.id,
            shims_mm=[]
            if reason
            else [
                ShimHeight(support=support.id, value=float(np.round(MM * h, 9)))
                for support, h in zip(model.doc.supports, heights, strict=True)
            ],
            worst_utilisation_before=before,
            worst_utilisation_after=None if reason else known(_worst(shimmed)),
            worst_utilisation_replaced=with_new,
            worst_utilisation_unrounded=bound,
            stages=[] if reason else self._stages(heights),
            sections=[self._section(i, nothing, shimmed, replaced) for i in range(len(nothing))],
            reactions=[] if reason else self._reactions(heights, (new, old_seats)),
            not_determined=reason,
        )

    def _replaced(self) -> tuple[Floats, Floats]:
        """Supports with all pads new: nominal stiffness, not yet crept; seats as they are."""
        known = self.known
        return acting(self.model, self.model.nominal, known.seats(self.model), known.log_factor)

    def _section(
        self, i: int, nothing: Sequence[Row], shimmed: Sequence[Row], replaced: Sequence[Row]
    ) -> ShimSection:
        check = nothing[i].check
        return ShimSection(
            effect=check.effect,
            span=check.span + 1 if check.span >= 0 else None,
            support=self.model.doc.supports[check.support].id if check.support >= 0 else None,
            nothing=known(nothing[i].case.utilisation),
            shimmed=known(shimmed[i].case.utilisation) if shimmed else None,
            replaced=known(replaced[i].case.utilisation),
        )

    def _reactions(self, heights: Floats, replaced: tuple[Floats, Floats]) -> list[ShimReaction]:
        effects = self.model.effects
        packed = self.seats.drops + self.seats.by_height @ heights
        cases = [(effects, self.compliance, self.seats.drops), (effects, self.compliance, packed)]
        cases.append((self.new.effects, *replaced))
        found = [one.steady_reactions(*on).permanent for one, *on in cases]
        return [
            ShimReaction(
                support=support.id,
                nothing_kN=float(found[0][i]),
                shimmed_kN=float(found[1][i]),
                replaced_kN=float(found[2][i]),
            )
            for i, support in enumerate(self.model.doc.supports)
        ]

    def _stages(self, heights: Floats) -> list[JackingStage]:
        stock = self.stock
        stages = staged(heights, step=stock.step, differential=stock.differential)
        before = np.zeros(self.model.n)
        shown = []
        for number, after in enumerate(stages, start=1):
            shown.append(self._stage(number, before, after))
            before = after
        return shown

    def _stage(self, number: int, before: Floats, after: Floats) -> JackingStage:
        model = self.model
        done = jacked(
            model.effects, model.permanent, model.factors, self.compliance, self.seats, (before, after)
        )
        drops = self.seats.drops + self.seats.by_height @ before
        stands = standing_on(
            model.condensed, model.permanent, self.compliance, drops, model.effects.held_down
        )
        rise = (stands.displacement - done.level) / np.exp(self.known.log_factor)
        lift = after - before
        names = [support.id for support in model.doc.supports]
        jacks = [
            Jack(
                support=names[i],
                lift_mm=float(np.round(MM * lift[i], 9)),
                packing_mm=float(np.round(MM * after[i], 9)),
                rise_mm=float(MM * rise[i]),
                load_kN=float(done.load[i]),
                capacity_kN=float(ALLOWANCE * done.load[i]),
            )
            for i in np.flatnonzero(lift > 0.0)
        ]
        return JackingStage(
            stage=number,
            jacks=jacks,
            differential_mm=float(np.round(MM * np.abs(np.diff(lift)).max(), 9)),
            girder_differential_mm=float(MM * np.abs(np.diff(rise)).max()),
            worst_utilisation=done.worst,
            lifts=[names[i] for i in np.flatnonzero(done.lifted)],
        )


def _worst(rows: Sequence[Row]) -> float:
    """The worst utilisation of rows that have one; NaN where none has."""
    used = [row.case.utilisation for row in rows if np.isfinite(row.case.utilisation)]
    return max(used, default=np.nan)
