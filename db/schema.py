"""The tables of a record: evidence is only ever added.

A reading is never overwritten. A correction is a new row that supersedes the old one with a reason;
a withdrawal is such a row too, with `withdrawn` set. Bridge files are kept as text, in revisions;
girders and supports have rows of their own that readings refer to and that no revision removes.
"""

from __future__ import annotations

import datetime as dt
from typing import Any

from sqlalchemy import (
    JSON,
    BigInteger,
    CheckConstraint,
    DateTime,
    Dialect,
    Double,
    ForeignKey,
    Index,
    MetaData,
    String,
    Text,
    TypeDecorator,
    UniqueConstraint,
    false,
)
from sqlalchemy.orm import DeclarativeBase, Mapped, mapped_column

SCHEMA_HEAD = "0003"
"""The newest migration; equal to Alembic's head."""

NAMING = {
    "ix": "ix_%(table_name)s_%(column_0_N_name)s",
    "uq": "uq_%(table_name)s_%(column_0_N_name)s",
    "ck": "ck_%(table_name)s_%(constraint_name)s",
    "fk": "fk_%(table_name)s_%(column_0_N_name)s",
    "pk": "pk_%(table_name)s",
}

ID = String(100)
DIGEST = String(64)


class UtcDateTime(TypeDecorator[dt.datetime]):
    """A moment, kept in UTC without a zone and handed out with it."""

    impl = DateTime
    cache_ok = True

    def process_bind_param(self, value: dt.datetime | None, dialect: Dialect) -> dt.datetime | None:
        """Turn an aware moment into UTC."""
        return None if value is None else value.astimezone(dt.UTC).replace(tzinfo=None)

    def process_result_value(self, value: dt.datetime | None, dialect: Dialect) -> dt.datetime | None:
        """Give the zone back."""
        return None if value is None else value.replace(tzinfo=dt.UTC)


def now() -> dt.datetime:
    """Return the present moment in UTC."""
    return dt.datetime.now(dt.UTC)


class Base(DeclarativeBase):
    """What all tables share: names for constraints, and the types of columns."""

    metadata = MetaData(naming_convention=NAMING)
    type_annotation_map = {dict[str, Any]: JSON, dt.datetime: UtcDateTime, float: Double}  # noqa: RUF012


class Written:
    """Who wrote a row, and when."""

    written_by: Mapped[str] = mapped_column(ID)
    written_at: Mapped[dt.datetime] = mapped_column(default=now)


class BridgeRow(Base):
    """A bridge, by the id of its file."""

    __tablename__ = "bridges"

    id: Mapped[int] = mapped_column(primary_key=True)
    key: Mapped[str] = mapped_column(ID, unique=True)


class RevisionRow(Written, Base):
    """A bridge file as it was handed in, numbered from 1."""

    __tablename__ = "revisions"
    __table_args__ = (
        UniqueConstraint("bridge_id", "number"),
        CheckConstraint("number >= 1", name="number"),
    )

    id: Mapped[int] = mapped_column(primary_key=True)
    bridge_id: Mapped[int] = mapped_column(ForeignKey("bridges.id"))
    number: Mapped[int]
    name: Mapped[str] = mapped_column(Text)
    text: Mapped[str] = mapped_column(Text)
    digest: Mapped[str] = mapped_column(DIGEST)


class GirderRow(Base):
    """A girder line that some revision named; its identity outlives the revisions."""

    __tablename__ = "girders"
    __table_args__ = (UniqueConstraint("bridge_id", "key"),)

    id: Mapped[int] = mapped_column(primary_key=True)
    bridge_id: Mapped[int] = mapped_column(ForeignKey("bridges.id"))
    key: Mapped[str] = mapped_column(ID)


class SupportRow(Base):
    """A support of a girder line that some revision named."""

    __tablename__ = "supports"
    __table_args__ = (UniqueConstraint("girder_id", "key"),)

    id: Mapped[int] = mapped_column(primary_key=True)
    girder_id: Mapped[int] = mapped_column(ForeignKey("girders.id"))
    key: Mapped[str] = mapped_column(ID)


class VisitRow(Written, Base):
    """A visit: its file and table of readings as handed in, and what they say of the day."""

    __tablename__ = "visits"
    __table_args__ = (UniqueConstraint("bridge_id", "date"),)

    id: Mapped[int] = mapped_column(primary_key=True)
    bridge_id: Mapped[int] = mapped_column(ForeignKey("bridges.id"))
    revision_id: Mapped[int] = mapped_column(ForeignKey("revisions.id"))  # the one it was checked against
    date: Mapped[dt.date]
    party: Mapped[str] = mapped_column(Text)
    pad_temperature: Mapped[float | None]  # degC
    datum: Mapped[str] = mapped_column(Text)
    remark: Mapped[str] = mapped_column(Text)
    text: Mapped[str] = mapped_column(Text)
    table_text: Mapped[str] = mapped_column(Text)
    digest: Mapped[str] = mapped_column(DIGEST)
    setup: Mapped[dict[str, Any] | None] = mapped_column(
        JSON(none_as_null=True)
    )  # unknowns, benchmarks, datum


class LoadStateRow(Base):
    """A load state of a visit."""

    __tablename__ = "load_states"
    __table_args__ = (
        UniqueConstraint("visit_id", "key"),
        CheckConstraint("(vehicle IS NULL) = (leading_axle_at IS NULL)", name="placed_vehicle"),
    )

    id: Mapped[int] = mapped_column(primary_key=True)
    visit_id: Mapped[int] = mapped_column(ForeignKey("visits.id"))
    key: Mapped[str] = mapped_column(ID)
    vehicle: Mapped[str | None] = mapped_column(ID)
    leading_axle_at: Mapped[float | None]  # m
    towards: Mapped[str] = mapped_column(String(20))


class ReadingRow(Written, Base):
    """A reading: the SI value beside what was written, and what it supersedes."""

    __tablename__ = "readings"
    __table_args__ = (
        CheckConstraint("sd > 0", name="sd"),
        CheckConstraint("support_id IS NOT NULL OR at IS NOT NULL", name="placed"),
        CheckConstraint("(supersedes_id IS NULL) = (reason IS NULL)", name="reason"),
        CheckConstraint("withdrawn = false OR supersedes_id IS NOT NULL", name="withdrawn"),
    )

    id: Mapped[int] = mapped_column(primary_key=True)
    visit_id: Mapped[int] = mapped_column(ForeignKey("visits.id"), index=True)
    state_id: Mapped[int] = mapped_column(ForeignKey("load_states.id"))
    girder_id: Mapped[int] = mapped_column(ForeignKey("girders.id"), index=True)
    support_id: Mapped[int | None] = mapped_column(ForeignKey("supports.id"), index=True)
    quantity: Mapped[str] = mapped_column(String(20))
    at: Mapped[float | None]  # m
    height: Mapped[float | None]  # m
    value: Mapped[float]  # m, rad or strain
    sd: Mapped[float]
    value_entered: Mapped[str] = mapped_column(Text)
    sd_entered: Mapped[str] = mapped_column(Text)
    unit: Mapped[str] = mapped_column(ID)
    instrument: Mapped[str] = mapped_column(Text)
    remark: Mapped[str] = mapped_column(Text)
    source: Mapped[str] = mapped_column(Text)
    supersedes_id: Mapped[int | None] = mapped_column(ForeignKey("readings.id"), unique=True)
    withdrawn: Mapped[bool] = mapped_column(default=False)
    reason: Mapped[str | None] = mapped_column(Text)
    benchmark: Mapped[str] = mapped_column(ID, default="", server_default="")
    raw: Mapped[dict[str, Any] | None] = mapped_column(JSON(none_as_null=True))  # what value and sd come from
    derived: Mapped[bool] = mapped_column(default=False, server_default=false())


class KeptRow(Base):
    """A kept result with all that is needed to make it again: what both kinds share."""

    __abstract__ = True

    id: Mapped[int] = mapped_column(primary_key=True)
    bridge_id: Mapped[int] = mapped_column(ForeignKey("bridges.id"))
    revision_id: Mapped[int] = mapped_column(ForeignKey("revisions.id"))
    visit_id: Mapped[int | None] = mapped_column(ForeignKey("visits.id"))
    input_digest: Mapped[str] = mapped_column(DIGEST)
    options: Mapped[dict[str, Any]]
    seed: Mapped[int | None] = mapped_column(BigInteger)
    version: Mapped[str] = mapped_column(ID)
    result: Mapped[dict[str, Any]]
    made_at: Mapped[dt.datetime] = mapped_column(default=now)
    evidence: Mapped[str | None] = mapped_column(
        DIGEST
    )  # what the record held when it was made; see `evidence.py`


class CalibrationRow(KeptRow):
    """A calibration of one visit: parameters and covariance stand in `result`."""

    __tablename__ = "calibrations"
    __table_args__ = (
        Index(None, "bridge_id", "visit_id"),
        CheckConstraint("visit_id IS NOT NULL", name="visit"),
    )


class AssessmentRow(KeptRow):
    """An assessment; without a visit it stands on nominal pads."""

    __tablename__ = "assessments"
    __table_args__ = (Index(None, "bridge_id", "visit_id"),)


class TrendRow(KeptRow):
    """A trend over the calibrated visits up to one."""

    __tablename__ = "trends"
    __table_args__ = (Index(None, "bridge_id", "visit_id"),)


class InterventionRow(Written, Base):
    """What was done to a pad on a day; a withdrawal is a row of its own that supersedes it with a reason."""

    __tablename__ = "interventions"
    __table_args__ = (
        CheckConstraint("kind IN ('replaced', 'jacked', 'shimmed')", name="kind"),
        CheckConstraint("withdrawn = (supersedes_id IS NOT NULL)", name="withdrawn"),
        CheckConstraint("(supersedes_id IS NULL) = (reason IS NULL)", name="reason"),
    )

    id: Mapped[int] = mapped_column(primary_key=True)
    bridge_id: Mapped[int] = mapped_column(ForeignKey("bridges.id"), index=True)
    support_id: Mapped[int] = mapped_column(ForeignKey("supports.id"))
    date: Mapped[dt.date]
    kind: Mapped[str] = mapped_column(String(20))
    remark: Mapped[str] = mapped_column(Text)
    supersedes_id: Mapped[int | None] = mapped_column(ForeignKey("interventions.id"), unique=True)
    withdrawn: Mapped[bool] = mapped_column(default=False, server_default=false())
    reason: Mapped[str | None] = mapped_column(Text)


class ActionRow(Written, Base):
    """Something to decide: one exceedance at one place, from its opening to its closing.

    `subject` says what and where; `turn` counts how often it was opened there, so that two programs that
    find the same thing at once cannot both open it.
    """

    __tablename__ = "actions"
    __table_args__ = (
        UniqueConstraint("bridge_id", "subject", "turn"),
        CheckConstraint("turn >= 1", name="turn"),
        CheckConstraint("(turn = 1) = (reopens_id IS NULL)", name="reopens"),
    )

    id: Mapped[int] = mapped_column(primary_key=True)
    bridge_id: Mapped[int] = mapped_column(ForeignKey("bridges.id"))
    subject: Mapped[str] = mapped_column(String(400))
    turn: Mapped[int]
    reopens_id: Mapped[int | None] = mapped_column(ForeignKey("actions.id"))
    details: Mapped[dict[str, Any]]


class ActionEventRow(Written, Base):
    """What became of an action, numbered from 1, its opening; rows are only ever added."""

    __tablename__ = "action_events"
    __table_args__ = (
        UniqueConstraint("action_id", "number"),
        UniqueConstraint("action_id", "closes"),
        CheckConstraint("number >= 1", name="number"),
        CheckConstraint("kind IN ('opened', 'found', 'noted', 'closed')", name="kind"),
        CheckConstraint("(kind = 'opened') = (number = 1)", name="opened"),
        CheckConstraint("(kind = 'closed') = (closes IS NOT NULL)", name="closes"),
        CheckConstraint("closes IS NULL OR closes = 1", name="closed_once"),
    )

    id: Mapped[int] = mapped_column(primary_key=True)
    action_id: Mapped[int] = mapped_column(ForeignKey("actions.id"))
    number: Mapped[int]
    kind: Mapped[str] = mapped_column(String(20))
    date: Mapped[dt.date]
    closes: Mapped[int | None]  # 1 in the one event that closes; nothing elsewhere
    visit_id: Mapped[int | None] = mapped_column(ForeignKey("visits.id"))
    evidence: Mapped[str] = mapped_column(DIGEST)
    severity: Mapped[str | None] = mapped_column(String(20))
    due: Mapped[dt.date | None]
    text: Mapped[str] = mapped_column(Text)
    figures: Mapped[dict[str, Any]]
