"""Interventions, actions with their events, kept trends, and what the record held when a result was made."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

revision = "0003"
down_revision = "0002"
branch_labels = None
depends_on = None


def upgrade() -> None:
    for table in ("calibrations", "assessments"):
        op.add_column(table, sa.Column("evidence", sa.String(length=64), nullable=True))
    _trends()
    _interventions()
    _actions()


def _trends() -> None:
    op.create_table(
        "trends",
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
        sa.Column("evidence", sa.String(length=64), nullable=True),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_trends_bridge_id")),
        sa.ForeignKeyConstraint(["revision_id"], ["revisions.id"], name=op.f("fk_trends_revision_id")),
        sa.ForeignKeyConstraint(["visit_id"], ["visits.id"], name=op.f("fk_trends_visit_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_trends")),
    )
    op.create_index(op.f("ix_trends_bridge_id_visit_id"), "trends", ["bridge_id", "visit_id"], unique=False)


def _interventions() -> None:
    op.create_table(
        "interventions",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("support_id", sa.Integer(), nullable=False),
        sa.Column("date", sa.Date(), nullable=False),
        sa.Column("kind", sa.String(length=20), nullable=False),
        sa.Column("remark", sa.Text(), nullable=False),
        sa.Column("supersedes_id", sa.Integer(), nullable=True),
        sa.Column("withdrawn", sa.Boolean(), nullable=False, server_default=sa.false()),
        sa.Column("reason", sa.Text(), nullable=True),
        sa.Column("written_by", sa.String(length=100), nullable=False),
        sa.Column("written_at", sa.DateTime(), nullable=False),
        sa.CheckConstraint("kind IN ('replaced', 'jacked', 'shimmed')", name=op.f("ck_interventions_kind")),
        sa.CheckConstraint(
            "withdrawn = (supersedes_id IS NOT NULL)", name=op.f("ck_interventions_withdrawn")
        ),
        sa.CheckConstraint(
            "(supersedes_id IS NULL) = (reason IS NULL)", name=op.f("ck_interventions_reason")
        ),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_interventions_bridge_id")),
        sa.ForeignKeyConstraint(["support_id"], ["supports.id"], name=op.f("fk_interventions_support_id")),
        sa.ForeignKeyConstraint(
            ["supersedes_id"], ["interventions.id"], name=op.f("fk_interventions_supersedes_id")
        ),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_interventions")),
        sa.UniqueConstraint("supersedes_id", name=op.f("uq_interventions_supersedes_id")),
    )
    op.create_index(op.f("ix_interventions_bridge_id"), "interventions", ["bridge_id"], unique=False)


def _actions() -> None:
    op.create_table(
        "actions",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("bridge_id", sa.Integer(), nullable=False),
        sa.Column("subject", sa.String(length=400), nullable=False),
        sa.Column("turn", sa.Integer(), nullable=False),
        sa.Column("reopens_id", sa.Integer(), nullable=True),
        sa.Column("details", sa.JSON(), nullable=False),
        sa.Column("written_by", sa.String(length=100), nullable=False),
        sa.Column("written_at", sa.DateTime(), nullable=False),
        sa.CheckConstraint("turn >= 1", name=op.f("ck_actions_turn")),
        sa.CheckConstraint("(turn = 1) = (reopens_id IS NULL)", name=op.f("ck_actions_reopens")),
        sa.ForeignKeyConstraint(["bridge_id"], ["bridges.id"], name=op.f("fk_actions_bridge_id")),
        sa.ForeignKeyConstraint(["reopens_id"], ["actions.id"], name=op.f("fk_actions_reopens_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_actions")),
        sa.UniqueConstraint("bridge_id", "subject", "turn", name=op.f("uq_actions_bridge_id_subject_turn")),
    )
    op.create_table(
        "action_events",
        sa.Column("id", sa.Integer(), nullable=False),
        sa.Column("action_id", sa.Integer(), nullable=False),
        sa.Column("number", sa.Integer(), nullable=False),
        sa.Column("kind", sa.String(length=20), nullable=False),
        sa.Column("date", sa.Date(), nullable=False),
        sa.Column("closes", sa.Integer(), nullable=True),
        sa.Column("visit_id", sa.Integer(), nullable=True),
        sa.Column("evidence", sa.String(length=64), nullable=False),
        sa.Column("severity", sa.String(length=20), nullable=True),
        sa.Column("due", sa.Date(), nullable=True),
        sa.Column("text", sa.Text(), nullable=False),
        sa.Column("figures", sa.JSON(), nullable=False),
        sa.Column("written_by", sa.String(length=100), nullable=False),
        sa.Column("written_at", sa.DateTime(), nullable=False),
        sa.CheckConstraint("number >= 1", name=op.f("ck_action_events_number")),
        sa.CheckConstraint(
            "kind IN ('opened', 'found', 'noted', 'closed')", name=op.f("ck_action_events_kind")
        ),
        sa.CheckConstraint("(kind = 'opened') = (number = 1)", name=op.f("ck_action_events_opened")),
        sa.CheckConstraint("(kind = 'closed') = (closes IS NOT NULL)", name=op.f("ck_action_events_closes")),
        sa.CheckConstraint("closes IS NULL OR closes = 1", name=op.f("ck_action_events_closed_once")),
        sa.ForeignKeyConstraint(["action_id"], ["actions.id"], name=op.f("fk_action_events_action_id")),
        sa.ForeignKeyConstraint(["visit_id"], ["visits.id"], name=op.f("fk_action_events_visit_id")),
        sa.PrimaryKeyConstraint("id", name=op.f("pk_action_events")),
        sa.UniqueConstraint("action_id", "number", name=op.f("uq_action_events_action_id_number")),
        sa.UniqueConstraint("action_id", "closes", name=op.f("uq_action_events_action_id_closes")),
    )
