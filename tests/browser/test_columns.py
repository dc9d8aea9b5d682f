"""Options as columns, undo, and nothing lost by a double click, by going back, or in two tabs; in a real browser."""

import re
from typing import TYPE_CHECKING

from playwright.sync_api import Locator, Page, Route, expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched

SPHERE = "prescription.right.sphere"


def button(page: Page, wish: str) -> Locator:
    """Find a button by what it asks for."""
    return page.locator(f"button[name='do'][value='{wish}']")


def materials(page: Page) -> list[str]:
    """Read the materials of the options from left to right, once the figures are current."""
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind|htmx-request"))
    fields = page.locator("select[name^='options.'][name$='.material']")
    return [field.input_value() for field in fields.all()]


def focused(page: Page) -> str:
    """Read what has the focus."""
    return str(page.evaluate("() => document.activeElement.id || document.activeElement.name"))


def places(page: Page) -> list[float]:
    """Read how far the page and its options are scrolled."""
    found: list[float] = page.evaluate("() => [window.scrollY, document.getElementById('options').scrollTop]")
    return found


def test_columns_are_copied_moved_and_removed_and_the_focus_goes_with_them(watched: "Watched") -> None:
    page = watched.open_demo("hairdresser-price-limit")
    first, second, third = materials(page)
    address, visited = page.url, page.evaluate("() => history.length")
    button(page, "copy-1").click()
    expect(page.locator(".option")).to_have_count(4)
    assert materials(page) == [first, second, second, third]
    assert focused(page) == "options.2.material"
    expect(button(page, "add")).to_have_count(0)
    button(page, "left-3").focus()
    page.keyboard.press("Enter")
    expect(page.locator("[name='options.2.material']")).to_have_value(third)
    assert focused(page) == "do-left-2"
    page.keyboard.press("Enter")
    expect(page.locator("[name='options.1.material']")).to_have_value(third)
    page.keyboard.press("Enter")
    expect(page.locator("[name='options.0.material']")).to_have_value(third)
    assert focused(page) == "do-right-0"  # it is the first now and goes no further
    assert materials(page) == [third, first, second, second]
    button(page, "remove-3").click()
    expect(page.locator(".option")).to_have_count(3)
    assert focused(page) == "do-remove-2"
    assert materials(page) == [third, first, second]
    assert (page.url, page.evaluate("() => history.length")) == (address, visited)
    watched.is_clean()


def test_a_button_leaves_scroll_and_what_was_opened_as_they_were(watched: "Watched") -> None:
    page = watched.open_demo("office-window-behind")
    page.set_viewport_size({"width": 1366, "height": 500})
    for fold in ("fold-form-0", "why-price", "why-weight_g"):
        page.locator(f"#{fold} > summary").click()
    page.locator("#fold-life > summary").click()  # open at first
    page.evaluate("() => { window.scrollTo(0, 60); document.getElementById('options').scrollTop = 90; }")
    before = places(page)
    assert before[1] > 0
    page.evaluate("() => document.querySelector(\"button[value='right-0']\").click()")
    expect(page.locator("#fold-form-1")).to_have_attribute("open", "")  # it went with its option
    expect(page.locator("#fold-form-0")).not_to_have_attribute("open", "")
    expect(page.locator("#why-price")).to_have_attribute("open", "")
    expect(page.locator("#why-weight_g")).to_have_attribute("open", "")
    expect(page.locator("#fold-life")).not_to_have_attribute("open", "")
    assert places(page) == before
    # the new form works like the first: it types, it opens questions, and it presses
    watched.named(SPHERE).fill("-6")
    materials(page)
    expect(button(page, "undo")).to_have_text("Undo: sphere, right")
    watched.is_clean()


def test_laying_out_from_the_advice_keeps_the_place(watched: "Watched") -> None:
    page = watched.open_demo("high-plus-child")
    count = page.locator(".option").count()
    lay = page.locator("button[value^='lay:']").first
    lay.scroll_into_view_if_needed()
    before = places(page)
    lay.click()
    expect(page.locator(".option")).to_have_count(count + 1)
    assert focused(page) == "h-advice"
    assert places(page) == before
    watched.is_clean()


def test_undo_by_keys_takes_back_all_and_a_text_field_keeps_its_own(watched: "Watched") -> None:
    page = watched.open_demo("weak-minus-night-driver")
    power = watched.named(SPHERE).input_value()
    expect(button(page, "undo")).to_be_disabled()
    watched.named(SPHERE).fill("-6")
    materials(page)
    rim = watched.named("frame.rim")
    was = rim.input_value()
    rim.select_option("drilled")
    materials(page)
    count = page.locator(".option").count()
    button(page, "remove-1").click()
    expect(page.locator(".option")).to_have_count(count - 1)
    rim.focus()
    page.keyboard.press("Control+z")
    page.keyboard.press("Control+z")
    expect(rim).to_have_value(was)
    expect(page.locator(".option")).to_have_count(count)
    expect(rim).to_be_focused()
    expect(button(page, "undo")).to_have_text("Undo: sphere, right")
    watched.named("wearer.name").focus()
    page.keyboard.press("Control+z")  # the field's own, which has nothing to take back
    page.wait_for_timeout(300)
    expect(watched.named(SPHERE)).to_have_value("-6")
    page.keyboard.press("Control+Alt+z")
    expect(watched.named(SPHERE)).to_have_value(power)
    expect(watched.named("wearer.name")).to_be_focused()
    expect(button(page, "undo")).to_be_disabled()
    page.keyboard.press("Control+Alt+Shift+z")
    expect(watched.named(SPHERE)).to_have_value("-6")
    page.reload()
    expect(button(page, "redo")).to_be_enabled()
    button(page, "undo").click()
    expect(watched.named(SPHERE)).to_have_value(power)
    assert focused(page) == "do-redo"
    watched.is_clean()


def test_what_is_typed_while_a_button_is_answered_is_not_lost(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    held: list[Route] = []
    page.route("**/counter", lambda route: held.append(route))
    button(page, "copy-0").click()
    expect(page.locator("#figures")).to_have_class(re.compile("behind"))
    watched.named("wearer.name").fill("Typed Meanwhile")
    watched.named("options.1.tint_own").evaluate("(field) => { field.value = '0.5'; }")
    page.wait_for_timeout(100)
    (route,) = held  # nothing else is sent while the button is answered
    page.route("**/counter", lambda later: later.continue_())
    route.continue_()
    expect(page.locator("[name='options.2.tint_own']")).to_have_value("0.5")  # its option moved on by one
    expect(watched.named("wearer.name")).to_have_value("Typed Meanwhile")
    expect(watched.named("wearer.name")).to_be_focused()
    materials(page)
    page.reload()
    expect(watched.named("wearer.name")).to_have_value("Typed Meanwhile")
    expect(page.locator("[name='options.2.tint_own']")).to_have_value("0.5")
    watched.is_clean()


def test_an_answer_to_what_was_typed_before_does_not_make_figures_look_current(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    held: list[Route] = []
    page.route("**/counter", lambda route: held.append(route))
    watched.named(SPHERE).fill("-3")
    page.wait_for_timeout(400)
    watched.named(SPHERE).fill("-5")
    page.wait_for_timeout(400)
    with page.expect_response("**/counter"):
        held[0].continue_()
    expect(page.locator("#figures")).to_have_class(re.compile("behind"))
    page.wait_for_timeout(400)
    expect(page.locator("#figures")).to_have_class(re.compile("behind"))
    held[1].continue_()
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind"))
    watched.is_clean()


def test_a_button_that_the_program_does_not_answer_leaves_the_form_and_can_be_pressed_again(watched: "Watched") -> None:
    page = watched.open_demo("tinted-pair")
    count = page.locator(".option").count()
    page.route("**/counter", lambda route: route.abort())
    button(page, "remove-0").click()
    expect(page.get_by_text("so these figures are not current. See that it still runs")).to_be_visible()
    expect(page.locator("#figures")).to_have_class(re.compile("behind"))
    page.unroute("**/counter")
    button(page, "remove-0").click()
    expect(page.locator(".option")).to_have_count(count - 1)
    materials(page)


def test_a_page_out_of_the_browsers_memory_is_fetched_again(watched: "Watched") -> None:
    page = watched.open_demo("tinted-pair")
    watched.named("wearer.name").evaluate("(field) => { field.value = 'stale'; }")
    with page.expect_navigation():
        page.evaluate("() => window.dispatchEvent(new PageTransitionEvent('pageshow', { persisted: true }))")
    expect(watched.named("wearer.name")).not_to_have_value("stale")
    watched.is_clean()


def test_a_double_click_on_a_button_counts_once(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    wearers = page.locator(".option").count()
    button(page, "remove-0").dblclick()
    expect(page.locator(".option")).to_have_count(wearers - 1)
    materials(page)
    expect(page.locator(".option")).to_have_count(wearers - 1)
    watched.named("reference").fill("double click")
    button(page, "save").dblclick()
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    watched.go("/visits")
    expect(page.get_by_role("row", name="double click")).to_have_count(1)
    watched.is_clean()


def test_going_back_after_saving_shows_the_visit_as_saved(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    watched.named("reference").fill("going back")
    button(page, "save").click()  # while that is still being worked out
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    visit = page.url
    page.go_back()
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    assert page.url == visit
    expect(watched.named("reference")).to_have_value("going back")
    watched.named("wearer.name").fill("and changed")
    materials(page)
    button(page, "save").click()
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    assert page.url == visit
    watched.go("/visits")
    expect(page.get_by_role("row", name="going back")).to_have_count(1)
    watched.is_clean()


def test_a_form_that_could_not_be_saved_is_found_again_by_reload_and_back(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    watched.named("prescription.right.axis").fill("")
    watched.named("wearer.name").fill("kept")
    button(page, "save").click()
    expect(page.get_by_text("Not saved yet")).to_be_visible()
    expect(page).to_have_url(re.compile(r"/counter/[\w-]+$"))
    page.reload()
    expect(watched.named("wearer.name")).to_have_value("kept")
    watched.go("/range")
    page.go_back()
    expect(watched.named("wearer.name")).to_have_value("kept")


def test_two_tabs_of_one_form_do_not_overwrite_each_other(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    other = watched.another_tab()
    other.goto(page.url)
    other.locator("[name='wearer.name']").fill("theirs")
    materials(other)
    watched.named("reference").fill("mine")
    expect(page.get_by_text("changed in another window")).to_be_visible()
    button(page, "apart").click()
    expect(page.get_by_text("changed in another window")).to_have_count(0)
    expect(watched.named("reference")).to_have_value("mine")
    assert page.url != other.url
    other.reload()
    expect(other.locator("[name='wearer.name']")).to_have_value("theirs")
    expect(other.locator("[name='reference']")).not_to_have_value("mine")
    watched.is_clean()


def test_a_tab_that_is_looked_at_again_learns_that_another_changed_the_form(watched: "Watched") -> None:
    page = watched.open_demo("strong-cylinder")
    other = watched.another_tab()
    other.goto(page.url)
    other.locator("[name='wearer.name']").fill("theirs")
    materials(other)
    page.evaluate("() => document.dispatchEvent(new Event('visibilitychange'))")
    page.get_by_role("link", name="Load it again").click()
    expect(watched.named("wearer.name")).to_have_value("theirs")
    expect(page.get_by_text("changed in another window")).to_have_count(0)
    watched.is_clean()


def test_two_tabs_of_one_visit_the_later_save_is_told(watched: "Watched") -> None:
    page = watched.go(watched.served.visit("strong-cylinder"))
    other = watched.another_tab()
    other.goto(page.url)
    for tab, note in ((other, "theirs"), (page, "mine")):
        tab.locator("[name='wearer.name']").fill(note)
        materials(tab)
        button(tab, "save").click()
    expect(other.get_by_text("Saved.", exact=True)).to_be_visible()
    expect(page.get_by_text("nothing was overwritten")).to_be_visible()
    expect(watched.named("wearer.name")).to_have_value("mine")
    page.get_by_role("button", name="Save mine as a new visit").click()
    expect(page.get_by_text("Saved.", exact=True)).to_be_visible()
    expect(watched.named("wearer.name")).to_have_value("mine")
    other.reload()
    expect(other.locator("[name='wearer.name']")).to_have_value("theirs")
