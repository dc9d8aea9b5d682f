"""The whole job by mouse and keyboard in a real browser: nothing breaks the policy, nothing leaves this computer."""

import os
import re
import shutil
import threading
from collections.abc import Iterator
from urllib.parse import urlsplit

import pytest
from cheroot import wsgi
from playwright.sync_api import Browser, ConsoleMessage, Page, Route, expect, sync_playwright

from advisor.web.app import create_app

CHROMIUM = "/usr/bin/chromium"
FLAGS = [
    "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
    "--disable-component-update", "--disable-sync",
]  # fmt: skip

if not shutil.which(CHROMIUM):
    if os.environ.get("TWOLIGHT_REQUIRE_ALL"):
        raise RuntimeError(f"{CHROMIUM} is missing and TWOLIGHT_REQUIRE_ALL is set")
    pytest.skip(f"{CHROMIUM} is missing", allow_module_level=True)


@pytest.fixture(scope="module")
def address(tmp_path_factory: pytest.TempPathFactory) -> Iterator[str]:
    app = create_app(data_dir=tmp_path_factory.mktemp("records"))
    server = wsgi.Server(("127.0.0.1", 0), app, numthreads=4)
    server.prepare()
    thread = threading.Thread(target=server.serve, daemon=True)
    thread.start()
    yield f"http://127.0.0.1:{server.bind_addr[1]}"
    server.stop()
    thread.join()


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=CHROMIUM, args=FLAGS)
        yield browser
        browser.close()


class Watched:
    """A page whose console, errors and requests are written down."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.trouble: list[str] = []
        self.hosts: set[str] = set()
        page.on("console", self._console)
        page.on("pageerror", lambda error: self.trouble.append(str(error)))
        page.route("**/*", self._route)

    def _console(self, message: ConsoleMessage) -> None:
        if message.type in ("error", "warning"):
            self.trouble.append(message.text)

    def _route(self, route: Route) -> None:
        self.hosts.add(urlsplit(route.request.url).hostname or "")
        if urlsplit(route.request.url).hostname == "127.0.0.1":
            route.continue_()
        else:
            route.abort()

    def is_clean(self) -> None:
        """Nothing was complained of, and nothing was asked for elsewhere."""
        assert self.trouble == []
        assert self.hosts == {"127.0.0.1"}


@pytest.fixture
def watched(browser: Browser) -> Iterator[Watched]:
    context = browser.new_context(viewport={"width": 1366, "height": 768})
    watched = Watched(context.new_page())
    yield watched
    context.close()


def figures(page: Page, row: str) -> list[str]:
    """The big figures of one row, once they are current."""
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind|htmx-request"))
    return page.locator(f"#why-{row} .big").all_inner_texts()


def open_demo(page: Page, address: str, wearer: str) -> None:
    page.goto(f"{address}/")
    page.get_by_label("Open a demo wearer").select_option(wearer)
    page.get_by_role("button", name="Open", exact=True).click()
    expect(page.locator("#why-price")).to_be_visible()


def test_the_whole_job_by_mouse(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "hairdresser-price-limit")
    before = {row: figures(page, row) for row in ("price", "edge_thickest_mm", "weight_g")}
    page.get_by_role("group", name="Option 1").get_by_label("material", exact=True).select_option("thiourethane-167")
    expect(page.locator("#why-price .big").first).not_to_have_text(before["price"][0])
    after = {row: figures(page, row) for row in before}
    for row, texts in before.items():
        assert after[row][0] != texts[0], row
        assert after[row][1:] == texts[1:], row

    # a question is answered, and what it opens is asked next
    opened = page.locator("#asked-next [data-question='new-glare']")
    page.get_by_label("driving at night", exact=True).select_option("")
    expect(opened).to_have_count(0)
    page.get_by_label("driving at night", exact=True).select_option("often")
    expect(opened).to_be_visible()
    opened.get_by_role("combobox").select_option("no")
    figures(page, "price")

    # the recommended pair is taken off the table, and laid out again from the advice
    best = page.locator(".piece.is-recommended")
    place = re.search(r"option (\d)", best.locator(".cost").inner_text())
    assert place
    label = best.locator(".what").inner_text()
    page.get_by_role("button", name=f"Remove option {place[1]}").click()
    best.get_by_role("button", name="Lay out as an option").click()
    expect(page.locator(".piece.is-recommended .what")).to_have_text(label)
    expect(best.locator(".cost")).to_contain_text("option 3")
    page.get_by_role("group", name="Option 3").get_by_label("to be ordered").check()

    page.get_by_role("button", name="Save the visit").click()
    expect(page).to_have_url(re.compile(r"/visits/[\w-]+$"))
    price = figures(page, "price")[2]
    page.get_by_role("link", name="Visits").click()
    page.get_by_role("row").get_by_role("link").first.click()
    expect(page.locator("#why-price .big").nth(2)).to_have_text(price)

    visit = page.url
    page.get_by_role("link", name="Sheet for the wearer").click()
    expect(page.get_by_role("heading").first).to_be_visible()
    page.goto(visit)
    page.get_by_role("link", name="Order slip").click()
    expect(page.get_by_text(label.split(",")[0]).first).to_be_visible()
    for paper in ("sheet.pdf", "order.pdf"):
        answer = page.request.get(f"{visit}/{paper}")
        assert (answer.status, answer.headers["content-type"]) == (200, "application/pdf")
        assert answer.body().startswith(b"%PDF-")
    page.goto(visit)
    page.get_by_role("link", name="Recheck: the wearer came back").click()
    page.get_by_label("All asked; the rest no").check()
    page.get_by_label("in the wearer's words").fill("second light")
    page.get_by_role("button", name="Work out").click()
    expect(page.locator("#h-causes, .refer").first).to_be_visible()
    watched.is_clean()


def test_twenty_changes_in_a_row_stay_right(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "weak-minus-night-driver")
    page.locator("#why-edge_thickest_mm > summary").click()
    sphere = page.locator("[name='prescription.right.sphere']")
    known: dict[str, list[str]] = {}
    for turn in range(20):
        typed = ("-1", "-4", "-7")[turn % 3]
        with page.expect_response("**/counter"):
            sphere.fill(typed)
        given = page.locator("#why-edge_thickest_mm tbody tr", has_text="sphere as made").locator("td").first
        expect(given).to_contain_text(f"\N{MINUS SIGN}{typed[1:]}.00")
        found = figures(page, "edge_thickest_mm")
        assert known.setdefault(typed, found) == found  # the same power gives the same figures each time
        assert page.evaluate("() => document.activeElement.name") == "prescription.right.sphere"
    assert len({tuple(texts) for texts in known.values()}) == 3
    for selector in ("#figures", "#h-advice", "#draft-marks", "#asked-next"):
        assert page.locator(selector).count() == 1
    watched.is_clean()


def test_what_is_turned_down_is_recorded_where_the_advice_says_so(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "high-plus-child")
    told = page.locator(".advice").get_by_text("A child: an impact material first")
    expect(told).to_be_visible()
    page.locator(".advice a[href='#declined-tough-material']").first.click()
    expect(page.locator("#declined-tough-material")).to_be_focused()
    page.keyboard.press("Space")
    expect(told).to_have_count(0)
    expect(page.locator("#declined-tough-material")).to_be_checked()
    watched.is_clean()


def test_a_new_visit_by_keyboard(watched: Watched, address: str) -> None:
    page = watched.page
    page.goto(f"{address}/")
    page.get_by_label("sphere").first.focus()
    page.keyboard.type("-4,25")
    for _ in range(9):  # cylinder, axis, add, prism, base, balance, prism, base, then the left sphere
        page.keyboard.press("Tab")
    page.keyboard.type("-3.75")
    expect(page.locator("#why-second_image")).to_be_visible()
    expect(page).to_have_url(re.compile(r"/counter/[\w-]+$"))
    assert page.evaluate("() => document.activeElement.name") == "prescription.left.sphere"
    page.reload()
    expect(page.locator("[name='prescription.right.sphere']")).to_have_value("-4,25")
    expect(page.locator("#why-second_image")).to_be_visible()
    watched.is_clean()


def test_a_fault_stands_beside_its_field_while_typing_and_goes_when_mended(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "weak-minus-night-driver")
    page.locator("[name='prescription.right.cylinder']").fill("-1")
    fault = page.locator("[id='fault-prescription.right.axis']")
    expect(fault).to_contain_text("needs an axis")
    expect(page.locator("[name='prescription.right.axis']")).to_have_attribute("aria-invalid", "true")
    expect(page.locator("#figures .big")).to_have_count(0)
    page.locator("[name='prescription.right.axis']").fill("90")
    expect(fault).to_have_text("")
    expect(page.locator("#why-price")).to_be_visible()
    watched.is_clean()


def test_what_was_opened_stays_open_and_stale_figures_do_not_look_current(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "weak-minus-night-driver")
    page.locator("#why-price > summary").click()
    page.route("**/counter", lambda _route: None)  # the answer never comes
    page.locator("[name='prescription.right.sphere']").fill("-2")
    expect(page.locator("#figures")).to_have_attribute("aria-busy", "true")
    expect(page.get_by_text("Working out")).to_be_visible()
    page.unroute("**/counter")
    page.reload()
    page.locator("#why-price > summary").click()
    page.locator("[name='prescription.right.sphere']").fill("-3")
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind"))
    expect(page.locator("#why-price")).to_have_attribute("open", "")


def test_a_program_that_has_stopped_is_said_to_have_stopped(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "weak-minus-night-driver")
    page.route("**/counter", lambda route: route.abort())
    page.locator("[name='prescription.right.sphere']").fill("-2")
    expect(page.get_by_text("The program does not answer")).to_be_visible()
    page.unroute("**/counter")
    page.locator("[name='prescription.right.sphere']").fill("-2.5")
    expect(page.get_by_text("The program does not answer")).not_to_be_visible()
    expect(page.locator("#figures")).not_to_have_class(re.compile("behind"))


def test_a_saved_visit_that_is_changed_says_that_paper_is_behind(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "strong-cylinder")
    page.get_by_role("button", name="Save the visit").dblclick()
    expect(page.get_by_text("Saved.")).to_be_visible()
    page.locator("[name='reference']").fill("A-999")
    expect(page.get_by_text("Changed, not saved yet")).to_be_visible()
    expect(page).to_have_url(re.compile("/counter/"))
    page.reload()
    expect(page.get_by_text("Changed, not saved yet")).to_be_visible()
    page.goto(f"{address}/visits")
    expect(page.get_by_role("link", name="Teo Brandt")).to_have_count(1)  # a double click saved once
    watched.is_clean()


def test_visits_are_found_while_typing_and_the_search_stays_out_of_the_address(watched: Watched, address: str) -> None:
    page = watched.page
    open_demo(page, address, "tinted-pair")
    page.get_by_role("button", name="Save the visit").click()
    page.goto(f"{address}/visits")
    page.get_by_label("Find by name").fill("sof lind")
    expect(page.get_by_role("link", name="Sofia Lindqvist")).to_be_visible()
    page.get_by_label("Find by name").fill("nobody")
    expect(page.get_by_text("No visit fits")).to_be_visible()
    assert page.url == f"{address}/visits"
    watched.is_clean()


# All that a scheme changes is colours.
RULES = {"light": ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"], "dark": ["color-contrast"]}
PLACES = ("/", "/visits", "/range", "/range/coating/3", "/visits/gone", "demo", "faults", "recheck", "order")


def go(page: Page, address: str, path: str) -> None:
    """Show a page: by its address, or one that needs a visit first."""
    if path.startswith("/"):
        page.goto(address + path)
        return
    open_demo(page, address, "weak-minus-night-driver")
    if path == "faults":
        page.locator("[name='prescription.right.cylinder']").fill("-1")
        page.locator("[name='frame.a_mm']").fill("wide")
        expect(page.locator("#faults li")).to_have_count(2)
    elif path != "demo":
        page.locator("[name='fitting.right.pd_mm']").fill("")
        page.get_by_role("button", name="Save the visit").click()
        expect(page.get_by_text("Saved.")).to_be_visible()
        page.goto(f"{page.url}/{path}")


@pytest.mark.parametrize("path", PLACES)
def test_no_page_scrolls_sideways_and_axe_finds_nothing_to_mend(browser: Browser, address: str, path: str) -> None:
    from axe_playwright_python.sync_playwright import Axe

    # axe is put into the page as a script, so the policy stands aside here alone
    context = browser.new_context(viewport={"width": 1366, "height": 768}, bypass_csp=True)
    page = context.new_page()
    go(page, address, path)
    beyond = {}
    for width in (320, 820, 1366):
        page.set_viewport_size({"width": width, "height": 768})
        beyond[width] = page.evaluate(
            "() => document.documentElement.scrollWidth - document.documentElement.clientWidth"
        )
    for scheme, opened in (("light", path != "faults"), ("dark", False)):
        page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]  # one of the two words
        # what is folded uses the same colours as what is not, so it is opened once
        page.evaluate("opened => document.querySelectorAll('details').forEach((one) => { one.open = opened; })", opened)
        found = Axe().run(page, options={"runOnly": RULES[scheme]})
        assert found.violations_count == 0, found.generate_report()
    context.close()
    assert max(beyond.values()) <= 0, beyond
