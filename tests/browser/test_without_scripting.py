"""The Counter in a browser that runs no script."""

import re
from collections.abc import Iterator
from typing import TYPE_CHECKING

import pytest
from playwright.sync_api import Browser, Page, expect

if TYPE_CHECKING:
    from tests.browser.conftest import Served


@pytest.fixture
def unscripted(browser: Browser, served: "Served") -> Iterator[Page]:
    """A page in which no script runs."""
    context = browser.new_context(java_script_enabled=False, base_url=served.address)
    yield context.new_page()
    context.close()


def test_without_scripting_the_form_computes_grows_saves_and_prints(unscripted: Page) -> None:
    page = unscripted
    page.goto("/")
    for eye in ("right", "left"):
        page.locator(f"[name='prescription.{eye}.sphere']").fill("-4.25")
    page.keyboard.press("Enter")
    expect(page.locator("#why-price .big")).to_have_count(3)
    page.locator("#why-price > summary").click()
    expect(page.locator("#why-price dt").first).to_be_visible()
    page.get_by_role("button", name="Add an option").click()
    expect(page.locator("#why-price .big")).to_have_count(4)
    page.locator("[name='options.3.material']").select_option("thiourethane-167")
    page.locator("[name='ordered'][value='3']").check()
    page.get_by_role("button", name="Save the visit").click()
    expect(page).to_have_url(re.compile(r"/visits/[\w-]+$"))
    expect(page.locator("[name='options.3.material']")).to_have_value("thiourethane-167")
    page.get_by_role("link", name="Sheet for the wearer").click()
    expect(page.get_by_text("Thiourethane 1.67").first).to_be_visible()
