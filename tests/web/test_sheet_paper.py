"""The wearer's sheet on paper: how many pages, how large, tagged in order, and standing up to whatever is typed."""

import datetime as dt
import resource
from collections.abc import Iterator
from concurrent.futures import ThreadPoolExecutor
from functools import cache
from io import BytesIO
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfReader
from pypdf.generic import ArrayObject, DictionaryObject

from advisor.counsel.sheet import NoSuchOption
from advisor.counsel.sheet_texts import BAR_BARE, BAR_HARD_COAT, BAR_MIRRORED, BAR_WITH, HEADINGS
from advisor.counsel.stock import Range, Shop, builtin_range
from advisor.counsel.visit import Visit, check_visit, read_visit
from advisor.resources import resource_dir
from advisor.web.language import language, languages
from advisor.web.pdf import write_pdf
from advisor.web.sheet_page import Print, care_sheet, wearer_sheet
from tests.wearers import visits

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
POINTS_A_MM = 72 / 25.4
MOST_PAGES: dict[Print, int] = {"standard": 2, "large": 4}
LEAST_PT: dict[Print, float] = {"standard": 12.0, "large": 18.0}


def shop(region: str) -> Range:
    own = Shop(name="Lamplight Opticians", contact="1 High Street\nTelephone 000 000", region=region, currency="EUR")
    return builtin_range().model_copy(update={"shop": own})


@cache
def pdf_of(path: Path, size: Print, region: str = "eu", code: str = "en") -> PdfReader:
    html = wearer_sheet(read_visit(path), shop(region), code=code, print_size=size, today=TODAY)
    return PdfReader(BytesIO(write_pdf(html)))


def text_of(pdf: PdfReader) -> str:
    return " ".join(" ".join(page.extract_text() for page in pdf.pages).split())


def sizes(pdf: PdfReader) -> set[float]:
    """The size in points of every letter on every page, foot and letterhead too."""
    found: set[float] = set()

    def seen(text: str, page: list[float], line: list[float], _font: Any, size: float) -> None:
        if text.strip():
            found.add(round(size * abs(line[3]) * abs(page[3]), 2))

    for page in pdf.pages:
        page.extract_text(visitor_text=seen)
    return found


def nodes(pdf: PdfReader) -> list[DictionaryObject]:
    """Every structure element, in reading order."""
    found: list[DictionaryObject] = []

    def walk(node: Any) -> None:
        node = node.get_object()
        if isinstance(node, ArrayObject):
            for part in node:
                walk(part)
        elif isinstance(node, DictionaryObject) and "/S" in node:
            found.append(node)
            if "/K" in node:
                walk(node["/K"])

    root: Any = pdf.trailer["/Root"]
    walk(root["/StructTreeRoot"]["/K"])
    return found


# --- pages and print --------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("path", DEMO, ids=lambda path: path.stem)
@pytest.mark.parametrize("size", MOST_PAGES)
@pytest.mark.parametrize("code", languages())
def test_a_sheet_fits_its_pages_and_no_letter_is_smaller_than_promised(path: Path, size: Print, code: str) -> None:
    pdf = pdf_of(path, size, code=code)
    assert len(pdf.pages) <= MOST_PAGES[size]
    assert min(sizes(pdf)) >= LEAST_PT[size]


@pytest.mark.parametrize("size", MOST_PAGES)
def test_large_print_is_set_anew_and_not_made_bigger(size: Print) -> None:
    pdf = pdf_of(DEMO[0], size)
    box = pdf.pages[0].mediabox
    assert (float(box.width), float(box.height)) == pytest.approx((210 * POINTS_A_MM, 297 * POINTS_A_MM), abs=0.5)
    assert text_of(pdf_of(DEMO[0], "large")).replace("/ 4", "") != ""
    assert len(pdf.pages[0].extract_text()) > (1200 if size == "standard" else 500)


@pytest.mark.parametrize(
    ("region", "mm"), [("us", (215.9, 279.4)), ("eu", (210, 297)), ("uk", (210, 297)), ("international", (210, 297))]
)
@pytest.mark.parametrize("size", MOST_PAGES)
@pytest.mark.parametrize("code", languages())
def test_the_paper_is_the_regions(region: str, mm: tuple[float, float], size: Print, code: str) -> None:
    for path in DEMO[1::5]:
        pdf = pdf_of(path, size, region, code)
        box = pdf.pages[0].mediabox
        assert (float(box.width), float(box.height)) == pytest.approx([POINTS_A_MM * side for side in mm], abs=0.5)
        assert len(pdf.pages) <= MOST_PAGES[size]


# Numbers as the authorities publish them: 112 in the EU, 999, 112 and 111 in the UK, 911 in the US.
@pytest.mark.parametrize(
    ("region", "words"),
    [
        ("eu", "call 112."),
        ("uk", "call 999 or 112."),
        ("us", "call 911."),
        ("international", "your local emergency number."),
    ],
)
def test_urgent_help_is_named_as_the_region_does(region: str, words: str) -> None:
    text = text_of(pdf_of(DEMO[0], "standard", region))
    assert f"In an emergency, {'call ' if words.startswith('your') else ''}{words}" in text


def test_the_wearers_own_print_counts_unless_another_is_asked_for() -> None:
    child = read_visit(resource_dir("demo_patients") / "high-plus-child.json")
    assert child.wearer is not None
    assert child.wearer.print == "large"
    assert "paper-large.css" in wearer_sheet(child, shop("eu"), code="en", today=TODAY)
    asked = wearer_sheet(child, shop("eu"), code="en", print_size="standard", today=TODAY)
    assert "paper-standard.css" in asked
    assert "paper-large.css" not in asked


def invented() -> Iterator[Visit]:
    """A spread of the invented wearers: enough to meet long sheets, few enough to be quick."""
    yield from visits(280)[::23]


@pytest.mark.parametrize("code", languages())
def test_the_sheets_of_invented_wearers_fit_their_pages_too(code: str) -> None:
    made = 0
    for visit in invented():
        for size, most in MOST_PAGES.items():
            try:
                html = wearer_sheet(visit, shop("us"), code=code, print_size=size, today=TODAY)
            except NoSuchOption:
                continue
            pdf = PdfReader(BytesIO(write_pdf(html)))
            assert len(pdf.pages) <= most, (visit.reference, size)
            made += 1
    assert made > 10


@pytest.mark.parametrize("answered", [True, False])
def test_the_page_about_care_is_one_page(answered: bool) -> None:
    visit = read_visit(resource_dir("demo_patients") / "tinted-pair.json") if answered else None
    for region in ("eu", "us"):
        pdf = PdfReader(BytesIO(write_pdf(care_sheet(visit, shop(region), code="en", today=TODAY))))
        assert len(pdf.pages) == 1
        text = text_of(pdf)
        assert text.index("How to care for your glasses") < text.index("Rinse the lenses") < text.index("oven or grill")
        assert "See an eye doctor" not in text
        assert ("tap water" in text) is answered  # for those who meet the sea


@pytest.mark.parametrize("code", languages())
def test_the_page_about_care_is_one_page_and_in_large_print_two_at_most_in_every_language(code: str) -> None:
    visit = read_visit(resource_dir("demo_patients") / "tinted-pair.json")
    one = PdfReader(BytesIO(write_pdf(care_sheet(visit, shop("us"), code=code, today=TODAY))))
    assert len(one.pages) == 1
    pdf = PdfReader(BytesIO(write_pdf(care_sheet(visit, shop("us"), code=code, print_size="large", today=TODAY))))
    assert len(pdf.pages) <= 2
    assert min(sizes(pdf)) >= LEAST_PT["large"]


# --- tagged -----------------------------------------------------------------------------------------------------------


TITLES = {"en": "Your new glasses", "es": "Sus gafas nuevas", "fr": "Vos nouvelles lunettes", "de": "Ihre neue Brille"}


@pytest.mark.parametrize("size", MOST_PAGES)
@pytest.mark.parametrize("code", languages())
def test_a_sheet_is_tagged_with_language_title_headings_and_words_for_its_drawing(size: Print, code: str) -> None:
    pdf = pdf_of(DEMO[3], size, code=code)
    root: Any = pdf.trailer["/Root"]
    assert root["/Lang"] == code
    assert root["/MarkInfo"]["/Marked"]
    assert root["/ViewerPreferences"]["/DisplayDocTitle"]
    assert pdf.metadata is not None
    assert pdf.metadata.title == TITLES[code]
    roles = [str(node["/S"]) for node in nodes(pdf)]
    headings = [role for role in roles if role in ("/H1", "/H2", "/H3")]
    assert headings[0] == "/H1"
    assert headings.count("/H1") == 1
    assert set(headings) == {"/H1", "/H2"}
    figures = [node for node in nodes(pdf) if str(node["/S"]) == "/Figure"]
    assert len(figures) == 2  # the two bars of the one drawing; marks are no figures
    starts = tuple(language(code).gettext(bar) for bar in (BAR_BARE, BAR_HARD_COAT, BAR_WITH, BAR_MIRRORED))
    assert all(str(node["/Alt"]).startswith(starts) for node in figures)
    assert roles.count("/TH") == 2
    headers = [node for node in nodes(pdf) if str(node["/S"]) == "/TD"]
    assert all("/Headers" in str(node["/A"]) for node in headers)
    assert roles.count("/LI") > 30


def test_every_font_of_a_large_sheet_is_inside_the_file() -> None:
    seen = set()
    for page in pdf_of(DEMO[3], "large").pages:
        fonts: Any = page["/Resources"]
        for font in fonts["/Font"].values():
            inner = font.get_object()["/DescendantFonts"][0].get_object()
            assert {"/FontFile2", "/FontFile3"} & set(inner["/FontDescriptor"].get_object())
            seen.add(str(font.get_object()["/BaseFont"]))
    assert len(seen) == 2  # the two weights of one face


@pytest.mark.parametrize("code", languages())
def test_the_headings_are_read_in_the_order_of_the_page(code: str) -> None:
    text = text_of(pdf_of(DEMO[3], "large", code=code))
    found = [text.find(words) for one in HEADINGS.values() if (words := language(code).gettext(one)) in text]
    assert len(found) >= 10
    assert found == sorted(found)


# --- black and white --------------------------------------------------------------------------------------------------


def test_nothing_on_a_sheet_is_told_by_a_colour() -> None:
    pdf = pdf_of(DEMO[3], "standard")
    used = set()
    for page in pdf.pages:
        content: Any = page.get_contents()
        for operands, operator in content.operations:
            if operator in (b"rg", b"RG"):
                used.add(tuple(float(part) for part in operands))
    assert used
    assert all(max(colour) - min(colour) < 0.04 for colour in used), used  # greys, but for the ink's faint blue


# --- whatever is typed ------------------------------------------------------------------------------------------------

PLAIN: dict[str, Any] = {
    "prescription": {"right": {"sphere": -2.0}, "left": {"sphere": -2.0}},
    "options": [{"design": "single-vision", "material": "hard-resin-150", "coating": "broadband"}],
    "scenes": [],
}
PRISM = [{"amount": 2.0, "base": base} for base in ("in", "up", "out", "down")]
HEBREW = "\u05d3\u05d5\u05d3 \u05db\u05d4\u05df"


@pytest.mark.parametrize(
    "more",
    [
        {},
        {"wearer": {"name": "A" * 200}},
        {"wearer": {"name": "Anna Bo " * 24}, "reference": "R-" * 90, "dispensed_by": "Sam Fitter " * 18},
        {"note": "A line of a note\n" * 60},
        {"wearer": {"name": HEBREW}},
        {"prescription": {"right": {"sphere": -2.0, "prism": PRISM}, "left": {"sphere": 0.0, "prism": PRISM}}},
        {"wearer": {"name": "<script>alert(1)</script> {{ 7*7 }} %(x)s </p><h1>"}},
    ],
    ids=["missing", "long-word", "long-names", "long-note", "right-to-left", "four-prisms", "hostile"],
)
@pytest.mark.parametrize("size", MOST_PAGES)
def test_a_sheet_stands_up_to_what_is_typed(more: dict[str, Any], size: Print) -> None:
    visit = check_visit(PLAIN | more)
    html = wearer_sheet(visit, shop("eu"), code="en", print_size=size, today=TODAY)
    pdf = PdfReader(BytesIO(write_pdf(html)))
    assert len(pdf.pages) <= MOST_PAGES[size]
    text = text_of(pdf)
    assert "See an eye doctor today" in text
    assert "A line of a note" not in text
    if visit.wearer is not None and visit.wearer.name is not None and "<" in visit.wearer.name:
        assert visit.wearer.name.replace(" ", "") in text.replace(" ", "")  # wherever its lines end
        assert [str(node["/S"]) for node in nodes(pdf)].count("/H1") == 1


def test_a_name_is_set_apart_so_that_it_may_run_the_other_way() -> None:
    html = wearer_sheet(check_visit(PLAIN | {"wearer": {"name": HEBREW}}), shop("eu"), code="en", today=TODAY)
    assert f'<bdi dir="rtl">{HEBREW}</bdi>' in html


def test_the_shops_paragraph_runs_its_own_way_whatever_the_language_of_the_sheet() -> None:
    for words, way in ((HEBREW, "rtl"), ("See you soon.", "ltr")):
        own = Shop(name="Lamplight Opticians", paragraph=words, region="eu", currency="EUR")
        stock = builtin_range().model_copy(update={"shop": own})
        assert f'<p dir="{way}">{words}</p>' in wearer_sheet(check_visit(PLAIN), stock, code="en", today=TODAY)


def test_who_supplied_the_glasses_and_the_warranty_are_named() -> None:
    stock = builtin_range()
    text = wearer_sheet(check_visit(PLAIN | {"dispensed_by": "Sam Fitter"}), stock, code="en", today=TODAY)
    assert "These glasses were supplied by: Sam Fitter" in text
    months = stock.coating_of("broadband").warranty_months
    assert f'Warranty on the coating, in months: <bdi dir="ltr">{months}</bdi>' in text
    assert "were supplied by" not in wearer_sheet(check_visit(PLAIN), stock, code="en", today=TODAY)


# --- many -------------------------------------------------------------------------------------------------------------


def many(count: int) -> list[str]:
    pages = []
    for number in range(count):
        path = DEMO[number % len(DEMO)]
        name = {"wearer": {"name": f"Wearer {number}"}}
        visit = read_visit(path)
        content = visit.model_dump(mode="json", by_alias=True, exclude_none=True) | name
        pages.append(wearer_sheet(check_visit(content), shop("eu"), code="en", today=TODAY))
    return pages


def test_four_sheets_at_once_are_each_their_own() -> None:
    pages = many(4)
    alone = [write_pdf(html) for html in pages]
    with ThreadPoolExecutor(4) as pool:
        assert list(pool.map(write_pdf, pages)) == alone
    assert len(set(alone)) == 4
    for number, content in enumerate(alone):
        assert f"Wearer {number}" in text_of(PdfReader(BytesIO(content)))


@pytest.mark.soak
def test_fifty_sheets_in_a_row_are_right_and_memory_stays_steady() -> None:
    def most_kib() -> int:
        return resource.getrusage(resource.RUSAGE_SELF).ru_maxrss

    pages = many(50)
    for html in pages[:12]:  # warm: every wearer once
        write_pdf(html)
    before = most_kib()
    for number, html in enumerate(pages):
        assert f"Wearer {number}" in text_of(PdfReader(BytesIO(write_pdf(html))))
    assert most_kib() - before < 40 * 1024  # one sheet's own needs, not fifty
