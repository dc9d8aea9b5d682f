"""The Counter: a form whose figures are worked out as it is filled in."""

from flask import Blueprint, Response, make_response, redirect, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.errors import TwolightError
from advisor.web import counter_page, demo_wearers
from advisor.web.desk import current_desk
from advisor.web.screen import screen
from advisor.web.stock_loader import current_shelf

counter = Blueprint("counter", __name__)


def is_live() -> bool:
    """Tell whether a page asks for a part of itself."""
    return request.headers.get("HX-Request") == "true"


@counter.get("/")
def start() -> str:
    """Show an empty form."""
    shelf = current_shelf(current_desk().store)
    return counter_page.page(counter_page.blank(shelf), shelf)


@counter.get("/counter/<draft_id>")
def draft(draft_id: str) -> str:
    """Show a form again as it was typed."""
    store = current_desk().store
    return counter_page.page(counter_page.of_draft(store.get_draft(draft_id)), current_shelf(store))


@counter.post("/counter")
def work_out() -> AnyResponse:
    """Keep what was typed and work it out: the figures alone for a live page, else the whole page."""
    sent = counter_page.changed(counter_page.of_form(request.form), request.form.get("do", ""))
    return _figures(sent) if is_live() else _kept(sent)


def _kept(sent: counter_page.Editing) -> AnyResponse:
    store = current_desk().store
    editing = counter_page.keep(store, sent)
    if editing.draft_id is None:
        return make_response(counter_page.page(editing, current_shelf(store)))
    return redirect(url_for("counter.draft", draft_id=editing.draft_id, _anchor="options"), 303)


def _figures(sent: counter_page.Editing) -> Response:
    """Answer a live page; what goes wrong is said where the figures would stand, with status 200."""
    store = current_desk().store
    editing, notice = sent, ""
    try:
        editing = counter_page.keep(store, sent)
    except TwolightError as error:
        notice = screen().gettext(getattr(error, "text", str(error))) % getattr(error, "figures", {})
    answer = make_response(counter_page.part(editing, current_shelf(store), notice=notice))
    if editing.draft_id is not None:
        answer.headers["HX-Replace-Url"] = url_for("counter.draft", draft_id=editing.draft_id)
    return answer


@counter.post("/demo")
def open_demo() -> AnyResponse:
    """Begin a form with a demo wearer's visit."""
    store = current_desk().store
    visit = demo_wearers.wearer(request.form.get("wearer", ""))
    editing = counter_page.keep(store, counter_page.of_copy(visit, current_shelf(store)))
    return redirect(url_for("counter.draft", draft_id=editing.draft_id), 303)
