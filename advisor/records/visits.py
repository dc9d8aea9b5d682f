"""Visits as stored rows: saved with what was computed, found by the beginnings of words."""

import datetime
import json
import zlib
from dataclasses import dataclass
from typing import Any, NamedTuple

from sqlalchemy import ColumnElement, Connection, Row, delete, insert, or_, select, tuple_, update

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import tables
from advisor.records.folding import fold

_VISIT = tables.visit.c


@dataclass(frozen=True)
class SavedVisit:
    """A visit as stored, with the range's hash, the program's version and the answer it was saved with."""

    id: str
    created_at: str
    changed_at: str
    edit: int
    date: str
    visit_json: str
    range_hash: str
    version: str
    answer_json: str


class PageKey(NamedTuple):
    """Where a page of the list ended."""

    changed_at: str
    id: str


@dataclass(frozen=True)
class VisitLine:
    """A visit in the list."""

    id: str
    changed_at: str
    edit: int
    date: str
    name: str
    reference: str
    note: str

    @property
    def key(self) -> PageKey:
        """Where the list goes on after this line."""
        return PageKey(self.changed_at, self.id)


class VisitChanged(TwolightError):
    """Somebody saved the visit after the editor saw it; ``stored`` is what is there now."""

    text = mark("This visit was changed after you opened it; nothing was overwritten. Look at both before you save.")

    def __init__(self, stored: SavedVisit) -> None:
        self.stored = stored
        super().__init__()


class VisitMissing(TwolightError):
    """There is no such visit, or it has been erased."""

    text = mark("There is no such visit; it may have been erased.")


class Made(NamedTuple):
    """What a visit is saved with: its content, the range and program it was worked out with, and the answer."""

    visit_json: str
    range_hash: str
    version: str
    answer_json: str


class _Named(NamedTuple):
    name: str
    reference: str
    note: str


def _named(content: dict[str, Any]) -> _Named:
    wearer = content.get("wearer") or {}
    return _Named(wearer.get("name") or "", content.get("reference") or "", content.get("note") or "")


def _columns(made: Made) -> dict[str, Any]:
    content = json.loads(made.visit_json)
    named = _named(content)
    row: dict[str, Any] = {f"{field}_folded": fold(text) for field, text in named._asdict().items()}
    row |= {"visit": made.visit_json, "answer": zlib.compress(made.answer_json.encode()), "changed_at": tables.now()}
    row |= {"range_hash": made.range_hash, "version": made.version}
    if content.get("date"):
        row["date"] = content["date"]
    return row


def _saved(row: Row[Any]) -> SavedVisit:
    return SavedVisit(
        id=row.id,
        created_at=row.created_at,
        changed_at=row.changed_at,
        edit=row.edit,
        date=row.date,
        visit_json=row.visit,
        range_hash=row.range_hash,
        version=row.version,
        answer_json=zlib.decompress(row.answer).decode(),
    )


def find(connection: Connection, visit_id: str) -> SavedVisit:
    """Return a visit, or raise VisitMissing."""
    row = connection.execute(select(tables.visit).where(_VISIT.id == visit_id)).first()
    if row is None:
        raise VisitMissing
    return _saved(row)


def add(connection: Connection, made: Made) -> SavedVisit:
    """Store a new visit; one without a date is of today."""
    row = {"date": datetime.date.today().isoformat()} | _columns(made)
    row |= {"id": tables.new_id(), "created_at": row["changed_at"], "edit": 1}
    connection.execute(insert(tables.visit).values(row))
    return find(connection, row["id"])


def change(connection: Connection, made: Made, *, over: tuple[str, int]) -> SavedVisit:
    """Store a visit over the one, and the edit of it, that the editor saw, and over no other."""
    visit_id, edit_seen = over
    row = _columns(made) | {"edit": edit_seen + 1}
    seen = (_VISIT.id == visit_id) & (_VISIT.edit == edit_seen)
    done = connection.execute(update(tables.visit).where(seen).values(row))
    stored = find(connection, visit_id)
    if done.rowcount == 0:
        raise VisitChanged(stored)
    return stored


def erase(connection: Connection, visit_id: str) -> None:
    """Remove a visit and the drafts that began from it, or raise VisitMissing."""
    if connection.execute(delete(tables.visit).where(_VISIT.id == visit_id)).rowcount == 0:
        raise VisitMissing


def _begins(word: str) -> ColumnElement[bool]:
    words = (_VISIT.name_folded, _VISIT.reference_folded, _VISIT.note_folded)
    first = (column.startswith(word, autoescape=True) for column in (*words, _VISIT.date))
    later = (column.contains(f" {word}", autoescape=True) for column in words)
    return or_(*first, *later)


def page(connection: Connection, search: str, *, limit: int, after: PageKey | None) -> list[VisitLine]:
    """Return visits, the last changed first, in which every word of the search begins some word."""
    columns = (_VISIT.id, _VISIT.changed_at, _VISIT.edit, _VISIT.date, _VISIT.visit)
    query = select(*columns).order_by(_VISIT.changed_at.desc(), _VISIT.id.desc()).limit(limit)
    query = query.where(*(_begins(word) for word in fold(search).split()))
    if after is not None:
        query = query.where(tuple_(_VISIT.changed_at, _VISIT.id) < tuple(after))
    rows = connection.execute(query)
    return [VisitLine(*row[:4], *_named(json.loads(row.visit))) for row in rows]
