"""Two counters have one saved visit open, and the later one says what becomes of both, in a real browser."""

from typing import TYPE_CHECKING

import pytest
from playwright.sync_api import Page, expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched


def saved(page: Page, name: str) -> None:
    """Type a name and save."""
    page.locator("[name='wearer.name']").fill(name)
    page.locator("button[name='do'][value='save']").click()


@pytest.mark.parametrize(
    ("button", "kept"), [("Save mine over it", "mine"), ("Take the stored one, drop mine", "theirs")]
)
def test_the_later_save_is_put_over_or_dropped_as_the_button_says(watched: "Watched", button: str, kept: str) -> None:
    page = watched.go(watched.served.visit("strong-cylinder"))
    other = watched.another_tab()
    other.goto(page.url)
    saved(other, "theirs")
    expect(other.get_by_text("Saved.", exact=True)).to_be_visible()
    saved(page, "mine")
    expect(page.get_by_text("nothing was overwritten")).to_be_visible()
    page.get_by_role("button", name=button).click()
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    expect(watched.named("wearer.name")).to_have_value(kept)
    other.reload()
    expect(other.locator("[name='wearer.name']")).to_have_value(kept)
