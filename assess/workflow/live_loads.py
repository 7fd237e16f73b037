"""Live loads of a bridge file that name a published model: found, checked, shared out, said in words."""

from __future__ import annotations

import numpy as np

from assess.loads import (
    Allowance,
    LiveModel,
    ModelLoad,
    UnknownModelError,
    en_rail,
    live_model,
    model_names,
)
from db.documents import BridgeDoc, GirderDoc, LiveDoc
from db.errors import BedstoneError
from db.wording import listed, shown, suggestion

FILE = "bridge file"
TRACK = "standard"  # where the file does not say: the greater factor of the two
_BY_LENGTH = (
    "50 / (L + 125 ft), at most 0.30, L the span for sagging, the mean of the two spans at the support for hogging and "
    "reactions, and the loaded length to the far support for shear"
)


def check_live(bridge: BridgeDoc, *, file: str) -> None:
    """Refuse a bridge file with a live load model that is not known or whose allowance cannot be told."""
    for live in bridge.live:
        if live.model is not None:
            model = _model(live, file)
            for girder in bridge.girders:
                _allowance(live, model, girder, file)


def model_loads(bridge: BridgeDoc, girder: GirderDoc) -> tuple[ModelLoad, ...]:
    """The published live load models as a girder carries them: its share of one track or lane, and the allowance."""
    loads = []
    for live in bridge.live:
        if live.model is not None:
            model = _model(live, FILE)
            allowance = _allowance(live, model, girder, FILE)
            loads.append(ModelLoad(model=model.scaled(girder.live_share * live.factor), allowance=allowance))
    return tuple(loads)


def models_by_length(bridge: BridgeDoc) -> list[str]:
    """Names of the published models whose allowance follows from lengths of spans."""
    named = [(live, _model(live, FILE)) for live in bridge.live if live.model is not None]
    rules = ("en-rail", "loaded-length")
    return [model.name for live, model in named if live.dynamic is None and model.rule in rules]


def live_in_words(bridge: BridgeDoc) -> list[str]:
    """The live loads for a reader: what runs, by which document, with which dynamic allowance."""
    return [
        _vehicle_in_words(live) if live.model is None else _model_in_words(bridge, live)
        for live in bridge.live
    ]


def models_in_words(bridge: BridgeDoc) -> list[str]:
    """The published live load models alone, for a reader."""
    return [_model_in_words(bridge, live) for live in bridge.live if live.model is not None]


def _vehicle_in_words(live: LiveDoc) -> str:
    at = f" at {live.pitch:g} m" if live.count > 1 else ""
    return (
        f"{live.id}: {live.count} x {live.vehicle}{at}, dynamic allowance {live.dynamic or 0.0:g}, "
        "both running directions"
    )


def _model_in_words(bridge: BridgeDoc, live: LiveDoc) -> str:
    model = _model(live, FILE)
    return (
        f"{live.id}: {model.title}, one {model.basis} times the girder's live share, both running directions "
        f"({model.source}; {model.note}); {_allowance_in_words(bridge, live, model)}"
    )


def _allowance_in_words(bridge: BridgeDoc, live: LiveDoc, model: LiveModel) -> str:
    bare = not all(one.uniform_allowance for one in model.alternatives)
    rest = " on axles, none on the uniform part" if bare else ""
    if live.dynamic is not None:
        return f"dynamic allowance {live.dynamic:g}{rest}, as the bridge file says"
    if model.rule == "constant":
        return f"dynamic allowance {model.rule_value:g}{rest} ({model.rule_source})"
    if model.rule == "loaded-length":
        return f"dynamic allowance {_BY_LENGTH} ({model.rule_source})"
    each = (f"{_allowance(live, model, g, FILE).value or 0.0:.3g} on girder {g.id}" for g in bridge.girders)
    maintained = (
        "carefully maintained track" if _track(live) == "careful" else "track with standard maintenance"
    )
    return f"dynamic allowance {', '.join(each)} for {maintained} ({model.rule_source})"


def _model(live: LiveDoc, file: str) -> LiveModel:
    name = live.model or ""
    try:
        return live_model(name)
    except UnknownModelError as error:
        known = list(model_names())
        raise BedstoneError(
            f'there is no live load model "{shown(name)}"{suggestion(name, known)}',
            file=file,
            field=f'live "{shown(live.id)}", model',
            remedy=f"known: {listed(known)} and any other cooper-eNN",
        ) from error


def _track(live: LiveDoc) -> str:
    return live.track or TRACK


def _allowance(live: LiveDoc, model: LiveModel, girder: GirderDoc, file: str) -> Allowance:
    """The dynamic allowance on one girder: the file's own first, else by the model's rule."""
    place = f'live "{shown(live.id)}"'
    if live.track is not None and model.rule != "en-rail":
        raise BedstoneError(
            f"the allowance of {model.name} does not ask for the track",
            file=file,
            field=f"{place}, track",
            remedy="leave it out",
        )
    if live.dynamic is not None:
        return Allowance(value=live.dynamic)
    if model.rule == "given":
        raise BedstoneError(
            f"{model.name} brings no dynamic allowance",
            file=file,
            field=f"{place}, dynamic",
            remedy=f"write it: {model.rule_source}; for example dynamic = 0.35, or 0 for none",
        )
    if model.rule == "constant":
        return Allowance(value=model.rule_value)
    if model.rule == "loaded-length":
        return Allowance(value=None)
    spans = np.array([span.length for span in girder.spans])
    return Allowance(value=en_rail(spans, _track(live)))
