"""The whole job in a real browser: by mouse, and by keyboard alone; on a screen and on a tablet."""

import re
from typing import TYPE_CHECKING

import pytest
from playwright.sync_api import Page, expect

if TYPE_CHECKING:
    from tests.browser.conftest import Watched

SIZES = pytest.mark.parametrize(("width", "height"), [(1366, 768), (820, 1180)])
MOST_STOPS = 400
SETTLED_MS = 500
# Everything an order asks for, in the order of the page; the words of a choice are its values here.
WRITTEN = {
    "prescription.right.sphere": "-4.25",
    "prescription.right.cylinder": "-1.00",
    "prescription.right.axis": "175",
    "prescription.right.add": "1.50",
    "prescription.left.sphere": "-3.75",
    "prescription.left.add": "1.50",
    "prescription.vertex_mm": "12",
    "prescription.for": "distance",
    "fitting.right.pd_mm": "31.5",
    "fitting.right.height_mm": "20",
    "fitting.left.pd_mm": "31",
    "fitting.left.height_mm": "20",
    "fitting.vertex_mm": "12",
    "frame.a_mm": "54",
    "frame.b_mm": "36",
    "frame.dbl_mm": "18",
    "frame.rim": "full",
    "daily_life.driving": "often",
    "daily_life.night_driving": "often",
    "daily_life.impact": "never",
    "daily_life.one_good_eye": "no",
}
# Where the focus is, and whether it is seen: an outline of two pixels at least, on the screen, nothing laid over it.
STOP = """(selector) => {
  const one = document.activeElement;
  const [style, box] = [getComputedStyle(one), one.getBoundingClientRect()];
  const isMarked = style.outlineStyle !== "none" && parseFloat(style.outlineWidth) >= 2;
  const [x, y] = [(box.left + box.right) / 2, (box.top + Math.min(box.bottom, innerHeight)) / 2];
  const above = document.elementFromPoint(x, y);
  const isSeen = above !== null && (
    one.contains(above) || above.contains(one) || above.closest("label")?.contains(one)
  );
  const name = one.id || one.name || one.textContent.trim().slice(0, 40);
  return { isThere: one.matches(selector), isBody: one === document.body, name, isVisible: isMarked && !!isSeen };
}"""


class Keys:
    """A page used by keyboard alone; every place the focus stops at must be seen to have it."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.unseen: list[str] = []

    def to(self, selector: str, *, key: str = "Tab") -> None:
        """Press Tab until the focus is there."""
        self.page.wait_for_load_state("load")
        for _ in range(MOST_STOPS):
            self.page.keyboard.press(key)
            stop = self.page.evaluate(STOP, selector)
            if not stop["isVisible"] and not stop["isBody"]:
                self.page.wait_for_timeout(SETTLED_MS)  # an answer that comes just now moves what stands below it
                stop = self.page.evaluate(STOP, selector)
            if not stop["isVisible"] and not stop["isBody"]:
                self.unseen.append(stop["name"])
            if stop["isThere"]:
                return
        raise AssertionError(f"no way by {key} to {selector}")

    def type(self, selector: str, text: str) -> None:
        """Go to a field and type into it."""
        self.to(selector)
        self.page.keyboard.type(text)

    def press(self, selector: str, *, back: bool = False) -> None:
        """Go to a link or a button and press Enter."""
        self.to(selector, key="Shift+Tab" if back else "Tab")
        self.page.keyboard.press("Enter")


def field(name: str) -> str:
    return f"[name='{name}']"


@SIZES
def test_the_whole_job_by_mouse(watched: "Watched", width: int, height: int) -> None:
    watched.page.set_viewport_size({"width": width, "height": height})
    page = watched.open_demo("hairdresser-price-limit")
    before = {row: watched.figures(row) for row in ("price", "edge_thickest_mm", "weight_g")}
    page.get_by_role("group", name="Option 1").get_by_label("material", exact=True).select_option("thiourethane-167")
    expect(page.locator("#why-price .big").first).not_to_have_text(before["price"][0])
    after = {row: watched.figures(row) for row in before}
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
    watched.figures("price")

    # the recommended pair is taken off the table, and laid out again from the advice
    best = page.locator(".piece.is-recommended")
    place = re.search(r"option (\d)", best.locator(".cost").inner_text())
    assert place
    label = best.locator(".what").inner_text()
    page.get_by_role("button", name=re.compile(rf"Remove\W+option {place[1]}$")).click()
    best.get_by_role("button", name="Lay out as an option").click()
    expect(page.locator(".piece.is-recommended .what")).to_have_text(label)
    expect(best.locator(".cost")).to_contain_text("option 3")
    page.get_by_role("group", name="Option 3").get_by_label("to be ordered").check()

    page.get_by_role("button", name="Save the visit").click()
    expect(page).to_have_url(re.compile(r"/visits/[\w-]+$"))
    price = watched.figures("price")[2]
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


@SIZES
def test_the_whole_job_by_keyboard_alone(watched: "Watched", width: int, height: int) -> None:
    watched.page.set_viewport_size({"width": width, "height": height})
    page = watched.go("/")
    keys = Keys(page)
    for name, text in WRITTEN.items():
        keys.type(field(name), text)
    keys.press("#fold-wearer > summary")
    keys.type(field("wearer.birth_year"), "1979")
    assert {name: watched.named(name).input_value() for name in WRITTEN} == WRITTEN
    thin = watched.figures("edge_thickest_mm")

    keys.to("[name='options.0.material']")
    page.keyboard.type("thiourethane 1.67")
    expect(watched.named("options.0.material")).to_have_value("thiourethane-167")
    expect(page.locator("#why-edge_thickest_mm .big").first).not_to_have_text(thin[0])
    count = page.locator(".option").count()
    keys.press("button[value='add']", back=True)
    expect(page.locator(".option")).to_have_count(count + 1)
    keys.to("[name='baseline']:checked")
    page.keyboard.press("ArrowRight")
    expect(page.locator("[name='baseline']").nth(1)).to_be_checked()
    keys.to("[name='ordered']")
    page.keyboard.press("Space")
    watched.figures("price")
    keys.press("button[value='save']", back=True)
    expect(page).to_have_url(re.compile(r"/visits/[\w-]+$"))

    for link, place in {"sheet": "h1", "order": "h1", "pictures": ".pair img"}.items():
        keys.press(f".papers a[href$='/{link}']")
        expect(page).to_have_url(re.compile(f"/{link}$"))
        expect(page.locator(place).first).to_be_visible()
        page.go_back()
        expect(page.locator(".papers")).to_be_visible()
    keys.press(".papers a[href$='/recheck']")
    expect(page).to_have_url(re.compile("/recheck$"))
    keys.to("[name='none_of_these']")
    page.keyboard.press("Space")
    keys.type("#says", "second light")
    keys.press("button[value='work']")
    expect(page.locator("#h-causes")).to_be_visible()
    assert keys.unseen == []
    watched.is_clean()
