"""Visits of the contract's bridge that read its permanent state as well, with a known truth, written as files."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

from assess.calibrate import Observation, ObservationModel, PermanentState, Unknowns
from assess.loads import LoadCase
from assess.workflow.building import GirderModel
from assess.workflow.combination import dead_loads
from db.documents import LoadStateDoc
from tests.workflow.invented import HEADER, STATES, model

SUSTAINED = 1.0 / 1.35  # as published creep has it where the file gives no hardness
SUPPORTS = ("west abutment", "pier 1", "pier 2", "east abutment")
GAPS = tuple(("compression", support, 0.05) for support in SUPPORTS[:3])
SEATS = tuple(("settlement", support, 0.3) for support in SUPPORTS)
LEVELS = tuple(("deflection", support, 0.3) for support in SUPPORTS)
MIDDLES = (6.0, 19.5, 33.0)


@dataclass(frozen=True, kw_only=True)
class Truth:
    """What stands behind the readings; mm where a length."""

    ratios: Sequence[float] = (1.0, 1.0, 1.0)
    settled: Mapping[str, float] = field(default_factory=dict)
    sustained: float = SUSTAINED
    factor: float = 1.0
    shift: float = 0.0
    tilt: float = 0.0


def write_survey(
    folder: Path,
    date: str,
    truth: Truth,
    lasting: Sequence[tuple[str, str, float]],
    *,
    tests: Sequence[str] = (),
    seed: int | None = 1,
    girder: GirderModel | None = None,
) -> Path:
    """Write a visit: readings of the permanent state (quantity, support, sd mm), and gaps and levels in test states."""
    girder = model() if girder is None else girder
    placed = [
        girder.placed(LoadStateDoc(id=s, vehicle="ballast wagon", leading_axle_at=STATES[s])) for s in tests
    ]
    edges = girder.doc.support_positions
    read = [_at(girder, 0, quantity, support, sd) for quantity, support, sd in lasting]
    for state in range(1, len(placed) + 1):
        read += [_at(girder, state, "compression", support, 0.02) for support in SUPPORTS[:3]]
        read += [Observation(quantity="deflection", state=state, value=0.0, sd=5e-5, x=x) for x in MIDDLES]
    dead = LoadCase(uniforms=tuple(u for one in dead_loads(girder.doc) for u in one.loads.uniforms))
    asked = Unknowns(sustained=True, settlements=tuple(range(girder.n)), girder=True, datum=True)
    equations = ObservationModel(
        girder.condensed, girder.pads, [PermanentState(loads=dead), *placed], read, asked
    )
    values = 1e3 * equations.predict(_theta(girder, equations, truth))
    rng = np.random.default_rng(seed)
    rows = [HEADER]
    for o, value in zip(read, values, strict=True):
        noisy = value if seed is None else value + 1e3 * o.sd * rng.standard_normal()
        support, at = (girder.doc.supports[o.support].id, "") if o.support >= 0 else ("", f"{o.x:.15g}")
        if not at and o.quantity == "deflection":
            raise AssertionError(edges)
        state = "permanent" if o.state == 0 else tests[o.state - 1]
        rows.append(f"{girder.doc.id},{state},{o.quantity},{support},{at},{noisy:.15g},{1e3 * o.sd:g},mm,,")
    (folder / f"{date}.csv").write_text("\n".join(rows) + "\n")
    head = ["format = 1", "[visit]", f'bridge = "{girder.bridge.id}"', f"date = {date}"]
    head += ['pad_temperature = "20 degC"', f'readings = "{date}.csv"', "[[load_state]]", 'id = "permanent"']
    for s in tests:
        head += [
            "[[load_state]]",
            f'id = "{s}"',
            'vehicle = "ballast wagon"',
            f'leading_axle_at = "{STATES[s]} m"',
        ]
    path = folder / f"{date}.toml"
    path.write_text("\n".join(head) + "\n")
    return path


def _at(girder: GirderModel, state: int, quantity: str, support: str, sd: float) -> Observation:
    index = girder.doc.support_index(support)
    if quantity == "deflection":
        x = float(girder.doc.support_positions[index])
        return Observation(quantity=quantity, state=state, value=0.0, sd=1e-3 * sd, x=x)
    return Observation(quantity=quantity, state=state, value=0.0, sd=1e-3 * sd, support=index)


def _theta(girder: GirderModel, equations: ObservationModel, truth: Truth) -> np.ndarray:
    layout, theta = equations.layout, np.zeros(equations.size)
    theta[layout.of("pads")] = girder.nominal + np.log(np.array(truth.ratios))
    theta[layout.of("sustained")] = np.log(truth.sustained)
    for support, drop in truth.settled.items():
        theta[layout.of("settlements")][girder.doc.support_index(support)] = 1e-3 * drop
    theta[layout.of("girder")] = np.log(truth.factor)
    if "datum" in layout:
        theta[layout.of("datum")] = 1e-3 * truth.shift, 1e-3 * truth.tilt
    return theta
