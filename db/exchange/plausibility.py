"""What a file may say and seldom means: nothing here is refused, all of it is to be looked at again.

The limits are common practice, no source: they are set so that a slip of a unit or of a column shows.
"""

from __future__ import annotations

import math
from collections import Counter, defaultdict

from db.documents import BridgeDoc, ReadingDoc, SectionDoc, VisitDoc
from db.exchange.corners import corner_queries

PAD_STIFFNESS = (1e4, 1e7)  # kN/m
AXLE_LOAD = (5.0, 500.0)  # kN
LEVEL_SLACK = 5e-4  # m: levels on drawings are written in whole or half millimetres
EFFECT_FACTOR = (0.9, 2.5)
MOST_DYNAMIC = 1.0
MOST_COMPRESSION = 0.020  # m, under a test load
SD_SPREAD = 20.0  # largest over smallest standard deviation of a quantity in one visit
RISE = 3.29  # standard deviations by which a seat has to stand above its datum


def bridge_queries(bridge: BridgeDoc) -> list[str]:
    """What to look at again in a bridge file."""
    return [
        *_sections(bridge),
        *_pads(bridge),
        *_batches(bridge),
        *_vehicles(bridge),
        *_live(bridge),
        *_factors(bridge),
    ]


def _sections(bridge: BridgeDoc) -> list[str]:
    return [
        f'section "{s.id}": {one}'
        for s in bridge.sections
        for one in (*_clear_of_each_other(s), *_cut_into(s))
    ]


def _clear_of_each_other(section: SectionDoc) -> list[str]:
    """Plates that touch nothing of the rest."""
    said, reached = [], -math.inf
    for plate in sorted(section.plates, key=lambda p: p.bottom):
        if reached != -math.inf and plate.bottom > reached + LEVEL_SLACK:
            gap = f"{1e3 * (plate.bottom - reached):.6g} mm"
            said.append(f'plate "{plate.name}" stands {gap} clear of the plates below it; check its bottom')
        reached = max(reached, plate.bottom + plate.height)
    return said


def _cut_into(section: SectionDoc) -> list[str]:
    """Upright plates that end inside the thickness of a flat one."""
    flat = [plate for plate in section.plates if plate.height <= plate.width]
    return [
        f'plate "{one.name}" ends within the thickness of "{other.name}", where both are counted; check its bottom'
        for one in section.plates
        if one.height > one.width
        for other in flat
        if any(
            other.bottom + LEVEL_SLACK < end < other.bottom + other.height - LEVEL_SLACK
            for end in (one.bottom, one.bottom + one.height)
        )
    ]


def _pads(bridge: BridgeDoc) -> list[str]:
    low, high = PAD_STIFFNESS
    return [
        f'girder "{girder.id}", support "{support.id}": {support.stiffness / 1e3:g} kN/mm is an unusual stiffness for a pad; '
        "check the unit"
        for girder in bridge.girders
        for support in girder.supports
        if support.stiffness is not None and not low <= support.stiffness <= high
    ]


def _batches(bridge: BridgeDoc) -> list[str]:
    pads = [
        (g.id, s.id, s.pad.batch)
        for g in bridge.girders
        for s in g.supports
        if s.pad is not None and s.pad.batch
    ]
    count = Counter(batch for _, _, batch in pads)
    return [
        f'girder "{girder}", support "{support}": batch "{batch}" has this one pad, so that there is nothing to share; '
        "check the name"
        for girder, support, batch in pads
        if count[batch] == 1
    ]


def _vehicles(bridge: BridgeDoc) -> list[str]:
    low, high = AXLE_LOAD
    said = []
    for vehicle in bridge.vehicles:
        odd = [load for _, load in vehicle.axles if not low <= load <= high]
        if odd:
            said.append(f'vehicle "{vehicle.id}": an axle of {odd[0]:g} kN is unusual; check the unit')
    return said


def _live(bridge: BridgeDoc) -> list[str]:
    said = []
    for live in bridge.live:
        where = f'live "{live.id}"'
        if live.dynamic is not None and live.dynamic > MOST_DYNAMIC:
            said.append(
                f"{where}: dynamic {live.dynamic:g} is added to 1: for effects times 1.25 write dynamic = 0.25"
            )
        axles = next((v.axles for v in bridge.vehicles if v.id == live.vehicle), ())
        length = max((at for at, _ in axles), default=0.0) - min((at for at, _ in axles), default=0.0)
        if live.count > 1 and live.pitch < length:
            said.append(
                f"{where}: the pitch of {live.pitch:g} m is shorter than the vehicle ({length:g} m between its end axles), "
                "so that the vehicles stand in each other"
            )
    return said


def _factors(bridge: BridgeDoc) -> list[str]:
    low, high = EFFECT_FACTOR
    factors = bridge.factors
    said = [
        f"factors, {name}: {value:g} is an unusual factor on effects"
        for name, value in (
            ("permanent", factors.permanent),
            ("surfacing", factors.surfacing),
            ("settlement", factors.settlement),
            ("live", factors.live),
        )
        if value is not None and not low <= value <= high
    ]
    if factors.resistance is not None and factors.resistance > 1.0:
        said.append(
            f"factors, resistance: {factors.resistance:g} multiplies the capacities and raises them; a partial factor of "
            f"{factors.resistance:g} that divides them is written {1.0 / factors.resistance:.3g}"
        )
    return said


def visit_queries(visit: VisitDoc, earlier: VisitDoc | None = None) -> list[str]:
    """What to look at again in a visit file; `earlier` is the visit before it, if there is one."""
    tested = [r for r in visit.readings if visit.state(r.state).vehicle is not None and not r.derived]
    said = [*_spreads(tested), *_compressions(tested), *_seats(visit), *corner_queries(visit)]
    if (
        earlier is not None
        and earlier.datum.strip() != visit.datum.strip()
        and _levels(visit)
        and _levels(earlier)
    ):
        said.append(
            f'datum: "{visit.datum}", but the visit of {earlier.date} had "{earlier.datum}": settlements of the two are '
            "compared as if the datum were one"
        )
    return said


def _spreads(tested: list[ReadingDoc]) -> list[str]:
    by_quantity: dict[str, list[ReadingDoc]] = defaultdict(list)
    for reading in tested:
        by_quantity[reading.quantity].append(reading)
    said = []
    for quantity, readings in by_quantity.items():
        noisy = [r for r in readings if r.sd > abs(r.value)]
        if len(readings) > 2 and 2 * len(noisy) > len(readings):
            said.append(
                f"{quantity}: {len(noisy)} of {len(readings)} readings are smaller than their own standard deviation; are value "
                f"and sd swapped? ({noisy[0].source})"
            )
        most, least = max(readings, key=lambda r: r.sd), min(readings, key=lambda r: r.sd)
        if most.sd > SD_SPREAD * least.sd:
            said.append(
                f"{quantity}: standard deviations reach from {least.sd_entered} to {most.sd_entered}; are value and sd swapped, "
                f"or a unit wrong? ({most.source})"
            )
    return said


def _compressions(tested: list[ReadingDoc]) -> list[str]:
    return [
        f'compression at "{r.support}", {r.state}: {r.value_entered} is much for a pad under a test load ({r.source})'
        for r in tested
        if r.quantity == "compression" and abs(r.value) > MOST_COMPRESSION
    ]


def _levels(visit: VisitDoc) -> list[ReadingDoc]:
    return [r for r in visit.readings if r.quantity == "settlement" and visit.state(r.state).vehicle is None]


def _seats(visit: VisitDoc) -> list[str]:
    return [
        f'settlement at "{r.support}" ({r.girder}): {r.value_entered} stands above the datum (settlement is positive downward); '
        f"check the sign ({r.source})"
        for r in _levels(visit)
        if r.value < -RISE * r.sd
    ]
