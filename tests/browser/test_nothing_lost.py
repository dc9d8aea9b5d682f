"""Sent twice, left in a hurry, gone back, changed after saving: nothing that was typed is lost or doubled."""

import re
from typing import TYPE_CHECKING

from playwright.sync_api import expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched


def test_a_saved_visit_that_is_changed_says_that_paper_is_behind(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    watched.named("wearer.name").fill("Saved Once")
    watched.figures("price")
    page.get_by_role("button", name="Save the visit").dblclick()
    expect(page.get_by_text("Saved.")).to_be_visible()
    watched.named("reference").fill("A-999")
    expect(page.get_by_text("Changed, not saved yet")).to_be_visible()
    expect(page).to_have_url(re.compile("/counter/"))
    page.reload()
    expect(page.get_by_text("Changed, not saved yet")).to_be_visible()
    watched.go("/visits")
    expect(page.get_by_role("link", name="Saved Once")).to_have_count(1)  # a double click saved once
    watched.is_clean()


def test_visits_are_found_while_typing_and_the_search_stays_out_of_the_address(watched: "Watched") -> None:
    page = watched.open_demo("tinted-pair")
    page.get_by_role("button", name="Save the visit").click()
    watched.go("/visits")
    page.get_by_label("Find by name").fill("sof lind")
    expect(page.get_by_role("link", name="Sofia Lindqvist")).to_be_visible()
    page.get_by_label("Find by name").fill("nobody")
    expect(page.get_by_text("No visit fits")).to_be_visible()
    assert page.url == watched.served.address + "/visits"
    watched.is_clean()


def test_saved_twice_by_the_enter_key_and_once_more_after_going_back_it_is_one_visit(watched: "Watched") -> None:
    page = watched.open_demo("prescribed-prism")
    watched.named("wearer.name").fill("Once Only")
    watched.figures("price")
    page.get_by_role("button", name="Save the visit").focus()
    page.keyboard.press("Enter")
    page.keyboard.press("Enter")
    expect(page).to_have_url(re.compile("/visits/"))
    page.go_back()
    expect(watched.named("wearer.name")).to_have_value("Once Only")
    page.get_by_role("button", name="Save the visit").click()
    expect(page.get_by_text("Saved.")).to_be_visible()
    watched.go("/visits")
    expect(page.get_by_role("link", name="Once Only")).to_have_count(1)
    watched.is_clean()


def test_what_was_typed_just_before_leaving_is_there_on_coming_back(watched: "Watched") -> None:
    page = watched.open_demo("prescribed-prism")
    watched.named("reference").fill("B-17")
    page.get_by_role("link", name="Range", exact=True).click()
    expect(page).to_have_url(re.compile("/range$"))
    page.go_back()
    expect(watched.named("reference")).to_have_value("B-17")
    watched.figures("price")
    watched.is_clean()
