"""The first tables: range versions, visits, drafts, settings.

A migration never imports the tables of the day: it says what they were when it was written.
"""

import sqlalchemy as sa
from alembic import op

revision = "0001"
down_revision = None


def upgrade() -> None:
    """Make every table."""
    create_range_version()
    create_visit()
    create_draft()
    create_setting()


def create_range_version() -> None:
    """One row for each distinct range text."""
    op.create_table(
        "range_version",
        sa.Column("hash", sa.String(64), primary_key=True),
        sa.Column("toml", sa.Text, nullable=False),
        sa.Column("saved_at", sa.String(32), nullable=False),
    )


def create_visit() -> None:
    """The visits, with the range and the answer as they were."""
    op.create_table(
        "visit",
        sa.Column("id", sa.String(32), primary_key=True),
        sa.Column("created_at", sa.String(32), nullable=False),
        sa.Column("changed_at", sa.String(32), nullable=False),
        sa.Column("edit", sa.Integer, nullable=False),
        sa.Column("name_folded", sa.Text, nullable=False),
        sa.Column("reference_folded", sa.Text, nullable=False),
        sa.Column("date", sa.String(10), nullable=False),
        sa.Column("note_folded", sa.Text, nullable=False),
        sa.Column("visit", sa.Text, nullable=False),
        sa.Column("range_hash", sa.String(64), sa.ForeignKey("range_version.hash"), nullable=False),
        sa.Column("version", sa.String(40), nullable=False),
        sa.Column("answer", sa.LargeBinary, nullable=False),
    )
    op.create_index("ix_visit_changed", "visit", ["changed_at", "id"])
    op.create_index("ix_visit_range", "visit", ["range_hash"])


def create_draft() -> None:
    """Forms in progress; they go with the visit they began from."""
    op.create_table(
        "draft",
        sa.Column("id", sa.String(32), primary_key=True),
        sa.Column("changed_at", sa.String(32), nullable=False),
        sa.Column("edit", sa.Integer, nullable=False),
        sa.Column("fields", sa.Text, nullable=False),
        sa.Column("visit_id", sa.String(32), sa.ForeignKey("visit.id", ondelete="CASCADE")),
        sa.Column("visit_edit", sa.Integer),
    )
    op.create_index("ix_draft_visit", "draft", ["visit_id"])


def create_setting() -> None:
    """Small values by key."""
    op.create_table(
        "setting",
        sa.Column("key", sa.String(64), primary_key=True),
        sa.Column("value", sa.Text, nullable=False),
    )
