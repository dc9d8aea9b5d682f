"""The Counter's form shown again as it was sent when the records fail under it: what was typed is never lost with them.

Nothing is asked of the records here: they may be full, held by another program, damaged or gone.
"""

from flask import Response, make_response, render_template, request

from advisor.counsel.phrases import mark
from advisor.records.trouble import StoreError
from advisor.web import counter_page, drafting
from advisor.web.counter import is_live
from advisor.web.desk import current_desk
from advisor.web.screen import screen
from advisor.web.sentences import sentence_of
from advisor.web.stock_loader import last_shelf
from advisor.web.told import Told

STAYS = mark("What you typed still stands in the form; leave this page open until it is saved.")


def holds_form() -> bool:
    """Tell whether what was sent is the Counter's form."""
    return request.method == "POST" and {"token", "option_count"} <= set(request.form)


def shown(error: StoreError, *, status: int) -> Response:
    """Show the form as it was sent, with what is wrong; a live page says it where figures would stand."""
    told = Told(f"{sentence_of(error, screen())} {screen().gettext(STAYS)}")
    sent, shelf = drafting.of_form(request.form), last_shelf(current_desk().opened)
    if is_live():
        answer = make_response(counter_page.part(sent, shelf, told=told))
        answer.headers["HX-Retarget"] = answer.headers["HX-Reselect"] = "#figures"
        return answer
    asks_nothing = {"first_steps": tuple, "visit_story": lambda _visit_id: None}
    page = render_template("counter.html", live=False, **counter_page.context(sent, shelf, told=told), **asks_nothing)
    return make_response(page, status)
