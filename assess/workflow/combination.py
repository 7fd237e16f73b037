"""Factors and temperature of a bridge file: the owner's values first, a built-in set for the rest; said in words."""

from __future__ import annotations

import numpy as np

from assess.capacity import Dead, Factors, FactorSet, Thermal, UnknownSetError, factor_set, set_names
from assess.loads import LoadCase
from assess.workflow.sections import depth_of
from assess.workflow.stretches import stretches
from db.documents import BridgeDoc, FactorsDoc, GirderDoc, PermanentDoc, TemperatureDoc
from db.errors import BedstoneError
from db.wording import listed, shown, suggestion

FILE = "bridge file"


def check_combination(bridge: BridgeDoc, *, file: str) -> None:
    """Refuse a bridge file whose factors or temperature cases cannot be told."""
    factors_of(bridge, file=file)
    for girder in bridge.girders:
        _refuse_stage(girder, file)
        for case in bridge.temperature:
            _curvatures(bridge, girder, case, file)


def factors_of(bridge: BridgeDoc, *, file: str = FILE) -> Factors:
    """The factors of a bridge: what its file gives, then what the set gives that it names.

    A relieving permanent effect counts at most once unless the file or the set says otherwise.

    Raises
    ------
    BedstoneError
        for a set, level or condition that is not known, or where temperature has no factor.
    """
    doc = bridge.factors
    base = None if doc.set is None else _set(doc.set, file)
    permanent, relieving = _permanent(doc, base)
    surfacing = _pair((doc.surfacing, doc.surfacing_relieving), None if base is None else base.surfacing)
    settlement = _pair((doc.settlement, doc.settlement_relieving), None if base is None else base.settlement)
    return Factors(
        permanent=permanent,
        permanent_relieving=relieving,
        surfacing=surfacing[0],
        surfacing_relieving=surfacing[1],
        settlement=settlement[0],
        settlement_relieving=settlement[1],
        temperature=_on_temperature(bridge, base, file),
        live=_live(doc, base, file),
        resistance=_resistance(doc, base, file),
        relief_counts=doc.relief_counts,
        levels=() if base is None or base.form != "rating" else tuple(base.levels.items()),
    )


def _permanent(doc: FactorsDoc, base: FactorSet | None) -> tuple[float, float]:
    if doc.permanent is not None:
        given = doc.permanent_relieving
        return doc.permanent, min(1.0, doc.permanent) if given is None else given
    assert base is not None  # the file's reader sees to it
    loading, relieving = base.permanent
    return loading, relieving if doc.permanent_relieving is None else doc.permanent_relieving


def _pair(
    own: tuple[float | None, float | None], base: tuple[float, float] | None
) -> tuple[float | None, float | None]:
    """The owner's pair, filled up from the set's where the owner gives no loading factor."""
    loading, relieving = own
    if loading is not None or base is None:
        return loading, relieving
    return base[0], base[1] if relieving is None else relieving


def _on_temperature(bridge: BridgeDoc, base: FactorSet | None, file: str) -> float:
    given = bridge.factors.temperature
    if given is None and base is not None:
        given = base.temperature
    if given is None and bridge.temperature:
        raise BedstoneError(
            "there is a temperature case, but no factor on it",
            file=file,
            field="factors, temperature",
            remedy="write the factor beside the full live load, for example temperature = 0.9, or 0 to leave it out",
        )
    return given or 0.0


def _live(doc: FactorsDoc, base: FactorSet | None, file: str) -> float:
    if doc.live is not None:
        return doc.live
    assert base is not None
    if doc.level is None:
        return next(iter(base.levels.values()))
    return _chosen(base, base.levels, "level", doc.level, file)


def _resistance(doc: FactorsDoc, base: FactorSet | None, file: str) -> float:
    if base is None:
        assert doc.resistance is not None  # the file's reader sees to it
        return doc.resistance
    if doc.condition is not None:
        _chosen(base, base.condition, "condition", doc.condition, file)
    if doc.resistance is None:
        return base.on_resistance(doc.condition, doc.system)
    return doc.resistance * base.on_resistance(doc.condition, doc.system) / base.resistance


def _chosen(base: FactorSet, values: dict[str, float], field: str, name: str, file: str) -> float:
    if name in values:
        return values[name]
    raise BedstoneError(
        f'the set {base.name} has no {field} "{shown(name)}"{suggestion(name, list(values))}',
        file=file,
        field=f"factors, {field}",
        remedy=f"it has: {listed(list(values))}" if values else "leave it out",
    )


def _set(name: str, file: str) -> FactorSet:
    try:
        return factor_set(name)
    except UnknownSetError as error:
        known = list(set_names())
        raise BedstoneError(
            f'there is no factor set "{shown(name)}"{suggestion(name, known)}',
            file=file,
            field="factors, set",
            remedy=f"known: {listed(known)}",
        ) from error


def factors_in_words(bridge: BridgeDoc) -> str:
    """The factors for a reader: whose they are, each of them, and what is done with relief."""
    doc, used = bridge.factors, factors_of(bridge)
    pairs = [("permanent", (used.permanent, used.permanent_relieving))]
    if used.surfacing is not None:
        pairs.append(("surfacing", used.of_kind("surfacing")))
    if used.settlement is not None:
        pairs.append(("settlement", used.of_settlement))
    parts = [f"{name} {loading:g} (where it relieves {relieving:g})" for name, (loading, relieving) in pairs]
    if bridge.temperature:
        parts.append(f"temperature {used.temperature:g}")
    level = "" if doc.level is None else f" ({doc.level})"
    parts.append(f"live {used.live:g}{level}")
    parts.append(f"resistance {used.resistance:g}")
    relief = (
        "relief by settlement counts, as the bridge file says"
        if used.relief_counts
        else "every section with and without relief by settlement, the worse governs"
    )
    return f"{_whose(doc)}: {', '.join(parts)}; {relief}"


def _whose(doc: FactorsDoc) -> str:
    if doc.set is None:
        return doc.name
    base = factor_set(doc.set)
    own = [
        name
        for name in ("permanent", "surfacing", "settlement", "temperature", "live", "resistance")
        if getattr(doc, name) is not None
    ]
    but = f", but {listed(own)} as the bridge file gives" if own else ""
    told = f"{doc.name}, " if doc.name else ""
    return f"{told}set {base.name}, {base.title} ({base.text}; {base.status}{but})"


def temperature_in_words(bridge: BridgeDoc) -> list[str]:
    """The temperature cases for a reader."""
    said = []
    for case in bridge.temperature:
        parts = []
        if case.difference:
            warmer = "warmer" if case.difference > 0.0 else "colder"
            parts.append(f"top {abs(case.difference):g} K {warmer} than the underside, straight between")
        parts += [f"seat {s.girder} / {s.support} up {1e3 * s.rise:g} mm" for s in case.seats]
        said.append(f"{case.id}: {', '.join(parts)}; expansion {case.expansion:g} per K")
    return said


# what they are combined from ---------------------------------------------------------------------


def dead_loads(girder: GirderDoc) -> tuple[Dead, ...]:
    """Permanent loads by kind and stage."""
    found: dict[tuple[str, bool], list[PermanentDoc]] = {}
    for one in girder.permanent:
        found.setdefault((one.kind, one.stage == "continuous"), []).append(one)
    return tuple(
        Dead(loads=_case_of(own), kind=kind, continuous=continuous)
        for (kind, continuous), own in found.items()
    )


def _case_of(loads: list[PermanentDoc]) -> LoadCase:
    points = tuple((p.at, p.point) for p in loads if p.point is not None and p.at is not None)
    uniforms = tuple((p.start, p.end, p.uniform) for p in loads if p.uniform is not None)
    return LoadCase(points=points, uniforms=uniforms)


def thermal_cases(bridge: BridgeDoc, girder: GirderDoc, *, file: str = FILE) -> tuple[Thermal, ...]:
    """The temperature cases as they act on a girder."""
    cases = []
    for case in bridge.temperature:
        drop = np.zeros(len(girder.supports))
        for seat in case.seats:
            if seat.girder == girder.id:
                drop[girder.support_index(seat.support)] -= seat.rise
        cases.append(Thermal(curvatures=_curvatures(bridge, girder, case, file), drop=drop))
    return tuple(cases)


def curvatures_of(
    bridge: BridgeDoc, girder: GirderDoc, difference: float
) -> tuple[tuple[float, float, float], ...]:
    """Curvatures (start m, end m, 1/m) by which a temperature difference, K, top warmer positive, would bend a girder.

    Expansion is that of the bridge file's first temperature case, else the usual one.

    Raises
    ------
    BedstoneError
        where the depth of a section is not known.
    """
    expansion = bridge.temperature[0].expansion if bridge.temperature else TemperatureDoc(id="").expansion
    case = TemperatureDoc(id="gradient", difference=difference, expansion=expansion)
    return _curvatures(bridge, girder, case, FILE)


def _curvatures(
    bridge: BridgeDoc, girder: GirderDoc, case: TemperatureDoc, file: str
) -> tuple[tuple[float, float, float], ...]:
    """A warmer top bends the free girder upward: curvature (sagging positive) - expansion x difference / depth."""
    if case.difference == 0.0:
        return ()
    result = []
    start = 0.0
    for length, section in (part for span in girder.spans for part in stretches(bridge, span)):
        depth = depth_of(section)
        if depth is None:
            raise BedstoneError(
                f'temperature case "{shown(case.id)}" needs the depth of this section',
                file=file,
                field=f'section "{shown(section.id)}", depth',
                remedy='write for example depth = "900 mm"',
            )
        result.append((start, start + length, -case.expansion * case.difference / depth))
        start += length
    return tuple(result)


def _refuse_stage(girder: GirderDoc, file: str) -> None:
    """Loads carried span by span ask for spans that stand by themselves."""
    staged = any(p.stage == "span by span" for p in girder.permanent)
    for j, span in enumerate(girder.spans):
        if staged and span.hinges:
            raise BedstoneError(
                "loads that came on span by span ask for spans that stand by themselves, but this one has a hinge",
                file=file,
                field=f'girder "{shown(girder.id)}", span {j + 1}, hinges',
                remedy='give the loads the stage "continuous"',
            )
    for i, support in enumerate(girder.supports):
        if support.rotation > 0.0 and staged:
            raise BedstoneError(
                "loads that came on span by span ask for spans hinged at both ends, but this support holds rotation",
                file=file,
                field=f'girder "{shown(girder.id)}", support {i + 1}, rotation',
                remedy='leave rotation out, or give the loads the stage "continuous"',
            )
