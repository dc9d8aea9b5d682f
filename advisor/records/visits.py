"""Visits as stored rows: saved with what was computed, and with the words they are found by (see ``finding``)."""

import datetime
import json
import zlib
from dataclasses import dataclass
from typing import Any, NamedTuple

from sqlalchemy import Connection, Row, insert, select, update

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import events, tables, words

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
    """What a visit is saved with: content, the range and program it was worked out with, answer, and who saves it."""

    visit_json: str
    range_hash: str
    version: str
    answer_json: str
    who: str = events.HERE


class Named(NamedTuple):
    """What a visit is known by."""

    name: str
    reference: str
    note: str


def named(content: dict[str, Any]) -> Named:
    """Return what the visit of this content is known by; what it lacks is empty."""
    wearer = content.get("wearer") or {}
    return Named(wearer.get("name") or "", content.get("reference") or "", content.get("note") or "")


def _columns(made: Made) -> dict[str, Any]:
    content = json.loads(made.visit_json)
    row: dict[str, Any] = {"visit": made.visit_json, "answer": zlib.compress(made.answer_json.encode())}
    row |= {"changed_at": tables.now(), "range_hash": made.range_hash, "version": made.version}
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


def _keep_words(connection: Connection, saved: SavedVisit) -> None:
    known = named(json.loads(saved.visit_json))
    words.keep(connection, saved.id, words.words_of(**known._asdict(), date=saved.date))


def find(connection: Connection, visit_id: str, *, held: bool = False) -> SavedVisit:
    """Return a visit, or raise VisitMissing; where it is to be ``held``, nobody changes it before we are done.

    SQLite has one writer at a time and needs no holding.
    """
    query = select(tables.visit).where(_VISIT.id == visit_id)
    row = connection.execute(query.with_for_update() if held else query).first()
    if row is None:
        raise VisitMissing
    return _saved(row)


def add(connection: Connection, made: Made) -> SavedVisit:
    """Store a new visit; one without a date is of today."""
    row = {"date": datetime.date.today().isoformat()} | _columns(made)
    row |= {"id": tables.new_id(), "created_at": row["changed_at"], "edit": 1}
    connection.execute(insert(tables.visit).values(row))
    stored = find(connection, row["id"])
    _keep_words(connection, stored)
    events.add(connection, "saved", who=made.who, visit_id=stored.id)
    return stored


def change(connection: Connection, made: Made, *, over: tuple[str, int]) -> SavedVisit:
    """Store a visit over the one, and the edit of it, that the editor saw, and over no other."""
    visit_id, edit_seen = over
    row = _columns(made) | {"edit": edit_seen + 1}
    seen = (_VISIT.id == visit_id) & (_VISIT.edit == edit_seen)
    done = connection.execute(update(tables.visit).where(seen).values(row))
    stored = find(connection, visit_id)
    if done.rowcount == 0:
        raise VisitChanged(stored)
    _keep_words(connection, stored)
    events.add(connection, "changed", who=made.who, visit_id=stored.id)
    return stored


def note_order(connection: Connection, visit_json: str, *, over: tuple[str, int], who: str) -> SavedVisit:
    """Store what was ordered into the edit that was seen; the range and the answer stay those it was saved with."""
    visit_id, edit_seen = over
    row = {"visit": visit_json, "changed_at": tables.now(), "edit": edit_seen + 1}
    seen = (_VISIT.id == visit_id) & (_VISIT.edit == edit_seen)
    done = connection.execute(update(tables.visit).where(seen).values(row))
    stored = find(connection, visit_id)
    if done.rowcount == 0:
        raise VisitChanged(stored)
    events.add(connection, "ordered", who=who, visit_id=visit_id)
    return stored
