"""Who did what, and when: one row for each thing done, without contents and without the name of any wearer.

A row about a visit points at it. When the visit is erased the row stays and points at nothing.
"""

from dataclasses import astuple, dataclass
from typing import Literal, NamedTuple

from sqlalchemy import Connection, delete, insert, select, tuple_

from advisor.records import tables

_EVENT = tables.event.c

What = Literal[
    "saved",
    "changed",
    "copied",
    "ordered",
    "rechecked",
    "linked",
    "sheet",
    "care",
    "order",
    "bench",
    "exported",
    "erased",
    "range-changed",
    "backup",
    "restored",
    "signed-in",
    "signed-out",
]
HERE = "local"  # whoever works at this computer, while nobody signs in
LONGEST_WHO = 80
KEPT_DAYS = 731  # 24 months


class EventKey(NamedTuple):
    """Where a page of the list ended."""

    at: str
    id: str


@dataclass(frozen=True)
class Event:
    """One thing that was done; ``visit_id`` is None where it was about no visit, or its visit has been erased."""

    id: str
    at: str
    who: str
    what: str
    visit_id: str | None

    @property
    def key(self) -> EventKey:
        """Where the list goes on after this row."""
        return EventKey(self.at, self.id)


def add(connection: Connection, what: What, *, who: str, visit_id: str | None = None) -> Event:
    """Write down that something was done, and drop what was written down more than ``KEPT_DAYS`` ago."""
    connection.execute(delete(tables.event).where(_EVENT.at < tables.days_ago(KEPT_DAYS)))
    event = Event(tables.new_id(), tables.now(), who[:LONGEST_WHO] or HERE, what, visit_id)
    connection.execute(insert(tables.event).values(astuple(event)))
    return event


def page(connection: Connection, *, visit_id: str | None, limit: int, after: EventKey | None) -> list[Event]:
    """Return what was done, the last first: of one visit, or of everything."""
    query = select(tables.event).order_by(_EVENT.at.desc(), _EVENT.id.desc()).limit(limit)
    if visit_id is not None:
        query = query.where(_EVENT.visit_id == visit_id)
    if after is not None:
        query = query.where(tuple_(_EVENT.at, _EVENT.id) < tuple(after))
    return [Event(*row) for row in connection.execute(query)]


def last(connection: Connection, what: What, *, visit_id: str) -> Event | None:
    """Return when something was last done with a visit, or None where it was not."""
    query = select(tables.event).where(_EVENT.visit_id == visit_id, _EVENT.what == what)
    row = connection.execute(query.order_by(_EVENT.at.desc(), _EVENT.id.desc()).limit(1)).first()
    return Event(*row) if row else None
