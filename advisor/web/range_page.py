"""Range: what the shop sells, seen, changed, imported and exported."""

from collections.abc import Callable, Mapping

from flask import Blueprint, Response, make_response, redirect, render_template, request, url_for
from pydantic import BaseModel
from werkzeug.wrappers import Response as AnyResponse

from advisor.counsel.faults import Fault, Faults
from advisor.counsel.phrases import mark
from advisor.counsel.stock import Range
from advisor.web import range_editing as editing
from advisor.web import range_words as words
from advisor.web.desk import current_desk
from advisor.web.screen import screen
from advisor.web.sentences import fault_sentence
from advisor.web.stock_loader import current_shelf

range_page = Blueprint("range_page", __name__, url_prefix="/range")

REFUSED = mark("Nothing was changed. The file has these faults:")
NOT_REMOVED = mark("Nothing was changed: something else names this item.")


def _overview(faults: list[str] | None = None, notice: str = "", status: int = 200) -> Response:
    shelf = current_shelf(current_desk().store)
    values = {"shelf": shelf, "currency": shelf.stock.currency, "editing": editing, "words": words}
    return make_response(render_template("range.html", faults=faults or [], notice=notice, **values), status)


@range_page.get("")
def overview() -> Response:
    """Show everything the shop sells."""
    return _overview()


@range_page.get("/export")
def export() -> Response:
    """Hand out the range as one file; nothing changes."""
    answer = make_response(current_shelf(current_desk().store).toml)
    answer.headers["Content-Type"] = "application/toml; charset=utf-8"
    answer.headers["Content-Disposition"] = 'attachment; filename="twolight-range.toml"'
    return answer


@range_page.post("/import")
def import_() -> AnyResponse:
    """Take a file as the range, or refuse it whole with every fault."""
    sent = request.files.get("file")
    name = (sent.filename or "range.toml")[:100] if sent else "range.toml"
    try:
        stock = editing.from_file(sent.read() if sent else b"", name=name)
        editing.keep(current_desk().store, stock, seen=request.form.get("seen", ""))
    except Faults as error:
        return _overview(error.lines(screen()), REFUSED, 422)
    return redirect(url_for("range_page.overview"), 303)


def _form(
    section: str, place: int, shown: Mapping[str, str], faults: tuple[Fault, ...] = (), status: int = 200
) -> Response:
    shelf = current_shelf(current_desk().store)
    boxes = editing.boxes(section)
    path = section if section == "shop" else f"{section}[{place}]"
    found, rest = editing.beside(faults, place=path, names=[box.name for box in boxes])
    values = {
        "section": section,
        "place": place,
        "title": words.TITLES[section],
        "boxes": boxes,
        "words": words,
        "shown": shown,
        "faults": {name: [fault_sentence(one, screen()) for one in some] for name, some in found.items()},
        "rest": Faults(rest).lines(screen()) if rest else [],
        "seen": request.form.get("seen") or shelf.hash,
        "is_new": section != "shop" and place >= len(editing.items(shelf.stock, section)),
    }
    return make_response(render_template("range_item.html", **values), status)


def _changed(section: str, place: int, change: Callable[[Range], Range]) -> AnyResponse:
    store = current_desk().store
    try:
        editing.keep(store, change(current_shelf(store).stock), seen=request.form.get("seen", ""))
    except Faults as error:
        return _form(section, place, request.form, error.faults, 422)
    return redirect(url_for("range_page.overview", _anchor=section), 303)


@range_page.get("/shop")
def shop() -> Response:
    """Show the shop's own fields."""
    return _form("shop", 0, editing.typed("shop", current_shelf(current_desk().store).stock.shop))


@range_page.post("/shop")
def change_shop() -> AnyResponse:
    """Change the shop's own fields."""
    return _changed("shop", 0, lambda stock: editing.with_shop(stock, request.form))


@range_page.get("/<section>/<int:place>")
def show(section: str, place: int) -> Response:
    """Show one item in its form."""
    return _form(section, place, editing.typed(section, _item(section, place)))


@range_page.get("/<section>/new")
def new(section: str) -> Response:
    """Show an empty form."""
    stock = current_shelf(current_desk().store).stock
    return _form(section, len(editing.items(stock, section)), {})


@range_page.get("/<section>/<int:place>/copy")
def copy(section: str, place: int) -> Response:
    """Show a form for a new item that begins as a copy."""
    stock = current_shelf(current_desk().store).stock
    shown = editing.copied(section, editing.typed(section, _item(section, place)), stock)
    return _form(section, len(editing.items(stock, section)), shown)


@range_page.post("/<section>/<int:place>")
def change(section: str, place: int) -> AnyResponse:
    """Change one item, or add it behind the last."""
    return _changed(section, place, lambda stock: editing.with_item(stock, section, place, request.form))


@range_page.post("/<section>/<int:place>/remove")
def remove(section: str, place: int) -> AnyResponse:
    """Remove one item, unless something else names it."""
    store = current_desk().store
    try:
        stock = editing.without_item(current_shelf(store).stock, section, place)
        editing.keep(store, stock, seen=request.form.get("seen", ""))
    except Faults as error:
        return _overview(error.lines(screen()), NOT_REMOVED, 409)
    return redirect(url_for("range_page.overview", _anchor=section), 303)


def _item(section: str, place: int) -> BaseModel:
    return editing.item(current_shelf(current_desk().store).stock, section, place)
