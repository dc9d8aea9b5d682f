"""One wearer whole: every visit that seems to be of one person, exported as a file or erased for good."""

from flask import Blueprint, Response, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.records.drafts import SavedDraft
from advisor.records.visits import SavedVisit
from advisor.web.desk import current_desk
from advisor.web.exports import note_handed_out
from advisor.web.operators import current_operator
from advisor.web.same_wearer import Candidate, drafts_like, visits_like
from advisor.web.wearer_files import wearer_zip

wearer = Blueprint("wearer", __name__)


@wearer.get("/visits/<visit_id>/wearer")
def choose(visit_id: str) -> str:
    """List the visits that seem to be of one person, to be ticked."""
    saved, found, drafts = _found(visit_id)
    ticked = {one.id for one in found if one.is_certain or one.id == visit_id}
    return _page(saved, found, drafts, ticked)


def _found(visit_id: str) -> tuple[SavedVisit, list[Candidate], list[SavedDraft]]:
    store = current_desk().store
    saved = store.get_visit(visit_id)
    return saved, visits_like(store, saved), drafts_like(store, saved)


def _page(
    saved: SavedVisit, found: list[Candidate], drafts: list[SavedDraft], ticked: set[str], *, none: bool = False
) -> str:
    return render_template(
        "wearer.html",
        visit_id=saved.id,
        found=found,
        drafts=drafts,
        ticked=ticked,
        with_drafts=True,
        nothing_ticked=none,
    )


def _ticked(found: list[Candidate]) -> list[str]:
    """Return the visits that were ticked, of those that may be ticked."""
    sent = request.form.getlist("visit")
    return [one.id for one in found if one.id in sent]


def _ticked_drafts(drafts: list[SavedDraft]) -> list[SavedDraft]:
    return drafts if request.form.get("forms") else []


@wearer.post("/visits/<visit_id>/wearer/export")
def export(visit_id: str) -> AnyResponse:
    """Hand out what was ticked as one ZIP file."""
    saved, found, drafts = _found(visit_id)
    ids, forms = _ticked(found), _ticked_drafts(drafts)
    if not ids and not forms:
        return make_response(_page(saved, found, drafts, set(), none=True), 422)
    store = current_desk().store
    content = wearer_zip(store, [store.get_visit(one) for one in ids], forms)
    for one in ids:
        note_handed_out(one)
    return _zip(content)


def _zip(content: bytes) -> Response:
    answer = make_response(content)
    answer.headers["Content-Type"] = "application/zip"
    answer.headers["Content-Disposition"] = 'attachment; filename="twolight-wearer.zip"'
    return answer


@wearer.post("/visits/<visit_id>/wearer/erase")
def erase(visit_id: str) -> AnyResponse:
    """Say what would go and what would stay; erase what was ticked once that has been read and confirmed."""
    saved, found, drafts = _found(visit_id)
    ids, forms = _ticked(found), [one.id for one in _ticked_drafts(drafts)]
    if not ids and not forms:
        return make_response(_page(saved, found, drafts, set(), none=True), 422)
    store = current_desk().store
    if request.form.get("confirmed") != "yes":
        goes = store.count_of(ids, forms)
        return make_response(
            render_template("erase.html", back=f"/visits/{visit_id}/wearer", ids=ids, forms=bool(forms), goes=goes)
        )
    store.erase(ids, draft_ids=forms, who=current_operator())
    return redirect(url_for("wearer.erased"), 303)


@wearer.get("/visits/erased")
def erased() -> str:
    """Say that it is done, and what the program cannot reach."""
    return render_template("erased.html")
