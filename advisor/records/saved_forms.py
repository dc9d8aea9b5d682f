"""Which visit each form became: a form sent twice is saved once, and never over what its window had not seen."""

from dataclasses import dataclass

from sqlalchemy import Connection, Row, insert, select, update

from advisor.records import drafts, tables, visits
from advisor.records.visits import Made, SavedVisit, VisitChanged

_FORM = tables.saved_form.c


@dataclass(frozen=True)
class SentForm:
    """What a form says of itself: the token drawn when it was first shown, and the draft it is kept in, if any."""

    token: str
    draft_id: str | None = None
    draft_edit: int | None = None


def save(connection: Connection, made: Made, *, form: SentForm, over: tuple[str, int] | None) -> SavedVisit:
    """Store what a form came to and drop its draft; ``over`` is the visit and the edit that the form began from.

    Raises
    ------
    VisitChanged
        If the visit, or this very form in another window, was saved with something that this window has not seen.
    DraftChanged
        If the form was changed in another window and not saved there.
    """
    earlier = _row(connection, form.token)
    if earlier is not None:
        over = earlier.visit_id, earlier.visit_edit
    saved = _already(connection, made, over)
    if saved is not None and earlier is not None:
        return saved
    if earlier is not None and earlier.draft_edit != form.draft_edit:
        raise VisitChanged(visits.find(connection, earlier.visit_id))
    if saved is None:
        saved = visits.add(connection, made) if over is None else visits.change(connection, made, over=over)
    if form.draft_id is not None:
        drafts.take(connection, form.draft_id, edit_seen=form.draft_edit)
    row = {"visit_id": saved.id, "visit_edit": saved.edit, "draft_id": form.draft_id, "draft_edit": form.draft_edit}
    if earlier is None:
        connection.execute(insert(tables.saved_form).values(token=form.token, **row))
    else:
        connection.execute(update(tables.saved_form).where(_FORM.token == form.token).values(row))
    return saved


def visit_of_draft(connection: Connection, draft_id: str) -> str | None:
    """Return the visit that a draft was saved as."""
    return connection.execute(select(_FORM.visit_id).where(_FORM.draft_id == draft_id)).scalar()


def _row(connection: Connection, token: str) -> Row[tuple[str, str, int, str | None, int | None]] | None:
    return connection.execute(select(tables.saved_form).where(_FORM.token == token)).first()


def _already(connection: Connection, made: Made, over: tuple[str, int] | None) -> SavedVisit | None:
    """Return the stored visit if it holds this very content: the form was sent twice."""
    if over is None:
        return None
    stored = visits.find(connection, over[0], held=True)  # the same form, sent twice at once, is looked at one by one
    return stored if (stored.visit_json, stored.range_hash) == (made.visit_json, made.range_hash) else None
