"""Bring in: a prescription, a visit or a frame record from a file; nothing is kept before the optician says so."""

from dataclasses import replace
from typing import Any

from flask import Blueprint, Response, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.faults import Faults
from advisor.counsel.frame_record import plain_record
from advisor.counsel.frame_trace import FrameRecord, mirrored, read_frame_record
from advisor.counsel.recognised import recognise
from advisor.counsel.visit import Frame, parse_visit
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.web import counter_page, drafting
from advisor.web.brought import card, traced
from advisor.web.desk import current_desk
from advisor.web.drafting import Editing
from advisor.web.screen import screen
from advisor.web.stock_loader import current_shelf
from advisor.web.told import told_of
from advisor.web.traced_frame import frame_in, with_frame, without_outline

bring_in = Blueprint("bring_in", __name__)

MIRROR = "mirror"


@bring_in.get("/bring-in")
def start() -> Response:
    """Ask for a file."""
    return _page()


@bring_in.get("/bring-in/<draft_id>")
def for_draft(draft_id: str) -> Response:
    """Ask for the file of a frame for a form that is being filled in."""
    return _page(draft_id=draft_id)


@bring_in.post("/counter/bring-in")
def from_counter() -> AnyResponse:
    """Keep the form as it was typed and ask for the file of its frame."""
    store, sent = current_desk().store, drafting.of_form(request.form)
    try:
        kept = drafting.keep(store, sent)
    except (DraftChanged, DraftMissing) as error:
        told = told_of(store, sent, error)
        return make_response(counter_page.page(sent, current_shelf(store), told=told), 409)
    if kept.draft_id is None:
        return redirect(url_for("bring_in.start"), 303)
    return redirect(url_for("bring_in.for_draft", draft_id=kept.draft_id), 303)


@bring_in.post("/bring-in")
def read() -> Response:
    """Show what a file holds; it is not kept."""
    sent, draft_id = request.files.get("file"), request.form.get("draft", "")
    content = sent.read() if sent else b""
    try:
        found = recognise(content)
    except Faults as error:
        return _page(draft_id=draft_id, faults=error.lines(screen()), no_file=not content, status=422)
    if isinstance(found, FrameRecord):
        return _frame_page(draft_id, plain_record(content), found)
    return _page(draft_id=draft_id, cards=[card(one, screen()) for one in found])


@bring_in.post("/bring-in/begin")
def begin() -> AnyResponse:
    """Begin a form with a visit that was shown."""
    store = current_desk().store
    visit = parse_visit(request.form.get("visit", ""))
    editing = drafting.keep(store, drafting.of_copy(visit, current_shelf(store)))
    return redirect(url_for("counter.draft", draft_id=editing.draft_id), 303)


@bring_in.post("/bring-in/frame")
def frame() -> AnyResponse:
    """Put a frame that was shown into the form, or show it mirrored first."""
    form = request.form
    draft_id, text, is_turned = form.get("draft", ""), form.get("record", ""), form.get("turned") == "1"
    record = read_frame_record(text.encode())
    if form.get("do") == MIRROR:
        return _frame_page(draft_id, text, record, is_turned=not is_turned)
    used = mirrored(record.frame) if is_turned else record.frame
    return _into_form(draft_id, used)


@bring_in.post("/bring-in/<draft_id>/remove")
def remove(draft_id: str) -> AnyResponse:
    """Take the outline out of a form; undo brings it back."""
    return _into_form(draft_id, None)


def _into_form(draft_id: str, used: Frame | None) -> AnyResponse:
    """Keep the form with a frame, or without its outline; where none is open, begin one."""
    store = current_desk().store
    editing = _form(draft_id)
    fields = without_outline(editing.fields) if used is None else with_frame(editing.fields, used)
    kept = drafting.keep(store, replace(editing, fields=fields))
    return redirect(url_for("counter.draft", draft_id=kept.draft_id, _anchor="h-frame"), 303)


def _form(draft_id: str) -> Editing:
    store = current_desk().store
    return drafting.of_draft(store.get_draft(draft_id)) if draft_id else drafting.blank(current_shelf(store))


def _frame_page(draft_id: str, text: str, record: FrameRecord, *, is_turned: bool = False) -> Response:
    shown = mirrored(record.frame) if is_turned else record.frame
    drawn = traced(record, shown, screen())
    return _page(draft_id=draft_id, record=text, is_turned=is_turned, traced=drawn)


def _page(*, draft_id: str = "", status: int = 200, **found: Any) -> Response:
    """Show the page; a form that it would bring a frame into must be there, and says whether it holds an outline."""
    holds_outline = bool(draft_id) and frame_in(_form(draft_id).fields) is not None
    values = {"faults": [], "no_file": False, "cards": None, "traced": None, **found}
    return make_response(
        render_template("bring_in.html", draft_id=draft_id, holds_outline=holds_outline, **values), status
    )
