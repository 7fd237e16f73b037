"""Suppositions: what if a pad, a seat, a section or a load were other than it is taken to be.

A supposition is a line "NAME = VALUE". Its names are those of the bridge file:

    north/pier 2 stiffness = 220 kN/mm                  a pad, under short load
    north/pier 1 settlement = 5 mm                      a seat, downward since the as-built datum
    north stiffness factor = 0.9                        EI and GA of the whole girder
    section pier 2/bottom flange loss = 3 mm            thickness gone from a plate, all faces together
    live line traffic factor = 1.2                      all loads of a live load
    permanent north/deck and track factor = 1.1         a permanent load

All else stays as calibrated; nothing of it is kept.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from assess.workflow.building import GirderModel
from assess.workflow.supports import Settlement, Supports
from db.documents import BridgeDoc, LossDoc, SectionDoc
from db.errors import BedstoneError
from db.quantities import read_number, read_quantity
from db.wording import listed, shown, suggestion

FIELD = "--suppose"
_ALWAYS = dt.date.min  # the day of a supposed loss: it counts on every day


@dataclass(frozen=True, kw_only=True)
class Supposition:
    """One line, understood.

    Attributes
    ----------
    kind : "stiffness" | "settlement" | "girder" | "loss" | "live" | "permanent"
    owner : girder, section or live load by id
    part : support, plate or permanent load by name; empty where the owner is meant
    value : kN/m, m, or a plain factor
    text : as written, spaces tidied
    """

    kind: str
    owner: str
    part: str
    value: float
    text: str


def read_suppositions(bridge: BridgeDoc, lines: Sequence[str]) -> list[Supposition]:
    """Understand lines about a bridge.

    Raises
    ------
    BedstoneError
        for a line that is none, names nothing of the bridge, has a wrong value, or says again what another one says.
    """
    found: dict[str, Supposition] = {}
    names = _names(bridge)
    for line in lines:
        name, one = _read(bridge, names, line)
        if name in found:
            raise BedstoneError(f'"{shown(name)}" is supposed twice', field=FIELD, remedy="say it once")
        found[name] = one
    return list(found.values())


def _names(bridge: BridgeDoc) -> dict[str, tuple[str, str, str]]:
    """All that may stand before the sign of equality, with kind, owner and part."""
    names: dict[str, tuple[str, str, str]] = {}
    for girder in bridge.girders:
        for support in girder.supports:
            place = f"{girder.id}/{support.id}"
            if support.kind == "pad":
                names[f"{place} stiffness"] = ("stiffness", girder.id, support.id)
            names[f"{place} settlement"] = ("settlement", girder.id, support.id)
        names[f"{girder.id} stiffness factor"] = ("girder", girder.id, "")
        for load in girder.permanent:
            names[f"permanent {girder.id}/{load.name} factor"] = ("permanent", girder.id, load.name)
    for section in bridge.sections:
        for plate in section.plates:
            names[f"section {section.id}/{plate.name} loss"] = ("loss", section.id, plate.name)
    for live in bridge.live:
        names[f"live {live.id} factor"] = ("live", live.id, "")
    return {" ".join(name.split()): what for name, what in names.items()}


def _read(bridge: BridgeDoc, names: dict[str, tuple[str, str, str]], line: str) -> tuple[str, Supposition]:
    name, sign, value = (part.strip() for part in line.rpartition("="))
    name = " ".join(name.split())
    example = f'write for example "{_example(bridge, name)}"'
    if not (sign and name and value):
        raise BedstoneError(f'"{shown(line)}" is not of the form NAME = VALUE', field=FIELD, remedy=example)
    if name not in names:
        _refuse_known_kinds(bridge, name, example)
        raise BedstoneError(
            f'nothing of {bridge.id} is named "{shown(name)}"{suggestion(name, names)}',
            field=FIELD,
            remedy=example,
        )
    kind, owner, part = names[name]
    text = f"{name} = {' '.join(value.split())}"
    return name, Supposition(
        kind=kind, owner=owner, part=part, value=_value(bridge, kind, owner, part, value, text), text=text
    )


def _refuse_known_kinds(bridge: BridgeDoc, name: str, example: str) -> None:
    """Say why a name that is nearly right can have no such value."""
    for girder in bridge.girders:
        for support in girder.supports:
            if name == f"{girder.id}/{support.id} stiffness":
                problem = f'"{shown(support.id)}" of girder "{shown(girder.id)}" is a pin and holds its level'
                raise BedstoneError(
                    problem, field=FIELD, remedy=f'{example}, or "{name[:-9]}settlement = 5 mm"'
                )
    for section in bridge.sections:
        if name.startswith(f"section {section.id}/") and name.endswith(" loss"):
            told = (
                f"its plates are {listed(plate.name for plate in section.plates)}"
                if section.plates
                else "it is not given by plates, so no loss can be taken off"
            )
            raise BedstoneError(
                f'section "{shown(section.id)}" has no such plate: {told}', field=FIELD, remedy=example
            )


def _value(bridge: BridgeDoc, kind: str, owner: str, part: str, text: str, line: str) -> float:
    if kind in ("girder", "live", "permanent"):
        value = read_number(text, field=f'{FIELD} "{shown(line)}"')
        return _positive(value, line, "a factor", "0.9")
    if kind == "stiffness":
        found = read_quantity(text, "stiffness", field=f'{FIELD} "{shown(line)}"')
        return _positive(found.si, line, "a stiffness", "220 kN/mm")
    value = read_quantity(text, "length", field=f'{FIELD} "{shown(line)}"', example="5 mm").si
    if kind == "loss":
        plate = next(one for one in bridge.section(owner).plates if one.name == part)
        there = min(plate.width, plate.height)
        if not 0.0 <= value < there:
            raise BedstoneError(
                f"the plate is {1e3 * there:g} mm thick, and a loss is less than that and not below 0",
                field=f'{FIELD} "{shown(line)}"',
                remedy='write for example "3 mm"',
            )
    return value


def _positive(value: float, line: str, what: str, example: str) -> float:
    if value <= 0.0:
        raise BedstoneError(
            f"{what} is above 0", field=f'{FIELD} "{shown(line)}"', remedy=f'write for example "{example}"'
        )
    return value


def _example(bridge: BridgeDoc, wrong: str) -> str:
    """A right line of this bridge, of the kind that was meant where that can be told."""
    girder = bridge.girders[0]
    pads = [support.id for support in girder.supports if support.kind == "pad"]
    plates = [(s.id, s.plates[-1].name) for s in bridge.sections if s.plates]
    if wrong.endswith(" loss") and plates:
        return "section {}/{} loss = 3 mm".format(*plates[0])
    if wrong.startswith("live ") and bridge.live:
        return f"live {bridge.live[0].id} factor = 1.2"
    if wrong.startswith("permanent ") and girder.permanent:
        return f"permanent {girder.id}/{girder.permanent[0].name} factor = 1.1"
    if wrong.endswith(" factor"):
        return f"{girder.id} stiffness factor = 0.9"
    if wrong.endswith(" settlement") or not pads:
        return f"{girder.id}/{girder.supports[-1].id} settlement = 5 mm"
    return f"{girder.id}/{pads[-1]} stiffness = 220 kN/mm"


# put to use --------------------------------------------------------------------------------------


def supposed_model(model: GirderModel, suppositions: Sequence[Supposition]) -> GirderModel:
    """The girder with the supposed losses and loads; the same one where there are none."""
    bridge = model.bridge
    for one in suppositions:
        bridge = _changed(bridge, one)
    if bridge is model.bridge:
        return model
    return GirderModel(bridge, bridge.girder(model.doc.id), model.as_of)


def _changed(bridge: BridgeDoc, one: Supposition) -> BridgeDoc:
    if one.kind == "loss":
        sections = tuple(_worn(s, one) if s.id == one.owner else s for s in bridge.sections)
        return replace(bridge, sections=sections)
    if one.kind == "live":
        live = tuple(replace(x, factor=one.value) if x.id == one.owner else x for x in bridge.live)
        return replace(bridge, live=live)
    if one.kind == "permanent":
        girder = bridge.girder(one.owner)
        loads = tuple(
            replace(
                load,
                uniform=None if load.uniform is None else one.value * load.uniform,
                point=None if load.point is None else one.value * load.point,
            )
            if load.name == one.part
            else load
            for load in girder.permanent
        )
        changed = replace(girder, permanent=loads)
        return replace(bridge, girders=tuple(changed if g.id == girder.id else g for g in bridge.girders))
    return bridge


def _worn(section: SectionDoc, one: Supposition) -> SectionDoc:
    """A section of which a plate has lost what is supposed, and nothing that was measured there."""
    others = tuple(loss for loss in section.losses if loss.plate != one.part)
    return replace(
        section, losses=(*others, LossDoc(plate=one.part, faces=1, depth=one.value, visit=_ALWAYS))
    )


def supposed_supports(
    model: GirderModel, supports: Supports, suppositions: Sequence[Supposition]
) -> Supports:
    """What is known of a girder's supports, with the supposed pads, seats and stiffness in its place."""
    log_stiffness = supports.log_stiffness.copy()
    seats = dict(supports.settlements)
    log_factor = supports.log_factor
    for one in suppositions:
        if one.owner != model.doc.id:
            continue
        if one.kind == "stiffness":
            log_stiffness[model.pad_ids.index(one.part)] = np.log(one.value)
        elif one.kind == "settlement":
            seats[one.part] = Settlement(value=one.value, sd=0.0, date=_ALWAYS)
        elif one.kind == "girder":
            log_factor = float(np.log(one.value))
    return replace(supports, log_stiffness=log_stiffness, settlements=seats, log_factor=log_factor)
