"""Turn round: the comparison for the wearer's eyes, in the wearer's language, with prices that can be hidden."""

from collections.abc import Mapping

from flask import Blueprint, Response, make_response, redirect, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.compare import answer_of, compute
from advisor.counsel.faults import Faults
from advisor.counsel.phrases import say
from advisor.counsel.turned_round import TurnedRound, turned_round
from advisor.counsel.turned_texts import ROW_TITLES, TURNED_TEXTS
from advisor.counsel.visit import Visit, parse_visit
from advisor.records.drafts import DraftChanged, DraftMissing
from advisor.records.store import Store
from advisor.records.visits import VisitMissing
from advisor.web import counter_page, drafting
from advisor.web.desk import current_desk
from advisor.web.forms import visit_from_fields
from advisor.web.language import Language, language, languages
from advisor.web.paper import page
from advisor.web.screen import screen
from advisor.web.stock_loader import Shelf, current_shelf
from advisor.web.told import told_of
from advisor.web.undoing import difference

turn_round = Blueprint("turn_round", __name__)

HIDDEN = "hidden"
BAR_LONG = 100  # of the thickest, in drawing units


@turn_round.get("/visits/<visit_id>/turn")
def of_visit(visit_id: str) -> Response:
    """Show a saved visit turned round, with the figures that the Counter shows of it."""
    store = current_desk().store
    visit = parse_visit(store.get_visit(visit_id).visit_json)
    return _page(visit, current_shelf(store), back=url_for("visits.reopen", visit_id=visit_id))


@turn_round.get("/counter/<draft_id>/turn")
def of_draft(draft_id: str) -> AnyResponse:
    """Show a form being filled in turned round; one that was saved meanwhile is the saved visit."""
    store, back = current_desk().store, url_for("counter.draft", draft_id=draft_id)
    try:
        fields = drafting.of_draft(store.get_draft(draft_id)).fields
        return _page(visit_from_fields(fields), current_shelf(store), back=back)
    except DraftMissing:
        visit_id = store.visit_of_draft(draft_id)
        if visit_id is None:
            raise
        return redirect(url_for("turn_round.of_visit", visit_id=visit_id))
    except Faults:
        return _shown(None, screen(), back=back, currency="", status=409)


@turn_round.post("/counter/turn")
def turn() -> AnyResponse:
    """Keep the form as it was typed and show it turned round; a saved visit that was not changed needs no draft."""
    store = current_desk().store
    sent = drafting.of_form(request.form)
    if sent.draft_id is None and sent.visit_id is not None and _is_as_saved(store, sent.fields, sent.visit_id):
        return redirect(url_for("turn_round.of_visit", visit_id=sent.visit_id), 303)
    try:
        kept = drafting.keep(store, sent)
    except (DraftChanged, DraftMissing) as error:
        page_told = counter_page.page(sent, current_shelf(store), told=told_of(store, sent, error))
        return make_response(page_told, 409)
    if kept.draft_id is None:
        return redirect(url_for("counter.start"), 303)
    return redirect(url_for("turn_round.of_draft", draft_id=kept.draft_id), 303)


def _is_as_saved(store: Store, fields: Mapping[str, str], visit_id: str) -> bool:
    """Tell whether a form says what the saved visit says; an empty field says nothing."""
    try:
        saved = store.get_visit(visit_id)
    except VisitMissing:
        return False
    stored = drafting.of_visit(saved, parse_visit(saved.visit_json), current_shelf(store)).fields
    return not difference(stored, fields)


def _language(visit: Visit) -> Language:
    """Return the wearer's language if there are texts in it, else the screen's."""
    own = visit.wearer.language if visit.wearer else None
    return language(own) if own in languages() else screen()


def _page(visit: Visit, shelf: Shelf, *, back: str) -> Response:
    chosen = _language(visit)
    computed = compute(visit, shelf.stock)
    turned = turned_round(computed, answer_of(computed, translator=chosen), translator=chosen)
    return _shown(turned, chosen, back=back, currency=shelf.stock.currency)


def _shown(turned: TurnedRound | None, chosen: Language, *, back: str, currency: str, status: int = 200) -> Response:
    values = {
        "turned": turned,
        "titles": ROW_TITLES,
        "say": lambda phrase: say(phrase, TURNED_TEXTS, chosen),
        "bar": lambda length_mm: _bar(length_mm, turned),
        "bar_long": BAR_LONG,
        "currency": currency,
        "prices_hidden": request.args.get("prices") == HIDDEN,
        "here": request.path,
        "back": back,
    }
    return make_response(page("turn_round.html", values, code=chosen.language), status)


def _bar(length_mm: float, turned: TurnedRound | None) -> float:
    """Return the length of a bar; all bars of the page have one scale, from nothing to the thickest."""
    most_mm = (turned.most_mm if turned else None) or length_mm or 1.0
    return round(BAR_LONG * length_mm / most_mm, 1)
