"""Paper of a saved visit: sheet, care, order slip and bench slip, each as a page to print and as a PDF."""

from collections.abc import Callable, Mapping

from flask import Blueprint, Response, make_response, render_template, request, url_for

from advisor.counsel.order import NotReady
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit, parse_visit
from advisor.web.desk import current_desk
from advisor.web.documents import bench_slip, order_slip
from advisor.web.opened import note_opened
from advisor.web.pdf import PdfFailed, PdfUnavailable, write_pdf
from advisor.web.policy import refuse_foreign_readers
from advisor.web.screen import screen
from advisor.web.sentences import sentence_of
from advisor.web.sheet_page import Print, care_sheet, wearer_sheet
from advisor.web.stock_loader import current_shelf, shelf_of

paper_pages = Blueprint("paper_pages", __name__)
paper_pages.before_request(refuse_foreign_readers)

Make = Callable[[Visit, Range, str], str]  # the last is the kind of fonts
PAPERS: Mapping[str, Make] = {
    "sheet": lambda visit, stock, fonts: wearer_sheet(
        visit, stock, number=_option(visit), print_size=_print(), fonts=fonts, logo=shop_logo()
    ),
    "care": lambda visit, stock, fonts: care_sheet(visit, stock, print_size=_print(), fonts=fonts, logo=shop_logo()),
    "order": lambda visit, stock, fonts: order_slip(visit, stock, number=_option(visit), fonts=fonts),
    "bench": lambda visit, stock, fonts: bench_slip(visit, stock, number=_option(visit), fonts=fonts),
}
NAMES = ", ".join(PAPERS)
PRINTS: Mapping[str, Print] = {"standard": "standard", "large": "large"}
FONTS = {"html": "fonts", "pdf": "print-fonts"}  # WOFF2 for the screen, TrueType for the layout engine


def _visit(visit_id: str) -> tuple[Visit, Range]:
    """Return a saved visit with the range it was saved with, so that a reprint says what the first print said."""
    store = current_desk().store
    saved = store.get_visit(visit_id)
    return parse_visit(saved.visit_json), shelf_of(store, saved.range_hash).stock


def shop_logo() -> bytes | None:
    """Return the logo the shop has now: a visit of before is reprinted with it."""
    return current_desk().store.get_logo()


def _option(visit: Visit) -> int | None:
    """Return the option asked for, counted from 1; one that the visit does not have is not asked for."""
    text = request.args.get("option", "")
    number = int(text) if text.isascii() and text.isdigit() and len(text) < 3 else 0
    return number if 1 <= number <= len(visit.options or ()) else None


def _print() -> Print | None:
    """Return the print asked for; anything else is the wearer's own."""
    return PRINTS.get(request.args.get("print", ""))


def _html(paper: str, visit_id: str, kind: str) -> str:
    visit, stock = _visit(visit_id)
    html = PAPERS[paper](visit, stock, FONTS[kind])
    note_opened(paper, visit_id)
    return html


@paper_pages.get(f"/visits/<visit_id>/<any({NAMES}):paper>")
def preview(visit_id: str, paper: str) -> str:
    """Show one of the papers as a page to print."""
    return _html(paper, visit_id, "html")


@paper_pages.get(f"/visits/<visit_id>/<any({NAMES}):paper>.pdf")
def pdf(visit_id: str, paper: str) -> Response:
    """Answer with the PDF; where none can be made, with a page that says so and leads to the browser's own print."""
    asked = request.args.get
    page = url_for("paper_pages.preview", visit_id=visit_id, paper=paper, option=asked("option"), print=asked("print"))
    return _answer(_html(paper, visit_id, "pdf"), name=paper, preview=page)


@paper_pages.get("/care")
def care_preview() -> str:
    """Show the page about care, for somebody without a visit."""
    return _care("html")


@paper_pages.get("/care.pdf")
def care_pdf() -> Response:
    """Answer with the page about care as PDF."""
    page = url_for("paper_pages.care_preview", print=request.args.get("print"))
    return _answer(_care("pdf"), name="care", preview=page)


def _care(kind: str) -> str:
    stock = current_shelf(current_desk().store).stock
    return care_sheet(None, stock, code=screen().language, print_size=_print(), fonts=FONTS[kind], logo=shop_logo())


def _answer(html: str, *, name: str, preview: str) -> Response:
    """Answer with a page as PDF, or with a page that says why there is none and leads to the browser's own print."""
    try:
        content = write_pdf(html, logo=shop_logo())
    except (PdfUnavailable, PdfFailed) as error:
        return make_response(
            render_template("no_pdf.html", sentence=sentence_of(error, screen()), preview=preview), 503
        )
    answer = make_response(content)
    answer.headers["Content-Type"] = "application/pdf"
    answer.headers["Content-Disposition"] = f'inline; filename="twolight-{name}.pdf"'
    return answer


@paper_pages.errorhandler(NotReady)
def not_ready(error: NotReady) -> Response:
    """Say why nothing can be ordered yet."""
    visit_id = (request.view_args or {}).get("visit_id", "")
    return make_response(render_template("not_ready.html", lines=error.lines, visit_id=visit_id), 409)
