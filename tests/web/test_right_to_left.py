"""A language that runs from right to left, on the screen and on paper: made up for the tests, in Hebrew letters."""

import os
import re
from collections.abc import Iterator
from pathlib import Path

import pypdfium2
import pytest
from fontTools.ttLib import TTFont

from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web import language as module
from advisor.web import paper
from advisor.web.app import create_app
from advisor.web.documents import standing_alone
from advisor.web.figure_rows import unbroken
from advisor.web.language import Language, language
from advisor.web.pdf import is_available, write_pdf
from advisor.web.sheet_page import wearer_sheet
from tests.pseudo_language import CODE, write_catalogue

STATIC = resource_dir("static")
CHROMIUM = Path("/usr/bin/chromium")
NEEDED = os.environ.get("TWOLIGHT_REQUIRE_ALL") == "1"
HEBREW = {"Accept-Language": CODE}
ISOLATE, END, MINUS = "\N{LEFT-TO-RIGHT ISOLATE}", "\N{POP DIRECTIONAL ISOLATE}", "\N{MINUS SIGN}"
needs_pdf = pytest.mark.skipif(not (NEEDED or is_available()), reason="the PDF libraries are not here")
needs_browser = pytest.mark.skipif(not (NEEDED or CHROMIUM.exists()), reason="no Chromium here")


@pytest.fixture(scope="module")
def hebrew(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Language]:
    folder = tmp_path_factory.mktemp("translations")
    write_catalogue(folder)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "TRANSLATIONS", folder)
        language.cache_clear()
        paper.environment.cache_clear()
        yield language(CODE)
    language.cache_clear()
    paper.environment.cache_clear()


@pytest.fixture(scope="module")
def counter(tmp_path_factory: pytest.TempPathFactory, hebrew: Language) -> str:
    """The Counter of a demo wearer in the made-up language."""
    assert hebrew.direction == "rtl"
    client = create_app(data_dir=tmp_path_factory.mktemp("data"), testing=True).test_client()
    address = client.post("/demo", data={"wearer": "weak-minus-night-driver"}, headers=HEBREW).headers["Location"]
    return client.get(address.partition("#")[0], headers=HEBREW).text


def test_figures_are_kept_apart_with_their_sign_before_them(hebrew: Language) -> None:
    assert hebrew.number(-2.25, digits=2) == f"{ISOLATE}{MINUS}2.25{END}"
    assert hebrew.money(35.0, currency="EUR", signed=True) == f"{ISOLATE}+35.00\N{NO-BREAK SPACE}€{END}"
    assert hebrew.percent(0.5).startswith(ISOLATE)


@pytest.mark.parametrize("code", ["en", "es", "fr", "de"])
def test_a_language_that_runs_to_the_right_needs_no_marks(code: str) -> None:
    chosen = Language(code)
    written = [chosen.number(-2.25, digits=2), chosen.money(-35.0, currency="EUR", signed=True), chosen.percent(0.5)]
    assert not set("".join(written)) & {ISOLATE, END}


def test_a_unit_stays_with_its_number() -> None:
    assert unbroken(f"{ISOLATE}2.9{END} mm, {ISOLATE}4.8{END} g") == (
        f"{ISOLATE}2.9\N{NO-BREAK SPACE}mm{END}, {ISOLATE}4.8\N{NO-BREAK SPACE}g{END}"
    )
    assert unbroken("2.9 mm") == "2.9\N{NO-BREAK SPACE}mm"


def test_the_page_runs_to_the_left_and_fields_by_what_is_in_them(counter: str) -> None:
    assert '<html lang="he" dir="rtl">' in counter
    typed = re.findall(r"<(?:input(?=[^>]*inputmode)|textarea)[^>]*>", counter)
    assert len(typed) > 20
    assert [field for field in typed if ' dir="auto"' not in field and ' dir="ltr"' not in field] == []


@pytest.mark.parametrize("name", ["app.css", "paper.css", "pictures.css", "sheet-preview.css", "turn.css"])
def test_style_sheets_name_no_side(name: str) -> None:
    """Start and end turn round with the language; left and right do not, unless a rule turns them round beside it."""
    text = re.sub(r"/\*.*?\*/|@bottom-(?:left|right)", "", (STATIC / "css" / name).read_text("utf-8"), flags=re.DOTALL)
    turned = set(re.findall(r'html\[dir="rtl"\] ([.\w-]+) \{ float', text))
    text = re.sub("|".join(rf"{re.escape(one)} \{{[^}}]*\}}" for one in turned) or "$^", "", text)
    sides = re.findall(r"(?:margin|padding|border)-(?:left|right)|(?:text-align|float|clear): *(?:left|right)", text)
    assert sides == []


@needs_browser
def test_on_the_screen_a_sign_stands_left_of_its_figure(counter: str) -> None:
    from playwright.sync_api import sync_playwright

    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=CHROMIUM, args=["--no-sandbox", "--disable-gpu"])
        page = browser.new_page(viewport={"width": 1366, "height": 768})
        page.route("**", lambda route: route.abort())
        page.set_content(standing_alone(counter.replace("/fonts.css", "/print-fonts.css")))
        places = page.evaluate(
            """() => [...document.querySelectorAll(".difference")].flatMap((one) => {
                const node = [...one.childNodes].find((part) => /−[0-9]/.test(part.data ?? ""));
                if (!node) return [];
                const at = node.data.search(/−[0-9]/);
                return [[at, at + 1].map((k) => {
                    const range = document.createRange();
                    range.setStart(node, k); range.setEnd(node, k + 1);
                    return range.getBoundingClientRect().left;
                })];
            })"""
        )
        first, last = page.evaluate(
            "() => ['.written', '.ledger'].map((one) => document.querySelector(one).getBoundingClientRect().left)"
        )
        browser.close()
    assert len(places) >= 3
    assert [pair for pair in places if pair[0] >= pair[1]] == []
    assert first > last  # what is typed stands at the right, the options to the left of it


@needs_pdf
def test_on_paper_every_figure_reads_from_the_left(hebrew: Language) -> None:
    assert hebrew.language == CODE
    visit = read_visit(resource_dir("demo_patients") / "weak-minus-night-driver.json")
    page = wearer_sheet(visit, builtin_range(), number=1, code=CODE)
    assert 'dir="rtl"' in page
    figures = re.findall(r'<bdi dir="ltr">([^<]+)</bdi>', page)
    assert figures
    pdf = pypdfium2.PdfDocument(write_pdf(page))
    letters = [letter for n in range(len(pdf)) for letter in _letters(pdf, n)]
    row = "".join(letter for letter, _, _ in letters)
    for figure in {re.sub(f"[{ISOLATE}{END}]", "", text) for text in figures if re.search(r"\d[.,]\d", text)}:
        number = re.sub(r"[^\d.,]", "", figure)
        at = row.find(number)
        assert at >= 0, figure
        lefts = [left for _, left, _ in letters[at : at + len(number)]]
        assert lefts == sorted(lefts), figure


def _letters(pdf: pypdfium2.PdfDocument, n: int) -> list[tuple[str, float, float]]:
    """Return each letter of a page with the left and the bottom of its box."""
    text = pdf[n].get_textpage()
    return [
        (letter, *text.get_charbox(k)[:2])
        for k in range(text.count_chars())
        if (letter := text.get_text_range(k, 1)) and letter not in "\r\n"
    ]


def test_the_hebrew_face_has_the_letters_and_the_spaces_between_them() -> None:
    """Print takes a space from the face of the word before it; a face without one prints boxes."""
    for weight in (400, 700):
        shapes = TTFont(STATIC / "fonts" / f"twolight-hebrew-{weight}.ttf").getBestCmap()
        letters = [chr(code) for code in range(ord("א"), ord("ת") + 1)]
        assert [
            letter
            for letter in (*letters, " ", "\N{NO-BREAK SPACE}", "\N{NARROW NO-BREAK SPACE}")
            if ord(letter) not in shapes
        ] == []
        assert [digit for digit in "0123456789" if ord(digit) in shapes] == []  # figures stay those of the text face
