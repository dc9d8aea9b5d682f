"""Return visits: what came of each, kept beside the visit."""

import sqlalchemy as sa
from alembic import op

revision = "0002"
down_revision = "0001"


def upgrade() -> None:
    """Make the table; nothing that is there changes."""
    create_recheck()


def create_recheck() -> None:
    """One row for each recorded outcome; it goes with its visit."""
    op.create_table(
        "recheck",
        sa.Column("id", sa.String(32), primary_key=True),
        sa.Column("visit_id", sa.String(32), sa.ForeignKey("visit.id", ondelete="CASCADE"), nullable=False),
        sa.Column("at", sa.String(32), nullable=False),
        sa.Column("outcome", sa.String(20), nullable=False),
        sa.Column("who_pays", sa.String(20), nullable=False),
        sa.Column("new_visit_id", sa.String(32), sa.ForeignKey("visit.id", ondelete="SET NULL")),
        sa.Column("content", sa.Text, nullable=False),
    )
    op.create_index("ix_recheck_visit", "recheck", ["visit_id", "at"])
    op.create_index("ix_recheck_new_visit", "recheck", ["new_visit_id"])
