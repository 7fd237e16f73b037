"""The first tables."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

revision = "0001"
down_revision = None
branch_labels = None
depends_on = None


def upgrade() -> None:
    op.create_table(
        "bridges",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("key", sa.String(length=100), nullable=False),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_bridges")),
        sa.UniqueConstraint("key", name=op.f("uq_bridges_key")),
    )
    op.create_table(
        "girders",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("key", sa.String(length=100), nullable=False),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_girders_bridge_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_girders")),
        sa.UniqueConstraint("bridge_id", "key", name=op.f("uq_girders_bridge_id_key")),
    )
    op.create_table(
        "revisions",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("number", sa.Integer(), nullable=False),
        sa.Column("name", sa.Text(), nullable=False),
        sa.Column("text", sa.Text(), nullable=False),
        sa.Column("digest", sa.String(length=64), nullable=False),
        sa.Column("written_by", sa.String(length=100), nullable=False),
        sa.Column("written_at", sa.DateTime(), nullable=False),
        sa.CheckConstraint("number >= 1", name=op.f("ck_revisions_number")),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_revisions_bridge_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_revisions")),
        sa.UniqueConstraint("bridge_id", "number", name=op.f("uq_revisions_bridge_id_number")),
    )
    op.create_table(
        "supports",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("girder_id", sa.Integer(), nullable=False),
        sa.Column("key", sa.String(length=100), nullable=False),
        sa.ForeignKeyConstraint(["girder_id"], ["girders.id"], name=op.f("fk_supports_girder_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_supports")),
        sa.UniqueConstraint("girder_id", "key", name=op.f("uq_supports_girder_id_key")),
    )
    op.create_table(
        "visits",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("revision_id", sa.Integer(), nullable=False),
        sa.Column("date", sa.Date(), nullable=False),
        sa.Column("party", sa.Text(), nullable=False),
        sa.Column("pad_temperature", sa.Double(), nullable=True),
        sa.Column("datum", sa.Text(), nullable=False),
        sa.Column("remark", sa.Text(), nullable=False),
        sa.Column("text", sa.Text(), nullable=False),
        sa.Column("table_text", sa.Text(), nullable=False),
        sa.Column("digest", sa.String(length=64), nullable=False),
        sa.Column("written_by", sa.String(length=100), nullable=False),
        sa.Column("written_at", sa.DateTime(), nullable=False),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_visits_bridge_id")),
        sa.ForeignKeyConstraint(["revision_id"], ["revisions.id"], name=op.f("fk_visits_revision_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_visits")),
        sa.UniqueConstraint("bridge_id", "date", name=op.f("uq_visits_bridge_id_date")),
    )
    op.create_table(
        "assessments",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("revision_id", sa.Integer(), nullable=False),
        sa.Column("visit_id", sa.Integer(), nullable=True),
        sa.Column("input_digest", sa.String(length=64), nullable=False),
        sa.Column("options", sa.JSON(), nullable=False),
        sa.Column("seed", sa.BigInteger(), nullable=True),
        sa.Column("version", sa.String(length=100), nullable=False),
        sa.Column("result", sa.JSON(), nullable=False),
        sa.Column("made_at", sa.DateTime(), nullable=False),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_assessments_bridge_id")),
        sa.ForeignKeyConstraint(["revision_id"], ["revisions.id"], name=op.f("fk_assessments_revision_id")),
        sa.ForeignKeyConstraint(["visit_id"], ["visits.id"], name=op.f("fk_assessments_visit_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_assessments")),
    )
    op.create_index(
        op.f("ix_assessments_bridge_id_visit_id"), "assessments", ["bridge_id", "visit_id"], unique=False
    )
    op.create_table(
        "calibrations",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("revision_id", sa.Integer(), nullable=False),
        sa.Column("visit_id", sa.Integer(), nullable=True),
        sa.Column("input_digest", sa.String(length=64), nullable=False),
        sa.Column("options", sa.JSON(), nullable=False),
        sa.Column("seed", sa.BigInteger(), nullable=True),
        sa.Column("version", sa.String(length=100), nullable=False),
        sa.Column("result", sa.JSON(), nullable=False),
        sa.Column("made_at", sa.DateTime(), nullable=False),
        sa.CheckConstraint("visit_id IS NOT NULL", name=op.f("ck_calibrations_visit")),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_calibrations_bridge_id")),
        sa.ForeignKeyConstraint(["revision_id"], ["revisions.id"], name=op.f("fk_calibrations_revision_id")),
        sa.ForeignKeyConstraint(["visit_id"], ["visits.id"], name=op.f("fk_calibrations_visit_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_calibrations")),
    )
    op.create_index(
        op.f("ix_calibrations_bridge_id_visit_id"), "calibrations", ["bridge_id", "visit_id"], unique=False
    )
    op.create_table(
        "load_states",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("visit_id", sa.Integer(), nullable=False),
        sa.Column("key", sa.String(length=100), nullable=False),
        sa.Column("vehicle", sa.String(length=100), nullable=True),
        sa.Column("leading_axle_at", sa.Double(), nullable=True),
        sa.Column("towards", sa.String(length=20), nullable=False),
        sa.CheckConstraint(
            "(vehicle IS NULL) = (leading_axle_at IS NULL)", name=op.f("ck_load_states_placed_vehicle")
        ),
        sa.ForeignKeyConstraint(["visit_id"], ["visits.id"], name=op.f("fk_load_states_visit_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_load_states")),
        sa.UniqueConstraint("visit_id", "key", name=op.f("uq_load_states_visit_id_key")),
    )
    op.create_table(
        "readings",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("visit_id", sa.Integer(), nullable=False),
        sa.Column("state_id", sa.Integer(), nullable=False),
        sa.Column("girder_id", sa.Integer(), nullable=False),
        sa.Column("support_id", sa.Integer(), nullable=True),
        sa.Column("quantity", sa.String(length=20), nullable=False),
        sa.Column("at", sa.Double(), nullable=True),
        sa.Column("height", sa.Double(), nullable=True),
        sa.Column("value", sa.Double(), nullable=False),
        sa.Column("sd", sa.Double(), nullable=False),
        sa.Column("value_entered", sa.Text(), nullable=False),
        sa.Column("sd_entered", sa.Text(), nullable=False),
        sa.Column("unit", sa.String(length=100), nullable=False),
        sa.Column("instrument", sa.Text(), nullable=False),
        sa.Column("remark", sa.Text(), nullable=False),
        sa.Column("source", sa.Text(), nullable=False),
        sa.Column("supersedes_id", sa.Integer(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False),
        sa.Column("reason", sa.Text(), nullable=True),
        sa.Column("written_by", sa.String(length=100), nullable=False),
        sa.Column("written_at", sa.DateTime(), nullable=False),
        sa.CheckConstraint("(supersedes_id IS NULL) = (reason IS NULL)", name=op.f("ck_readings_reason")),
        sa.CheckConstraint("sd > 0", name=op.f("ck_readings_sd")),
        sa.CheckConstraint("support_id IS NOT NULL OR at IS NOT NULL", name=op.f("ck_readings_placed")),
        sa.CheckConstraint(
            "withdrawn = false OR supersedes_id IS NOT NULL", name=op.f("ck_readings_withdrawn")
        ),
        sa.ForeignKeyConstraint(["girder_id"], ["girders.id"], name=op.f("fk_readings_girder_id")),
        sa.ForeignKeyConstraint(["state_id"], ["load_states.id"], name=op.f("fk_readings_state_id")),
        sa.ForeignKeyConstraint(["supersedes_id"], ["readings.id"], name=op.f("fk_readings_supersedes_id")),
        sa.ForeignKeyConstraint(["support_id"], ["supports.id"], name=op.f("fk_readings_support_id")),
        sa.ForeignKeyConstraint(["visit_id"], ["visits.id"], name=op.f("fk_readings_visit_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_readings")),
        sa.UniqueConstraint("supersedes_id", name=op.f("uq_readings_supersedes_id")),
    )
    op.create_index(op.f("ix_readings_girder_id"), "readings", ["girder_id"], unique=False)
    op.create_index(op.f("ix_readings_support_id"), "readings", ["support_id"], unique=False)
    op.create_index(op.f("ix_readings_visit_id"), "readings", ["visit_id"], unique=False)
