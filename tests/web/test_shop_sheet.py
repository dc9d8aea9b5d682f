"""The shop's own on the wearer's sheet: typed and shown at once, kept whole or not at all, and printed."""

import datetime as dt
import io
import itertools
import re
from functools import cache
from pathlib import Path
from typing import Any

import pypdfium2
import pytest
from click.testing import CliRunner
from flask.testing import FlaskClient
from PIL import Image, ImageDraw
from pypdf import PdfReader
from werkzeug.datastructures import FileStorage
from werkzeug.test import TestResponse, encode_multipart

from advisor.cli import main
from advisor.counsel.sheet_switches import MAY_BE_OFF
from advisor.counsel.stock import Range, Shop, builtin_range, parse_range, range_to_toml
from advisor.counsel.visit import read_visit
from advisor.records.store import Store
from advisor.records.trouble import StoreUnreadable
from advisor.resources import resource_dir
from advisor.web.filled_form import visit_to_fields
from advisor.web.language import languages
from advisor.web.logo import logo_from
from advisor.web.pdf import FileOutside, write_pdf
from advisor.web.sheet_page import Print, care_sheet, wearer_sheet

TODAY = dt.date(2026, 12, 1)
DEMO = sorted(resource_dir("demo_patients").glob("*.json"))
POINTS_A_MM = 72 / 25.4
WORDS = "Come in when a screw is loose or a pad is worn, and we put it right while you wait. " * 8
LIVE = {"HX-Request": "true"}
MOST_PAGES: dict[Print, int] = {"standard": 2, "large": 4}


@cache
def picture(kind: str = "PNG") -> bytes:
    drawn, target = Image.new("RGB", (900, 420), "white"), io.BytesIO()
    ImageDraw.Draw(drawn).ellipse((40, 40, 860, 380), outline=(20, 60, 120), width=30)
    drawn.save(target, kind)
    return target.getvalue()


def stored(store: Store) -> Range:
    current = store.current_range()
    assert current is not None
    return parse_range(current.toml)


def form(client: FlaskClient, *, off: tuple[str, ...] = (), **typed: object) -> dict[str, Any]:
    """The form as a browser sends it: everything as it stands on the page, but for what is typed."""
    page = client.get("/range/sheet").text
    seen = re.search(r'name="seen" value="(\w+)"', page)
    assert seen is not None
    ticked = re.findall(r'name="line" value="([\w-]+)" checked', page)
    empty = {"name": "", "contact": "", "paragraph": "", "paper": "", "wearer": "weak-minus-night-driver"}
    lines = [key for key in ticked if key not in off]
    return {**empty, "seen": seen.group(1), "line": lines, **typed}


def send(client: FlaskClient, data: dict[str, Any], address: str = "/range/sheet") -> TestResponse:
    boundary, body = encode_multipart(data)  # the client itself would leave a large one in a file it never closes
    return client.post(address, data=body, content_type=f'multipart/form-data; boundary="{boundary}"')


def sent(data: bytes, name: str = "logo.png") -> FileStorage:
    return FileStorage(io.BytesIO(data), name)


def shown(page: str) -> str:
    """The sheet as the page shows it, as text."""
    _, _, part = page.partition('class="on-paper"')
    return " ".join(re.sub(r"<[^>]*>", " ", part).split())


# --- the page ---------------------------------------------------------------------------------------------------------


def test_every_line_that_may_be_off_stands_on_the_page_as_it_prints_and_is_on(client: FlaskClient) -> None:
    page = client.get("/range/sheet").text
    assert set(re.findall(r'name="line" value="([\w-]+)" checked', page)) == set(MAY_BE_OFF)
    assert "Dry them with a clean soft cloth." in page
    assert "Price of the pair of lenses: …" in page
    assert "not safety glasses" in shown(page)
    assert 'value="not-eye-protection"' not in page
    assert client.get("/range").text.count('href="/range/sheet"') == 1


def test_the_sheet_follows_what_is_typed_and_nothing_is_stored(client: FlaskClient, store: Store) -> None:
    typed = form(
        client, off=("chosen-price", "soap"), name="Lamp & Light", contact="1 High Street", paragraph=WORDS[:90]
    )
    answer = client.post("/range/sheet/preview", data=typed, headers=LIVE)
    assert answer.status_code == 200
    assert answer.text.startswith('<div id="sheet-preview">')
    text = shown(answer.text)
    for words in ("Lamp &amp; Light", "1 High Street", "Come in when a screw is loose", "not safety glasses"):
        assert words in text
    assert "Price of the pair" not in text
    assert "mild liquid soap" not in text
    assert "mild liquid soap" in shown(client.get("/range/sheet").text)
    assert store.current_range() is None


def test_without_scripting_a_button_shows_the_same(client: FlaskClient, store: Store) -> None:
    answer = send(client, form(client, off=("soap",), name="Lamplight"), "/range/sheet/preview")
    assert "<title>" in answer.text
    assert "Lamplight" in shown(answer.text)
    assert 'value="soap">' in answer.text
    assert 'name="name" value="Lamplight"' in answer.text
    assert store.current_range() is None


@pytest.mark.parametrize("wearer", [path.stem for path in DEMO])
def test_any_demo_wearer_is_shown_whatever_the_shop_sells(client: FlaskClient, store: Store, wearer: str) -> None:
    few = parse_range('[[material]]\nkey = "own"\nn_d = 1.5\nabbe = 58\ndensity_g_cm3 = 1.3\n')
    store.set_range(range_to_toml(few))
    answer = client.post("/range/sheet/preview", data=form(client, wearer=wearer, name="Lamplight"), headers=LIVE)
    assert "Lamplight" in shown(answer.text)
    assert "See an eye doctor today" in shown(answer.text)


def test_headings_of_the_sheet_stand_below_those_of_the_page(client: FlaskClient) -> None:
    page = client.get("/range/sheet").text
    levels = [int(level) for level in re.findall(r"<h(\d)", page)]
    assert levels.count(1) == 1
    assert all(after - before <= 1 for before, after in itertools.pairwise(levels))
    assert "<h3>Your new glasses</h3>" in page


def test_markup_that_is_typed_is_shown_as_typed(client: FlaskClient) -> None:
    evil = "<script>alert(1)</script> {{ 7*7 }} %(x)s"
    typed = form(client, name=evil, contact=evil, paragraph=evil)
    for answer in (client.post("/range/sheet/preview", data=typed, headers=LIVE), send(client, typed)):
        assert "<script>alert" not in answer.text
    page = client.get("/range/sheet").text
    assert "<script>alert" not in page
    assert page.count("&lt;script&gt;alert(1)&lt;/script&gt; {{ 7*7 }} %(x)s") >= 6


# --- keeping ----------------------------------------------------------------------------------------------------------


def test_what_is_typed_is_kept_with_the_logo(client: FlaskClient, store: Store) -> None:
    typed = form(
        client,
        off=("soap",),
        name="Lamplight",
        contact="1 High Street\r\nTelephone 000",
        paragraph=" Come in. ",
        paper="letter",
        logo=sent(picture("JPEG"), "whatever.gif"),
    )
    answer = send(client, typed)
    assert answer.status_code == 303
    shop = stored(store).shop
    assert (shop.name, shop.contact, shop.paragraph) == ("Lamplight", "1 High Street\nTelephone 000", "Come in.")
    assert (shop.paper, shop.lines_off) == ("letter", ("soap",))
    assert shop.default_options == builtin_range().shop.default_options
    assert store.get_logo() == logo_from(picture("JPEG"))
    page = client.get(answer.headers["Location"]).text
    assert "Kept." in page
    assert '<img class="logo" src="/shop/logo.png" alt="Lamplight">' in page
    assert [event.what for event in store.list_events()] == ["range-changed"]


def test_sent_again_unchanged_it_changes_nothing(client: FlaskClient, store: Store) -> None:
    send(client, form(client, name="Lamplight", off=("soap", "heat"), logo=sent(picture())))
    before, logo = stored(store), store.get_logo()
    assert send(client, form(client, name="Lamplight")).status_code == 303
    assert stored(store) == before
    assert store.get_logo() == logo


def test_the_other_form_of_the_shop_leaves_the_sheet_alone(client: FlaskClient, store: Store) -> None:
    send(client, form(client, name="Lamplight", off=("soap",), paragraph="Come in.", paper="letter"))
    page = client.get("/range/shop").text
    assert 'name="paragraph"' not in page
    seen = re.search(r'name="seen" value="(\w+)"', page)
    assert seen is not None
    data = {"seen": seen.group(1), "name": "Other", "region": "uk"}
    assert client.post("/range/shop", data=data).status_code == 303
    shop = stored(store).shop
    assert (shop.name, shop.region) == ("Other", "uk")
    assert (shop.lines_off, shop.paragraph, shop.paper) == (("soap",), "Come in.", "letter")


def test_the_logo_is_taken_away(client: FlaskClient, store: Store) -> None:
    send(client, form(client, logo=sent(picture())))
    assert store.get_logo() is not None
    typed = form(client, without_logo="1")
    assert "logo.png" not in client.post("/range/sheet/preview", data=typed, headers=LIVE).text
    assert store.get_logo() is not None
    assert send(client, typed).status_code == 303
    assert store.get_logo() is None
    assert client.get("/shop/logo.png").status_code == 404


@pytest.mark.parametrize(
    ("typed", "field", "words"),
    [
        ({"paragraph": "x" * 601}, "paragraph", "at most 600 letters"),
        ({"name": "x" * 201}, "name", "at most 200 letters"),
        ({"contact": "x" * 4001}, "contact", "at most 4000 letters"),
        ({"paper": "A5"}, "paper", "Use one of"),
        ({"logo": sent(b"<svg/>", "logo.png")}, "logo", "Only PNG and JPEG"),
        ({"logo": sent(picture() + b"<script>", "logo.png")}, "logo", "Something else stands in the file"),
        ({"logo": sent(picture() + bytes(1024 * 1024), "logo.png")}, "logo", "larger than 1 MB"),
        ({"logo": sent(picture()[:500], "logo.png")}, "logo", "broken or cut off"),
    ],
)
def test_a_fault_stands_beside_its_field_and_nothing_changes(
    client: FlaskClient, store: Store, typed: dict[str, Any], field: str, words: str
) -> None:
    more = {"contact": "Typed here"} | typed
    answer = send(client, form(client, off=("soap",), **more))
    assert answer.status_code == 422
    said = re.search(rf'id="fault-{field}">([^<]*)<', answer.text)
    assert said is not None
    assert words in said.group(1)
    assert str(more["contact"])[:10] in answer.text
    assert 'value="soap">' in answer.text
    assert ("Choose it once more" in answer.text) is (field == "logo")
    assert store.current_range() is None
    assert store.get_logo() is None


def test_a_good_logo_is_not_kept_beside_a_wrong_field(client: FlaskClient, store: Store) -> None:
    answer = send(client, form(client, paragraph="x" * 601, logo=sent(picture())))
    assert answer.status_code == 422
    assert "Choose it once more" in answer.text
    assert store.get_logo() is None


def test_while_something_is_wrong_the_sheet_says_what_to_mend(client: FlaskClient) -> None:
    answer = client.post("/range/sheet/preview", data=form(client, paragraph="x" * 601), headers=LIVE)
    assert answer.status_code == 200
    assert "at most 600 letters" in answer.text
    assert "on-paper" not in answer.text


def test_a_change_made_meanwhile_is_not_overwritten_and_what_was_typed_stays(client: FlaskClient, store: Store) -> None:
    late = form(client, name="Late", logo=sent(picture()))
    send(client, form(client, name="First"))
    answer = send(client, late)
    assert answer.status_code == 409
    assert "nothing was overwritten" in answer.text
    assert 'name="name" value="Late"' in answer.text
    assert stored(store).shop.name == "First"
    assert store.get_logo() is None


def test_a_line_that_may_not_be_off_prints_whatever_is_sent(client: FlaskClient, store: Store) -> None:
    assert send(client, form(client, line=[])).status_code == 303  # every tick taken away
    assert set(stored(store).shop.lines_off or ()) == set(MAY_BE_OFF)
    text = shown(client.get("/range/sheet").text)
    for words in ("not safety glasses", "Do not drive or cycle until", "Keep your old pair", "See an eye doctor today"):
        assert words in text
    assert "Rinse the lenses" not in text


# --- the logo ---------------------------------------------------------------------------------------------------------


def test_the_logo_is_a_picture_that_no_cache_keeps(client: FlaskClient) -> None:
    send(client, form(client, logo=sent(picture())))
    answer = client.get("/shop/logo.png")
    assert answer.data == logo_from(picture())
    assert answer.headers["Content-Type"] == "image/png"
    assert answer.headers["Cache-Control"] == "no-store"
    assert answer.headers["X-Content-Type-Options"] == "nosniff"


def test_a_logo_damaged_in_the_records_is_told(store: Store) -> None:
    store.set_setting("logo", "no base64 at all")
    with pytest.raises(StoreUnreadable):
        store.get_logo()


def with_own(region: str = "eu", paper: str | None = None) -> Range:
    own = Shop(
        name="Lamplight Opticians",
        contact="1 High Street\nTelephone 000 000",
        region=region,
        currency="EUR",
        paragraph=WORDS[:600],
        paper="letter" if paper == "letter" else "A4" if paper == "A4" else None,
    )
    return builtin_range().model_copy(update={"shop": own})


@cache
def printed(path: Path, size: Print, region: str = "eu", code: str = "en") -> bytes:
    logo = logo_from(picture())
    html = wearer_sheet(read_visit(path), with_own(region), code=code, print_size=size, today=TODAY, logo=logo)
    return write_pdf(html, logo=logo)


@pytest.mark.parametrize("size", MOST_PAGES)
def test_with_a_logo_and_600_letters_a_sheet_still_fits_its_pages(size: Print) -> None:
    for path in DEMO:
        pdf = PdfReader(io.BytesIO(printed(path, size, "us")))  # the shorter paper
        assert len(pdf.pages) <= MOST_PAGES[size], path.stem
        assert "Come in when a screw is loose" in " ".join(" ".join(p.extract_text() for p in pdf.pages).split())


@pytest.mark.parametrize("code", [code for code in languages() if code != "en"])
@pytest.mark.parametrize("size", MOST_PAGES)
def test_the_longest_sheets_fit_in_every_other_language_too(size: Print, code: str) -> None:
    for name in ("high-plus-child", "tinted-pair"):
        path = resource_dir("demo_patients") / f"{name}.json"
        pdf = PdfReader(io.BytesIO(printed(path, size, "eu", code)))
        assert len(pdf.pages) <= MOST_PAGES[size], name


def test_the_shops_words_come_after_the_signs_for_an_eye_doctor() -> None:
    html = wearer_sheet(read_visit(DEMO[0]), with_own(), code="en", today=TODAY)
    assert html.index("See an eye doctor today") < html.index("Come in when a screw is loose")


def test_the_page_about_care_keeps_to_its_pages_too() -> None:
    logo = logo_from(picture())
    for size, most in (("standard", 1), ("large", 2)):
        html = care_sheet(None, with_own("us"), code="en", print_size=size, today=TODAY, logo=logo)  # type: ignore[arg-type]  # one of the two words
        assert len(PdfReader(io.BytesIO(write_pdf(html, logo=logo))).pages) <= most


def figures(node: Any) -> list[Any]:
    node = node.get_object()
    if isinstance(node, list):
        return [found for part in node for found in figures(part)]
    if not hasattr(node, "get"):
        return []
    own = [node] if node.get("/S") == "/Figure" else []
    return own + (figures(node["/K"]) if "/K" in node else [])


@pytest.mark.parametrize("size", MOST_PAGES)
def test_in_the_pdf_the_logo_is_a_figure_with_words_in_reading_order(size: Print) -> None:
    root: Any = PdfReader(io.BytesIO(printed(DEMO[3], size))).trailer["/Root"]
    found = figures(root["/StructTreeRoot"]["/K"])
    assert str(found[0]["/Alt"]) == "Lamplight Opticians"
    assert [str(one["/Alt"]).startswith("Mirrored away") for one in found] == [False, True, True]


@pytest.mark.parametrize("size", MOST_PAGES)
def test_the_logo_prints_at_most_18_mm_high_at_the_top_of_the_first_page(size: Print) -> None:
    page = pypdfium2.PdfDocument(printed(DEMO[3], size))[0]
    (box,) = [one.get_bounds() for one in page.get_objects() if one.type == pypdfium2.raw.FPDF_PAGEOBJ_IMAGE]
    left, bottom, right, top = box
    assert top - bottom == pytest.approx(18 * POINTS_A_MM, abs=0.5)
    assert (right - left) / (top - bottom) == pytest.approx(600 / 280, rel=0.01)  # its own shape
    assert top > page.get_height() - 15 * POINTS_A_MM


def test_a_page_gets_the_one_picture_handed_over_and_no_other() -> None:
    asks = '<!doctype html><html lang="en"><title>t</title><img alt="x" src="{}">'
    logo = logo_from(picture())
    assert write_pdf(asks.format("/shop/logo.png"), logo=logo).startswith(b"%PDF-")
    with pytest.raises(FileOutside):
        write_pdf(asks.format("/shop/logo.png"))
    for address in (
        "/shop/other.png",
        "/shop/logo.png?x",
        "/shop/../shop/logo2.png",
        "http://example.com/shop/logo.png",
    ):
        with pytest.raises(FileOutside):
            write_pdf(asks.format(address), logo=logo)


@pytest.mark.parametrize(
    ("region", "paper", "mm"),
    [("eu", "letter", (215.9, 279.4)), ("us", "A4", (210, 297)), ("us", None, (215.9, 279.4))],
)
def test_the_shops_own_paper_counts_before_the_regions(region: str, paper: str | None, mm: tuple[float, float]) -> None:
    html = wearer_sheet(read_visit(DEMO[0]), with_own(region, paper), code="en", today=TODAY)
    box = PdfReader(io.BytesIO(write_pdf(html))).pages[0].mediabox
    assert (float(box.width), float(box.height)) == pytest.approx([POINTS_A_MM * side for side in mm], abs=0.5)


# --- saved visits, and the command line -------------------------------------------------------------------------------


def test_a_visit_is_printed_again_with_the_words_of_its_day_and_the_logo_of_today(client: FlaskClient) -> None:
    send(client, form(client, name="Old name", paragraph="Old words.", off=("soap",), logo=sent(picture())))
    fields = visit_to_fields(read_visit(DEMO[0])) | {"token": "a" * 24, "wearer.language": "en"}
    address = client.post("/visits", data=fields).headers["Location"]
    other = io.BytesIO()
    Image.new("RGB", (50, 50), (90, 0, 0)).save(other, "PNG")
    send(client, form(client, name="New name", paragraph="New words.", logo=sent(other.getvalue())))
    for paper in ("sheet", "care"):
        page = client.get(f"{address}/{paper}").text
        assert "Old words." in page
        assert "New words." not in page
        assert "mild liquid soap" not in page
        assert '<img class="logo" src="/shop/logo.png" alt="Old name">' in page
        images = [
            one
            for one in pypdfium2.PdfDocument(client.get(f"{address}/{paper}.pdf").data)[0].get_objects()
            if one.type == pypdfium2.raw.FPDF_PAGEOBJ_IMAGE
        ]
        assert [one.get_px_size() for one in images] == [(50, 50)]
    assert "logo.png" not in client.get(f"{address}/bench").text


def test_the_command_prints_the_logo_of_the_records(tmp_path: Path) -> None:
    data, out = tmp_path / "data", tmp_path / "sheet.html"
    data.mkdir()
    with Store.open(data) as store:
        store.set_range(range_to_toml(with_own()), logo=logo_from(picture()))

    def run(*given: object) -> str:
        answer = CliRunner().invoke(
            main, ["--data", str(data), "sheet", str(DEMO[0]), "--language", "en", *map(str, given)]
        )
        assert answer.exit_code == 0, answer.output
        return out.read_text("utf-8") if out.exists() else ""

    page = run("-o", out)
    assert '<img class="logo" src="data:image/png;base64,iVBOR' in page
    assert "/shop/logo.png" not in page
    assert "/shop/logo.png" not in run("-o", out, "--care-only")
    run("-o", tmp_path / "sheet.pdf")
    root: Any = PdfReader(tmp_path / "sheet.pdf").trailer["/Root"]
    assert str(figures(root["/StructTreeRoot"]["/K"])[0]["/Alt"]) == "Lamplight Opticians"
    (tmp_path / "many").mkdir()
    run("-o", tmp_path / "many")
    root = PdfReader(tmp_path / "many" / f"{DEMO[0].stem}.pdf").trailer["/Root"]
    assert str(figures(root["/StructTreeRoot"]["/K"])[0]["/Alt"]) == "Lamplight Opticians"


# --- the Counter ------------------------------------------------------------------------------------------------------


def test_who_dispensed_is_typed_at_the_counter_and_printed_and_care_is_a_paper_too(client: FlaskClient) -> None:
    fields = visit_to_fields(read_visit(DEMO[0])) | {"token": "b" * 24, "wearer.language": "en"}
    assert fields["dispensed_by"] == ""
    address = client.post("/visits", data=fields | {"dispensed_by": "Sam Fitter"}).headers["Location"]
    page = client.get(address).text
    assert 'name="dispensed_by" value="Sam Fitter"' in page
    assert f'href="{address}/care"' in page
    assert f'href="{address}/care.pdf"' in page
    assert "These glasses were supplied by: Sam Fitter" in client.get(f"{address}/sheet").text
    assert 'name="dispensed_by" value=""' in client.get("/").text


def test_a_name_too_long_is_marked_where_it_stands(client: FlaskClient) -> None:
    fields = visit_to_fields(read_visit(DEMO[0])) | {"token": "c" * 24, "dispensed_by": "x" * 201}
    page = client.post("/counter", data=fields, headers={"HX-Request": "true"}).text
    assert "at most 200 letters" in page
    assert "ispensed by" in page
