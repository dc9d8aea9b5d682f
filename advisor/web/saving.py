"""Saving a form as a visit: once, however often it is sent, and never over a change that its editor has not seen."""

import datetime as dt
import hashlib

from advisor import __version__
from advisor.counsel.compare import compare
from advisor.counsel.visit import Visit, visit_to_json
from advisor.records.drafts import DraftMissing
from advisor.records.saved_forms import SentForm
from advisor.records.store import Store
from advisor.records.visits import SavedVisit
from advisor.web.drafting import Editing, of_draft
from advisor.web.forms import visit_from_fields
from advisor.web.operators import current_operator
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf
from advisor.web.undoing import difference


def dated(visit: Visit) -> Visit:
    """Return the visit with today's date where it has none, so that it reads the same in a year."""
    return visit if visit.date else visit.model_copy(update={"date": dt.date.today()})


def save_form(store: Store, editing: Editing, shelf: Shelf) -> SavedVisit:
    """Save a form as a visit and drop its draft.

    Raises
    ------
    Faults
        If the form cannot be read as a visit; nothing is saved.
    VisitChanged, VisitMissing
        If the visit was saved or erased by somebody else since; nothing is overwritten.
    DraftChanged
        If another window has changed the form since; nothing is saved.
    """
    visit = dated(visit_from_fields(editing.fields))
    answer = compare(visit, shelf.stock, translator=screen())
    over = editing.visit_id is not None and editing.visit_edit is not None
    return store.save_visit(
        visit_to_json(visit),
        range_toml=shelf.toml,
        version=__version__,
        answer_json=answer.model_dump_json(exclude_unset=True),
        visit_id=editing.visit_id if over else None,
        edit_seen=editing.visit_edit if over else None,
        form=SentForm(editing.token, editing.draft_id, _edit_seen(store, editing)),
        who=current_operator(),
    )


def _edit_seen(store: Store, editing: Editing) -> int | None:
    """Return the edit of the draft that the form has seen; a draft that says the same has been seen, too."""
    if editing.draft_id is None:
        return None
    try:
        kept = of_draft(store.get_draft(editing.draft_id))
    except DraftMissing:
        return editing.draft_edit
    return editing.draft_edit if difference(kept.fields, editing.fields) else kept.draft_edit


def as_new(editing: Editing) -> Editing:
    """Return the form cut loose from the visit it began from; sent twice, it is the same new form both times."""
    token = hashlib.sha256(f"{editing.token} as new".encode()).hexdigest()[:32]
    return Editing(editing.fields, token, editing.draft_id, editing.draft_edit)
