"""The sheet and the slip as they leave the printer, read by another program than wrote them."""

import datetime as dt
import re
from functools import cache
from html import unescape
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfReader
from pypdf.generic import ArrayObject, DictionaryObject

from advisor.counsel.order import NotReady
from advisor.counsel.sheet_texts import HEADINGS
from advisor.counsel.stock import Range, builtin_range, check_range
from advisor.counsel.visit import Visit, check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.documents import order_slip, standing_alone
from advisor.web.pdf import write_pdf
from advisor.web.sheet_page import sheet_language, wearer_sheet

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
STOCK = builtin_range()
POINTS_A_MM = 72 / 25.4


@cache
def visit_of(path: Path) -> Visit:
    return read_visit(path)


@cache
def sheet_pdf(path: Path) -> PdfReader:
    """The sheet in standard print, whatever print the wearer prefers."""
    visit = visit_of(path)
    assert visit.wearer is not None
    standard = visit.model_copy(update={"wearer": visit.wearer.model_copy(update={"print": "standard"})})
    return PdfReader(BytesIO(write_pdf(wearer_sheet(standard, STOCK, code="en", today=TODAY))))


@cache
def slip_pdf(path: Path) -> PdfReader:
    visit = visit_of(path)
    if path.stem == "very-unequal-eyes":  # one of two pairs: it is ordered as what it is for
        visit = visit.model_copy(update={"prescription": visit.prescription.model_copy(update={"for_": "distance"})})
    return PdfReader(BytesIO(write_pdf(order_slip(visit, STOCK, today=TODAY))))


def text_of(pdf: PdfReader) -> str:
    return " ".join(" ".join(page.extract_text() for page in pdf.pages).split())


def tags(pdf: PdfReader) -> list[str]:
    """Every structure tag of a tagged PDF, in reading order."""
    found: list[str] = []

    def walk(node: Any) -> None:
        node = node.get_object()
        if isinstance(node, ArrayObject):
            for part in node:
                walk(part)
        elif isinstance(node, DictionaryObject):
            if "/S" in node:
                found.append(str(node["/S"]))
            if "/K" in node:
                walk(node["/K"])

    root: Any = pdf.trailer["/Root"]
    walk(root["/StructTreeRoot"]["/K"])
    return found


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_a_sheet_is_two_pages_of_a4(path: Path) -> None:
    pdf = sheet_pdf(path)
    assert len(pdf.pages) == 2
    for page in pdf.pages:
        size = float(page.mediabox.width), float(page.mediabox.height)
        assert size == pytest.approx((210 * POINTS_A_MM, 297 * POINTS_A_MM), abs=0.5)


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_a_slip_is_one_page(path: Path) -> None:
    assert len(slip_pdf(path).pages) == 1


@pytest.mark.parametrize("path", DEMO[::4], ids=lambda path: path.stem)
@pytest.mark.parametrize("make", [sheet_pdf, slip_pdf], ids=["sheet", "slip"])
def test_a_pdf_says_what_it_is_to_a_reader_who_cannot_see_it(make: Any, path: Path) -> None:
    pdf = make(path)
    root = pdf.trailer["/Root"]
    assert root["/Lang"] == "en"
    assert root["/MarkInfo"]["/Marked"]
    assert root["/ViewerPreferences"]["/DisplayDocTitle"]
    assert pdf.metadata is not None
    assert pdf.metadata.title == ("Your new glasses" if make is sheet_pdf else "Order slip")
    found = [tag for tag in tags(pdf) if re.fullmatch(r"/H\d", tag)]
    assert found[0] == "/H1"
    assert found.count("/H1") == 1
    assert set(found) == {"/H1", "/H2"}
    assert {"/P", "/L", "/LI"} <= set(tags(pdf)) or make is slip_pdf


@pytest.mark.parametrize("path", DEMO[::4], ids=lambda path: path.stem)
@pytest.mark.parametrize("make", [sheet_pdf, slip_pdf], ids=["sheet", "slip"])
def test_every_font_is_inside_the_file(make: Any, path: Path) -> None:
    seen = 0
    for page in make(path).pages:
        for font in page["/Resources"]["/Font"].values():
            part = font.get_object()
            for inner in part.get("/DescendantFonts", [part]):
                descriptor = inner.get_object()["/FontDescriptor"].get_object()
                assert {"/FontFile2", "/FontFile3"} & set(descriptor), part["/BaseFont"]
                seen += 1
    assert seen >= 2  # the text's two weights


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
def test_the_text_of_a_sheet_reads_in_order(path: Path) -> None:
    text = text_of(sheet_pdf(path))
    visit = visit_of(path)
    assert visit.wearer is not None
    found = [text.find(heading) for heading in HEADINGS.values() if heading in text]
    assert found == sorted(found)
    assert len(found) >= 10
    assert text.index("Your new glasses") < text.index(visit.wearer.name or "?") < found[0]
    assert (
        text.index("Rinse the lenses") < text.index("soft cloth") < text.index("straight lines that suddenly look bent")
    )


def test_a_pdf_repeats_byte_for_byte() -> None:
    html = wearer_sheet(visit_of(DEMO[0]), STOCK, code="en", today=TODAY)
    assert write_pdf(html) == write_pdf(html)


# --- language and date ------------------------------------------------------------------------------------------------


def test_a_language_without_texts_falls_back_to_english() -> None:
    visit = visit_of(DEMO[0])
    assert visit.wearer is not None
    foreign = visit.model_copy(update={"wearer": visit.wearer.model_copy(update={"language": "tlh"})})
    assert sheet_language(foreign, None) == "en"
    nobody = visit.model_copy(update={"wearer": None})
    assert sheet_language(nobody, None) == "en"
    assert '<html lang="en" dir="ltr">' in wearer_sheet(foreign, STOCK, today=TODAY)


def test_a_date_is_written_with_the_month_as_a_word() -> None:
    content = {"prescription": {"right": {"sphere": -1.0}, "left": {"sphere": -1.0}}, "scenes": []}
    assert "1 December 2026" in wearer_sheet(check_visit(content), STOCK, today=TODAY)
    assert "2 March 2027" in wearer_sheet(check_visit(content | {"date": "2027-03-02"}), STOCK, today=TODAY)


def test_a_page_that_stands_alone_asks_for_nothing() -> None:
    html = standing_alone(wearer_sheet(visit_of(DEMO[0]), STOCK, code="en", today=TODAY))
    assert "<link" not in html
    assert "/static/" not in html
    assert not re.search(r"\b(src|href)=", html)
    assert set(re.findall(r'url\("([^:"]+):', html)) == {"data"}


# --- the order slip ---------------------------------------------------------------------------------------------------

COMPLETE: dict[str, Any] = {
    "date": "2026-12-01", "reference": "A-117",
    "wearer": {"name": "Somebody Else", "birth_date": "1980-05-04"},
    "note": "A note for the shop alone",
    "prescription": {
        "vertex_mm": 14.0,
        "right": {"sphere": -6.0, "cylinder": -2.0, "axis": 30, "add": 2.25,
                  "prism": [{"amount": 1.25, "base": "in"}, {"amount": 0.5, "base": "up"}]},
        "left": {"sphere": -5.25, "balance": True, "add": 2.25},
    },
    "fitting": {
        "right": {"pd_mm": 31.5, "near_pd_mm": 29.5, "height_mm": 20.5},
        "left": {"pd_mm": 32.0, "height_mm": 21.0},
        "vertex_mm": 12.5, "tilt_deg": 9.5, "wrap_deg": 4.5,
    },
    "frame": {"a_mm": 50.2, "b_mm": 38.4, "dbl_mm": 17.8, "ed_mm": 54.6, "rim": "grooved"},
    "daily_life": {"impact": "never", "one_good_eye": "no", "driving": "often"},
    "options": [{
        "design": "progressive", "material": "thiourethane-167", "tint": "brown-75",
        "coating": {"front": "hard-coat-only", "back": "broadband"},
    }],
    "declined": [{"key": "tough-material", "by": "wearer"}],
    "scenes": [],
}  # fmt: skip


def slip(stock: Range | None = None, **more: Any) -> str:
    """The order slip, whatever kind of space stands before a unit."""
    html = order_slip(check_visit(COMPLETE | more), stock or STOCK, today=TODAY)
    return html.replace("\N{NO-BREAK SPACE}", " ")


def rows(html: str) -> dict[str, list[list[str]]]:
    """Table rows as text, by the heading above them."""
    found: dict[str, list[list[str]]] = {}
    for part in re.split(r"<h2[^>]*>", html)[1:]:
        heading, _, rest = part.partition("</h2>")
        cells = [
            re.findall(r"<t[hd][^>]*>(.*?)</t[hd]>", row, re.S) for row in re.findall(r"<tr>(.*?)</tr>", rest, re.S)
        ]
        found[heading] = [[unescape(re.sub(r"<[^>]+>", "", cell)).strip() for cell in row] for row in cells]
    return found


def moved(power: float) -> float:
    """From 14 to 12.5 mm: the focus, counted from the lens, moves by as much as the lens does."""
    return 1000 / (1000 / power - 1.5)


def signed(value: float) -> str:
    return f"{value:+.2f}".replace("-", "\N{MINUS SIGN}")


def test_a_slip_shows_the_power_as_written_and_as_made() -> None:
    _, right, right_made, left, left_made = rows(slip())["Powers"]
    assert right == ["right, as written", signed(-6), signed(-2), "30", "+2.25", "1.25 base in, 0.50 base up"]
    first, second = moved(-6.0), moved(-8.0)
    assert right_made[:5] == ["right, as made", signed(first), signed(second - first), "30", "+2.25"]
    assert right_made[5] == "as written"
    assert left[:5] == ["left, as written", signed(-5.25), "–", "–", "+2.25"]
    assert "balance lens" in left[5]
    assert left_made[:2] == ["left, as made", signed(moved(-5.25))]
    text = unescape(re.sub(r"<[^>]+>", "", slip()))
    assert "As written: at 14.0 mm. As made: moved to 12.5 mm" in text


def test_a_slip_shows_everything_a_maker_needs() -> None:
    found = rows(slip())
    fitting = [cell for row in found["Fitting"] for cell in row]
    measured = ["31.5 mm", "32.0 mm", "29.5 mm", "20.5 mm", "21.0 mm", "12.5 mm", "9.5°", "4.5°", "54.6 mm"]
    assert {*measured, "50.2 × 38.4, 17.8 mm", "grooved (nylon)"} <= set(fitting)
    assert ["least thickness", "centre 1.2 mm, edge 1.8 mm"] in found["Fitting"]
    lens = dict(row for row in found["Lens"] if len(row) == 2)
    assert lens["design"] == "Progressive"
    assert lens["material"] == "Thiourethane 1.67 (nd 1.665)"
    assert lens["coating, front"] == "Hard coat only"
    assert lens["coating, back"] == "Broadband"
    assert lens["tint"] == "Brown 75 %"
    assert lens["made"] == "to the frame's shape"
    text = unescape(re.sub(r"<[^>]+>", "", slip()))
    assert "reference A-117" in text
    assert "an impact material (child, one good eye, knocks) (the wearer)" in text
    assert "A note for the shop alone" not in text


def test_a_slip_carries_the_suppliers_code_and_the_blank_of_an_offer() -> None:
    offer = {
        "design": "single-vision", "material": "thiourethane-167", "coating": "broadband", "made": "stock",
        "supplier_code": "TW-167-BB", "price": 99.0,
    }  # fmt: skip
    option = {"design": "single-vision", "material": "thiourethane-167", "coating": "broadband"}
    far: dict[str, Any] = {"prescription": COMPLETE["prescription"] | {"for": "distance"}, "options": [option]}
    html = slip(check_range({"offer": [offer]}), **far)
    assert "supplier code TW-167-BB" in html
    assert dict(row for row in rows(html)["Lens"] if len(row) == 2)["made"] == "cut from a stock blank"
    assert "supplier code" not in slip(**far)


def test_a_slip_of_a_near_lens_says_that_the_add_is_in_it() -> None:
    near = COMPLETE["prescription"] | {"for": "near"}
    html = slip(options=[{"design": "reading", "material": "thiourethane-167"}], prescription=near)
    _, right, made, *_ = rows(html)["Powers"]
    assert right[4] == "+2.25"
    assert made[4] == "–"
    assert made[1] == signed(moved(-6.0) + 2.25)
    assert "with the near power put in" in html


@pytest.mark.parametrize("key", ["prescription", "fitting", "frame", "daily_life"])
def test_a_slip_is_not_printed_while_something_is_missing(key: str) -> None:
    bare: dict[str, Any] = {"right": {"sphere": -6.0}, "left": {"sphere": -5.0}}
    content = {name: part for name, part in COMPLETE.items() if name != key}
    with pytest.raises(NotReady, match="Not ready to order:"):
        order_slip(check_visit({"prescription": bare} | content), STOCK, today=TODAY)


def test_hostile_text_on_a_slip_stays_text() -> None:
    shop = STOCK.shop.model_copy(update={"name": "<script>alert(1)</script>", "contact": "<i>x</i>"})
    html = slip(
        STOCK.model_copy(update={"shop": shop}),
        reference="<img src=x>",
        declined=[{"key": "tough-material", "by": "<b>wearer</b>"}],
    )
    for tag in ("<script", "<img", "<b>", "<i>"):
        assert tag not in html
    assert "&lt;script&gt;alert(1)&lt;/script&gt;" in html
