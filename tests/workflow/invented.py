"""Visits of the contract's bridge with known pads, written as files."""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping, Sequence
from pathlib import Path

import numpy as np

from assess.calibrate import Observation, ObservationModel
from assess.workflow.building import GirderModel
from db.documents import LoadStateDoc
from db.exchange import parse_bridge

BRIDGE = Path(__file__).parent.parent / "data" / "bridge-example.toml"
VISIT = BRIDGE.with_name("visit-example.toml")
PADS = ("west abutment", "pier 1", "pier 2")
STATES = {"T1": 13.1, "T2": 21.0, "T3": 31.0}
SD = {"compression": 0.02, "deflection": 0.05}  # mm
MM_PER_IN = 25.4
HEADER = "girder,state,quantity,support,at,value,sd,unit,instrument,remark"


def bridge_text() -> str:
    return BRIDGE.read_text()


def model() -> GirderModel:
    bridge = parse_bridge(bridge_text(), file="bridge-example.toml")
    return GirderModel(bridge, bridge.girders[0])


def write_visit(
    folder: Path,
    date: str,
    ratios: Sequence[float],
    *,
    seed: int | None = 1,
    states: Sequence[str] = ("T1", "T2", "T3"),
    pads: Sequence[str] = PADS,
    places: Sequence[float] = (6.0, 19.5, 33.0),
    settled: Mapping[str, float] | None = None,
    temperature: str | None = "20 degC",
    colder: float | Sequence[float] = 0.0,
    unit: str = "mm",
    girder: GirderModel | None = None,
) -> Path:
    """Write a visit on which the pads have `ratios` of nominal; no seed, no noise. Settlements in mm.

    `colder` is what the cold of the day adds to every ln k. The girder is that of the contract's bridge unless given.
    """
    girder = model() if girder is None else girder
    chosen = [LoadStateDoc(id=s, vehicle="ballast wagon", leading_axle_at=STATES[s]) for s in states]
    read = [
        Observation(quantity="compression", state=j, value=0.0, sd=1.0, support=girder.doc.support_index(pad))
        for j in range(len(chosen))
        for pad in pads
    ]
    read += [
        Observation(quantity="deflection", state=j, value=0.0, sd=1.0, x=x)
        for j in range(len(chosen))
        for x in places
    ]
    equations = ObservationModel(girder.condensed, girder.pads, [girder.placed(s) for s in chosen], read)
    true = 1e3 * equations.predict(girder.nominal + np.log(np.array(ratios)) + np.asarray(colder))
    rng = np.random.default_rng(seed)
    scale = 1.0 / MM_PER_IN if unit == "in" else 1.0
    rows = [HEADER]
    for o, value in zip(read, true, strict=True):
        sd = SD[o.quantity]
        noisy = value if seed is None else value + sd * rng.standard_normal()
        support = girder.doc.supports[o.support].id if o.support >= 0 else ""
        at = "" if o.support >= 0 else f"{o.x:g}"
        state = chosen[o.state].id
        rows.append(
            f"{girder.doc.id},{state},{o.quantity},{support},{at},{noisy * scale:.12g},{sd * scale:.12g},{unit},,"
        )
    for support, drop in (settled or {}).items():
        rows.append(f"{girder.doc.id},permanent,settlement,{support},,{drop:g},0.3,mm,,")
    name = f"{date}-{unit}"
    (folder / f"{name}.csv").write_text("\n".join(rows) + "\n")
    head = [
        "format = 1",
        "[visit]",
        f'bridge = "{girder.bridge.id}"',
        f"date = {dt.date.fromisoformat(date)}",
    ]
    if temperature is not None:
        head.append(f'pad_temperature = "{temperature}"')
    head += [f'readings = "{name}.csv"', "[[load_state]]", 'id = "permanent"']
    for s in chosen:
        head += ["[[load_state]]", f'id = "{s.id}"', 'vehicle = "ballast wagon"']
        head.append(f'leading_axle_at = "{s.leading_axle_at} m"')
    path = folder / f"{name}.toml"
    path.write_text("\n".join(head) + "\n")
    return path
