"""The Counter: a form whose figures are worked out as it is filled in."""

from flask import Blueprint, Response, make_response, redirect, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.errors import TwolightError
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.web import counter_page, demo_wearers, drafting
from advisor.web.desk import current_desk
from advisor.web.drafting import Editing
from advisor.web.first_run import demo_was_tried
from advisor.web.stock_loader import current_shelf
from advisor.web.told import Told, told_of
from advisor.web.wishes import APART

counter = Blueprint("counter", __name__)


def is_live() -> bool:
    """Tell whether a page asks for a part of itself."""
    return request.headers.get("HX-Request") == "true"


@counter.get("/")
def start() -> str:
    """Show an empty form."""
    shelf = current_shelf(current_desk().store)
    return counter_page.page(drafting.blank(shelf), shelf)


@counter.get("/counter/<draft_id>")
def draft(draft_id: str) -> AnyResponse | str:
    """Show a form again as it was typed; one that was saved meanwhile is the saved visit."""
    store = current_desk().store
    try:
        editing = drafting.of_draft(store.get_draft(draft_id))
    except DraftMissing:
        visit_id = store.visit_of_draft(draft_id)
        if visit_id is None:
            raise
        return redirect(url_for("visits.reopen", visit_id=visit_id))
    return counter_page.page(editing, current_shelf(store))


@counter.post("/counter")
def work_out() -> AnyResponse:
    """Keep what was typed, do what a button asks for and work it out: a live page takes its part of the answer."""
    store, wish = current_desk().store, request.form.get("do", "")
    sent = drafting.of_form(request.form)
    try:
        editing = drafting.keep(store, drafting.apart(sent) if wish == APART else sent, wish=wish)
    except (DraftChanged, DraftMissing) as error:
        return _not_kept(sent, told_of(store, sent, error), 409 if isinstance(error, DraftChanged) else 404)
    except TwolightError as error:
        if not is_live():
            raise
        return _not_kept(sent, told_of(store, sent, error), 200)
    return _live(editing, whole=bool(wish)) if is_live() else _whole(editing)


def _whole(editing: Editing) -> AnyResponse:
    """Answer a page without scripting; what could not be kept whole is shown, not fetched again."""
    if editing.draft_id is None or not editing.is_whole:
        return make_response(counter_page.page(editing, current_shelf(current_desk().store)))
    return redirect(url_for("counter.draft", draft_id=editing.draft_id, _anchor="options"), 303)


def _live(editing: Editing, *, whole: bool) -> Response:
    """Answer a live page: the figures alone while somebody types, the whole form after a button."""
    shelf = current_shelf(current_desk().store)
    answer = make_response(counter_page.page(editing, shelf) if whole else counter_page.part(editing, shelf))
    if editing.draft_id is not None:
        answer.headers["HX-Replace-Url"] = url_for("counter.draft", draft_id=editing.draft_id)
    return answer


def _not_kept(sent: Editing, told: Told, status: int) -> AnyResponse:
    """Say why nothing was kept, and leave the form as sent; a live page says it where figures would stand."""
    shelf = current_shelf(current_desk().store)
    if not is_live():
        return make_response(counter_page.page(sent, shelf, told=told), status)
    answer = make_response(counter_page.part(sent, shelf, told=told))
    answer.headers["HX-Retarget"] = answer.headers["HX-Reselect"] = "#figures"
    return answer


@counter.post("/demo")
def open_demo() -> AnyResponse:
    """Begin a form with a demo wearer's visit."""
    store = current_desk().store
    visit = demo_wearers.wearer(request.form.get("wearer", ""))
    editing = drafting.keep(store, drafting.of_copy(visit, current_shelf(store)))
    demo_was_tried(store)
    return redirect(url_for("counter.draft", draft_id=editing.draft_id), 303)
