"""The program stops while somebody types: saving does not lead away from the form, and leaving is asked about first."""

import re
from typing import TYPE_CHECKING

from playwright.sync_api import Dialog, Page, Route, expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched

NOT_ANSWERED = "so these figures are not current. See that it still runs"


def stop(page: Page) -> None:
    """Let nothing that would be sent arrive, as where the program has stopped."""
    page.route("**/*", lambda route: route.abort())


def test_a_save_that_nothing_answers_keeps_the_form_and_saves_later(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    stop(page)
    watched.named("reference").fill("typed meanwhile")
    expect(page.get_by_text(NOT_ANSWERED)).to_be_visible()
    page.get_by_role("button", name="Save the visit").dblclick()
    page.wait_for_timeout(300)
    expect(page.get_by_text(NOT_ANSWERED)).to_be_visible()
    expect(watched.named("reference")).to_have_value("typed meanwhile")
    page.unroute("**/*")
    page.get_by_role("button", name="Save the visit").dblclick()
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    expect(watched.named("reference")).to_have_value("typed meanwhile")
    watched.go("/visits")
    expect(page.get_by_role("row", name="typed meanwhile")).to_have_count(1)
    assert not [text for text in watched.trouble if "undefined" in text]  # no promise broken without a word


def test_a_save_pressed_while_an_answer_fails_to_come_stays_as_well(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    held: list[Route] = []
    page.route("**/counter", lambda route: held.append(route))
    watched.named("reference").fill("caught in between")
    page.get_by_role("button", name="Save the visit").click()
    held[0].abort()
    expect(page.get_by_text(NOT_ANSWERED)).to_be_visible()
    page.wait_for_timeout(300)
    expect(page).to_have_url(re.compile("/counter/"))
    expect(watched.named("reference")).to_have_value("caught in between")


def test_leaving_asks_first_only_where_something_would_be_lost(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    asked: list[str] = []

    def stay(dialog: Dialog) -> None:
        asked.append(dialog.type)
        dialog.dismiss()

    page.on("dialog", stay)
    stop(page)
    watched.named("reference").fill("not kept yet")
    expect(page.get_by_text(NOT_ANSWERED)).to_be_visible()
    page.get_by_role("link", name="Visits").click(no_wait_after=True)
    page.wait_for_timeout(300)
    assert asked == ["beforeunload"]
    expect(watched.named("reference")).to_have_value("not kept yet")
    page.unroute("**/*")
    watched.named("reference").fill("kept now")
    watched.figures("price")
    page.get_by_role("link", name="Visits").click()
    expect(page).to_have_url(re.compile("/visits$"))
    assert asked == ["beforeunload"]
