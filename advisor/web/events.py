"""Who did what: the list of what was done, page by page, without what was in it."""

from collections.abc import Mapping
from dataclasses import dataclass

from flask import Blueprint, render_template, request

from advisor.counsel.phrases import mark
from advisor.records.events import Event, EventKey
from advisor.web.desk import current_desk
from advisor.web.operators import operator_words
from advisor.web.screen import screen
from advisor.web.visit_story import day_of, local_time

events = Blueprint("events", __name__)

LINES = 100
WORDS: Mapping[str, str] = {
    "saved": mark("saved a new visit"),
    "changed": mark("changed a visit"),
    "copied": mark("copied a visit"),
    "ordered": mark("marked what was ordered"),
    "rechecked": mark("recorded a return visit"),
    "linked": mark("linked a new order to a return visit"),
    "sheet": mark("opened the wearer's sheet"),
    "care": mark("opened the page about care"),
    "order": mark("opened the order slip"),
    "bench": mark("opened the bench slip"),
    "exported": mark("exported a visit"),
    "erased": mark("erased a visit"),
    "range-changed": mark("changed the range"),
    "backup": mark("made a backup"),
    "restored": mark("restored a backup"),
    "signed-in": mark("signed in"),
    "signed-out": mark("signed out"),
}


@dataclass(frozen=True)
class Line:
    """One row of the list, in words."""

    day: str
    time: str
    who: str
    what: str
    visit_id: str | None


@events.get("/records")
def listing() -> str:
    """List what was done, the last first; of one visit, or everything. Nothing of a wearer is in the address."""
    asked = request.args.get
    after = asked("at", ""), asked("id", "")
    found = current_desk().store.list_events(
        visit_id=asked("visit") or None, limit=LINES + 1, after=EventKey(*after) if all(after) else None
    )
    shown = found[:LINES]
    more = shown[-1].key if len(found) > LINES else None
    lines = [_line(event) for event in shown]
    return render_template("events.html", lines=lines, more=more, visit_id=asked("visit") or "", later=all(after))


def _line(event: Event) -> Line:
    speaker = screen()
    words = speaker.gettext(WORDS.get(event.what, event.what))
    time = f"{local_time(event.at):%H:%M}"
    return Line(day_of(event.at), time, operator_words(event.who, speaker), words, event.visit_id)
