"""What to read at the next visit: the readings that tell most of the utilisation that governs."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from assess.calibrate.planning import Candidates, Limits, Plan
from assess.calibrate.planning import plan as choose
from assess.results import (
    GirderPlan,
    GoverningSection,
    HalfPlan,
    PlannedPad,
    PlannedPosition,
    PlannedReading,
    PlannedSeat,
    PlanResult,
    PlanSupport,
)
from assess.workflow import cautions, contact_cautions, plan_cautions
from assess.workflow.aiming import Aim, aim_of, with_corners
from assess.workflow.building import GirderModel
from assess.workflow.lifting import tipping_named
from assess.workflow.offering import Offer, offer_of
from assess.workflow.study import Progress, Study, quiet
from assess.workflow.supports import kept_fits, supports_of
from assess.workflow.unknowns import Setup, asked_of
from db.documents import PERMANENT, GirderDoc, VehicleDoc
from db.errors import BedstoneError
from db.quantities import to_unit
from db.store import open_record
from db.wording import listed, shown

Floats = NDArray[np.float64]

READINGS, POSITIONS = 8, 3
"""On each girder line, unless more are asked for."""


@dataclass(frozen=True, kw_only=True)
class _Planned:
    """One girder line: what was offered, and what was chosen of it."""

    model: GirderModel
    setup: Setup
    offer: Offer
    aim: Aim
    before: Floats  # (size, size) covariance as believed
    full: Plan
    half: Plan

    def leading(self, made: Plan) -> list[float]:
        """Where the leading axle stands in a plan, m."""
        used = {int(self.offer.position[i]) for i in made.chosen} - {-1}
        return sorted(self.offer.leading[i] for i in used)


def plan(
    url: str,
    bridge: str,
    *,
    vehicle: str,
    readings: int = READINGS,
    positions: int = POSITIONS,
    girder: str | None = None,
    progress: Progress | None = None,
) -> PlanResult:
    """Plan the next visit of a bridge with a vehicle: so many readings and positions on each girder line.

    The visit is taken as it will be calibrated: by itself, from nominal pads. The equations are linearised where the
    latest kept calibration stands.

    Raises
    ------
    BedstoneError
        for a vehicle or a girder that the bridge file does not have, or where there is no pad to read.
    """
    tell = progress or quiet
    with open_record(url) as record:
        study = Study.fetch(record, bridge)
    placed, chosen = _vehicle(study, vehicle), _girders(study, girder)
    made, said = [], plan_cautions.of_sources(study)
    for i, one in enumerate(chosen):
        tell(f"planning {one.id}", i, len(chosen))
        model = study.model(one.id)
        if not model.pads.size:
            said.append(cautions.no_pads(one.id))
            continue
        with tipping_named(model):
            planned = _plan_girder(study, model, placed, Limits(readings=readings, positions=positions))
        made.append(planned)
        said += _cautions(planned, readings)
    tell("planned", len(chosen), len(chosen))
    if not made:
        raise BedstoneError(
            f"{bridge}: all supports hold their level, so there is no pad to read",
            field="girder " + ", ".join(f'"{one.id}"' for one in chosen),
            remedy="plan for a bridge with pads",
        )
    names = _state_names(made)
    return PlanResult(
        bridge=bridge,
        girders=[_shown(one, names) for one in made],
        vehicle=vehicle,
        axles_behind_m=[offset for offset, _ in placed.axles],
        defaults=_defaults(made),
        cautions=[*dict.fromkeys(said), plan_cautions.PROMISE, plan_cautions.BY_ITSELF, *cautions.STANDING],
    )


def _defaults(made: Sequence[_Planned]) -> list[str]:
    """What was taken for granted, once for all girders that share it."""
    girders: dict[str, list[str]] = {}
    for one in made:
        for sentence in one.offer.defaults:
            girders.setdefault(sentence, []).append(one.model.doc.id)
    return [f"{', '.join(names)}: {sentence}" for sentence, names in girders.items()]


def _vehicle(study: Study, name: str) -> VehicleDoc:
    known = {vehicle.id: vehicle for vehicle in study.bridge.vehicles}
    if name not in known:
        remedy = f"vehicles of the bridge file: {listed(list(known))}" if known else "add a [[vehicle]] to it"
        raise BedstoneError(
            f'{study.bridge.id} has no vehicle "{shown(name)}"', field="--vehicle", remedy=remedy
        )
    return known[name]


def _girders(study: Study, name: str | None) -> list[GirderDoc]:
    known = {girder.id: girder for girder in study.bridge.girders}
    if name is None:
        return list(known.values())
    if name not in known:
        raise BedstoneError(
            f'{study.bridge.id} has no girder "{shown(name)}"',
            field="--girder",
            remedy=f"girders of the bridge file: {listed(list(known))}",
        )
    return [known[name]]


def _plan_girder(study: Study, model: GirderModel, vehicle: VehicleDoc, limits: Limits) -> _Planned:
    supports, _ = supports_of(study, model, kept_fits(study, None), None)
    seats = supports.seats(model)
    datum_load = study.visits[-1].datum_load if study.visits else "none"
    offer = offer_of(model, vehicle, (model.nominal, supports.log_stiffness), seats, datum_load)
    asked = asked_of(model, offer.visit, offer.readings, None)
    setup = Setup(model, offer.visit, offer.readings, asked.names)
    theta = _known(setup, supports.log_stiffness, seats, supports.log_factor)
    rows = setup.prior().rows(theta.size)
    precision = rows.T @ rows
    before: Floats = np.asarray(np.linalg.inv(precision))
    candidates = Candidates(
        rows=setup.equations.jacobian(theta), sd=setup.equations.sd, cost=offer.cost, position=offer.position
    )
    aim = aim_of(setup, supports, theta, np.sqrt(np.diag(before)))
    full = choose(candidates, precision=precision, aim=aim.gradient, limits=limits)
    # once more with the slopes over what will be left open, which is known only now
    aim = aim_of(setup, supports, theta, np.sqrt(np.diag(full.covariance)))
    full = choose(candidates, precision=precision, aim=aim.gradient, limits=limits)
    aim = with_corners(aim, setup, supports, theta, full.covariance)
    halved = Limits(readings=limits.readings, positions=limits.positions, cost=full.cost / 2.0)
    half = choose(candidates, precision=precision, aim=aim.gradient, limits=halved)
    return _Planned(model=model, setup=setup, offer=offer, aim=aim, before=before, full=full, half=half)


def _known(setup: Setup, log_stiffness: Floats, seats: Floats, log_factor: float) -> Floats:
    """Unknowns (size,) as far as they are known today, else as believed."""
    theta, layout = setup.start.copy(), setup.layout
    theta[layout.of("pads")] = log_stiffness
    theta[layout.of("settlements")] = [seats[layout.entries[j].index] for j in layout.places("settlements")]
    theta[layout.of("girder")] = log_factor
    return theta


# showing -----------------------------------------------------------------------------------------


def _state_names(made: Sequence[_Planned]) -> dict[float, str]:
    """Load states by the place of the leading axle: those of the plans first, in order, then those at half the cost."""
    full = sorted({x for one in made for x in one.leading(one.full)})
    half = sorted({x for one in made for x in one.leading(one.half)} - set(full))
    return {x: f"T{i}" for i, x in enumerate([*full, *half], start=1)}


def _shown(one: _Planned, names: dict[float, str]) -> GirderPlan:
    doc, aim = one.model.doc, one.aim
    return GirderPlan(
        girder=doc.id,
        positions=_positions(one.leading(one.full), names),
        readings=_readings(one, one.full, names),
        pads=[
            PlannedPad(support=support, sd_ln_before=before, sd_ln_after=after)
            for support, before, after in _sds(one, "pads")
        ],
        seats=[
            PlannedSeat(support=support, sd_mm_before=1e3 * before, sd_mm_after=1e3 * after)
            for support, before, after in _sds(one, "settlements")
        ],
        governs=None
        if aim.check is None
        else GoverningSection(
            effect=aim.check.effect,
            span=aim.check.span + 1 if aim.check.span >= 0 else None,
            support=doc.supports[aim.check.support].id if aim.check.support >= 0 else None,
        ),
        utilisation=aim.utilisation,
        sd_utilisation_before=aim.sd(one.full.variance[0]),
        cost=one.full.cost,
        half_cost=HalfPlan(
            positions=_positions(one.leading(one.half), names),
            readings=_readings(one, one.half, names),
            sd_utilisation_after=aim.sd(one.half.variance[-1]),
            cost=one.half.cost,
        ),
        supports=[
            PlanSupport(support=support.id, at_m=float(x))
            for support, x in zip(doc.supports, doc.support_positions, strict=True)
        ],
    )


def _positions(leading: Iterable[float], names: dict[float, str]) -> list[PlannedPosition]:
    return [PlannedPosition(state=names[x], leading_axle_at_m=x) for x in leading]


def _readings(one: _Planned, made: Plan, names: dict[float, str]) -> list[PlannedReading]:
    rows = []
    for i, variance in zip(made.chosen, made.variance[1:], strict=True):
        reading, position = one.offer.readings[i], int(one.offer.position[i])
        length = reading.quantity not in ("rotation", "strain")
        rows.append(
            PlannedReading(
                state=PERMANENT if position < 0 else names[one.offer.leading[position]],
                quantity=reading.quantity,
                support=reading.support,
                at_m=reading.at,
                sd_mm=1e3 * reading.sd if length else None,
                sd_utilisation_after=one.aim.sd(variance),
                sd=to_unit(reading.sd, reading.unit),
                unit=reading.unit,
                height_m=reading.height,
                cost=float(one.offer.cost[i]),
            )
        )
    return rows


def _sds(one: _Planned, block: str) -> list[tuple[str, float, float]]:
    """Support, sd before and sd after of a block that has one unknown a support."""
    layout, supports = one.setup.layout, one.model.doc.supports
    return [
        (
            supports[layout.entries[j].index].id,
            float(np.sqrt(one.before[j, j])),
            float(np.sqrt(one.full.covariance[j, j])),
        )
        for j in layout.places(block)
    ]


def _cautions(one: _Planned, readings: int) -> list[str]:
    """What this plan leaves out or cannot promise."""
    name, model, offer = one.model.doc.id, one.model, one.offer
    said = [] if model.permanent.given else [contact_cautions.unknown(name)]
    said += plan_cautions.of_lifting(name, offer.lifting, offer.permanent_lifts)
    if one.full.chosen.size < readings:
        said.append(plan_cautions.fewer(name, one.full.chosen.size, readings))
    for made, which in ((one.full, "the plan"), (one.half, "the set at half the cost")):
        if made.chosen.size and not one.leading(made):
            said.append(plan_cautions.no_test(name, which))
    if one.aim.check is None:
        said.append(plan_cautions.no_capacity(name))
    seats = _sds(one, "settlements")
    # as in an assessment: a seat counts as told from half of its prior variance on
    open_still = {seat for seat, before, after in seats if after**2 > (1.0 - cautions.TOLD) * before**2}
    known = {seat for seat, _, _ in seats}
    said += plan_cautions.seats_unread(name, [s.id for s in model.doc.supports if s.id in open_still])
    said += plan_cautions.seats_without_gauge(name, [s.id for s in model.doc.supports if s.id not in known])
    other = one.aim.overtaken(one.full.covariance)
    return said if other is None else [*said, plan_cautions.overtaken(name, model.doc, *other)]
