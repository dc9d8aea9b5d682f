"""Calm pages for what goes wrong: one table of texts by status, one of statuses by error class.

No page repeats what was sent, and the log names the place in the code but no value: a wearer's data may be in either.
"""

from flask import Flask, Response, make_response, render_template
from werkzeug.exceptions import HTTPException, InternalServerError

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.erasing import TracesLeft
from advisor.records.rechecks import RecheckMissing
from advisor.records.trouble import StoreError, StoreFull
from advisor.records.visits import VisitChanged, VisitMissing
from advisor.web import form_stays
from advisor.web.screen import screen
from advisor.web.sentences import sentence_of

TEXTS: dict[int, tuple[str, str]] = {
    400: (mark("This request could not be read"), mark("Go back and try once more.")),
    403: (mark("This request came from another site"), mark("Nothing was changed. Open the page here and try again.")),
    404: (mark("There is no such page"), mark("It may have been erased, or the address is mistyped.")),
    405: (
        mark("This address does not work that way"),
        mark("Nothing was changed. Go back and use the page's buttons."),
    ),
    409: (mark("This was changed meanwhile"), mark("Nothing was overwritten.")),
    413: (mark("This is too large"), mark("Nothing was changed. A file may have at most 4 MB.")),
    500: (
        mark("Something went wrong in the program"),
        mark("What you saved before is safe. Go back and try once more."),
    ),
    503: (mark("The records cannot be used"), mark("Nothing was saved.")),
}
# Of errors of our own alone: no HTTP error is raised with these.
OWN_TEXTS: dict[int, tuple[str, str]] = {
    507: (mark("There is no room left"), mark("Nothing was saved.")),
}

# The first class that fits counts.
STATUSES: tuple[tuple[type[TwolightError], int], ...] = (
    (VisitMissing, 404),
    (DraftMissing, 404),
    (RecheckMissing, 404),
    (VisitChanged, 409),
    (DraftChanged, 409),
    (StoreFull, 507),
    (TracesLeft, 507),
    (StoreError, 503),
    (TwolightError, 400),
)


def _page(status: int, sentence: str | None = None) -> Response:
    title, text = (TEXTS | OWN_TEXTS).get(status, TEXTS[500 if status >= 500 else 400])
    told = sentence or screen().gettext(text)
    page = render_template("error.html", title=title, sentence=told, screen_back="/")  # no address is repeated
    return make_response(page, status)


def http_error(error: HTTPException) -> Response:
    """Answer an HTTP error with its page, keeping headers such as Allow; Flask itself answers redirects."""
    page = _page(error.code or 500)
    for name, value in error.get_headers():
        if name.lower() not in ("content-type", "content-length"):
            page.headers[name] = value
    return page


def program_error(error: TwolightError) -> Response:
    """Answer an error of the program's own with its sentence."""
    status = next(status for kind, status in STATUSES if isinstance(error, kind))
    if isinstance(error, StoreError) and form_stays.holds_form():
        return form_stays.shown(error, status=status)
    return _page(status, sentence_of(error, screen()))


def unforeseen(_error: InternalServerError) -> Response:
    """Answer anything else; what happened is in the log."""
    return _page(500)


def register(app: Flask) -> None:
    """Install the pages."""
    app.register_error_handler(HTTPException, http_error)
    app.register_error_handler(TwolightError, program_error)
    app.register_error_handler(InternalServerError, unforeseen)
