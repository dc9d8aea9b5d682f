"""Every word of every page goes through the catalogue: shown by a language whose every letter is Hebrew."""

import html
import json
import re
from collections.abc import Iterator
from io import BytesIO
from pathlib import Path

import pytest
from flask import Flask
from flask.testing import FlaskClient

from advisor.counsel.caution_texts import CAUTION_TEXTS
from advisor.counsel.visit import read_visit
from advisor.resources import resource_dir
from advisor.web import language as module
from advisor.web import paper
from advisor.web.app import create_app
from advisor.web.filled_form import visit_to_fields
from advisor.web.language import language
from tests.frame_records import WHOLE
from tests.pseudo_language import CODE, write_catalogue

WEARERS = (
    "weak-minus-night-driver", "presbyope-previous-pair", "tinted-pair", "one-good-eye-drilled", "high-plus-child",
    "very-unequal-eyes", "hairdresser-price-limit",
)  # fmt: skip
HEBREW = {"Accept-Language": CODE}
PAPERS = ("sheet", "order", "bench", "turn")
SAID = (
    ("weak-minus-night-driver", "second light"),
    ("presbyope-previous-pair", "headaches"),
    ("tinted-pair", "my own eye"),
)
# Left as they are: the program's name, units, currencies, names of formats, standards and languages.
AS_THEY_ARE = frozenset({"Twolight", "PDF", "mm", "nm", "cm", "cd", "EUR", "EN", "ISO", "English", "LED", "fr"})


@pytest.fixture(scope="module")
def hebrew(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """A catalogue in which no Latin letter is left, in a folder of its own."""
    folder = tmp_path_factory.mktemp("translations")
    write_catalogue(folder)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(module, "TRANSLATIONS", folder)
        language.cache_clear()
        paper.environment.cache_clear()
        yield
    language.cache_clear()
    paper.environment.cache_clear()


@pytest.fixture(scope="module")
def app(tmp_path_factory: pytest.TempPathFactory, hebrew: None) -> Flask:  # noqa: ARG001  # the catalogue comes first
    return create_app(data_dir=tmp_path_factory.mktemp("data"), testing=True)


@pytest.fixture(scope="module")
def client(app: Flask) -> FlaskClient:
    return app.test_client()


def fields_of(wearer: str) -> dict[str, str]:
    fields = visit_to_fields(read_visit(resource_dir("demo_patients") / f"{wearer}.json"))
    return fields | {"token": wearer, "ordered": "0", "wearer.language": CODE}


@pytest.fixture(scope="module")
def saved(client: FlaskClient) -> dict[str, str]:
    """The address of each wearer's saved visit."""
    answers = {wearer: client.post("/visits", data=fields_of(wearer), headers=HEBREW) for wearer in WEARERS}
    return {wearer: answer.headers["Location"] for wearer, answer in answers.items()}


def texts_of(page: str) -> str:
    """Return what a page shows or has read aloud; what stands in fields was typed by somebody."""
    page = re.sub(r"<textarea.*?</textarea>|<(?:script|style)\b.*?</(?:script|style)>", "", page, flags=re.DOTALL)
    spoken = re.findall(r'\b(?:alt|title|aria-label|placeholder|data-working|data-long|data-failed)="([^"]*)"', page)
    return html.unescape("\n".join([*spoken, re.sub(r"<[^>]*>", "\n", page)]))


def latin_words(page: str, typed: frozenset[str] = frozenset()) -> set[str]:
    """Return the words in Latin letters that nobody typed, and that are no citation."""
    text = re.sub(r"\{[^{}]*=[^{}]*\}", "", texts_of(page))  # a value as the range file writes it
    for part in sorted([*typed, *(words.source for words in CAUTION_TEXTS.values())], key=len, reverse=True):
        text = text.replace(part, "") if part else text
    return set(re.findall(r"[A-Za-z]{2,}", text)) - AS_THEY_ARE


def typed_in(wearer: str) -> frozenset[str]:
    """Return what was typed for a wearer, whole and as a list of visits shortens it."""
    fields = fields_of(wearer)
    texts = {fields[name] for name in ("wearer.name", "reference", "note", "worn_now.liked", "worn_now.disliked")}
    first = {fields["wearer.name"].split()[0]}
    return frozenset(texts | first | {f"{text[:77].rsplit(' ', 1)[0]}..." for text in texts})


ALL_TYPED = frozenset(
    text for file in sorted(resource_dir("demo_patients").glob("*.json")) for text in typed_in(file.stem)
)


@pytest.mark.parametrize("wearer", WEARERS)
def test_the_counter_and_its_pictures_are_translated(client: FlaskClient, wearer: str) -> None:
    address = client.post("/demo", data={"wearer": wearer}, headers=HEBREW).headers["Location"].partition("#")[0]
    page = client.get(address, headers=HEBREW).text
    assert '<html lang="he" dir="rtl">' in page
    assert latin_words(page, ALL_TYPED) == set()
    assert latin_words(client.get(f"{address}/pictures", headers=HEBREW).text, typed_in(wearer)) == set()


@pytest.mark.parametrize("paper_name", PAPERS)
@pytest.mark.parametrize("wearer", WEARERS)
def test_papers_are_translated(client: FlaskClient, saved: dict[str, str], wearer: str, paper_name: str) -> None:
    page = client.get(f"{saved[wearer]}/{paper_name}", headers=HEBREW).text
    assert 'dir="rtl"' in page
    assert latin_words(page, typed_in(wearer)) == set()


@pytest.mark.parametrize(("wearer", "says"), SAID)
def test_the_recheck_is_translated(client: FlaskClient, saved: dict[str, str], wearer: str, says: str) -> None:
    form = {"token": "a" * 24, "says": says, "none_of_these": "1", "measured.right.sphere": "-3.00"}
    page = client.post(f"{saved[wearer]}/recheck", data=form, headers=HEBREW).text
    assert "<table" in page
    assert latin_words(page, typed_in(wearer)) == set()


def test_a_sign_for_an_eye_doctor_and_its_slip_are_translated(client: FlaskClient, saved: dict[str, str]) -> None:
    address = f"{saved['tinted-pair']}/recheck"
    form = {"token": "b" * 24, "says": "", "answer.today-rings": "yes"}
    assert latin_words(client.post(address, data=form, headers=HEBREW).text, typed_in("tinted-pair")) == set()
    form = {"token": "c" * 24, "says": "fringes", "none_of_these": "1", "do": "record", "outcome": "remake"}
    client.post(address, data=form | {"who_pays": "shop"}, headers=HEBREW)
    page = client.get(address, headers=HEBREW).text
    (slip,) = set(re.findall(r'href="(/visits/[\w-]+/recheck/[\w-]+)"', page))
    shown = client.get(slip, headers=HEBREW).text
    assert latin_words(shown.replace("fringes", ""), typed_in("tinted-pair")) == set()


def test_files_that_are_brought_in_and_handed_out_are_translated(client: FlaskClient, saved: dict[str, str]) -> None:
    assert latin_words(client.get(f"{saved['tinted-pair']}/files", headers=HEBREW).text) == set()
    lenses = [{"eye": eye, "sphere": -2, "prism": 1, "base": "in", "brand": "-"} for eye in ("right", "left")]
    one = {"resourceType": "VisionPrescription", "status": "draft", "dispense": lenses}
    for content in (json.dumps(one), WHOLE, "{}"):
        file = (BytesIO(content.encode()), "brought.txt")
        page = client.post("/bring-in", data={"file": file}, headers=HEBREW).text
        assert latin_words(page) == set()


@pytest.mark.parametrize("end", ["then", "wearer"])
@pytest.mark.parametrize("wearer", WEARERS[:3])
def test_what_is_kept_about_a_visit_is_translated(
    client: FlaskClient, saved: dict[str, str], wearer: str, end: str
) -> None:
    page = client.get(f"{saved[wearer]}/{end}", headers=HEBREW).text
    assert latin_words(page, typed_in(wearer)) == set()


def test_two_counters_and_erasing_are_translated(client: FlaskClient, saved: dict[str, str]) -> None:
    path = saved["weak-minus-night-driver"]
    mine = fields_of("weak-minus-night-driver") | {"token": "9" * 32, "visit": path.rpartition("/")[2]}
    late = client.post("/visits", data=mine | {"visit_edit": "7", "frame.rim": "drilled"}, headers=HEBREW)
    assert late.status_code == 409
    told = re.search(r'id="told">(.*?)</div>', late.text, re.DOTALL)
    assert told is not None
    assert latin_words(told[1], ALL_TYPED) == set()
    asked = client.post(f"{path}/wearer/erase", data={"visit": path.rpartition("/")[2]}, headers=HEBREW)
    assert asked.status_code == 200
    assert latin_words(asked.text) == set()


FORMS = ("material/0", "coating/3", "tint/0", "design/0", "scene/0", "offer/new", "shop")


PAGES = (
    "/", "/range", "/visits", "/visits/old", "/visits/erased", "/records", "/bring-in", "/care", "/nothing-here",
    "/visits/nobody",
)  # fmt: skip


@pytest.mark.parametrize("address", PAGES)
def test_other_pages_are_translated(client: FlaskClient, saved: dict[str, str], address: str) -> None:
    assert saved
    assert latin_words(client.get(address, headers=HEBREW).text, ALL_TYPED) == set()


@pytest.mark.parametrize("form", FORMS)
def test_forms_of_the_range_are_translated(client: FlaskClient, form: str) -> None:
    assert latin_words(client.get(f"/range/{form}", headers=HEBREW).text) <= {"LED"}


def test_the_shops_own_on_the_sheet_is_translated(client: FlaskClient) -> None:
    page = client.get("/range/sheet", headers=HEBREW).text
    assert 'class="on-paper"' in page
    assert latin_words(page, ALL_TYPED) == set()


def test_what_is_wrong_is_said_in_the_language(client: FlaskClient) -> None:
    typed = {
        "prescription.right.sphere": "-31,5", "prescription.left.sphere": "far", "prescription.left.cylinder": "-1",
        "frame.a_mm": "5", "frame.ed_mm": "900", "wearer.birth_date": "1. 2. 1950", "options.0.material": "nothing",
    }  # fmt: skip
    page = client.post("/counter", data=typed, headers=HEBREW | {"HX-Request": "true"}).text
    assert page.count('class="sentence"') >= 5
    assert latin_words(page, frozenset({"nothing"})) == set()


def test_a_range_that_is_refused_is_refused_in_the_language(client: FlaskClient) -> None:
    changed = client.post("/range/material/0", data={"key": "", "n_d": "9", "abbe": "x"}, headers=HEBREW)
    assert latin_words(changed.text) == set()
    for text in (b"[[material]\n", b"[[material]]\nkey='a'\nabbe=3\n[shop]\nregion='moon'", b"\xff"):
        sent = {"file": (BytesIO(text), "f.toml"), "seen": ""}
        page = client.post("/range/import", data=sent, headers=HEBREW).text
        told = re.search(r'role="alert">(.*?)</div>', page, re.DOTALL)
        assert told is not None
        places = frozenset(
            {"f.toml", "material", "abbe", "density_g_cm3", "shop.region", "international", "eu", "uk", "us"}
        )
        assert latin_words(told.group(1), places) == set()


def test_a_complaint_is_heard_as_the_language_words_it(client: FlaskClient, saved: dict[str, str]) -> None:
    page = client.get(f"{saved['tinted-pair']}/recheck", headers=HEBREW).text
    offered = re.findall(r'<option value="([^"]+)"></option>', page)
    assert len(offered) > 10
    form = {"token": "d" * 24, "says": html.unescape(offered[0]), "none_of_these": "1"}
    answer = client.post(f"{saved['tinted-pair']}/recheck", data=form, headers=HEBREW).text
    assert 'id="h-causes"' in answer


def test_an_untranslated_word_would_be_found(tmp_path: Path) -> None:
    assert tmp_path.exists()
    assert latin_words('<p title="Help">שלום <b>there</b> 3 mm</p><textarea>typed</textarea>') == {"Help", "there"}
