"""Bridges as plain numbers in SI, and the same written as files with units of every spelling."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path

import numpy as np

SPELLINGS = {
    "length": {"m": 1.0, "mm": 1e-3, "cm": 1e-2, "ft": 0.3048, "in": 0.0254},
    "second moment": {"m^4": 1.0, "mm^4": 1e-12, "cm^4": 1e-8, "in^4": 0.0254**4},
    "area": {"m^2": 1.0, "mm^2": 1e-6, "cm^2": 1e-4, "in^2": 0.0254**2},
    "stress": {"GPa": 1e6, "MPa": 1e3, "kN/m^2": 1.0, "ksi": 4.4482216152605 / 0.0254**2, "N/mm^2": 1e3},
    "force": {"kN": 1.0, "N": 1e-3, "MN": 1e3, "kip": 4.4482216152605, "lbf": 4.4482216152605e-3},
    "line load": {"kN/m": 1.0, "N/mm": 1.0, "N/m": 1e-3, "kip/ft": 4.4482216152605 / 0.3048},
    "stiffness": {"kN/m": 1.0, "kN/mm": 1e3, "MN/m": 1e3, "kip/in": 4.4482216152605 / 0.0254},
    "moment": {"kN m": 1.0, "kNm": 1.0, "MN m": 1e3, "kip ft": 4.4482216152605 * 0.3048},
    "rotational stiffness": {"kN m / rad": 1.0, "MN m / rad": 1e3},
    "angle": {"rad": 1.0, "mrad": 1e-3, "deg": float(np.pi / 180)},
    "strain": {"microstrain": 1e-6, "strain": 1.0},
}


@dataclass
class Section:
    """E kN/m2, I m4, shear area m2 or None, G or None, capacities kN m and kN (positive)."""

    E: float
    I: float  # noqa: E741
    area: float | None = None
    G: float | None = None
    sagging: float | None = 4000.0
    hogging: float | None = 4000.0
    shear: float | None = 1500.0

    @property
    def EI(self) -> float:
        return self.E * self.I

    @property
    def GA(self) -> float:
        return np.inf if self.area is None else (self.G or self.E / 2.6) * self.area


@dataclass
class Support:
    """`k` in kN/m; None is a pin. `rotation` in kN m/rad; inf is fixed."""

    k: float | None
    cv: float = 0.3
    rotation: float = 0.0
    per_kelvin: float | None = None


@dataclass
class Girder:
    """`spans` are (length, section, [(start, end, section)]); permanent (load, start, end) or (load, at, None)."""

    spans: list[tuple[float, str, list[tuple[float, float, str]]]]
    supports: list[Support]
    permanent: list[tuple[float, float, float | None]]
    share: float = 0.5
    id: str = "north"

    @property
    def at(self) -> np.ndarray:
        return np.concatenate(([0.0], np.cumsum([s[0] for s in self.spans])))

    def pieces(self) -> list[tuple[float, float, str]]:
        """(start, end, section) from end to end, without gaps, x from the left end."""
        out: list[tuple[float, float, str]] = []
        for x0, (length, section, own) in zip(self.at, self.spans, strict=False):
            here = 0.0
            for a, b, name in sorted(own):
                if a > here + 1e-9:
                    out.append((x0 + here, x0 + a, section))
                out.append((x0 + a, x0 + b, name))
                here = b
            if here < length - 1e-9:
                out.append((x0 + here, x0 + length, section))
        return out


@dataclass
class Bridge:
    """`live` are (vehicle, count, pitch, dynamic); factors (permanent, live, resistance, relieving or None)."""

    sections: dict[str, Section]
    girders: list[Girder]
    vehicles: dict[str, list[tuple[float, float]]]
    live: list[tuple[str, int, float, float]]
    factors: tuple[float, float, float, float | None] = (1.2, 1.5, 1.0, None)
    id: str = "inventdale"


@dataclass
class Reading:
    """A reading in SI; `where` is a support index or an x."""

    girder: str
    state: str
    quantity: str
    support: int | None
    x: float | None
    value: float
    sd: float
    height: float | None = None


@dataclass
class Visit:
    """`states` are id -> (vehicle, leading axle at, faces larger x)."""

    date: str
    states: dict[str, tuple[str, float, bool]]
    readings: list[Reading] = field(default_factory=list)
    temperature: float | None = None


def written(value: float, dimension: str, rng: np.random.Generator | None) -> str:
    """A quantity in one of the spellings of its dimension; all digits, so that nothing is lost."""
    units = SPELLINGS[dimension]
    unit = next(iter(units)) if rng is None else str(rng.choice(list(units)))
    return f'"{float(value) / units[unit]!r} {unit}"'


def bridge_text(bridge: Bridge, rng: np.random.Generator | None = None) -> str:
    """The bridge file; `rng` picks the spellings, None takes the first of each."""

    def w(value: float, dimension: str) -> str:
        return written(value, dimension, rng)

    out = [
        "format = 1",
        "[bridge]",
        f'id = "{bridge.id}"',
        'name = "Inventdale viaduct"',
        "built = 1980-01-01",
    ]
    for name, s in bridge.sections.items():
        out += ["[[section]]", f'id = "{name}"', f"E = {w(s.E, 'stress')}", f"I = {w(s.I, 'second moment')}"]
        out += [f"shear_area = {w(s.area, 'area')}"] if s.area else []
        out += [f"G = {w(s.G, 'stress')}"] if s.G else []
        out += [f"sagging_capacity = {w(s.sagging, 'moment')}"] if s.sagging else []
        out += [f"hogging_capacity = {w(s.hogging, 'moment')}"] if s.hogging else []
        out += [f"shear_capacity = {w(s.shear, 'force')}"] if s.shear else []
    for g in bridge.girders:
        out += ["[[girder]]", f'id = "{g.id}"', f"live_share = {g.share!r}"]
        for length, section, own in g.spans:
            out += ["[[girder.span]]", f"length = {w(length, 'length')}", f'section = "{section}"']
            for a, b, name in own:
                out += ["[[girder.span.piece]]", f"start = {w(a, 'length')}", f"end = {w(b, 'length')}"]
                out += [f'section = "{name}"']
        for i, s in enumerate(g.supports):
            out += ["[[girder.support]]", f'id = "s{i}"', f'kind = "{"pin" if s.k is None else "pad"}"']
            if s.k is not None:
                out += [f"stiffness = {w(s.k, 'stiffness')}", f"stiffness_cv = {s.cv!r}"]
                if s.per_kelvin is not None:
                    out += [f'temperature_coefficient = "{s.per_kelvin * 100!r} percent / K"']
            # the reference knows no contact
            out += ["hold_down = true"]
            if np.isinf(s.rotation):
                out += ['rotation = "fixed"']
            elif s.rotation:
                out += [f"rotation = {w(s.rotation, 'rotational stiffness')}"]
        for load, a, b in g.permanent:
            out += ["[[girder.permanent]]", 'name = "part"']
            if b is None:
                out += [f"point = {w(load, 'force')}", f"at = {w(a, 'length')}"]
            else:
                out += [
                    f"uniform = {w(load, 'line load')}",
                    f"start = {w(a, 'length')}",
                    f"end = {w(b, 'length')}",
                ]
    for name, axles in bridge.vehicles.items():
        rows = ", ".join(f"[{w(d, 'length')}, {w(p, 'force')}]" for d, p in axles)
        out += ["[[vehicle]]", f'id = "{name}"', f"axles = [{rows}]"]
    for i, (vehicle, count, pitch, dynamic) in enumerate(bridge.live):
        out += [
            "[[live]]",
            f'id = "live {i}"',
            f'vehicle = "{vehicle}"',
            f"count = {count}",
            f"dynamic = {dynamic!r}",
        ]
        out += [f"pitch = {w(pitch, 'length')}"] if count > 1 else []
    permanent, live, resistance, relieving = bridge.factors
    out += ["[factors]", 'name = "invented"', f"permanent = {permanent!r}", f"live = {live!r}"]
    out += [f"resistance = {resistance!r}"]
    out += [f"permanent_relieving = {relieving!r}"] if relieving is not None else []
    return "\n".join(out) + "\n"


DIMENSION = {"compression": "length", "deflection": "length", "settlement": "length"} | {
    "rotation": "angle",
    "strain": "strain",
}
_CSV_UNIT = {
    "length": {"mm": 1e-3, "in": 0.0254, "um": 1e-6},
    "angle": {"mrad": 1e-3},
    "strain": {"microstrain": 1e-6},
}


def write_visit(
    folder: Path, bridge: Bridge, visit: Visit, rng: np.random.Generator | None = None, *, table: bool = True
) -> Path:
    """Write the visit file, with a table beside it or with the readings in it, and return its path."""
    out = ["format = 1", "[visit]", f'bridge = "{bridge.id}"', f"date = {visit.date}"]
    if visit.temperature is not None:
        out += [f'pad_temperature = "{visit.temperature!r} degC"']
    csv = f"{bridge.id}-{visit.date}.csv"
    out += [f'readings = "{csv}"'] if table else []
    if any(r.state == "permanent" for r in visit.readings):
        out += ["[[load_state]]", 'id = "permanent"']
    for name, (vehicle, lead, larger) in visit.states.items():
        out += ["[[load_state]]", f'id = "{name}"', f'vehicle = "{vehicle}"']
        out += [
            f"leading_axle_at = {written(lead, 'length', rng)}",
            f'towards = "{"larger" if larger else "smaller"} x"',
        ]
    rows = ["girder,state,quantity,support,at,height,value,sd,unit,instrument,remark"]
    for r in visit.readings:
        support = "" if r.support is None else f"s{r.support}"
        dimension = DIMENSION[r.quantity]
        if table:
            units = _CSV_UNIT[dimension]
            unit = next(iter(units)) if rng is None else str(rng.choice(list(units)))
            at, height = ("" if v is None else repr(float(v)) for v in (r.x, r.height))
            value, sd = (repr(float(v) / units[unit]) for v in (r.value, r.sd))
            rows.append(f"{r.girder},{r.state},{r.quantity},{support},{at},{height},{value},{sd},{unit},,")
            continue
        out += ["[[reading]]", f'girder = "{r.girder}"', f'state = "{r.state}"', f'quantity = "{r.quantity}"']
        out += [f'support = "{support}"'] if support else [f"at = {written(r.x or 0.0, 'length', rng)}"]
        out += [f"height = {written(r.height, 'length', rng)}"] if r.height is not None else []
        out += [f"value = {written(r.value, dimension, rng)}", f"sd = {written(r.sd, dimension, rng)}"]
    if table:
        (folder / csv).write_text("\n".join(rows) + "\n")
    path = folder / f"{bridge.id}-{visit.date}.toml"
    path.write_text("\n".join(out) + "\n")
    return path
