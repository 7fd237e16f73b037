"""Planned visits carried out: the readings of a plan with seeded noise, as a visit file."""

from __future__ import annotations

import datetime as dt
import re
from pathlib import Path

import numpy as np

from assess.results import PlanResult
from assess.workflow import draft_visit
from assess.workflow.study import Study
from assess.workflow.supports import kept_fits, supports_of
from assess.workflow.unknowns import Setup, asked_of
from db.documents import VisitDoc
from db.exchange import read_visit
from db.quantities import to_unit
from db.store import open_record


def filled(result: PlanResult, date: dt.date, values: list[str] | None = None) -> str:
    """The draft of a plan with its date and its values, zeros unless given."""
    text = re.sub(
        r"^date = +", f"date = {date.isoformat()} ", draft_visit(result), count=1, flags=re.MULTILINE
    )
    count = text.count('value = ""')
    given = iter(values or [f"0 {unit}" for unit in _units(result)])
    assert count == len(_units(result))
    return re.sub('value = ""', lambda _: f'value = "{next(given)}"', text)


def _units(result: PlanResult) -> list[str]:
    return [reading.unit for girder in result.girders for reading in girder.readings]


def carried_out(url: str, result: PlanResult, folder: Path, date: dt.date, seed: int) -> Path:
    """Write the planned visit as it would be read on pads and seats as known today, with noise."""
    path = folder / f"planned-{date.isoformat()}.toml"
    path.write_text(filled(result, date), encoding="utf-8")
    visit = read_visit(path)
    with open_record(url) as record:
        study = Study.fetch(record, result.bridge)
    rng = np.random.default_rng(seed)
    values = [text for girder in result.girders for text in _read(study, visit, girder.girder, rng)]
    path.write_text(filled(result, date, values), encoding="utf-8")
    return path


def _read(study: Study, visit: VisitDoc, girder: str, rng: np.random.Generator) -> list[str]:
    """The readings of one girder, in the order of the visit."""
    model = study.model(girder)
    readings = [reading for reading in visit.readings if reading.girder == girder]
    today, _ = supports_of(study, model, kept_fits(study, None), None)
    setup = Setup(model, visit, readings, asked_of(model, visit, readings, None).names)
    theta, layout = setup.start.copy(), setup.layout
    theta[layout.of("pads")] = today.log_stiffness
    for j in layout.places("settlements"):
        theta[j] = today.seats(model)[layout.entries[j].index]
    equations = setup.equations
    noisy = equations.predict(theta) + equations.sd * rng.standard_normal(equations.sd.size)
    return [f"{to_unit(value, one.unit):.9g} {one.unit}" for value, one in zip(noisy, readings, strict=True)]
