"""The words a visit is found by, one row for each; the columns of folded text that were searched before go."""

import sqlalchemy as sa
from alembic import op

revision = "0005"
down_revision = "0004"

BATCH = 500  # visits filled in at a time, so that a large file does not have to fit into memory


def upgrade() -> None:
    """Make the table, fill it for the visits that are there, and drop what it replaces."""
    create_visit_word()
    fill_visit_word()
    for column in ("name_folded", "reference_folded", "note_folded"):
        op.drop_column("visit", column)


def create_visit_word() -> None:
    """One row for each word of a visit; it goes with its visit."""
    op.create_table(
        "visit_word",
        sa.Column("visit_id", sa.String(32), sa.ForeignKey("visit.id", ondelete="CASCADE"), primary_key=True),
        sa.Column("word", sa.String(40).with_variant(sa.String(40, collation="C"), "postgresql"), primary_key=True),
        sqlite_with_rowid=False,
    )
    op.create_index("ix_visit_word_word", "visit_word", ["word", "visit_id"])


def fill_visit_word() -> None:
    """Take the words from the folded columns, as saving a visit would have stored them."""
    connection = op.get_bind()
    names = ("id", "name_folded", "reference_folded", "note_folded", "date")
    visit = sa.table("visit", *(sa.column(name, sa.String) for name in names))
    visit_word = sa.table("visit_word", sa.column("visit_id", sa.String), sa.column("word", sa.String))
    page, last = sa.select(visit).order_by(visit.c.id).limit(BATCH), ""
    while rows := connection.execute(page.where(visit.c.id > last)).all():
        filled = [{"visit_id": row.id, "word": word} for row in rows for word in sorted(words_of(row))]
        if filled:
            connection.execute(sa.insert(visit_word), filled)
        last = rows[-1].id


def words_of(row: sa.Row[tuple[str, ...]]) -> set[str]:
    """Return the words of a visit, each cut at 40 letters; of its note the first sixty."""
    texts = (row.name_folded, row.reference_folded, row.date)
    words = [word for text in texts for word in text.split()] + row.note_folded.split()[:60]
    return {word[:40] for word in words}
