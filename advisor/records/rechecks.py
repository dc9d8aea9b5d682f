"""Return visits as stored rows: what came of each, beside the visit it is about."""

from dataclasses import astuple, dataclass, replace

from sqlalchemy import Connection, insert, select, update

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import events, tables, visits

_RECHECK = tables.recheck.c


@dataclass(frozen=True)
class SavedRecheck:
    """A recorded outcome; ``new_visit_id`` is the visit of the new order, if one came of it."""

    id: str
    visit_id: str
    at: str
    outcome: str
    who_pays: str
    new_visit_id: str | None
    content_json: str


class RecheckMissing(TwolightError):
    """There is no such record, or its visit has been erased."""

    text = mark("There is no such record; its visit may have been erased.")


class RecheckChanged(TwolightError):
    """Another outcome was recorded under this identifier before."""

    text = mark("An outcome was recorded from this form before, and it was another one; nothing was overwritten.")


class OwnOrder(TwolightError):
    """The visit that was rechecked is named as the new order that came of it."""

    text = mark("A visit is never its own new order; choose the visit of the new order.")


def add(
    connection: Connection,
    content_json: str,
    *,
    visit_id: str,
    outcome: str,
    who_pays: str,
    new_visit_id: str | None,
    recheck_id: str | None,
    who: str = events.HERE,
) -> SavedRecheck:
    """Store an outcome; one sent twice under the same identifier is stored once, another one is refused."""
    visits.find(connection, visit_id)
    if new_visit_id is not None:
        _find_other(connection, new_visit_id, visit_id)
    key = recheck_id or tables.new_id()
    saved = SavedRecheck(key, visit_id, tables.now(), outcome, who_pays, new_visit_id, content_json)
    there = connection.execute(select(tables.recheck).where(_RECHECK.id == key)).first()
    if there is not None:
        stored = SavedRecheck(*there)
        if replace(saved, at=stored.at) != stored:
            raise RecheckChanged
        return stored
    connection.execute(insert(tables.recheck).values(astuple(saved)))
    events.add(connection, "rechecked", who=who, visit_id=visit_id)
    return saved


def find(connection: Connection, recheck_id: str) -> SavedRecheck:
    """Return a record, or raise RecheckMissing."""
    row = connection.execute(select(tables.recheck).where(_RECHECK.id == recheck_id)).first()
    if row is None:
        raise RecheckMissing
    return SavedRecheck(*row)


def of_visit(connection: Connection, visit_id: str) -> list[SavedRecheck]:
    """Return what was recorded of a visit, the last first."""
    query = select(tables.recheck).where(_RECHECK.visit_id == visit_id).order_by(_RECHECK.at.desc(), _RECHECK.id)
    return [SavedRecheck(*row) for row in connection.execute(query)]


def leading_to(connection: Connection, visit_id: str) -> list[SavedRecheck]:
    """Return the records whose new order is this visit, the last first."""
    query = select(tables.recheck).where(_RECHECK.new_visit_id == visit_id)
    return [SavedRecheck(*row) for row in connection.execute(query.order_by(_RECHECK.at.desc(), _RECHECK.id))]


def link(connection: Connection, recheck_id: str, *, new_visit_id: str, who: str = events.HERE) -> SavedRecheck:
    """Say which visit is the new order that came of a record, or raise RecheckMissing, VisitMissing or OwnOrder."""
    found = find(connection, recheck_id)
    _find_other(connection, new_visit_id, found.visit_id)
    connection.execute(update(tables.recheck).where(_RECHECK.id == recheck_id).values(new_visit_id=new_visit_id))
    events.add(connection, "linked", who=who, visit_id=found.visit_id)
    return find(connection, recheck_id)


def _find_other(connection: Connection, new_visit_id: str, visit_id: str) -> None:
    if new_visit_id == visit_id:
        raise OwnOrder
    visits.find(connection, new_visit_id)
