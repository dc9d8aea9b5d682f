"""Erasing for good: visits with all that hangs on them, and forms in progress; and which visits are old."""

import sqlite3
from collections.abc import Sequence
from dataclasses import dataclass

from sqlalchemy import ColumnElement, Connection, Engine, delete, exists, func, select

from advisor.counsel.phrases import mark
from advisor.records import events, finding, tables
from advisor.records.trouble import StoreError
from advisor.records.visits import VisitLine

_VISIT = tables.visit.c
_RECHECK = tables.recheck.c


class TracesLeft(StoreError):
    """What was to go is gone from the records, but the file still holds the pages it stood on."""

    text = mark(
        "What was to go is erased, but there was no room to overwrite it: traces may stay in %(place)s. "
        "Make room on the disk, then stop Twolight and start it again."
    )


@dataclass(frozen=True)
class Erased:
    """How much went: visits, records of return visits, and forms in progress."""

    visits: int
    rechecks: int
    drafts: int


@dataclass(frozen=True)
class OldVisits:
    """How many visits are old, the day of the oldest, and the oldest of them as lines."""

    count: int
    oldest: str | None
    lines: tuple[VisitLine, ...]


def counted(connection: Connection, visit_ids: Sequence[str], draft_ids: Sequence[str] = ()) -> Erased:
    """Return how much would go with these visits and these forms; what is not there counts nothing."""
    visits = select(func.count()).select_from(tables.visit).where(_VISIT.id.in_(visit_ids))
    rechecks = select(func.count()).select_from(tables.recheck).where(_RECHECK.visit_id.in_(visit_ids))
    drafts = select(func.count()).select_from(tables.draft).where(_goes(visit_ids, draft_ids))
    return Erased(*(connection.execute(query).scalar_one() for query in (visits, rechecks, drafts)))


def _goes(visit_ids: Sequence[str], draft_ids: Sequence[str]) -> ColumnElement[bool]:
    return tables.draft.c.visit_id.in_(visit_ids) | tables.draft.c.id.in_(draft_ids)


def erase(connection: Connection, visit_ids: Sequence[str], *, draft_ids: Sequence[str] = (), who: str) -> Erased:
    """Remove visits with everything that hangs on them, and forms in progress; write down only how many went."""
    found = counted(connection, visit_ids, draft_ids)
    connection.execute(delete(tables.draft).where(_goes(visit_ids, draft_ids)))
    connection.execute(delete(tables.visit).where(_VISIT.id.in_(visit_ids)))
    for _ in range(found.visits):
        events.add(connection, "erased", who=who)
    return found


def _is_old(before_day: str) -> ColumnElement[bool]:
    """Tell old visits: of a day before this one, and neither changed nor rechecked since."""
    rechecked = exists().where(_RECHECK.visit_id == _VISIT.id, _RECHECK.at >= before_day)
    return (_VISIT.date < before_day) & (_VISIT.changed_at < before_day) & ~rechecked


def old(connection: Connection, *, before_day: str, limit: int) -> OldVisits:
    """Return the visits that nobody has touched since a day, the oldest first."""
    old_ones = select(func.count(), func.min(_VISIT.date)).where(_is_old(before_day))
    count, oldest = connection.execute(old_ones).one()
    wanted = select(_VISIT.id).where(_is_old(before_day)).order_by(_VISIT.date, _VISIT.id).limit(limit)
    return OldVisits(count, oldest, tuple(finding.oldest_first(connection, wanted)))


def old_among(connection: Connection, visit_ids: Sequence[str], *, before_day: str) -> list[str]:
    """Return those of these visits that are old, as they are now."""
    query = select(_VISIT.id).where(_VISIT.id.in_(visit_ids), _is_old(before_day))
    return list(connection.execute(query).scalars())


def settle(engine: Engine, *, place: str) -> None:
    """Bring what was erased out of SQLite's side file as well, where old pages would stay for a while.

    Raises
    ------
    TracesLeft
        If the disk does not let it: what was erased stays erased.
    """
    if engine.dialect.name != "sqlite":
        return
    raw = engine.raw_connection()
    try:
        raw.cursor().execute("PRAGMA wal_checkpoint(TRUNCATE)")  # a reader in between puts it off to the next
    except sqlite3.Error as error:
        raise TracesLeft(place) from error
    finally:
        raw.close()
