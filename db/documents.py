"""What a bridge file and a visit file say, in SI (m, kN, rad, degC), checked once when made.

The exchange modules turn text into these; everything past them is plain floats. Checks that
need only the values themselves live here; checks that need the text (units, spelling of field
names) live with the file format.
"""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

from db.action_doc import OWNER_ROLE, ActionsDoc
from db.intervention_doc import InterventionDoc
from db.pad_doc import PadDoc
from db.prior_doc import GaugeDoc, PriorDoc
from db.raw_doc import BenchmarkDoc, RawDoc

PERMANENT = "permanent"
"""The id of the load state measured from the as-built datum under permanent load."""

PERMANENT_KINDS = ("structure", "surfacing")
"""Kinds of permanent load that may have factors of their own."""

STAGES = ("continuous", "span by span")
"""Carried by the continuous girder, or by each span as a simple one before the spans were joined."""

QUANTITIES = ("compression", "deflection", "settlement", "rotation", "strain")

UNKNOWNS = ("pads", "sustained", "settlements", "girder", "datum", "share", "gradient")
"""What a calibration may ask of the readings; "pads" is always among it."""

DATUM_LOADS = ("none", "permanent")
"""The permanent load that was there when the as-built datum was taken."""


@dataclass(frozen=True, kw_only=True)
class PlateDoc:
    """A plate of a section as built; a `bottom` is resolved from the stack, above the underside of the stack."""

    name: str
    width: float  # m, across
    height: float  # m, along the depth
    bottom: float  # m, lower edge
    yield_strength: float | None = None  # kN/m2, its own or the section's
    web: bool | None = None  # carries shear; None: if its height exceeds its width


@dataclass(frozen=True, kw_only=True)
class HoleDoc:
    """Holes through a plate in one cross-section."""

    plate: str
    diameter: float  # m
    count: int = 1  # side by side across a flat plate
    level: float | None = None  # m, of its middle above the underside of the stack; in an upright plate


@dataclass(frozen=True, kw_only=True)
class LossDoc:
    """Thickness that a plate has lost since it was built, as measured on a day."""

    plate: str
    faces: int  # 1 or 2
    depth: float  # m, of each face
    visit: dt.date


@dataclass(frozen=True, kw_only=True)
class DeckDoc:
    """A concrete deck on a section: the part that acts with this girder."""

    width: float  # m
    thickness: float  # m
    modular_ratio: float  # E of the section over E of the concrete, short load
    modular_ratio_long: float  # the same for lasting load
    gap: float = 0.0  # m, between the highest plate and the deck
    strength: float | None = None  # kN/m2, stress it may carry at the limit; None: not checked


@dataclass(frozen=True, kw_only=True)
class SectionDoc:
    """A girder cross-section: stiffness and factored resistance as new, given or from plates."""

    id: str
    youngs_modulus: float  # kN/m2
    second_moment: float | None = None  # m4; None: from the plates
    shear_area: float | None = (
        None  # m2; None: from the plates; without plates it leaves shear flexibility out
    )
    shear_modulus: float | None = None  # kN/m2; None means E / 2.6
    sagging_capacity: float | None = None  # kN m; None: not given, utilisation not determined
    hogging_capacity: float | None = None  # kN m
    shear_capacity: float | None = None  # kN
    plates: tuple[PlateDoc, ...] = ()
    holes: tuple[HoleDoc, ...] = ()
    losses: tuple[LossDoc, ...] = ()
    deck: DeckDoc | None = None
    depth: float | None = None  # m, for temperature; None: from the plates
    moment_resistance: str = "elastic"  # "elastic" | "plastic": how plates and yield strength give a moment


@dataclass(frozen=True, kw_only=True)
class PieceDoc:
    """A part of a span with its own section; start and end from the span's left end."""

    start: float  # m
    end: float  # m
    section: str


@dataclass(frozen=True, kw_only=True)
class SpanDoc:
    """A span: its length, its section, the pieces that override it (sorted, no overlap), and its internal hinges."""

    length: float  # m
    section: str
    pieces: tuple[PieceDoc, ...] = ()
    hinges: tuple[float, ...] = ()  # m from the span's left end, ascending


@dataclass(frozen=True, kw_only=True)
class SupportDoc:
    """A support of a girder line: a pad (yields) or a pin (holds its level)."""

    id: str
    kind: str  # "pad" | "pin"
    stiffness: float | None = (
        None  # kN/m, nominal; None for a pin, and for a pad that gives its geometry alone
    )
    stiffness_cv: float | None = (
        None  # coefficient of variation of the nominal stiffness; None: from the geometry
    )
    pad: PadDoc | None = None  # geometry; where a stiffness is given too, that is the nominal one
    rotation: float = 0.0  # kN m/rad; 0 free, inf fixed
    temperature_coefficient: float | None = None  # 1/K, growth of ln k per kelvin colder than 20 degC
    hold_down: bool | None = (
        None  # whether it takes tension; None: a pin does, a pad only where it holds rotation
    )

    @property
    def takes_tension(self) -> bool:
        """Whether the girder is held down here."""
        return self.kind == "pin" or self.rotation > 0.0 if self.hold_down is None else self.hold_down


@dataclass(frozen=True, kw_only=True)
class PermanentDoc:
    """A permanent load: uniform over [start, end], or a point load at `at`; x from the girder's left end."""

    name: str
    uniform: float | None = None  # kN/m, downward
    start: float = 0.0  # m
    end: float = 0.0  # m
    point: float | None = None  # kN, downward
    at: float | None = None  # m
    kind: str = "structure"  # one of PERMANENT_KINDS: which factor it takes
    stage: str = "continuous"  # one of STAGES: the girder that carries it


@dataclass(frozen=True, kw_only=True)
class GirderDoc:
    """One girder line: n spans on n + 1 supports."""

    id: str
    live_share: float
    spans: tuple[SpanDoc, ...]
    supports: tuple[SupportDoc, ...]
    permanent: tuple[PermanentDoc, ...] = ()
    unknowns: tuple[str, ...] | None = None  # of UNKNOWNS; None: what the readings can carry
    gauges: tuple[GaugeDoc, ...] = ()

    @property
    def length(self) -> float:
        """Total length, m."""
        return sum(span.length for span in self.spans)

    @property
    def support_positions(self) -> tuple[float, ...]:
        """x of every support from the left end, m."""
        x = [0.0]
        for span in self.spans:
            x.append(x[-1] + span.length)
        return tuple(x)

    @property
    def hinges(self) -> tuple[float, ...]:
        """x of every internal hinge from the left end, m."""
        starts = zip(self.support_positions, self.spans, strict=False)
        return tuple(start + x for start, span in starts for x in span.hinges)

    def support_index(self, support_id: str) -> int:
        """Index of a support by id; KeyError if there is none."""
        for i, support in enumerate(self.supports):
            if support.id == support_id:
                return i
        raise KeyError(support_id)


@dataclass(frozen=True, kw_only=True)
class VehicleDoc:
    """A vehicle: axles as (distance behind the leading axle in m, load in kN)."""

    id: str
    axles: tuple[tuple[float, float], ...]
    plan_positions: tuple[float, ...] = ()  # m, where the leading axle can stand at a visit


@dataclass(frozen=True, kw_only=True)
class LiveDoc:
    """A live load the bridge is assessed for: `count` vehicles coupled at `pitch`, or a published model by name."""

    id: str
    vehicle: str = ""  # empty where it is a model
    count: int = 1
    pitch: float = 0.0  # m, leading axle to leading axle; 0 only if count is 1
    dynamic: float | None = 0.0  # dynamic allowance, added to 1; None (models only): by the model's own rule
    model: str | None = None
    factor: float = 1.0  # on all its loads, where more or less of it is supposed
    track: str | None = (
        None  # "careful" | "standard": maintenance of the track, for models whose rule asks for it
    )


@dataclass(frozen=True, kw_only=True)
class FactorsDoc:
    """The owner's partial factors; what is None is that of the built-in set, if one is named.

    Without a set permanent, live and resistance are given.
    """

    name: str
    permanent: float | None = None
    live: float | None = None
    resistance: float | None = None
    permanent_relieving: float | None = None  # on a permanent effect that relieves; None: min(1, permanent)
    surfacing: float | None = None  # on surfacing; None: as the other permanent loads
    surfacing_relieving: float | None = None
    settlement: float | None = None  # on what settlements add; None: as the permanent loads
    settlement_relieving: float | None = None
    temperature: float | None = None  # on a temperature case beside the live load
    relief_counts: bool = False  # let a relief by settlement count
    set: str | None = None  # a built-in set, for what is not given here
    level: str | None = None  # level of the set to assess at; None: its first
    condition: str | None = None  # of the member, for a set that has factors on it
    system: float | None = None  # system factor on the resistance


@dataclass(frozen=True, kw_only=True)
class SeatRiseDoc:
    """A seat that a warm pier lifts."""

    girder: str
    support: str
    rise: float  # m, upward


@dataclass(frozen=True, kw_only=True)
class TemperatureDoc:
    """A temperature case: a linear difference from top to underside, and piers that are warmer than others."""

    id: str
    difference: float = 0.0  # K, top warmer positive
    expansion: float = 12e-6  # 1/K
    seats: tuple[SeatRiseDoc, ...] = ()


@dataclass(frozen=True, kw_only=True)
class BridgeDoc:
    """A bridge file."""

    id: str
    name: str
    carries: str = ""
    built: dt.date | None = None
    zero: str = ""  # what stands at x = 0
    visit_interval_years: float | None = None  # the owner's own interval between visits
    sections: tuple[SectionDoc, ...]
    girders: tuple[GirderDoc, ...]
    vehicles: tuple[VehicleDoc, ...] = ()
    live: tuple[LiveDoc, ...] = ()
    temperature: tuple[TemperatureDoc, ...] = ()
    factors: FactorsDoc
    prior: PriorDoc = field(default_factory=PriorDoc)
    owner_role: str = OWNER_ROLE  # who decides on an action
    actions: ActionsDoc = field(default_factory=ActionsDoc)
    interventions: tuple[InterventionDoc, ...] = ()  # by date
    text: str = field(repr=False)  # the file as read
    digest: str  # sha256 of the text

    def girder(self, girder_id: str) -> GirderDoc:
        """Return a girder by id; KeyError if there is none."""
        for girder in self.girders:
            if girder.id == girder_id:
                return girder
        raise KeyError(girder_id)

    def section(self, section_id: str) -> SectionDoc:
        """Return a section by id; KeyError if there is none."""
        for section in self.sections:
            if section.id == section_id:
                return section
        raise KeyError(section_id)

    def vehicle(self, vehicle_id: str) -> VehicleDoc:
        """Return a vehicle by id; KeyError if there is none."""
        for vehicle in self.vehicles:
            if vehicle.id == vehicle_id:
                return vehicle
        raise KeyError(vehicle_id)


@dataclass(frozen=True, kw_only=True)
class LoadStateDoc:
    """A load state of a visit: the permanent one (no vehicle), or a placed test vehicle."""

    id: str
    vehicle: str | None = None
    leading_axle_at: float | None = None  # m
    towards: str = "larger x"  # the way the vehicle faces: "larger x" | "smaller x"


@dataclass(frozen=True, kw_only=True)
class ReadingDoc:
    """One reading: the SI value beside the value as entered.

    Where `raw` is there, value and sd are what it was reduced to, and the entered texts begin with them.
    """

    girder: str
    state: str
    quantity: str  # one of QUANTITIES
    support: str | None = None
    at: float | None = None  # m from the girder's left end
    height: float | None = None  # m above the section's neutral axis; strain only
    value: float  # m, rad, or strain
    sd: float  # same unit as value
    value_entered: str  # as written, e.g. "1.42 mm"
    sd_entered: str
    unit: str  # as written, e.g. "mm": results are shown in it
    instrument: str = ""
    remark: str = ""
    source: str = ""  # where it stands: "visit.toml, reading 2" or "visit.csv, row 7"
    row: int | None = None  # the record's own number, once kept
    benchmark: str = ""  # id of the benchmark it was levelled from
    raw: RawDoc | None = None  # what it was reduced from
    derived: bool = False  # a second value from readings that another reading was reduced from


@dataclass(frozen=True, kw_only=True)
class VisitDoc:
    """A visit file with its table of readings."""

    bridge: str
    date: dt.date
    party: str = ""
    pad_temperature: float | None = None  # degC
    datum: str = ""
    remark: str = ""
    states: tuple[LoadStateDoc, ...]
    readings: tuple[ReadingDoc, ...]
    text: str = field(repr=False)  # the TOML as read
    table_text: str = field(default="", repr=False)  # the readings table as read, if there is one
    digest: str  # sha256 over both
    unknowns: tuple[tuple[str, tuple[str, ...]], ...] = ()  # by girder; "" for all girders
    datum_load: str = "none"  # one of DATUM_LOADS
    benchmarks: tuple[BenchmarkDoc, ...] = ()

    def state(self, state_id: str) -> LoadStateDoc:
        """Return a load state by id; KeyError if there is none."""
        for state in self.states:
            if state.id == state_id:
                return state
        raise KeyError(state_id)

    def unknowns_of(self, girder: str) -> tuple[str, ...] | None:
        """Return what is asked for of a girder: its own, else that of all; None if the file says nothing."""
        given = dict(self.unknowns)
        return given.get(girder, given.get(""))

    def benchmark(self, benchmark_id: str) -> BenchmarkDoc:
        """Return a benchmark by id; KeyError if there is none."""
        for benchmark in self.benchmarks:
            if benchmark.id == benchmark_id:
                return benchmark
        raise KeyError(benchmark_id)
