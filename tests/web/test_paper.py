"""Pages for paper: texts of one language only, nothing fetched from anywhere, and a PDF that holds the words."""

import io
import os
from typing import Any

import pytest
from jinja2 import UndefinedError
from pypdf import PdfReader

from advisor.counsel.phrases import Phrase, say
from advisor.counsel.stock import builtin_range
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web import pdf
from advisor.web.documents import standing_alone
from advisor.web.language import language
from advisor.web.paper import OnPaper, environment, together
from advisor.web.pdf import PdfFailed, PdfUnavailable, is_available, write_pdf
from advisor.web.sheet_page import wearer_sheet

needs_pango = pytest.mark.skipif(
    not is_available() and not os.environ.get("TWOLIGHT_REQUIRE_ALL"), reason="the Pango libraries are missing"
)


def rendered(template: str, **values: object) -> str:
    return environment("en").from_string(template).render(**values)


def page(body: str, head: str = "") -> str:
    title = "<title>A page</title>"
    return f'<!doctype html><html lang="en"><head>{title}{head}</head><body><h1>Words</h1>{body}</body></html>'


# --- the template environment ----------------------------------------------------------------------------------------


def test_what_a_person_typed_is_text_and_never_markup() -> None:
    assert rendered("{{ name }}", name="<script>alert(1)</script>") == "&lt;script&gt;alert(1)&lt;/script&gt;"


def test_a_value_that_is_missing_stops_the_page() -> None:
    with pytest.raises(UndefinedError):
        rendered("{{ naem }}", name="x")


def test_filters_write_figures_and_a_dash_for_none() -> None:
    template = "{{ v|number(2, true) }}|{{ none|number }}|{{ f|percent(2) }}|{{ none|percent }}|{{ none|day }}"
    assert without_bdi(rendered(template, v=-2.25, f=0.0769)) == "−2.25|–|7.69 %|–|–"
    assert without_bdi(rendered("{{ p|money('EUR') }}|{{ none|money('EUR') }}", p=80)) == "€80.00|–"


def without_bdi(html: str) -> str:
    return html.replace('<bdi dir="ltr">', "").replace("</bdi>", "")


def test_a_figure_runs_left_to_right_with_its_sign_before_it_in_any_script() -> None:
    assert rendered("{{ v|number(2, true) }}", v=-4.25) == '<bdi dir="ltr">−4.25</bdi>'
    assert rendered("{{ _('Add %(add)s', add=v|number(2, true)) }}", v=2) == 'Add <bdi dir="ltr">+2.00</bdi>'


@pytest.mark.parametrize(
    ("text", "way"),
    [
        ("Ann Bo", "ltr"),
        ("2 \u05d3\u05e6\u05de\u05d1\u05e8 2026", "rtl"),
        ("1 \u0644\u064a", "rtl"),
        ("1 High Street", "ltr"),
        ("A-1", "ltr"),
        ("42", "ltr"),
        ("", "ltr"),
    ],
)  # the first strong letter decides: Unicode Standard Annex 9, rules P2 and P3
def test_what_was_typed_and_a_date_run_their_own_way(text: str, way: str) -> None:
    assert rendered("{{ text|apart }}", text=text) == f'<bdi dir="{way}">{text}</bdi>'
    assert rendered("{{ text|direction }}", text=text) == way


def test_no_line_ends_between_a_figure_and_its_unit() -> None:
    spaced = "{{ v|number(1) }} mm, {{ v|number(1) }} % of, {{ v|number(1) }} months"
    assert (
        without_bdi(together(rendered(spaced, v=2))) == "2.0\N{NO-BREAK SPACE}mm, 2.0\N{NO-BREAK SPACE}% of, 2.0 months"
    )


def test_a_sentence_of_the_domain_keeps_its_figures_apart_and_what_was_typed_as_text() -> None:
    phrase = Phrase("x", {"low_percent": 0.25, "material": "<b>%(x)s</b>"})
    said = say(phrase, {"x": "%(low_percent)s %% & %(material)s"}, OnPaper(language("en")))
    assert rendered("{{ said }}", said=said) == '<bdi dir="ltr">0.2</bdi> % &amp; &lt;b&gt;%(x)s&lt;/b&gt;'


def test_a_marked_text_with_a_percent_sign_and_a_figure_stays_whole() -> None:
    assert rendered("{{ _('%(share)s %% of the light', share=share) }}", share="7.7") == "7.7 % of the light"


def test_the_texts_of_a_marked_call_are_escaped_with_their_figures() -> None:
    assert rendered("{{ _('for %(name)s', name=name) }}", name="<b>") == "for &lt;b&gt;"


# --- fetching --------------------------------------------------------------------------------------------------------

OUTSIDE = [
    "file:///etc/passwd",
    "http://example.com/a.png",
    "//example.com/a.png",
    "https://twolight.invalid/static/favicon.svg",
    "http://twolight.invalid@example.com/static/favicon.svg",
    "http://twolight.invalid.example.com/static/favicon.svg",
    "http://twolight.invalid:81/static/favicon.svg",
    "data:image/png;base64,iVBORw0KGgo=",
    "ftp://example.com/a",
    "/static/../pyproject.toml",
    "/static/%2e%2e/pyproject.toml",
    "/static/..%2fpyproject.toml",
    "/static//etc/passwd",
    "/static/%00",
    "/static/none.svg",
    "/static/",
    "/pyproject.toml",
    "relative.png",
]


@needs_pango
@pytest.mark.parametrize("address", OUTSIDE)
def test_a_page_that_asks_for_anything_outside_the_program_is_not_written(address: str) -> None:
    with pytest.raises(PdfFailed, match="outside the program"):
        write_pdf(page(f'<img alt="" src="{address}">'))


@needs_pango
@pytest.mark.parametrize(
    "asks",
    [
        '<link rel="stylesheet" href="http://example.com/a.css">',
        '<link rel="attachment" href="file:///etc/passwd">',
        "<style>@import url(file:///etc/passwd);</style>",
        "<style>body { background: url(http://example.com/a.png) }</style>",
        "<style>@font-face { font-family: f; src: url(file:///etc/passwd) } body { font-family: f }</style>",
        '<object data="file:///etc/passwd"></object>',
        '<embed src="file:///etc/passwd">',
        '<svg width="9" height="9"><image href="file:///etc/passwd" width="9" height="9"/></svg>',
    ],
)
def test_no_other_way_of_asking_is_answered_either(asks: str) -> None:
    with pytest.raises(PdfFailed, match="outside the program"):
        write_pdf(page(asks, head=asks if asks.startswith("<link") else ""))


@needs_pango
def test_a_file_of_the_program_is_answered_and_a_link_is_not_fetched() -> None:
    made = write_pdf(page('<img alt="A lamp" src="/static/favicon.svg"> <a href="http://example.com/">a link</a>'))
    assert made.startswith(b"%PDF-")


# --- the file --------------------------------------------------------------------------------------------------------


@needs_pango
def test_the_pdf_holds_the_words_their_language_a_title_and_tags() -> None:
    reader = PdfReader(io.BytesIO(write_pdf(page("<p>Left eye −2.25 D, café 眼</p>"))))
    text = reader.pages[0].extract_text()
    assert "Left eye −2.25 D, café" in text
    assert reader.metadata is not None
    assert reader.metadata.title == "A page"
    root: Any = reader.root_object
    assert root["/Lang"] == "en"
    assert root["/MarkInfo"] == {"/Marked": True}


@needs_pango
def test_a_wearers_sheet_can_be_read_out_of_its_pdf() -> None:
    visit = read_visit(resource_dir("demo_patients") / "weak-minus-night-driver.json")
    assert visit.wearer is not None
    assert visit.wearer.name is not None
    reader = PdfReader(io.BytesIO(write_pdf(wearer_sheet(visit, builtin_range()))))
    text = " ".join(" ".join(sheet.extract_text() for sheet in reader.pages).split())
    assert visit.wearer.name in text
    assert "These are not safety glasses." in text
    assert "Rinse the lenses with lukewarm water before you wipe them." in text


def test_a_sheet_that_stands_alone_asks_for_nothing() -> None:
    visit = read_visit(resource_dir("demo_patients") / "weak-minus-night-driver.json")
    html = standing_alone(wearer_sheet(visit, builtin_range()))
    assert "/static/" not in html
    assert "<link" not in html
    assert 'url("../' not in html
    assert "http://" not in html.replace("http://www.w3.org/", "")


def test_without_the_libraries_the_way_out_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    def missing() -> None:
        raise PdfUnavailable("No PDF can be made here")

    monkeypatch.setattr(pdf, "_weasyprint", missing)
    assert not pdf.is_available()
    with pytest.raises(PdfUnavailable):
        pdf.write_pdf("<p>x</p>")


# French sets a no-break space before a colon, the others none; what was typed is escaped (common practice, no source).
@pytest.mark.parametrize(
    ("code", "text"),
    [
        ("en", "Rim: &lt;b&gt;:"),
        ("es", "Aro: &lt;b&gt;:"),
        ("fr", "Type de monture\N{NO-BREAK SPACE}: &lt;b&gt;\N{NO-BREAK SPACE}:"),
        ("de", "Rand: &lt;b&gt;:"),
    ],
)
def test_a_label_takes_its_colon_as_the_language_sets_it(code: str, text: str) -> None:
    assert environment(code).from_string('{{ _("Rim")|colon }} {{ "<b>"|colon }}').render() == text
