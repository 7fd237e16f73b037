"""Make the demo's files in sample_data: readings of an invented bridge, simulated and rounded.

Run it only to change the story; the files are kept. The same seed gives the same files.
"""

from __future__ import annotations

import datetime as dt
from pathlib import Path

import numpy as np

from assess.calibrate import Observation, ObservationModel
from assess.workflow.building import GirderModel
from assess.workflow.pads import cold_shift
from db.documents import LoadStateDoc
from db.exchange import parse_bridge

FOLDER = Path(__file__).resolve().parent.parent / "sample_data"
SEED = 16

# (date, party, pad temperature in degC, settlement of pier 2 in mm)
VISITS = [
    (dt.date(2018, 5, 16), "bearing party 1", 16.0, 0.0),
    (dt.date(2020, 6, 9), "bearing party 1", 18.0, 2.1),
    (dt.date(2021, 9, 14), "bearing party 2", 17.0, 3.9),
    (dt.date(2023, 1, 24), "bearing party 2", -2.0, 6.0),
    (dt.date(2024, 6, 11), "bearing party 1", 21.0, 8.0),
    (dt.date(2026, 5, 19), "bearing party 3", 17.0, 10.5),
]
# true stiffness against nominal in 2018, and its growth a year (ln)
TRUTH = {
    ("north", "west abutment"): (0.88, 0.002),
    ("north", "pier 1"): (0.93, 0.002),
    ("north", "pier 2"): (0.90, -0.105),
    ("north", "east abutment"): (0.95, 0.002),
    ("south", "west abutment"): (0.97, 0.002),
    ("south", "pier 1"): (0.86, 0.002),
    ("south", "pier 2"): (0.91, 0.002),
    ("south", "east abutment"): (0.84, 0.002),
}
STATES = [("T1", 10.5), ("T2", 20.5), ("T3", 28.0), ("T4", 36.5), ("T5", 45.0)]
SD = {"compression": 0.03, "deflection": 0.1, "settlement": 0.3}  # mm
KNOCKED = (dt.date(2021, 9, 14), "south", "T3", 24.0, 0.8)  # a gauge knocked: date, girder, state, place, mm
INSTRUMENT = {"compression": "gap gauge", "deflection": "dial gauge", "settlement": "digital level"}
PIERS = ("west abutment", "pier 1", "pier 2", "east abutment")
HEADER = "girder,state,quantity,support,at,value,sd,unit,instrument,remark"


def main() -> None:
    """Write the six visits."""
    bridge = parse_bridge((FOLDER / "hollin-water.toml").read_text(), file="hollin-water.toml")
    models = {girder.id: GirderModel(bridge, girder) for girder in bridge.girders}
    rng = np.random.default_rng(SEED)
    for date, party, temperature, settled in VISITS:
        rows = [HEADER]
        for name, model in models.items():
            rows += _tests(model, name, date, temperature, rng)
            rows += _levels(name, settled, rng)
        table = f"readings-{date.isoformat()}.csv"
        (FOLDER / table).write_text("\n".join(rows) + "\n")
        (FOLDER / f"visit-{date.isoformat()}.toml").write_text(_visit(date, party, temperature, table))


def _tests(
    model: GirderModel, name: str, date: dt.date, temperature: float, rng: np.random.Generator
) -> list[str]:
    years = (date - VISITS[0][0]).days / 365.25
    truth = [TRUTH[name, pad] for pad in model.pad_ids]
    log_k = model.nominal + [np.log(ratio) + growth * years for ratio, growth in truth]
    log_k = log_k + cold_shift(model.doc, list(model.pads), temperature).shift
    states = [LoadStateDoc(id=s, vehicle="works locomotive", leading_axle_at=x) for s, x in STATES]
    places = [("compression", i, 0.0) for i in range(model.n)] + [
        ("deflection", -1, x) for x in (7.0, 24.0, 41.0)
    ]
    observations = [
        Observation(quantity=q, state=j, value=0.0, sd=1.0, support=i, x=x)
        for j in range(len(states))
        for q, i, x in places
    ]
    equations = ObservationModel(model.condensed, model.pads, [model.placed(s) for s in states], observations)
    rows = []
    for o, true in zip(observations, 1e3 * equations.predict(log_k), strict=True):
        value = true + SD[o.quantity] * rng.standard_normal()
        state = states[o.state].id
        remark = ""
        if KNOCKED[:4] == (date, name, state, o.x) and o.quantity == "deflection":
            value += KNOCKED[4]
        support = model.doc.supports[o.support].id if o.support >= 0 else ""
        at = f"{o.x:g}" if o.support < 0 else ""
        digits = 2
        rows.append(
            f"{name},{state},{o.quantity},{support},{at},{value:.{digits}f},{SD[o.quantity]:g},mm,"
            f"{INSTRUMENT[o.quantity]},{remark}"
        )
    return rows


def _levels(name: str, settled: float, rng: np.random.Generator) -> list[str]:
    rows = []
    for pier in PIERS:
        value = (settled if pier == "pier 2" else 0.0) + SD["settlement"] * rng.standard_normal()
        rows.append(
            f"{name},permanent,settlement,{pier},,{value:.1f},{SD['settlement']:g},mm,{INSTRUMENT['settlement']},"
        )
    return rows


def _visit(date: dt.date, party: str, temperature: float, table: str) -> str:
    states = "".join(
        f'\n[[load_state]]\nid = "{s}"\nvehicle = "works locomotive"\nleading_axle_at = "{x:g} m"\n'
        for s, x in STATES
    )
    return (
        "# Invented data: no such bridge, no such visit.\nformat = 1\n\n[visit]\n"
        f'bridge = "hollin-water"\ndate = {date.isoformat()}\nparty = "{party}"\n'
        f'pad_temperature = "{temperature:g} degC"\ndatum = "levels of 2018, three marks on rock"\n'
        f'readings = "{table}"\n'
        f'\n[[load_state]]\nid = "permanent"\n{states}'
    )


if __name__ == "__main__":
    main()
