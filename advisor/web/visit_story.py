"""What happened to a saved visit after it was saved: ordered, rechecked, remade; and marking what was ordered."""

import datetime as dt
from dataclasses import dataclass

from flask import Blueprint, abort, redirect, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.visit import parse_visit, visit_to_json
from advisor.records.rechecks import RecheckMissing, SavedRecheck
from advisor.records.visits import VisitMissing
from advisor.web.desk import current_desk
from advisor.web.operators import current_operator
from advisor.web.recheck_text import OUTCOMES
from advisor.web.screen import screen

visit_story = Blueprint("visit_story", __name__)


@dataclass(frozen=True)
class Return:
    """A recorded return visit: its day, what came of it, and the visit at the other end of the link, if any."""

    day: str
    outcome: str
    other_id: str | None


@dataclass(frozen=True)
class Story:
    """What a page about a saved visit says of it; ``ordered`` counts from 1."""

    edit: int
    options: int
    ordered: int | None
    ordered_on: str
    returns: tuple[Return, ...]
    came_of: tuple[Return, ...]


def story_of(visit_id: str) -> Story | None:
    """Return what happened to a visit, or None where it is no longer there."""
    store = current_desk().store
    try:
        saved = store.get_visit(visit_id)
    except VisitMissing:
        return None
    visit = parse_visit(saved.visit_json)
    event = store.last_event("ordered", visit_id=visit_id)
    return Story(
        saved.edit,
        max(len(visit.options or ()), 1),
        None if visit.ordered is None else visit.ordered + 1,
        day_of(event.at) if event and visit.ordered is not None else "",
        tuple(_return(one, one.new_visit_id) for one in store.list_rechecks(visit_id)),
        tuple(_return(one, one.visit_id) for one in store.rechecks_leading_to(visit_id)),
    )


def _return(record: SavedRecheck, other_id: str | None) -> Return:
    return Return(day_of(record.at), screen().gettext(OUTCOMES[record.outcome]), other_id)


def local_time(at: str) -> dt.datetime:
    """Return a stored moment as this computer's clock shows it."""
    return dt.datetime.fromisoformat(at).astimezone()


def day_of(at: str) -> str:
    """Return the day of a stored moment, in words."""
    return screen().date(local_time(at).date())


@visit_story.post("/visits/<visit_id>/ordered")
def mark_ordered(visit_id: str) -> AnyResponse:
    """Store into the visit which option was ordered; one changed meanwhile is not overwritten."""
    store = current_desk().store
    visit = parse_visit(store.get_visit(visit_id).visit_json)
    number = _whole(request.form.get("option", ""))
    if not 1 <= number <= max(len(visit.options or ()), 1):
        abort(400)
    marked = visit_to_json(visit.model_copy(update={"ordered": number - 1}))
    seen = _whole(request.form.get("edit", ""))
    store.note_order(marked, visit_id=visit_id, edit_seen=seen, who=current_operator())
    return redirect(url_for("visits.reopen", visit_id=visit_id), 303)


@visit_story.post("/visits/<visit_id>/recheck/<recheck_id>/new-order")
def link_new_order(visit_id: str, recheck_id: str) -> AnyResponse:
    """Link a recorded return visit with the visit of the new order, which was saved after it."""
    store = current_desk().store
    if store.get_recheck(recheck_id).visit_id != visit_id:
        raise RecheckMissing
    store.link_recheck(recheck_id, new_visit_id=request.form.get("new_visit", ""), who=current_operator())
    return redirect(url_for("rechecks.recheck", visit_id=visit_id, _anchor="recorded"), 303)


def _whole(text: str) -> int:
    return int(text) if text.isascii() and text.isdigit() and len(text) < 10 else 0
