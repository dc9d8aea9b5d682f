"""The Counter while it is filled in: figures follow, faults stand beside their fields, what is behind looks so."""

import re
from typing import TYPE_CHECKING

from playwright.sync_api import expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched


def test_twenty_changes_in_a_row_stay_right(watched: "Watched") -> None:
    page = watched.open_demo("weak-minus-night-driver")
    page.locator("#why-edge_thickest_mm > summary").click()
    sphere = watched.named("prescription.right.sphere")
    known: dict[str, list[str]] = {}
    for turn in range(20):
        typed = ("-1", "-4", "-7")[turn % 3]
        with page.expect_response("**/counter"):
            sphere.fill(typed)
        given = page.locator("#why-edge_thickest_mm tbody tr", has_text="sphere as made").locator("td").first
        expect(given).to_contain_text(f"\N{MINUS SIGN}{typed[1:]}.00")
        found = watched.figures("edge_thickest_mm")
        assert known.setdefault(typed, found) == found  # the same power gives the same figures each time
        assert page.evaluate("() => document.activeElement.name") == "prescription.right.sphere"
    assert len({tuple(texts) for texts in known.values()}) == 3
    for selector in ("#figures", "#h-advice", "#draft-marks", "#asked-next"):
        assert page.locator(selector).count() == 1
    watched.is_clean()


def test_what_is_turned_down_is_recorded_where_the_advice_says_so(watched: "Watched") -> None:
    page = watched.open_demo("high-plus-child")
    told = page.locator(".advice").get_by_text("A child: an impact material first")
    expect(told).to_be_visible()
    page.locator(".advice a[href='#declined-tough-material']").first.click()
    expect(page.locator("#declined-tough-material")).to_be_focused()
    page.keyboard.press("Space")
    expect(told).to_have_count(0)
    expect(page.locator("#declined-tough-material")).to_be_checked()
    watched.is_clean()


def test_a_new_visit_by_keyboard(watched: "Watched") -> None:
    page = watched.go("/")
    page.get_by_label("sphere").first.focus()
    page.keyboard.type("-4,25")
    for _ in range(6):  # cylinder, axis, add, prism, base, then the left sphere
        page.keyboard.press("Tab")
    page.keyboard.type("-3.75")
    expect(page.locator("#why-second_image")).to_be_visible()
    expect(page).to_have_url(re.compile(r"/counter/[\w-]+$"))
    assert page.evaluate("() => document.activeElement.name") == "prescription.left.sphere"
    page.reload()
    expect(watched.named("prescription.right.sphere")).to_have_value("-4,25")
    expect(page.locator("#why-second_image")).to_be_visible()
    watched.is_clean()


def test_a_fault_stands_beside_its_field_while_typing_and_goes_when_mended(watched: "Watched") -> None:
    page = watched.open_demo("weak-minus-night-driver")
    watched.named("prescription.right.cylinder").fill("-1")
    fault = page.locator("[id='fault-prescription.right.axis']")
    expect(fault).to_contain_text("needs an axis")
    expect(watched.named("prescription.right.axis")).to_have_attribute("aria-invalid", "true")
    expect(page.locator("#figures .big")).to_have_count(0)
    watched.named("prescription.right.axis").fill("90")
    expect(fault).to_have_text("")
    expect(page.locator("#why-price")).to_be_visible()
    watched.is_clean()


def test_what_was_opened_stays_open_and_stale_figures_do_not_look_current(watched: "Watched") -> None:
    page = watched.open_demo("weak-minus-night-driver")
    page.locator("#why-price > summary").click()
    page.route("**/counter", lambda _route: None)  # the answer never comes
    watched.named("prescription.right.sphere").fill("-2")
    expect(page.locator("#figures")).to_have_attribute("aria-busy", "true")
    expect(page.get_by_text("Working out")).to_be_visible()
    page.unroute("**/counter")
    page.reload()
    page.locator("#why-price > summary").click()
    watched.named("prescription.right.sphere").fill("-3")
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind"))
    expect(page.locator("#why-price")).to_have_attribute("open", "")


def test_a_program_that_has_stopped_is_said_to_have_stopped(watched: "Watched") -> None:
    page = watched.open_demo("weak-minus-night-driver")
    page.route("**/counter", lambda route: route.abort())
    watched.named("prescription.right.sphere").fill("-2")
    expect(page.get_by_text("The program does not answer")).to_be_visible()
    page.unroute("**/counter")
    watched.named("prescription.right.sphere").fill("-2.5")
    expect(page.get_by_text("The program does not answer")).not_to_be_visible()
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind"))


def test_a_sign_alone_is_waited_for_while_it_is_typed_and_faulty_when_it_is_left(watched: "Watched") -> None:
    page = watched.open_demo("weak-minus-night-driver")
    before = watched.figures("edge_thickest_mm")
    sphere = watched.named("prescription.right.sphere")
    sphere.fill("-")
    expect(page.locator("#figures")).to_have_class(re.compile("behind"))
    page.wait_for_timeout(300)  # longer than any answer takes
    expect(page.locator("#faults")).to_have_count(0)
    assert page.locator("#why-edge_thickest_mm .big").all_inner_texts() == before
    page.keyboard.press("Tab")
    expect(page.locator("[id='fault-prescription.right.sphere']")).not_to_be_empty()
    sphere.fill("-6")
    expect(page.locator("#why-edge_thickest_mm")).to_be_visible()
    assert watched.figures("edge_thickest_mm") != before
    watched.is_clean()


# Runs when the page is parsed, before the page's own scripts, which wait for that.
EARLY = """document.addEventListener("readystatechange", () => {
  const field = document.getElementById("options.0.material");
  if (document.readyState === "interactive" && field && location.pathname.startsWith("/counter/")) {
    field.value = "thiourethane-167";
  }
});"""


def test_what_is_changed_before_the_scripts_have_come_is_worked_out_too(watched: "Watched") -> None:
    page = watched.open_demo("hairdresser-price-limit")
    before = watched.figures("edge_thickest_mm")
    page.add_init_script(EARLY)
    page.reload()
    expect(page.locator("[id='options.0.material']")).to_have_value("thiourethane-167")
    expect(page.locator("#why-edge_thickest_mm .big").first).not_to_have_text(before[0])
    watched.is_clean()
