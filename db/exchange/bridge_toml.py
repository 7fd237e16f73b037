"""The bridge file: TOML to a `BridgeDoc`, every field checked."""

from __future__ import annotations

from pathlib import Path

from db.action_doc import OWNER_ROLE
from db.documents import (
    BridgeDoc,
    GirderDoc,
    LiveDoc,
    SectionDoc,
    VehicleDoc,
)
from db.errors import BedstoneError
from db.exchange.actions_toml import actions
from db.exchange.combination_toml import factors, temperatures
from db.exchange.fields import Fields, refuse_duplicates
from db.exchange.files import digest_of, parse_toml, read_text, refuse_controls
from db.exchange.gauges_toml import plan_positions
from db.exchange.girder_toml import GIRDER, girder
from db.exchange.intervention_toml import interventions
from db.exchange.plates_toml import PLATES, with_plates
from db.exchange.prior_toml import prior
from db.quantities import read_quantity
from db.wording import printable, shown

WHAT = "bridge file"
STIFFEST_KN_PER_M2 = 1e9  # 1000 GPa
SOFTEST_KN_PER_M2 = 1e6  # 1 GPa
MOST_VEHICLES = 1000

_TOP = "format bridge section girder vehicle live temperature factors prior intervention actions"
_BRIDGE = "id name carries built zero visit_interval owner_role"
_SECTION = f"id E I shear_area G depth sagging_capacity hogging_capacity shear_capacity {PLATES}"
_VEHICLE = "id axles plan_positions"
_LIVE = "id vehicle count pitch dynamic model track"
_TRACKS = ("careful", "standard")


def read_bridge(path: Path) -> BridgeDoc:
    """Read a bridge file.

    Raises
    ------
    BedstoneError
        If the file cannot be read or anything in it is wrong; names file, field and remedy.
    """
    return parse_bridge(read_text(Path(path), what=WHAT), file=printable(str(path)))


def parse_bridge(text: str, *, file: str) -> BridgeDoc:
    """Turn the text of a bridge file into a document in SI.

    Parameters
    ----------
    text : str
        The TOML text.
    file : str
        Its name, for errors.

    Raises
    ------
    BedstoneError
        If anything in it is wrong; names file, field and remedy.
    """
    refuse_controls(text, file=file, what=WHAT)
    tables = parse_toml(text, file=file, what=WHAT)
    if "visit" in tables and "bridge" not in tables:
        raise BedstoneError("it is a visit file", file=file, remedy="log it: bedstone visit log FILE")
    top = Fields(tables, file=file, path="", known=_TOP)
    top.format_1(WHAT)
    head = top.subtable("bridge", _BRIDGE, "id and name")
    name = head.id("id")
    interval = head.optional_positive("visit_interval", "duration")
    sections = _sections(top)
    girders = _girders(top, [section.id for section in sections])
    vehicles = _vehicles(top, max(one.length for one in girders))
    return BridgeDoc(
        id=name,
        name=head.text("name", name),
        carries=head.text("carries", ""),
        built=head.date("built"),
        zero=head.text("zero", ""),
        visit_interval_years=interval,
        sections=sections,
        girders=girders,
        vehicles=vehicles,
        live=_live(top, [vehicle.id for vehicle in vehicles]),
        temperature=temperatures(top, girders),
        factors=factors(top),
        prior=prior(top),
        owner_role=head.id("owner_role") if head.has("owner_role") else OWNER_ROLE,
        actions=actions(top),
        interventions=interventions(top, girders),
        text=text,
        digest=digest_of(text),
    )


def _sections(top: Fields) -> tuple[SectionDoc, ...]:
    tables = top.tables("section", "section", _SECTION)
    sections = tuple(_section(fields) for fields in tables)
    refuse_duplicates(((f, s.id) for f, s in zip(tables, sections, strict=True)), "section")
    if not sections:
        raise top.error("section", "there is no section", "add a [[section]] with id, E and I")
    return sections


def _section(fields: Fields) -> SectionDoc:
    modulus = fields.positive("E", "stress", example="205 GPa")
    if not SOFTEST_KN_PER_M2 <= modulus <= STIFFEST_KN_PER_M2:
        problem = f'"{shown(fields.table["E"])}" is no Young\'s modulus of a girder'
        raise fields.error("E", problem, 'check the unit (1 to 1000 GPa), for example "205 GPa"')
    section = SectionDoc(
        id=fields.id("id"),
        youngs_modulus=modulus,
        second_moment=(fields.optional_positive if fields.has("plate") else fields.positive)(
            "I", "second moment"
        ),
        shear_area=fields.optional_positive("shear_area", "area"),
        shear_modulus=fields.optional_positive("G", "stress", example="79 GPa"),
        depth=fields.optional_positive("depth", "length", example="900 mm"),
        sagging_capacity=fields.optional_positive("sagging_capacity", "moment"),
        hogging_capacity=fields.optional_positive("hogging_capacity", "moment", example="4700 kN m"),
        shear_capacity=fields.optional_positive("shear_capacity", "force", example="1900 kN"),
    )
    return with_plates(section, fields)


def _girders(top: Fields, sections: list[str]) -> tuple[GirderDoc, ...]:
    tables = top.tables("girder", "girder", GIRDER)
    if not tables:
        raise top.error("girder", "there is no girder", "add a [[girder]] with its spans and supports")
    girders = tuple(girder(fields, sections) for fields in tables)
    refuse_duplicates(((f, g.id) for f, g in zip(tables, girders, strict=True)), "girder")
    return girders


def _vehicles(top: Fields, reach: float) -> tuple[VehicleDoc, ...]:
    tables = top.tables("vehicle", "vehicle", _VEHICLE)
    vehicles = tuple(_vehicle(fields, reach) for fields in tables)
    refuse_duplicates(((f, v.id) for f, v in zip(tables, vehicles, strict=True)), "vehicle")
    return vehicles


def _vehicle(fields: Fields, reach: float) -> VehicleDoc:
    axles = _axles(fields)
    return VehicleDoc(
        id=fields.id("id"), axles=axles, plan_positions=plan_positions(fields, axles, reach=reach)
    )


def _axles(fields: Fields) -> tuple[tuple[float, float], ...]:
    right = 'write for example axles = [["0 m", "200 kN"], ["1.8 m", "200 kN"]]'
    rows = fields.need("axles", '[["0 m", "200 kN"], ["1.8 m", "200 kN"]]')
    if not isinstance(rows, list) or not rows:
        raise fields.error("axles", "it is not a list of axles", right)
    axles = []
    for i, row in enumerate(rows, start=1):
        field = fields.where(f"axles, axle {i}")
        if not isinstance(row, list) or len(row) != 2:
            raise BedstoneError(
                "it is not a distance and a load", file=fields.file, field=field, remedy=right
            )
        distance = read_quantity(row[0], "length", file=fields.file, field=field, example="1.8 m").si
        load = read_quantity(row[1], "force", file=fields.file, field=field).si
        if distance < 0.0:
            raise BedstoneError(
                f'"{shown(row[0])}" is negative',
                file=fields.file,
                field=field,
                remedy="write the distance behind the leading axle, which stands at 0 m",
            )
        if not load > 0.0:
            problem = f'"{shown(row[1])}" is not greater than zero'
            raise BedstoneError(problem, file=fields.file, field=field, remedy='write for example "200 kN"')
        axles.append((distance, load))
    if min(distance for distance, _ in axles) != 0.0:
        raise fields.error("axles", "no axle stands at 0 m", "start with the leading axle, at 0 m")
    return tuple(axles)


def _live(top: Fields, vehicles: list[str]) -> tuple[LiveDoc, ...]:
    tables = top.tables("live", "live", _LIVE)
    loads = tuple(_one_live(fields, vehicles) for fields in tables)
    refuse_duplicates(((f, x.id) for f, x in zip(tables, loads, strict=True)), "live load")
    return loads


def _one_live(fields: Fields, vehicles: list[str]) -> LiveDoc:
    if fields.has("model"):
        return _one_model(fields)
    if fields.has("track"):
        raise fields.error(
            "track", "it belongs to a published model", 'leave it out, or write model = "lm71"'
        )
    count = fields.whole("count", 1, least=1, most=MOST_VEHICLES)
    pitch = 0.0
    if fields.has("pitch"):
        pitch = fields.positive("pitch", "length", example="13.4 m")
    elif count > 1:
        fields.need("pitch", '"13.4 m"')
    vehicle = fields.reference("vehicle", vehicles, "vehicle")
    return LiveDoc(id=fields.id("id"), vehicle=vehicle, count=count, pitch=pitch, dynamic=_dynamic(fields))


def _one_model(fields: Fields) -> LiveDoc:
    for name in ("vehicle", "count", "pitch"):
        if fields.has(name):
            remedy = f"leave out {name}, or leave out model and name a vehicle"
            raise fields.error(name, "it cannot stand beside a published model", remedy)
    return LiveDoc(
        id=fields.id("id"),
        model=fields.id("model"),
        dynamic=_dynamic(fields) if fields.has("dynamic") else None,
        track=fields.one_of("track", _TRACKS) if fields.has("track") else None,
    )


def _dynamic(fields: Fields) -> float:
    dynamic = fields.number("dynamic", 0.0)
    if not 0.0 <= dynamic <= 2.0:
        remedy = "write the part added to the static effect, from 0 to 2, for example 0.21"
        raise fields.error("dynamic", f"{dynamic:g} is no dynamic allowance", remedy)
    return dynamic
