"""Recheck: a wearer came back with a saved pair; worked out, an outcome recorded, a slip for the maker."""

import secrets
from collections.abc import Mapping
from dataclasses import replace

from flask import Blueprint, Response, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.choices import Option
from advisor.counsel.faults import Faults
from advisor.counsel.names import coating_name, material_name
from advisor.counsel.phrases import mark
from advisor.counsel.recheck_answer import OUTCOMES_TODAY, RecheckRecord
from advisor.counsel.recheck_shown import EYES as EYE_WORDS
from advisor.counsel.recheck_shown import finding_words
from advisor.counsel.recheck_texts import COMPLAINTS, SIGNS, TODAY
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit, parse_visit
from advisor.records.rechecks import RecheckChanged, RecheckMissing, SavedRecheck
from advisor.records.visits import VisitLine, VisitMissing
from advisor.web import labels, recheck_text
from advisor.web.desk import current_desk
from advisor.web.names_shown import covered
from advisor.web.operators import current_operator
from advisor.web.pdf import PdfFailed, PdfUnavailable, write_pdf
from advisor.web.recheck_form import TOKEN, Asked, NotToday, ask, fields_of, record_of
from advisor.web.recheck_paper import maker_slip
from advisor.web.screen import screen
from advisor.web.sentences import fault_sentence, sentence_of
from advisor.web.stock_loader import shelf_of

rechecks = Blueprint("rechecks", __name__)

LIKELY_ORDERS = 20
RECORD_AGAIN = mark("To record this one beside it, press “Record the outcome” once more.")


def _on_file(visit_id: str) -> tuple[Visit, Range]:
    store = current_desk().store
    saved = store.get_visit(visit_id)
    return parse_visit(saved.visit_json), shelf_of(store, saved.range_hash).stock


@rechecks.get("/visits/<visit_id>/recheck")
def recheck(visit_id: str) -> str:
    """Show the empty form, and what was recorded before."""
    return _page(visit_id, Asked({}))


@rechecks.post("/visits/<visit_id>/recheck")
def work_out(visit_id: str) -> AnyResponse:
    """Work a return visit out, or record what came of it."""
    asked = ask(fields_of(request.form), *_on_file(visit_id))
    if request.form.get("do") != "record" or asked.faults:
        return make_response(_page(visit_id, asked), 422 if asked.faults else 200)
    try:
        faults = _recorded(visit_id, asked)
    except RecheckChanged as error:
        sentences = [sentence_of(error, screen()), screen().gettext(RECORD_AGAIN)]
        again = replace(asked, faults={"record": sentences})
        return make_response(_page(visit_id, again, token=_new_token()), 409)
    if faults:
        return make_response(_page(visit_id, replace(asked, faults=faults)), 422)
    return redirect(url_for("rechecks.recheck", visit_id=visit_id, _anchor="recorded"), 303)


def _recorded(visit_id: str, asked: Asked) -> dict[str, list[str]]:
    """Record an outcome, or return what keeps it from that, by field."""
    faults: dict[str, list[str]] = {}
    try:
        _record(visit_id, record_of(asked))
    except Faults as error:
        for fault in error.faults:
            faults.setdefault(fault.field, []).append(fault_sentence(fault, screen()))
    except NotToday as error:
        faults["outcome"] = [sentence_of(error, screen())]
    except VisitMissing as error:  # that of the new order; the form's own was read before
        faults["new_visit"] = [sentence_of(error, screen())]
    return faults


def _new_token() -> str:
    return secrets.token_urlsafe(16)


def _record(visit_id: str, record: RecheckRecord) -> SavedRecheck:
    """Keep an outcome once, however often its form is sent."""
    token, new_visit = request.form.get("token", ""), request.form.get("new_visit", "")
    return current_desk().store.save_recheck(
        record.model_dump_json(exclude_none=True),
        visit_id=visit_id,
        outcome=record.outcome,
        who_pays=record.who_pays,
        new_visit_id=new_visit or None,
        recheck_id=token if TOKEN.fullmatch(token) else None,
        who=current_operator(),
    )


def _page(visit_id: str, asked: Asked, *, token: str = "") -> str:
    visit, stock = _on_file(visit_id)
    speaker = screen()
    recorded = [_line(saved) for saved in current_desk().store.list_rechecks(visit_id)]
    token = token or request.form.get("token", "")
    return render_template(
        "recheck.html",
        visit_id=visit_id,
        visit=visit,
        name=covered(visit.wearer.name if visit.wearer else None) or visit.reference or "",
        options=_option_words(visit, stock),
        fields=asked.fields,
        answer=asked.answer,
        faults=asked.faults,
        outcomes=_outcomes(asked),
        signs=SIGNS,
        today=TODAY,
        complaints=COMPLAINTS,
        bases=labels.BASES,
        words=recheck_text,
        eye_words=EYE_WORDS,
        finding_words=lambda finding, value: finding_words(finding, value, speaker),
        money=lambda amount: speaker.money(amount, currency=stock.currency),
        recorded=recorded,
        orders=_orders(visit_id, visit),
        token=token if TOKEN.fullmatch(token) else _new_token(),
    )


def _outcomes(asked: Asked) -> Mapping[str, str]:
    """Return the outcomes that may be recorded: of a return for today a referral or none."""
    today = asked.answer is not None and asked.answer.refer == "today"
    return {key: text for key, text in recheck_text.OUTCOMES.items() if not today or key in OUTCOMES_TODAY}


def _option_words(visit: Visit, stock: Range) -> dict[str, str]:
    """Return the options of a visit by number, each in a few words."""
    options = visit.options or ()
    return {str(k + 1): _words(option, stock) for k, option in enumerate(options)}


def _words(option: Option, stock: Range) -> str:
    material = [] if option.material is None else [material_name(stock.material_of(option.material), screen())]
    coatings = [coating_name(coating, screen()) for coating in stock.faces_of(option.coating or "bare")]
    return ", ".join(dict.fromkeys((*material, *coatings)))


def _orders(visit_id: str, visit: Visit) -> list[VisitLine]:
    """Return the wearer's other visits, one of which may be the new order."""
    name = visit.wearer.name if visit.wearer else None
    if not name:
        return []
    found = current_desk().store.list_visits(name, limit=LIKELY_ORDERS + 1)
    return [line for line in found if line.id != visit_id]


def _line(saved: SavedRecheck) -> Mapping[str, object]:
    record = RecheckRecord.model_validate_json(saved.content_json)
    day = "" if record.date is None else screen().date(record.date)
    return {"id": saved.id, "day": day, "record": record, "new_visit_id": saved.new_visit_id}


def _slip(visit_id: str, recheck_id: str, *, fonts: str) -> str:
    visit, stock = _on_file(visit_id)
    saved = current_desk().store.get_recheck(recheck_id)
    if saved.visit_id != visit_id:
        raise RecheckMissing
    return maker_slip(visit, stock, RecheckRecord.model_validate_json(saved.content_json), fonts=fonts)


@rechecks.get("/visits/<visit_id>/recheck/<recheck_id>")
def slip(visit_id: str, recheck_id: str) -> str:
    """Show the slip for the maker."""
    return _slip(visit_id, recheck_id, fonts="fonts")


@rechecks.get("/visits/<visit_id>/recheck/<recheck_id>.pdf")
def slip_pdf(visit_id: str, recheck_id: str) -> Response:
    """Return the slip for the maker as a PDF; where none can be made, a page that leads to the browser's own print."""
    try:
        content = write_pdf(_slip(visit_id, recheck_id, fonts="print-fonts"))
    except (PdfUnavailable, PdfFailed) as error:
        preview = url_for("rechecks.slip", visit_id=visit_id, recheck_id=recheck_id)
        sentence = sentence_of(error, screen())
        return make_response(render_template("no_pdf.html", sentence=sentence, preview=preview), 503)
    answer = make_response(content)
    answer.headers["Content-Type"] = "application/pdf"
    answer.headers["Content-Disposition"] = 'inline; filename="twolight-recheck.pdf"'
    return answer
