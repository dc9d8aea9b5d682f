"""Visits: save, list, find, reopen, copy; of two saves of one visit the later is shown both and decides."""

from dataclasses import replace

from flask import Blueprint, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.faults import Faults
from advisor.counsel.phrases import mark
from advisor.counsel.visit import parse_visit
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.visits import PageKey, SavedVisit, VisitChanged, VisitMissing
from advisor.web import conflict, counter_page, drafting
from advisor.web.counter import is_live
from advisor.web.desk import current_desk
from advisor.web.drafting import Editing
from advisor.web.operators import current_operator
from advisor.web.saving import as_new, save_form
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf, current_shelf
from advisor.web.then_now import is_of_today
from advisor.web.told import NOTHING, Told, told_of

visits = Blueprint("visits", __name__)

LINES = 50
NOT_SAVED = mark("Not saved yet: mend what is marked below, then save again.")
RANGE_CHANGED = mark(
    "The range has changed since this visit was saved: the figures here are worked out with today's. "
    "Papers of the saved visit keep the range of that day."
)
VERSION_CHANGED = mark(
    "This visit was saved with version %(version)s of the program: the figures here are worked out with today's."
)


@visits.post("/visits")
def save() -> AnyResponse:
    """Save the form as a visit, or show it again with what keeps it from being saved."""
    sent = drafting.of_form(request.form)
    return _saved(as_new(sent) if request.form.get("do") == "new" else sent)


@visits.post("/visits/<visit_id>/over")
def save_over(visit_id: str) -> AnyResponse:
    """Save the form over the edit that was shown beside it, and over no other."""
    edit = request.form.get("do", "")
    seen = int(edit) if edit.isascii() and edit.isdigit() and len(edit) < 10 else 0
    return _saved(conflict.over(drafting.of_form(request.form), visit_id, edit=seen))


@visits.post("/visits/<visit_id>/take")
def take_stored(visit_id: str) -> AnyResponse:
    """Drop the form that could not be saved, and show the visit that is stored."""
    store = current_desk().store
    store.get_visit(visit_id)
    store.delete_draft(request.form.get("draft", ""))
    return redirect(url_for("visits.reopen", visit_id=visit_id), 303)


def _saved(sent: Editing) -> AnyResponse:
    store = current_desk().store
    shelf = current_shelf(store)
    try:
        saved = save_form(store, sent, shelf)
    except Faults:
        return _shown_again(sent, Told(NOT_SAVED), 422)
    except VisitChanged as error:
        both = conflict.conflict_of(sent, error.stored, shelf)
        return _shown_again(_beside(sent, error.stored), Told(error.text, changed=True, conflict=both), 409)
    except VisitMissing as error:
        return _shown_again(drafting.apart(sent, cut_loose=True), Told(error.text), 409)
    except DraftChanged as error:
        return _shown_again(sent, told_of(store, sent, error), 409)
    return redirect(url_for("visits.reopen", visit_id=saved.id), 303)


def _beside(sent: Editing, stored: SavedVisit) -> Editing:
    """Return the form tied to the visit that was saved first, and to no edit of it that there is now."""
    seen = sent.visit_edit if sent.visit_id == stored.id and sent.visit_edit is not None else 0
    return replace(sent, visit_id=stored.id, visit_edit=seen)


def _shown_again(sent: Editing, told: Told, status: int) -> AnyResponse:
    """Show the form as it was sent, kept if it can be: in its draft, or, where that is gone, in one of its own."""
    store = current_desk().store
    try:
        kept = drafting.keep(store, sent)
    except DraftMissing:
        kept = drafting.keep(store, drafting.apart(sent))
    except DraftChanged as error:
        kept, told = sent, told if told.reload else told_of(store, sent, error)
    return make_response(counter_page.page(kept, current_shelf(store), told=told), status)


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
    editing = drafting.of_visit(saved, parse_visit(saved.visit_json), shelf)
    told = NOTHING if is_of_today(saved, shelf) else _of_that_day(saved, shelf)
    return counter_page.page(editing, shelf, told=told, saved=True)


def _of_that_day(saved: SavedVisit, shelf: Shelf) -> Told:
    """Say that figures may have changed since a visit was saved, and lead to both side by side."""
    then = url_for("then_now.then", visit_id=saved.id)
    if saved.range_hash != shelf.hash:
        return Told(screen().gettext(RANGE_CHANGED), then=then)
    return Told(screen().gettext(VERSION_CHANGED) % {"version": saved.version}, then=then)


@visits.post("/visits/<visit_id>/copy")
def copy(visit_id: str) -> AnyResponse:
    """Begin a new form with what a saved visit holds; its date is left to be today's."""
    store = current_desk().store
    visit = parse_visit(store.get_visit(visit_id).visit_json).model_copy(update={"date": None, "ordered": None})
    editing = drafting.keep(store, drafting.of_copy(visit, current_shelf(store)))
    store.record_event("copied", who=current_operator(), visit_id=visit_id)
    return redirect(url_for("counter.draft", draft_id=editing.draft_id), 303)
