"""Paper of a saved visit: the wearer's sheet, the order slip and the bench slip, as a page to print and as a PDF."""

from collections.abc import Callable, Mapping

from flask import Blueprint, Response, make_response, render_template, request, url_for

from advisor.counsel.order import NotReady
from advisor.counsel.stock import Range
from advisor.counsel.visit import Visit, parse_visit
from advisor.web.desk import current_desk
from advisor.web.documents import bench_slip, order_slip, wearer_sheet
from advisor.web.pdf import PdfFailed, PdfUnavailable, write_pdf
from advisor.web.stock_loader import shelf_of

paper_pages = Blueprint("paper_pages", __name__)

PAPERS: Mapping[str, Callable[..., str]] = {"sheet": wearer_sheet, "order": order_slip, "bench": bench_slip}
NAMES = ", ".join(PAPERS)
FONTS = {"html": "fonts", "pdf": "print-fonts"}  # WOFF2 for the screen, TrueType for the layout engine


def _visit(visit_id: str) -> tuple[Visit, Range]:
    """Return a saved visit with the range it was saved with, so that a reprint says what the first print said."""
    store = current_desk().store
    saved = store.get_visit(visit_id)
    return parse_visit(saved.visit_json), shelf_of(store, saved.range_hash).stock


def _option(visit: Visit) -> int | None:
    """Return the option asked for, counted from 1; one that the visit does not have is not asked for."""
    text = request.args.get("option", "")
    number = int(text) if text.isascii() and text.isdigit() and len(text) < 3 else 0
    return number if 1 <= number <= len(visit.options or ()) else None


def _html(paper: str, visit_id: str, kind: str) -> str:
    visit, stock = _visit(visit_id)
    return PAPERS[paper](visit, stock, number=_option(visit), fonts=FONTS[kind])


@paper_pages.get(f"/visits/<visit_id>/<any({NAMES}):paper>")
def preview(visit_id: str, paper: str) -> str:
    """Show one of the papers as a page to print."""
    return _html(paper, visit_id, "html")


@paper_pages.get(f"/visits/<visit_id>/<any({NAMES}):paper>.pdf")
def pdf(visit_id: str, paper: str) -> Response:
    """Answer with the PDF; where none can be made, with a page that says so and leads to the browser's own print."""
    html = _html(paper, visit_id, "pdf")
    try:
        content = write_pdf(html)
    except (PdfUnavailable, PdfFailed) as error:
        page = url_for("paper_pages.preview", visit_id=visit_id, paper=paper, option=request.args.get("option"))
        return make_response(render_template("no_pdf.html", sentence=str(error), preview=page), 503)
    answer = make_response(content)
    answer.headers["Content-Type"] = "application/pdf"
    answer.headers["Content-Disposition"] = f'inline; filename="twolight-{paper}.pdf"'
    return answer


@paper_pages.errorhandler(NotReady)
def not_ready(error: NotReady) -> Response:
    """Say why nothing can be ordered yet."""
    visit_id = (request.view_args or {}).get("visit_id", "")
    return make_response(render_template("not_ready.html", lines=error.lines, visit_id=visit_id), 409)
