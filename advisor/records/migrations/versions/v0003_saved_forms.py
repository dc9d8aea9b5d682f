"""Which visit each form became, so that a form sent twice is saved once, whenever it is sent again."""

import sqlalchemy as sa
from alembic import op

revision = "0003"
down_revision = "0002"


def upgrade() -> None:
    """Make the table; nothing that is there changes."""
    create_saved_form()


def create_saved_form() -> None:
    """One row for each form that was saved; it goes with its visit."""
    op.create_table(
        "saved_form",
        sa.Column("token", sa.String(64), primary_key=True),
        sa.Column("visit_id", sa.String(32), sa.ForeignKey("visit.id", ondelete="CASCADE"), nullable=False),
        sa.Column("visit_edit", sa.Integer, nullable=False),
        sa.Column("draft_id", sa.String(32)),
        sa.Column("draft_edit", sa.Integer),
    )
    op.create_index("ix_saved_form_visit", "saved_form", ["visit_id"])
    op.create_index("ix_saved_form_draft", "saved_form", ["draft_id"])
