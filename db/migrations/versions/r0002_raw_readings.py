"""What a reading was reduced from, its benchmark, and what a visit says of its unknowns and datum."""

from __future__ import annotations

import sqlalchemy as sa
from alembic import op

revision = "0002"
down_revision = "0001"
branch_labels = None
depends_on = None


def upgrade() -> None:
    op.add_column(
        "readings", sa.Column("benchmark", sa.String(length=100), nullable=False, server_default="")
    )
    op.add_column("readings", sa.Column("raw", sa.JSON(), nullable=True))
    op.add_column("readings", sa.Column("derived", sa.Boolean(), nullable=False, server_default=sa.false()))
    op.add_column("visits", sa.Column("setup", sa.JSON(), nullable=True))
