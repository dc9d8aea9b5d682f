"""Visits found by the beginnings of words, page by page from the last changed, in a time that hardly grows with them.

A word that few visits have is looked up among the words. One that many have is soon met among the visits changed last;
only where it is not, as with a date of years ago, is every visit that has it looked at.
"""

import json
from typing import Any

from sqlalchemy import ColumnElement, Connection, Select, func, select, tuple_

from advisor.records import tables, words
from advisor.records.visits import PageKey, VisitLine, named

FEW = 500  # so many rows of words are looked up without a thought
MANY = 20_000  # further than this the rows of a word are not counted
LATEST = 2_000  # so many visits are tried, the last changed first, before all that have a common word are

_VISIT = tables.visit.c
_WORD = tables.visit_word.c
_KEY = (_VISIT.changed_at.desc(), _VISIT.id.desc())


def page(connection: Connection, search: str, *, limit: int, after: PageKey | None) -> list[VisitLine]:
    """Return visits, the last changed first, in which every word of the search begins some word."""
    query = select(_VISIT.id).order_by(*_KEY)
    if after is not None:
        query = query.where(tuple_(_VISIT.changed_at, _VISIT.id) < tuple(after))
    wanted = sorted(set(words.words_in(search)))
    if not wanted:
        return _lines(connection, query.limit(limit))
    count, rarest = _rarest(connection, wanted, most=FEW)
    if count > FEW:
        latest = _down_to(connection, query).where(*(_has(word, _VISIT.id) for word in wanted))
        lines = _lines(connection, latest.limit(limit))
        if len(lines) == limit:
            return lines
        _, rarest = _rarest(connection, wanted, most=MANY)
    others = (_has(word, _WORD.visit_id) for word in wanted if word != rarest)
    having = select(_WORD.visit_id).where(words.begins(rarest), *others).distinct().cte().prefix_with("MATERIALIZED")
    return _lines(connection, query.where(_VISIT.id.in_(select(having.c.visit_id))).limit(limit))


def _down_to(connection: Connection, query: Select[tuple[str]]) -> Select[tuple[str]]:
    """Return the query for the visits changed last alone; put so that looking stops as soon as a page is full."""
    end = connection.execute(query.with_only_columns(_VISIT.changed_at, _VISIT.id).offset(LATEST).limit(1)).first()
    return query if end is None else query.where(tuple_(_VISIT.changed_at, _VISIT.id) > tuple(end))


def _rarest(connection: Connection, wanted: list[str], *, most: int) -> tuple[int, str]:
    """Return the word that the fewest visits have, and how many stored words begin so, counted up to one over most."""
    return min((_count(connection, word, most=most), word) for word in wanted)


def _count(connection: Connection, word: str, *, most: int) -> int:
    found = select(_WORD.visit_id).where(words.begins(word)).limit(most + 1).subquery()
    return connection.execute(select(func.count()).select_from(found)).scalar_one()


def _has(word: str, visit_id: ColumnElement[str]) -> ColumnElement[bool]:
    """Return the condition that a visit has a word; put so that it is tried visit by visit, never listed first."""
    among = tables.visit_word.alias()
    found = select(among.c.word).where(among.c.visit_id == visit_id, words.begins(word, among.c.word)).limit(1)
    return found.scalar_subquery().is_not(None)


def oldest_first(connection: Connection, found: Select[tuple[str]]) -> list[VisitLine]:
    """Return the lines of the visits that are found, by their day."""
    return _lines(connection, found, order=(_VISIT.date, _VISIT.id))


def _lines(connection: Connection, found: Select[tuple[str]], *, order: tuple[Any, ...] = _KEY) -> list[VisitLine]:
    """Return the lines of the visits that are found, in the order of the list."""
    columns = (_VISIT.id, _VISIT.changed_at, _VISIT.edit, _VISIT.date, _VISIT.visit)
    rows: Any = connection.execute(select(*columns).where(_VISIT.id.in_(found)).order_by(*order))
    return [VisitLine(row.id, row.changed_at, row.edit, row.date, *named(json.loads(row.visit))) for row in rows]
