"""Saving a form as a visit: once, however often it is sent, and never over a change that its editor has not seen."""

import datetime as dt
from dataclasses import replace

from advisor import __version__
from advisor.counsel.compare import compare
from advisor.counsel.visit import Visit, visit_to_json
from advisor.records.store import Store
from advisor.records.visits import SavedVisit, VisitMissing
from advisor.web.counter_page import Editing
from advisor.web.forms import visit_from_fields
from advisor.web.saved_forms import SavedForms
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf


def dated(visit: Visit) -> Visit:
    """Return the visit with today's date where it has none, so that it reads the same in a year."""
    return visit if visit.date else visit.model_copy(update={"date": dt.date.today()})


def save_form(store: Store, forms: SavedForms, editing: Editing, shelf: Shelf) -> SavedVisit:
    """Save a form as a visit and drop its draft.

    Raises
    ------
    Faults
        If the form cannot be read as a visit; nothing is saved.
    VisitChanged
        If the visit was saved by somebody else since; nothing is overwritten.
    """
    visit = dated(visit_from_fields(editing.fields))
    answer = compare(visit, shelf.stock, translator=screen())
    with forms.lock:
        answer_json = answer.model_dump_json(exclude_unset=True)
        saved = _save(store, _seen(forms, editing), visit_to_json(visit), answer_json, shelf)
        forms.remember(editing.token, saved)
    if editing.draft_id is not None:
        store.delete_draft(editing.draft_id)
    return saved


def _seen(forms: SavedForms, editing: Editing) -> tuple[str, int] | None:
    """Return the visit a form is saved over and the edit of it that the form began from; None for a new one."""
    if editing.visit_id is not None and editing.visit_edit is not None:
        return editing.visit_id, editing.visit_edit
    return forms.find(editing.token)


def _save(store: Store, over: tuple[str, int] | None, visit_json: str, answer_json: str, shelf: Shelf) -> SavedVisit:
    visit_id, edit_seen = over or (None, None)
    if visit_id is not None and (same := _already(store, visit_id, visit_json, shelf)) is not None:
        return same
    return store.save_visit(
        visit_json,
        range_toml=shelf.toml,
        version=__version__,
        answer_json=answer_json,
        visit_id=visit_id,
        edit_seen=edit_seen,
    )


def _already(store: Store, visit_id: str, visit_json: str, shelf: Shelf) -> SavedVisit | None:
    """Return the stored visit if it holds this very content already: the form was sent twice."""
    try:
        stored = store.get_visit(visit_id)
    except VisitMissing:
        return None
    return stored if (stored.visit_json, stored.range_hash) == (visit_json, shelf.hash) else None


def as_new(editing: Editing) -> Editing:
    """Return the form cut loose from the visit it began from."""
    return replace(Editing(editing.fields), draft_id=editing.draft_id, draft_edit=editing.draft_edit)
