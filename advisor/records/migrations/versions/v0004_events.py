"""Who did what and when: one row for each thing done, without what was in it."""

import sqlalchemy as sa
from alembic import op

revision = "0004"
down_revision = "0003"


def upgrade() -> None:
    """Make the table; nothing that is there changes."""
    create_event()


def create_event() -> None:
    """One row for each thing done; it outlives its visit and loses the link to it."""
    op.create_table(
        "event",
        sa.Column("id", sa.String(32), primary_key=True),
        sa.Column("at", sa.String(32), nullable=False),
        sa.Column("who", sa.String(80), nullable=False),
        sa.Column("what", sa.String(40), nullable=False),
        sa.Column("visit_id", sa.String(32), sa.ForeignKey("visit.id", ondelete="SET NULL")),
    )
    op.create_index("ix_event_at", "event", ["at", "id"])
    op.create_index("ix_event_visit", "event", ["visit_id", "at"])
