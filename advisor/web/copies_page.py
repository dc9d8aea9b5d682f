"""Daily copies on the screen: when the last one was made, how many are kept, and what kept one from being made."""

from dataclasses import dataclass

from flask import Blueprint, Response, redirect, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.phrases import mark
from advisor.errors import TwolightError
from advisor.records import copies
from advisor.web.desk import current_desk
from advisor.web.screen import screen
from advisor.web.sentences import sentence_of

daily_copies = Blueprint("daily_copies", __name__)


class CopiesNumber(TwolightError):
    """What was typed is no number of copies."""

    text = mark("Write a whole number from 0 to %(most)s; 0 makes no daily copies.")


@dataclass(frozen=True)
class CopiesShown:
    """What the page says: the day of the last copy, how many are kept and whether that may be changed, a problem."""

    last_day: str
    kept: int
    is_fixed: bool
    problem: str


def copies_shown() -> CopiesShown:
    """Return what is to be said of the daily copies."""
    desk = current_desk()
    found = copies.copies_in(desk.data_dir)
    problem: TwolightError | None = desk.copies.problem
    kept = copies.KEPT
    try:
        kept = copies.number_kept(desk.store)
    except copies.CopiesUnclear as error:
        problem = error
    told = "" if problem is None else sentence_of(problem, screen())
    return CopiesShown(copies.day_of(found[-1]) if found else "", kept, copies.is_fixed(), told)


@daily_copies.post("/copies")
def set_number() -> AnyResponse:
    """Store how many daily copies the shop keeps."""
    text = request.form.get("kept", "").strip()
    if not copies.is_number(text):
        raise CopiesNumber(most=str(copies.MOST))
    current_desk().store.set_setting(copies.SETTING, text)
    return redirect(url_for("visits.listing", _anchor="copies"), 303)


def after_saving(answer: Response) -> Response:
    """Begin the day's copy once something was sent and taken; the answer does not wait for it."""
    if request.method == "POST" and answer.status_code < 400:
        current_desk().see_to_copies()
    return answer
