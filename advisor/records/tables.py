"""The tables, written once for SQLite and PostgreSQL alike.

Times are ISO-8601 text in UTC with microseconds, so they sort as text. Identifiers are random: nothing about a wearer
can be guessed from an address. The words a visit is found by are folded (see ``folding``) and never shown.
"""

import datetime
import secrets

from sqlalchemy import Column, ForeignKey, Index, Integer, LargeBinary, MetaData, String, Table, Text

metadata = MetaData()

range_version = Table(
    "range_version",
    metadata,
    Column("hash", String(64), primary_key=True),  # SHA-256 of the text, hexadecimal
    Column("toml", Text, nullable=False),
    Column("saved_at", String(32), nullable=False),
)

visit = Table(
    "visit",
    metadata,
    Column("id", String(32), primary_key=True),
    Column("created_at", String(32), nullable=False),
    Column("changed_at", String(32), nullable=False),
    Column("edit", Integer, nullable=False),
    Column("date", String(10), nullable=False),
    Column("visit", Text, nullable=False),  # JSON, twolight-visit-1
    Column("range_hash", String(64), ForeignKey("range_version.hash"), nullable=False),
    Column("version", String(40), nullable=False),  # of the program that computed the answer
    Column("answer", LargeBinary, nullable=False),  # JSON, twolight-comparison-1, compressed by zlib
    Index("ix_visit_changed", "changed_at", "id"),
    Index("ix_visit_range", "range_hash"),
)

# Sorted by code point on a server too, whatever its language, so that one beginning is one stretch of the index.
visit_word = Table(
    "visit_word",
    metadata,
    Column("visit_id", String(32), ForeignKey("visit.id", ondelete="CASCADE"), primary_key=True),
    Column("word", String(40).with_variant(String(40, collation="C"), "postgresql"), primary_key=True),
    Index("ix_visit_word_word", "word", "visit_id"),
    sqlite_with_rowid=False,
)

draft = Table(
    "draft",
    metadata,
    Column("id", String(32), primary_key=True),
    Column("changed_at", String(32), nullable=False),
    Column("edit", Integer, nullable=False),
    Column("fields", Text, nullable=False),  # JSON, the form as typed
    Column("visit_id", String(32), ForeignKey("visit.id", ondelete="CASCADE")),
    Column("visit_edit", Integer),  # the edit of that visit the draft began from
    Index("ix_draft_visit", "visit_id"),
)

# A row is looked up when a form comes again, and when a draft is asked for that is no longer there.
saved_form = Table(
    "saved_form",
    metadata,
    Column("token", String(64), primary_key=True),  # drawn when the form was first shown
    Column("visit_id", String(32), ForeignKey("visit.id", ondelete="CASCADE"), nullable=False),
    Column("visit_edit", Integer, nullable=False),  # the edit that was saved from this form
    Column("draft_id", String(32)),  # the draft it was saved from, which went with the saving
    Column("draft_edit", Integer),
    Index("ix_saved_form_visit", "visit_id"),
    Index("ix_saved_form_draft", "draft_id"),
)

recheck = Table(
    "recheck",
    metadata,
    Column("id", String(32), primary_key=True),
    Column("visit_id", String(32), ForeignKey("visit.id", ondelete="CASCADE"), nullable=False),
    Column("at", String(32), nullable=False),
    Column("outcome", String(20), nullable=False),
    Column("who_pays", String(20), nullable=False),
    Column("new_visit_id", String(32), ForeignKey("visit.id", ondelete="SET NULL")),  # the order that came of it
    Column("content", Text, nullable=False),  # JSON, twolight-recheck-record-1
    Index("ix_recheck_visit", "visit_id", "at"),
    Index("ix_recheck_new_visit", "new_visit_id"),
)

# Who did what, without contents; a row outlives its visit and loses the link to it.
event = Table(
    "event",
    metadata,
    Column("id", String(32), primary_key=True),
    Column("at", String(32), nullable=False),
    Column("who", String(80), nullable=False),
    Column("what", String(40), nullable=False),
    Column("visit_id", String(32), ForeignKey("visit.id", ondelete="SET NULL")),
    Index("ix_event_at", "at", "id"),
    Index("ix_event_visit", "visit_id", "at"),
)

setting = Table(
    "setting",
    metadata,
    Column("key", String(64), primary_key=True),
    Column("value", Text, nullable=False),
)


def new_id() -> str:
    """Return a random identifier of 22 characters (128 bits) that may stand in an address."""
    return secrets.token_urlsafe(16)


def now() -> str:
    """Return the present moment as stored."""
    return days_ago(0)


def days_ago(days: int) -> str:
    """Return the moment so many days ago, as stored."""
    moment = datetime.datetime.now(datetime.UTC) - datetime.timedelta(days=days)
    return moment.isoformat(timespec="microseconds")
