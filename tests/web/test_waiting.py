"""Whatever takes longer than 300 ms says so, says when it fails, and is silent where the answer comes at once."""

import json
import re
import time
from collections.abc import Iterator

import pytest
from flask import Flask, request
from flask.testing import FlaskClient
from playwright.sync_api import Browser, Locator, Page, expect

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.store import Store
from advisor.resources import resource_dir
from tests.chromium import chromium, served

SLOW_S = 1.5
PNG = re.compile(r"\.png(\?|$)")

# Writes down every text that the bar shows, on every page of the tab: the driver cannot look at a page that is going.
LISTEN = """() => {
  addEventListener("DOMContentLoaded", () => {
    const bar = document.getElementById("waiting");
    const note = () => {
      if (!bar.textContent || !bar.getClientRects().length) return;
      sessionStorage.setItem("said", (sessionStorage.getItem("said") ?? "") + bar.textContent);
    };
    if (bar) new MutationObserver(note).observe(bar, { childList: true, characterData: true, subtree: true });
  });
}"""


@pytest.mark.parametrize("mark", ["0123abcd", "z" * 32])
def test_a_mark_comes_back_as_a_cookie_that_lasts_a_minute(client: FlaskClient, mark: str) -> None:
    cookie = client.get(f"/range/export?ready={mark}").headers["Set-Cookie"]
    assert cookie.startswith(f"ready={mark};")
    for part in ("Max-Age=60", "SameSite=Strict", "Path=/"):
        assert part in cookie


@pytest.mark.parametrize("mark", ["", "short", "z" * 33, "UPPERCASE", "abc;Path=/x", "abcdefgh%0d%0aX: y"])
def test_what_is_no_mark_comes_back_as_nothing(client: FlaskClient, mark: str) -> None:
    answer = client.get(f"/range/export?ready={mark}")
    assert answer.status_code == 200
    assert "Set-Cookie" not in answer.headers


def test_no_mark_asked_for_no_cookie_set(client: FlaskClient) -> None:
    for path in ("/", "/visits", "/range/export", "/nowhere"):
        assert "Set-Cookie" not in client.get(path).headers


# In a browser.


@pytest.fixture
def slow(app: Flask) -> list[str]:
    """Paths, or their ends, that are answered late."""
    ends: list[str] = []

    @app.before_request
    def wait() -> None:
        if any(request.path.endswith(end) for end in ends):
            time.sleep(SLOW_S)

    return ends


@pytest.fixture
def address(app: Flask, slow: list[str]) -> Iterator[str]:
    del slow  # it must be in place before the first request
    with served(app, threads=6) as place:
        yield place


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    with chromium() as started:
        yield started


@pytest.fixture
def page(browser: Browser) -> Iterator[Page]:
    context = browser.new_context(viewport={"width": 1366, "height": 768}, accept_downloads=True)
    page = context.new_page()
    page.add_init_script(f"({LISTEN})()")
    yield page
    context.close()


@pytest.fixture
def visit(store: Store) -> str:
    text = (resource_dir("demo_patients") / "weak-minus-night-driver.json").read_text("utf-8")
    return store.save_visit(
        json.dumps(json.loads(text)), range_toml=range_to_toml(builtin_range()), version="0", answer_json="{}"
    ).id


def bar(page: Page) -> Locator:
    return page.locator("#waiting")


def said(page: Page) -> str:
    return str(page.evaluate("() => sessionStorage.getItem('said') ?? ''"))


def test_a_page_that_is_slow_to_come_is_announced_and_the_next_page_is_calm(
    page: Page, address: str, slow: list[str]
) -> None:
    page.goto(f"{address}/")
    slow.append("/visits")
    page.get_by_role("link", name="Visits", exact=True).click()
    expect(page).to_have_url(f"{address}/visits")
    assert said(page) == "Working…"
    expect(bar(page)).to_be_hidden()
    expect(bar(page)).to_have_attribute("role", "status")


def test_a_form_that_is_slow_to_be_saved_is_announced(page: Page, address: str, visit: str, slow: list[str]) -> None:
    page.goto(f"{address}/visits/{visit}")
    slow.append("/visits")
    page.get_by_role("button", name="Save the visit").click()
    expect(page.get_by_text("Saved.")).to_be_visible()
    assert said(page) == "Working…"
    expect(bar(page)).to_be_hidden()


def test_what_comes_at_once_is_not_announced(page: Page, address: str) -> None:
    page.goto(f"{address}/range")  # fetched once, so that nothing is made for the first time
    page.goto(f"{address}/visits")
    for name in ("Range", "Visits"):
        page.get_by_role("link", name=name, exact=True).click()
        expect(page.get_by_role("heading", name=name, exact=True, level=1)).to_be_visible()
    page.get_by_role("link", name="Range", exact=True).click()
    with page.expect_download():
        page.get_by_role("link", name="Export as one file").click()
    page.wait_for_timeout(600)
    assert said(page) == ""


def test_a_file_that_leaves_the_page_standing_is_announced_until_it_has_come(
    page: Page, address: str, slow: list[str]
) -> None:
    page.goto(f"{address}/range")
    link = page.get_by_role("link", name="Export as one file")
    slow.append("/range/export")
    with page.expect_download() as coming:
        link.click(no_wait_after=True)
        expect(bar(page)).to_have_text("Working…")
        expect(bar(page)).to_be_visible()
        expect(link).to_have_attribute("href", "/range/export")  # as it was
    assert re.fullmatch(rf"{address}/range/export\?ready=[0-9a-z]{{8,32}}", coming.value.url)
    expect(bar(page)).to_be_hidden()
    assert "ready=" not in page.evaluate("() => document.cookie")


def test_a_pdf_is_announced_while_it_is_made_and_coming_back_is_calm(
    page: Page, address: str, visit: str, slow: list[str]
) -> None:
    page.goto(f"{address}/visits/{visit}")
    slow.append(".pdf")
    page.locator(f"a[href='/visits/{visit}/sheet.pdf']").click()
    expect(page).to_have_url(re.compile(r"sheet\.pdf\?ready=[0-9a-z]{8,32}$"))  # this browser shows it in the tab
    page.go_back()
    expect(page.get_by_role("button", name="Save the visit")).to_be_visible()
    assert said(page) == "Working…"
    expect(bar(page)).to_be_hidden()


def test_pictures_that_are_still_being_drawn_are_announced(
    page: Page, address: str, visit: str, slow: list[str]
) -> None:
    slow.append(".png")
    page.goto(f"{address}/visits/{visit}/pictures", wait_until="commit")
    expect(bar(page)).to_have_text("Working…")
    expect(bar(page)).to_be_hidden(timeout=30_000)
    assert page.evaluate("() => [...document.images].every((image) => image.complete && image.naturalWidth)")


def test_a_picture_that_cannot_be_fetched_is_told(page: Page, address: str, visit: str) -> None:
    page.route(PNG, lambda route: route.abort())
    page.goto(f"{address}/visits/{visit}/pictures")
    expect(bar(page)).to_contain_text("The program does not answer")
    expect(bar(page)).to_be_visible()


def test_a_search_that_is_slow_or_fails_is_told(page: Page, address: str, visit: str, slow: list[str]) -> None:
    del visit
    page.goto(f"{address}/visits")
    slow.append("/visits/find")
    page.get_by_label("Find by name").press_sequentially("nobody", delay=5)
    expect(bar(page)).to_have_text("Working…")
    expect(page.get_by_text("No visit fits")).to_be_visible()
    expect(bar(page)).to_be_hidden()
    page.route("**/visits/find", lambda route: route.abort())
    page.get_by_label("Find by name").press_sequentially("x")
    expect(bar(page)).to_contain_text("The program does not answer")


def test_figures_turn_grey_at_once_and_say_so_only_when_it_takes_longer(
    page: Page, address: str, visit: str, slow: list[str]
) -> None:
    page.goto(f"{address}/visits/{visit}")
    slow.append("/counter")
    at_once = page.evaluate(
        """() => {
          const field = document.querySelector("[name='prescription.right.sphere']");
          field.value = "-3";
          field.dispatchEvent(new Event("input", { bubbles: true }));
          const figures = document.getElementById("figures");
          const words = getComputedStyle(figures.querySelector(".when-busy")).visibility;
          return [figures.classList.contains("behind"), words];
        }"""
    )
    assert at_once == [True, "hidden"]
    words = page.locator("#figures .when-busy")
    expect(words).to_be_visible()
    expect(words).to_be_hidden()
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind|htmx-request"))
    assert said(page) == ""  # the figures say it where they stand


@pytest.mark.parametrize(("motion", "name"), [("reduce", "none"), ("no-preference", "breathe")])
def test_nothing_moves_for_those_who_ask_for_it(page: Page, address: str, motion: str, name: str) -> None:
    page.emulate_media(reduced_motion=motion)  # type: ignore[arg-type]  # one of the two words
    page.goto(f"{address}/visits")
    found = page.evaluate(
        """() => {
          const bar = document.getElementById("waiting");
          bar.textContent = "x";
          return getComputedStyle(bar, "::before").animationName;
        }"""
    )
    assert found == name


def test_a_link_opened_in_a_window_of_its_own_is_not_waited_for(page: Page, address: str, slow: list[str]) -> None:
    page.goto(f"{address}/")
    slow.append("/visits")
    with page.context.expect_page():
        page.get_by_role("link", name="Visits", exact=True).click(modifiers=["Control"])
    page.wait_for_timeout(500)
    assert said(page) == ""
