"""Names hidden on the screen, for when others can see it: a switch that this browser keeps, and what it covers.

Hidden are names and notes in lists, names in headings, and the name in its field while nobody types there. Nothing is
hidden on paper, and nothing that is stored changes.
"""

from flask import Blueprint, has_request_context, redirect, request
from werkzeug.wrappers import Response as AnyResponse

from advisor.web.language_switch import YEAR_S, local_path

names_shown = Blueprint("names_shown", __name__)

COOKIE = "names"
HIDDEN = "hidden"
COVERED = "•••"


def names_hidden() -> bool:
    """Tell whether names are hidden in this browser."""
    return has_request_context() and request.cookies.get(COOKIE) == HIDDEN


def covered(text: str | None) -> str:
    """Return a name or a note as the screen may show it."""
    return COVERED if text and names_hidden() else text or ""


@names_shown.post("/names")
def switch() -> AnyResponse:
    """Hide names or show them again, and go back to where the form stood."""
    answer = redirect(local_path(request.form.get("back", "")), 303)
    chosen = HIDDEN if request.form.get("names") == HIDDEN else "shown"
    answer.set_cookie(COOKIE, chosen, max_age=YEAR_S, httponly=True, samesite="Strict")
    return answer
