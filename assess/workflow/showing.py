"""What a bridge file comes to, resolved on a day."""

from __future__ import annotations

import datetime as dt

import numpy as np

from assess.shown import (
    BridgeShown,
    BridgeView,
    CapacityShown,
    GirderShown,
    PadShown,
    PlateShown,
    SectionShown,
    SectionView,
    SupportShown,
)
from assess.workflow import section_cautions
from assess.workflow.building import GirderModel
from assess.workflow.combination import factors_in_words, temperature_in_words
from assess.workflow.live_loads import models_in_words
from assess.workflow.sections import EFFECTS, SectionState, section_on
from db.documents import BridgeDoc
from db.store import open_record

MM = 1e3


def show_bridge(url: str, bridge: str, *, visit: dt.date | None = None) -> BridgeView:
    """Show the newest revision of a bridge file, its sections with the losses measured up to a day (None: all)."""
    with open_record(url) as record:
        document = record.bridge(bridge).document
    return bridge_view(document, visit)


def bridge_view(document: BridgeDoc, visit: dt.date | None = None) -> BridgeView:
    """What a bridge file comes to, its sections with the losses measured up to a day (None: all)."""
    views = section_views(document, visit)
    models = [GirderModel(document, girder) for girder in document.girders]
    return BridgeView(
        shown=BridgeShown(
            bridge=document.id,
            sections=[view.shown for view in views],
            girders=[_girder(model) for model in models],
        ),
        sections=views,
        pads=[pad for model in models for pad in _pads(model)],
        as_of=visit,
        models=models_in_words(document),
        temperature=temperature_in_words(document),
        factors=factors_in_words(document),
        cautions=section_cautions.of_bridge(document, visit),
    )


def section_views(bridge: BridgeDoc, day: dt.date | None) -> list[SectionView]:
    """All sections of a bridge with the losses measured up to a day, in the order of the file."""
    return [_section(section_on(section, day)) for section in bridge.sections]


def _girder(model: GirderModel) -> GirderShown:
    girder = model.doc
    nominal = dict(zip(model.pad_ids, np.exp(model.nominal), strict=True))
    spread = dict(zip(model.pad_ids, np.sqrt(np.expm1(model.prior.sd**2)), strict=True))
    rows = [
        SupportShown(
            support=support.id,
            kind=support.kind,
            x_m=x,
            nominal_kN_per_m=_first(support.stiffness, nominal.get(support.id)),
            cv=_first(support.stiffness_cv, spread.get(support.id)),
        )
        for support, x in zip(girder.supports, girder.support_positions, strict=True)
    ]
    return GirderShown(girder=girder.id, supports=rows)


def _pads(model: GirderModel) -> list[PadShown]:
    pairs = zip((model.doc.supports[i] for i in model.pads), model.pad_models, strict=True)
    return [
        PadShown(
            girder=model.doc.id,
            support=support.id,
            nominal_from="geometry" if support.stiffness is None else "stiffness",
            formula=pad.formula,
            shape_factor=pad.shape_factor,
            rubber_mm=MM * pad.geometry.rubber_thickness,
            layer_modulus_MPa=1e-3 * pad.layer_modulus,
            geometry_kN_per_m=pad.stiffness,
            batch=None if support.pad is None else support.pad.batch,
        )
        for support, pad in pairs
        if pad is not None
    ]


def _first(given: float | None, found: float | None) -> float | None:
    """What the file gives, digit for digit; else what follows from the geometry of a pad."""
    value = found if given is None else given
    return None if value is None else float(value)


def _section(state: SectionState) -> SectionView:
    built = state.built
    return SectionView(
        section=state.doc.id,
        shown=_shown(state),
        capacities=[
            CapacityShown(effect=effect, value=one.value, given=one.given, built=one.built, source=one.source)
            for effect, one in ((effect, state.capacities[effect]) for effect in EFFECTS)
        ],
        plates=_plates(state),
        holes=[
            (hole.plate, None if hole.level is None else MM * hole.level, MM * hole.count * hole.diameter)
            for hole in state.doc.holes
        ],
        deck=_deck(state),
        elastic_axis_mm=None if built is None else MM * built.stiffness.centroid,
        plastic_axis_mm=None if built is None else MM * built.equal_area.axis,
        shear_area_m2=state.shear_area,
        losses=section_cautions.losses_in_words(state),
        method=state.doc.moment_resistance,
    )


def _shown(state: SectionState) -> SectionShown:
    built = state.built
    sagging, hogging, shear = (state.capacities[effect].value for effect in EFFECTS)
    return SectionShown(
        id=state.doc.id,
        area_m2=None if built is None else built.stiffness.area,
        second_moment_m4=state.second_moment,
        elastic_modulus_top_m3=None if built is None else built.elastic_modulus("top"),
        elastic_modulus_bottom_m3=None if built is None else built.elastic_modulus("bottom"),
        plastic_modulus_m3=None if built is None else built.equal_area.moment,
        sagging_capacity_kNm=sagging,
        hogging_capacity_kNm=hogging,
        shear_capacity_kN=shear,
    )


def _plates(state: SectionState) -> list[PlateShown]:
    plates = () if state.built is None else state.built.plates
    return [
        PlateShown(
            name=plate.name,
            width_mm=MM * plate.width,
            height_mm=MM * plate.height,
            bottom_mm=MM * plate.bottom,
            loss_mm=MM * plate.loss,
            lost=" + ".join(
                f"{one.faces} x {MM * one.depth:.3g} mm" for one in state.losses.get(plate.name, ())
            ),
            web=plate.carries_shear,
        )
        for plate in plates
    ]


def _deck(state: SectionState) -> PlateShown | None:
    if state.built is None or state.built.deck is None:
        return None
    deck = state.built.deck
    return PlateShown(
        name="deck",
        width_mm=MM * deck.width,
        height_mm=MM * deck.thickness,
        bottom_mm=MM * deck.bottom,
        loss_mm=0.0,
        lost="",
        web=False,
    )
