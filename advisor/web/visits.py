"""Visits: save, list, find, reopen, copy."""

from flask import Blueprint, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.faults import Faults
from advisor.counsel.phrases import mark
from advisor.counsel.visit import parse_visit
from advisor.records.visits import PageKey, VisitChanged
from advisor.web import counter_page
from advisor.web.counter import is_live
from advisor.web.desk import current_desk
from advisor.web.saving import as_new, save_form
from advisor.web.stock_loader import current_shelf

visits = Blueprint("visits", __name__)

LINES = 50
NOT_SAVED = mark("Not saved yet: mend what is marked below, then save again.")
RANGE_CHANGED = mark(
    "The range has changed since this visit was saved: the figures here are worked out with today's. "
    "Papers of the saved visit keep the range of that day."
)


@visits.post("/visits")
def save() -> AnyResponse:
    """Save the form as a visit, or show it again with what keeps it from being saved."""
    desk = current_desk()
    shelf, editing = current_shelf(desk.store), counter_page.of_form(request.form)
    editing = as_new(editing) if request.form.get("do") == "new" else editing
    try:
        saved = save_form(desk.store, desk.saved_forms, editing, shelf)
    except Faults:
        return _shown_again(editing, NOT_SAVED, 422)
    except VisitChanged as error:
        return _shown_again(editing, error.text, 409)
    return redirect(url_for("visits.reopen", visit_id=saved.id), 303)


def _shown_again(editing: counter_page.Editing, notice: str, status: int) -> AnyResponse:
    store = current_desk().store
    kept = counter_page.keep(store, editing)
    return make_response(counter_page.page(kept, current_shelf(store), notice=notice, changed=status == 409), status)


@visits.get("/visits")
def listing() -> str:
    """List the visits, the last changed first."""
    return _list("", None)


@visits.post("/visits/find")
def find() -> str:
    """List the visits that fit; the search travels in the body, never in an address that is kept somewhere."""
    form = request.form
    after = form.get("after_changed", ""), form.get("after_id", "")
    return _list(form.get("search", "")[:200], PageKey(*after) if all(after) else None)


def _list(search: str, after: PageKey | None) -> str:
    found = current_desk().store.list_visits(search, limit=LINES + 1, after=after)
    lines = found[:LINES]
    more = lines[-1].key if len(found) > LINES else None
    template = "parts/visit_lines.html" if is_live() else "visits.html"
    return render_template(template, lines=lines, search=search, more=more, later=after is not None)


@visits.get("/visits/<visit_id>")
def reopen(visit_id: str) -> str:
    """Show a saved visit in the Counter."""
    store = current_desk().store
    saved, shelf = store.get_visit(visit_id), current_shelf(store)
    editing = counter_page.of_visit(saved, parse_visit(saved.visit_json), shelf)
    notice = "" if saved.range_hash == shelf.hash else RANGE_CHANGED
    return counter_page.page(editing, shelf, notice=notice, saved=True)


@visits.post("/visits/<visit_id>/copy")
def copy(visit_id: str) -> AnyResponse:
    """Begin a new form with what a saved visit holds; its date is left to be today's."""
    store = current_desk().store
    visit = parse_visit(store.get_visit(visit_id).visit_json).model_copy(update={"date": None, "ordered": None})
    editing = counter_page.keep(store, counter_page.of_copy(visit, current_shelf(store)))
    return redirect(url_for("counter.draft", draft_id=editing.draft_id), 303)
