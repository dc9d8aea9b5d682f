"""Turn round: the page for the wearer's eyes, its language, its prices, its keys, and how large it is written."""

import json
import re
from collections.abc import Iterator
from html import unescape
from pathlib import Path

import pytest
from axe_playwright_python.sync_playwright import Axe
from babel.messages.catalog import Catalog
from babel.messages.mofile import write_mo
from flask import Flask
from flask.testing import FlaskClient
from playwright.sync_api import Browser, Page, expect

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.store import Store
from advisor.resources import resource_dir
from advisor.web import language as module
from advisor.web.language import language
from advisor.web.paper import environment
from tests.chromium import chromium, served

LEAST_PX = 24.0
WEARER = "hairdresser-price-limit"


@pytest.fixture(autouse=True)
def catalogues(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """A folder of catalogues without any, so that the page is in English whatever the wearer speaks."""
    monkeypatch.setattr(module, "TRANSLATIONS", tmp_path / "translations")
    for kept in (language, environment):
        kept.cache_clear()
    yield tmp_path / "translations"
    for kept in (language, environment):
        kept.cache_clear()


def content(name: str) -> dict[str, object]:
    loaded: dict[str, object] = json.loads((resource_dir("demo_patients") / f"{name}.json").read_text("utf-8"))
    return loaded


def saved(store: Store, name: str, **changes: object) -> str:
    text = json.dumps(content(name) | changes)
    return store.save_visit(text, range_toml=range_to_toml(builtin_range()), version="0", answer_json="{}").id


def drafted(client: FlaskClient, name: str) -> str:
    return client.post("/demo", data={"wearer": name}).headers["Location"]


def drafts(store: Store) -> int:
    with store._engine.begin() as connection:
        return int(connection.exec_driver_sql("SELECT count(*) FROM draft").scalar_one())


def sent_form(page: str) -> dict[str, str | list[str]]:
    """What a browser sends of the Counter's form as it stands."""
    form = page[page.index('id="visit-form"') : page.index("</form>", page.index('id="visit-form"'))]
    found: dict[str, str | list[str]] = {}
    for tag in re.findall(r"<input [^>]*>", form):
        name, value = re.search(r'name="([^"]*)"', tag), re.search(r'value="([^"]*)"', tag)
        ticked = not re.search(r'type="(checkbox|radio)"', tag) or " checked" in tag
        if name and ticked and 'type="checkbox"' in tag:
            found[name[1]] = [*found.get(name[1], []), unescape(value[1] if value else "")]
        elif name and ticked:
            found[name[1]] = unescape(value[1] if value else "")
    for name_, body in re.findall(r'<select[^>]* name="([^"]*)"[^>]*>(.*?)</select>', form, re.S):
        chosen = re.search(r'<option value="([^"]*)" selected', body)
        found[name_] = unescape(chosen[1] if chosen else "")
    for name_, body in re.findall(r'<textarea[^>]* name="([^"]*)"[^>]*>(.*?)</textarea>', form, re.S):
        found[name_] = unescape(body)
    return found


def test_a_draft_and_a_saved_visit_turn_round_alike(client: FlaskClient, store: Store) -> None:
    draft, visit = drafted(client, WEARER), f"/visits/{saved(store, WEARER)}"
    pages = [client.get(f"{place}/turn") for place in (draft, visit)]
    assert [page.status_code for page in pages] == [200, 200]
    pairs = [page.text[page.text.index('class="pairs') : page.text.index("<footer")] for page in pages]
    assert pairs[0] == pairs[1]
    assert pairs[0].count("<section") == 3
    for place, page in zip((draft, visit), pages, strict=True):
        assert f'href="{place}" data-turn="F9 Escape"' in page.text


def test_the_title_and_the_page_tell_nothing_of_the_wearer_but_a_first_name(client: FlaskClient, store: Store) -> None:
    visit = content(WEARER)
    wearer = visit["wearer"]
    assert isinstance(wearer, dict)
    first, family = str(wearer["name"]).split()
    page = client.get(f"/visits/{saved(store, WEARER, note='Complains about her sister')}/turn").text
    assert "<title>Your glasses</title>" in page
    assert f"<h1>Your glasses, {first}</h1>" in page
    for private in (family, str(wearer["birth_year"]), str(visit["reference"]), "Complains"):
        assert private not in page


def test_prices_are_hidden_by_a_link_and_nothing_is_changed(client: FlaskClient, store: Store) -> None:
    place = f"/visits/{saved(store, WEARER)}/turn"
    shown = client.get(place).text
    hidden = client.get(f"{place}?prices=hidden").text
    assert f'href="{place}?prices=hidden">Hide prices' in shown
    assert "What it costs" in shown
    assert "€" in shown
    assert f'href="{place}">Show prices' in hidden
    assert "What it costs" not in hidden
    assert "€" not in hidden
    assert client.get(place).text == shown
    assert drafts(store) == 0


def test_an_unknown_price_is_no_number(client: FlaskClient, store: Store) -> None:
    own = {"n_d": 1.5, "abbe": 58, "density_g_cm3": 1.3}
    visit = saved(store, WEARER, options=[{"material": own, "coating": "bare"}], ordered=None, baseline=0)
    page = client.get(f"/visits/{visit}/turn").text
    assert re.search(r"What it costs</h3>\s*<p class=\"lead\">Ask us</p>", page)
    assert "€" not in page


def test_a_form_that_cannot_be_worked_out_says_so_and_leads_back(client: FlaskClient) -> None:
    draft = client.post("/counter", data={"prescription.right.sphere": "-1", "option_count": "1"}).headers["Location"]
    draft = draft.partition("#")[0]
    answer = client.get(f"{draft}/turn")
    assert answer.status_code == 409
    assert "nothing to compare yet" in answer.text
    assert f'href="{draft}"' in answer.text
    assert client.get("/counter/gone/turn").status_code == 404
    assert client.get("/visits/gone/turn").status_code == 404


def test_the_button_keeps_what_was_typed(client: FlaskClient, store: Store) -> None:
    draft = drafted(client, WEARER)
    form = sent_form(client.get(draft).text)
    form["prescription.right.sphere"] = "-7"
    answer = client.post("/counter/turn", data=form)
    assert (answer.status_code, answer.headers["Location"]) == (303, f"{draft}/turn")
    kept = json.loads(store.get_draft(draft.rsplit("/", 1)[1]).fields_json)
    assert kept["fields"]["prescription.right.sphere"] == "-7"


@pytest.mark.parametrize("name", ["hairdresser-price-limit", "tinted-pair", "presbyope-previous-pair"])
def test_a_saved_visit_that_was_not_changed_needs_no_draft(client: FlaskClient, store: Store, name: str) -> None:
    place = f"/visits/{saved(store, name)}"
    form = sent_form(client.get(place).text)
    assert client.post("/counter/turn", data=form).headers["Location"] == f"{place}/turn"
    assert drafts(store) == 0
    changed = client.post("/counter/turn", data=form | {"prescription.right.sphere": "-7"})
    assert re.fullmatch(r"/counter/[\w-]+/turn", changed.headers["Location"])
    assert drafts(store) == 1


def test_an_untouched_form_goes_back_to_the_start_and_another_window_is_not_overwritten(client: FlaskClient) -> None:
    assert client.post("/counter/turn", data={"option_count": "1"}).headers["Location"] == "/"
    draft = drafted(client, WEARER)
    form = sent_form(client.get(draft).text)
    client.post("/counter", data=form | {"prescription.right.sphere": "-6"})
    assert client.post("/counter/turn", data=form | {"prescription.right.sphere": "-7"}).status_code == 409
    assert 'value="-6"' in client.get(draft).text
    assert client.get("/counter/turn").status_code == 404  # a draft of that name, which there is not
    foreign = client.post("/counter/turn", data=form, headers={"Sec-Fetch-Site": "cross-site"})
    assert foreign.status_code == 403


@pytest.fixture
def spanish(catalogues: Path) -> None:
    """A catalogue of three texts."""
    folder = catalogues / "es" / "LC_MESSAGES"
    folder.mkdir(parents=True)
    catalogue = Catalog(locale="es")
    catalogue.add("Your glasses", "Sus gafas")
    catalogue.add("What it costs", "Lo que cuesta")
    catalogue.add("both lenses %(pair_g)s g", "ambas lentes %(pair_g)s g", flags={"python-format"})
    with (folder / "messages.mo").open("wb") as stream:
        write_mo(stream, catalogue)


@pytest.mark.usefixtures("spanish")
def test_the_page_speaks_the_wearers_language_and_the_screen_its_own(client: FlaskClient, store: Store) -> None:
    own = saved(store, WEARER, wearer={"name": "Nina", "language": "es"})
    page = client.get(f"/visits/{own}/turn").text
    assert '<html lang="es"' in page
    assert "<title>Sus gafas</title>" in page
    assert "Lo que cuesta" in page
    assert "ambas lentes" in page
    assert re.search(r"\d,\d\smm", page)  # decimal comma, by the Unicode CLDR
    assert '<html lang="en"' in client.get(f"/visits/{own}").text
    other = saved(store, WEARER, wearer={"name": "Nina", "language": "cy"})  # no texts in it: the screen's
    assert '<html lang="en"' in client.get(f"/visits/{other}/turn").text
    client.set_cookie("screen_language", "es")
    assert '<html lang="es"' in client.get(f"/visits/{other}/turn").text


# In a browser: keys, and how large the page is written.


@pytest.fixture
def address(app: Flask) -> Iterator[str]:
    with served(app) as place:
        yield place


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    with chromium() as started:
        yield started


@pytest.fixture
def page(browser: Browser) -> Iterator[Page]:
    context = browser.new_context(viewport={"width": 1366, "height": 768}, bypass_csp=True)  # axe is put in as a script
    yield context.new_page()
    context.close()


def open_demo(page: Page, address: str, wearer: str) -> None:
    page.goto(f"{address}/")
    page.get_by_label("Open a demo wearer").select_option(wearer)
    page.get_by_role("button", name="Open", exact=True).click()
    expect(page.locator("#why-price")).to_be_visible()


SIZES = """() => [...document.body.querySelectorAll("*")]
  .filter((one) => [...one.childNodes].some((node) => node.nodeType === 3 && node.textContent.trim()))
  .filter((one) => one.getClientRects().length)
  .map((one) => [one.textContent.trim().slice(0, 40), parseFloat(getComputedStyle(one).fontSize)])"""


@pytest.mark.parametrize("wearer", ["tinted-pair", "presbyope-previous-pair"])
def test_every_text_is_24_px_or_more_at_every_width_and_nothing_scrolls_sideways(
    page: Page, address: str, store: Store, wearer: str
) -> None:
    for place in (f"/visits/{saved(store, wearer)}/turn", f"/visits/{saved(store, wearer)}/turn?prices=hidden"):
        page.goto(address + place)
        for width in (320, 820, 1366):
            page.set_viewport_size({"width": width, "height": 768})
            sizes = page.evaluate(SIZES)
            assert len(sizes) > 30
            assert [one for one in sizes if one[1] < LEAST_PX] == []
            beyond = page.evaluate("() => document.documentElement.scrollWidth - innerWidth")
            assert beyond <= 0, width
            # a sentence has at least the width of its row, or nobody reads it
            narrow = page.evaluate("() => [...document.querySelectorAll('.matter p')].map((one) => one.offsetWidth)")
            assert min(narrow) > 250, width


def test_rows_stand_level_across_the_options(page: Page, address: str, store: Store) -> None:
    page.goto(f"{address}/visits/{saved(store, 'tinted-pair')}/turn")
    tops = page.evaluate(
        "() => [...document.querySelectorAll('.pair')].map((one) =>"
        " [...one.querySelectorAll('.matter')].map((cell) => Math.round(cell.getBoundingClientRect().top)))"
    )
    assert len(tops) == 4
    assert all(row == tops[0] for row in tops)
    assert len(set(tops[0])) == 3


@pytest.mark.parametrize("back", ["F9", "Escape"])
def test_a_key_turns_round_and_back_with_what_was_typed_last(page: Page, address: str, back: str) -> None:
    open_demo(page, address, WEARER)
    page.locator("[name='prescription.right.sphere']").fill("-7.5")
    page.keyboard.press("F9")  # at once, while the figures are being worked out
    expect(page).to_have_url(re.compile(r"/counter/[\w-]+/turn$"))
    expect(page).to_have_title("Your glasses")
    page.wait_for_load_state()  # a key pressed before the page's script runs is nobody's
    page.keyboard.press(back)
    expect(page).to_have_url(re.compile(r"/counter/[\w-]+$"))
    expect(page.locator("[name='prescription.right.sphere']")).to_have_value("-7.5")


def test_a_letter_typed_is_a_letter_and_the_button_turns_round_after_an_option_was_added(
    page: Page, address: str
) -> None:
    open_demo(page, address, WEARER)
    page.locator("[name='reference']").press("t")
    expect(page.locator("[name='reference']")).to_have_value(re.compile("t$|^t"))
    page.get_by_role("button", name="Add an option").click()
    expect(page.get_by_role("group", name="Option 4")).to_be_visible()
    page.get_by_role("button", name="Turn round").click()
    expect(page.locator(".pair")).to_have_count(4)
    page.get_by_role("link", name="Hide prices").click()
    expect(page.get_by_role("link", name="Show prices")).to_be_visible()
    expect(page.get_by_text("€")).to_have_count(0)
    page.get_by_role("link", name="Turn back").press("Enter")
    expect(page.locator("#why-price")).to_be_visible()


@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_axe_finds_nothing_to_mend(page: Page, address: str, store: Store, scheme: str) -> None:
    page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]  # one of the two words
    page.goto(f"{address}/visits/{saved(store, 'tinted-pair')}/turn")
    found = Axe().run(page, options={"runOnly": ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"]})
    assert found.violations_count == 0, found.generate_report()
