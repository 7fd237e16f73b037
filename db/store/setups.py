"""What of a document is kept as JSON: raw readings, and what a visit says of unknowns, benchmarks and datum."""

from __future__ import annotations

import dataclasses
from typing import Any

from db.documents import DATUM_LOADS, VisitDoc
from db.raw_doc import BenchmarkDoc, RawDoc


def raw_json(raw: RawDoc | None) -> dict[str, Any] | None:
    """Return a raw reading as JSON: what it says, without what it leaves out."""
    if raw is None:
        return None
    every = dataclasses.asdict(raw)
    return {
        name: list(value) if isinstance(value, tuple) else value
        for name, value in every.items()
        if value not in (None, ())
    }


def raw_doc(kept: dict[str, Any] | None) -> RawDoc | None:
    """Return a raw reading from JSON."""
    if kept is None:
        return None
    fields: dict[str, Any] = {n: tuple(v) if isinstance(v, list) else v for n, v in kept.items()}
    return RawDoc(**fields)


def setup_json(doc: VisitDoc) -> dict[str, Any]:
    """Return what a visit says of its unknowns, benchmarks and datum as JSON; order is kept."""
    return {
        "unknowns": [[girder, list(names)] for girder, names in doc.unknowns],
        "datum_load": doc.datum_load,
        "benchmarks": [[mark.id, mark.sd] for mark in doc.benchmarks],
    }


def setup_fields(kept: dict[str, Any] | None) -> dict[str, Any]:
    """Return those fields of a `VisitDoc` from JSON; none for a visit that was kept before there were any."""
    if kept is None:
        return {}
    return {
        "unknowns": tuple((girder, tuple(names)) for girder, names in kept.get("unknowns", ())),
        "datum_load": kept.get("datum_load", DATUM_LOADS[0]),
        "benchmarks": tuple(BenchmarkDoc(id=name, sd=sd) for name, sd in kept.get("benchmarks", ())),
    }
