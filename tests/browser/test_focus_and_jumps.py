"""A button that has the focus is not pressed by it; on a narrow screen the figures are one tap from the form."""

import re
from typing import TYPE_CHECKING

import pytest
from playwright.sync_api import expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched

TARGET_PX = 24  # the least size of a target, WCAG 2.2, 2.5.8
LOOKED_AT_AGAIN = "() => document.dispatchEvent(new Event('visibilitychange'))"


@pytest.mark.parametrize("button", ["Save the visit", "Turn round"])
def test_a_window_looked_at_again_does_nothing_that_the_focused_button_would_do(
    watched: "Watched", button: str
) -> None:
    page = watched.open_demo("strong-cylinder")
    reference = f"not asked: {button}"
    watched.named("reference").fill(reference)
    watched.figures("price")
    page.get_by_role("button", name=button).focus()
    with page.expect_response(lambda answer: answer.request.method == "POST") as answered:
        page.evaluate(LOOKED_AT_AGAIN)
    assert answered.value.url == watched.served.address + "/counter"
    watched.figures("price")
    watched.go("/visits")
    expect(page.get_by_role("row", name=reference)).to_have_count(0)
    watched.is_clean()


def test_undo_by_keys_undoes_where_the_focus_is_on_the_button_that_saves(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    was = watched.named("reference").input_value()
    watched.named("reference").fill("taken back")
    watched.figures("price")
    page.get_by_role("button", name="Save the visit").focus()
    page.keyboard.press("Control+z")
    expect(watched.named("reference")).to_have_value(was)
    expect(page).to_have_url(re.compile("/counter/"))
    watched.go("/visits")
    expect(page.get_by_role("row", name="taken back")).to_have_count(0)
    watched.is_clean()


@pytest.mark.parametrize(("width", "height"), [(820, 1180), (683, 384), (320, 700)])
def test_figures_and_prescription_are_one_tap_from_each_other_on_a_narrow_screen(
    watched: "Watched", width: int, height: int
) -> None:
    watched.page.set_viewport_size({"width": width, "height": height})
    page = watched.open_demo("office-window-behind")
    address, visited = page.url, page.evaluate("() => history.length")
    jumps = page.get_by_role("navigation", name="On this page")
    price = page.locator("#why-price > summary")
    expect(price).not_to_be_in_viewport()
    for link in jumps.get_by_role("link").all():
        box = link.bounding_box()
        assert box is not None
        assert box["width"] >= TARGET_PX
        assert box["height"] >= TARGET_PX
    jumps.get_by_role("link", name="Figures").click()
    expect(price).to_be_in_viewport(ratio=1)
    jumps.get_by_role("link", name="Prescription").click()
    expect(watched.named("prescription.right.sphere")).to_be_in_viewport(ratio=1)
    page.keyboard.press("Tab")
    page.keyboard.press("Tab")
    expect(watched.named("prescription.right.sphere")).to_be_focused()
    jumps.get_by_role("link", name="Side by side").click()
    expect(page.get_by_role("heading", name="Side by side")).to_be_in_viewport(ratio=1)
    assert (page.url, page.evaluate("() => history.length")) == (address, visited)  # nothing to go back to
    watched.is_clean()


def test_nothing_that_gets_the_focus_backwards_lies_under_the_links(watched: "Watched") -> None:
    watched.page.set_viewport_size({"width": 820, "height": 400})
    page = watched.open_demo("office-window-behind")
    page.locator("#why-price > summary").focus()
    bar = page.locator(".jumps").bounding_box()
    assert bar is not None
    for _ in range(60):
        page.keyboard.press("Shift+Tab")
        top = page.evaluate("() => document.activeElement.getBoundingClientRect().bottom")
        assert top > bar["height"], page.evaluate("() => document.activeElement.name")


def test_on_a_wide_screen_the_links_are_not_there(watched: "Watched") -> None:
    page = watched.open_demo("office-window-behind")
    expect(page.locator(".jumps")).to_be_hidden()
    expect(page.locator("#why-price > summary")).to_be_in_viewport()
