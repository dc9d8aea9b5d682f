"""The shop's own on the wearer's sheet: name, contact, logo, a paragraph, lines switched off; shown as it is typed."""

from typing import Any

from flask import Blueprint, Response, abort, make_response, redirect, render_template, request, url_for
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.faults import Faults
from advisor.counsel.stock import MOST_OF_PARAGRAPH, Range
from advisor.web import demo_wearers
from advisor.web import range_editing as editing
from advisor.web import shop_sheet_form as forms
from advisor.web.counter import is_live
from advisor.web.desk import current_desk
from advisor.web.logo import ADDRESS, LogoRefused
from advisor.web.range_editing import RangeChanged
from advisor.web.screen import screen
from advisor.web.sentences import fault_sentence, sentence_of
from advisor.web.shop_sheet_form import Told, Typed
from advisor.web.stock_loader import current_shelf

shop_sheet = Blueprint("shop_sheet", __name__)


@shop_sheet.get(ADDRESS)
def logo() -> Response:
    """Answer with the shop's logo."""
    picture = current_desk().store.get_logo()
    if picture is None:
        abort(404)
    answer = make_response(picture)
    answer.headers["Content-Type"] = "image/png"
    return answer


@shop_sheet.get("/range/sheet")
def show() -> Response:
    """Show the form as it is stored, beside a sheet."""
    return _page(forms.typed_of(current_shelf(current_desk().store).stock.shop))


@shop_sheet.post("/range/sheet/preview")
def show_typed() -> Response:
    """Show a sheet with what is typed, and store nothing: a live page takes the sheet alone."""
    typed = forms.typed_from(request.form)
    stock, told = _checked(typed)
    if not is_live():
        return _page(typed, told)
    return make_response(render_template("parts/sheet_preview.html", **_sheet(stock, typed, told)))


@shop_sheet.post("/range/sheet")
def keep() -> AnyResponse:
    """Store what is typed, with the picture that was sent; or nothing at all, with what is wrong beside its field."""
    typed = forms.typed_from(request.form)
    stock, told = _checked(typed)
    try:
        picture = forms.sent_logo(typed, request.files.get("logo"))
    except LogoRefused as error:
        return _page(typed, Told({**told.faults, "logo": [sentence_of(error, screen())]}, told.rest), 422)
    if stock is None:
        return _page(typed, told, 422)
    try:
        editing.keep(current_desk().store, stock, seen=request.form.get("seen", ""), logo=picture)
    except RangeChanged as error:
        return _page(typed, Told(above=sentence_of(error, screen())), 409)
    return redirect(url_for("shop_sheet.show", kept="1"), 303)


def _checked(typed: Typed) -> tuple[Range | None, Told]:
    """Return the range with what is typed, or none and what is wrong with it."""
    try:
        return editing.with_sheet(current_shelf(current_desk().store).stock, typed.content()), Told()
    except Faults as error:
        found, rest = editing.beside(error.faults, place="shop", names=(*forms.TEXTS, "lines_off"))
        beside = {name: [fault_sentence(one, screen()) for one in some] for name, some in found.items()}
        return None, Told(beside, tuple(Faults(rest).lines(screen())) if rest else ())


def _sheet(stock: Range | None, typed: Typed, told: Told) -> dict[str, Any]:
    """Return what the part of the page needs that shows the sheet: the sheet, or, while it cannot be, what to mend."""
    picture = current_desk().store.get_logo()
    shown = None if stock is None else forms.preview(stock.shop, typed, logo=picture, speaker=screen())
    return {"shown": shown, "mend": [*(text for texts in told.faults.values() for text in texts), *told.rest]}


def _page(typed: Typed, told: Told | None = None, status: int = 200) -> Response:
    """Show the form with what is said back, beside the sheet that it makes."""
    store = current_desk().store
    shelf, told = current_shelf(store), told or Told()
    stock, wrong = _checked(typed)
    values = {
        "typed": typed,
        "told": told,
        "faults": told.faults,
        "seen": request.form.get("seen") or shelf.hash,
        "kept": request.method == "GET" and request.args.get("kept") == "1",
        "groups": forms.groups(typed, screen()),
        "most": MOST_OF_PARAGRAPH,
        "paper": forms.regions_paper(shelf.stock.shop),
        "has_logo": store.get_logo() is not None,
        "sends_logo": bool(request.files.get("logo")),
        "demos": demo_wearers.names(screen()),
        **_sheet(stock, typed, wrong),
    }
    return make_response(render_template("range_sheet.html", **values), status)
