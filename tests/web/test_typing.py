"""Numbers are taken as people type them and step by the keys, and a copied prescription fills the form.

The cases of reading are common practice, no source; ``advisor.counsel.written_power`` is tested by the same ones.
"""

import json
import re
from collections.abc import Iterator
from contextlib import contextmanager
from html import unescape
from pathlib import Path
from typing import Any

import pytest
from flask.testing import FlaskClient
from playwright.sync_api import Browser, Locator, Page, expect

from advisor.counsel.faults import Faults
from advisor.web import form_fields, forms
from advisor.web.app import create_app
from advisor.web.number_fields import number_field, stepping
from tests.chromium import chromium, served

LIVE = {"HX-Request": "true"}
CASES: list[dict[str, Any]] = json.loads(
    (Path(__file__).parent.parent / "counsel/published/written_powers.json").read_text(encoding="utf-8")
)["cases"]
FIELD_OF = {
    "sphere": "prescription.right.sphere",
    "cylinder": "prescription.right.cylinder",
    "add": "prescription.right.add",
    "axis": "prescription.right.axis",
    "prism": "prescription.right.prism.0.amount",
    "curve": "options.0.front_power_d.right",
    "length": "frame.a_mm",
    "angle": "fitting.tilt_deg",
}
SPHERES = {"prescription.right.sphere": "0", "prescription.left.sphere": "0", "option_count": "1"}
NUMBER_NAMES = [
    name
    for name in (*form_fields.PLAIN, *(f"options.0.{part}" for part in form_fields.OPTION))
    if number_field(name) is not None and stepping(name, "")
]


# Without a browser.


def around(name: str) -> dict[str, str]:
    """What must stand around a field so that it alone decides whether the form can be read."""
    eye = name.partition(".right.")[0] + ".right." if ".right." in name else name.partition(".left.")[0] + ".left."
    fields = dict(SPHERES)
    if name.startswith("worn_now.prescription."):
        fields |= {f"worn_now.prescription.{side}.sphere": "0" for side in form_fields.EYES}
    if name.endswith(".amount"):
        fields[name.replace("amount", "base")] = "in"
    if name.endswith((".cylinder", ".axis")):
        fields |= {f"{eye}axis": "90", f"{eye}cylinder": "-1"}
    return fields


def reads(fields: dict[str, str]) -> bool:
    try:
        forms.visit_from_fields(fields)
    except Faults:
        return False
    return True


@pytest.mark.parametrize("name", NUMBER_NAMES)
def test_a_field_says_the_least_and_the_most_that_a_visit_takes(name: str) -> None:
    field, fields = number_field(name), around(name)
    assert field is not None
    for inside, outside in ((field.least, field.least - 0.01), (field.most, field.most + 0.01)):
        assert reads({**fields, name: repr(float(inside))}), inside
        if field.kind == "axis" and outside < 1:
            continue  # an axis of 0 is 180: the scale begins at 1, the form takes less
        assert not reads({**fields, name: repr(float(outside))}), outside


def test_every_number_of_the_prescription_the_fitting_and_the_frame_steps() -> None:
    numbers = {name for name in NUMBER_NAMES if not name.startswith(("worn_now.", "options."))}
    assert numbers == {
        *(f"prescription.{eye}.{part}" for eye in form_fields.EYES for part in ("sphere", "cylinder", "axis", "add")),
        *(f"prescription.{eye}.prism.{k}.amount" for eye in form_fields.EYES for k in (0, 1)),
        *(f"fitting.{eye}.{part}" for eye in form_fields.EYES for part in ("pd_mm", "near_pd_mm", "height_mm")),
        "prescription.vertex_mm", "prescription.intermediate_add", "fitting.vertex_mm", "fitting.tilt_deg",
        "fitting.wrap_deg", "frame.a_mm", "frame.b_mm", "frame.dbl_mm", "frame.ed_mm",
    }  # fmt: skip


def test_a_form_is_read_as_people_type() -> None:
    visit = forms.visit_from_fields(
        {
            **SPHERES,
            "prescription.right.sphere": "-425",
            "prescription.right.cylinder": "ds",
            "prescription.left.sphere": "pl",
            "prescription.left.cylinder": "100-",
            "prescription.left.axis": "0",
            "prescription.left.prism.0.amount": "2",
            "prescription.left.prism.0.base": "up",
            "prescription.intermediate_add": "075",
            "fitting.right.pd_mm": "31,5",
            "worn_now.prescription.right.sphere": "3,75-",
            "worn_now.prescription.left.sphere": "−400",
        }
    )
    right, left = visit.prescription.right, visit.prescription.left
    assert (right.sphere, right.cylinder) == (-4.25, None)
    assert (left.sphere, left.cylinder, left.axis) == (0.0, -1.0, 180.0)
    assert [part.amount for part in left.prism or ()] == [2.0]
    assert visit.prescription.intermediate_add == 0.75
    assert visit.fitting is not None
    assert visit.fitting.right is not None
    assert visit.fitting.right.pd_mm == 31.5
    assert visit.worn_now is not None
    assert visit.worn_now.prescription is not None
    worn = visit.worn_now.prescription
    assert (worn.right.sphere, worn.left.sphere) == (-3.75, -4.0)


def test_a_prism_and_a_length_are_never_divided() -> None:
    fields = {**SPHERES, "prescription.left.prism.0.amount": "150", "prescription.left.prism.0.base": "up"}
    with pytest.raises(Faults) as caught:
        forms.visit_from_fields({**fields, "frame.a_mm": "520"})
    assert {one.field for one in caught.value.faults} == {"prescription.left.prism[0].amount", "frame.a_mm"}


TYPED = {**SPHERES, "prescription.right.sphere": "-425", "prescription.right.cylinder": "ds", "frame.a_mm": "50"}


def test_what_was_typed_stays_and_how_it_was_read_stands_beside_it(client: FlaskClient) -> None:
    page = client.post("/counter", data=TYPED, follow_redirects=True).text
    assert 'name="prescription.right.sphere" value="-425"' in page
    assert re.search(r'id="read-prescription\.right\.sphere"[^>]*>read as −4\.25<', page)
    assert re.search(r'id="read-prescription\.right\.cylinder"[^>]*>read as no cylinder<', page)
    assert re.search(r'id="read-frame\.a_mm"[^>]*><', page)
    assert re.search(r'name="prescription\.right\.sphere"[^>]*aria-valuenow="-4\.25"[^>]*aria-valuetext="−4\.25"', page)


def test_a_live_answer_says_how_each_field_was_read(client: FlaskClient) -> None:
    page = client.post("/counter", data=TYPED, headers=LIVE).text
    (listed,) = re.findall(r'<ul hidden id="readings">(.*?)</ul>', page, re.DOTALL)
    assert re.findall(r'data-field="([^"]+)">([^<]+)<', listed) == [
        ("prescription.right.sphere", "read as −4.25"),
        ("prescription.right.cylinder", "read as no cylinder"),
    ]


def test_a_line_is_answered_with_the_fields_it_fills_and_what_was_not_read(client: FlaskClient) -> None:
    answer = client.post("/counter/line", data={"line": "R -4.25/-1.00x175 Add 1.50  L -3.75 banana"}).json
    assert answer is not None
    given = {name: text for name, text in answer["fields"].items() if text}
    assert given == {
        "prescription.right.sphere": "-4.25",
        "prescription.right.cylinder": "-1.00",
        "prescription.right.axis": "175",
        "prescription.right.add": "1.50",
        "prescription.left.sphere": "-3.75",
    }
    emptied = answer["fields"].keys() - given.keys()
    assert {"prescription.left.cylinder", "prescription.left.axis", "prescription.right.prism.0.base"} <= emptied
    assert not any(name.endswith("balance") for name in answer["fields"])
    assert answer["unread"] == ["banana"]
    for words in ("right sphere, right cylinder", "Not read: “banana”", "one eye only", "replaced"):
        assert words in answer["said"]


@pytest.mark.parametrize("text", ["", "Ada Lovelace", "R-117", "x" * 5000, "\x00R"])
def test_text_that_is_no_prescription_fills_nothing(client: FlaskClient, text: str) -> None:
    assert client.post("/counter/line", data={"line": text}).json == {"fields": {}, "unread": [], "said": ""}


def test_another_site_cannot_ask_what_a_line_says(client: FlaskClient) -> None:
    refused = client.post("/counter/line", data={"line": "R -4.25"}, headers={"Sec-Fetch-Site": "cross-site"})
    assert refused.status_code == 403


def fields_shown(page: str) -> dict[str, str]:
    """The text fields of a page by name."""
    return {name: unescape(text) for name, text in re.findall(r'<input[^>]* name="([^"]+)" value="([^"]*)"', page)}


def test_without_scripting_a_typed_line_fills_the_form_and_stays(client: FlaskClient) -> None:
    line = "R +2.00 L -3.75 ds banana PD 63"
    before = {
        **SPHERES,
        "do": "line",
        "line": line,
        "prescription.left.sphere": "-1",
        "prescription.left.cylinder": "-2",
        "prescription.left.axis": "90",
        "fitting.left.height_mm": "20",
    }
    page = client.post("/counter", data=before, follow_redirects=True).text
    shown = fields_shown(page)
    assert shown["prescription.right.sphere"] == "+2.00"
    assert shown["prescription.left.sphere"] == "-3.75"
    assert (shown["prescription.left.cylinder"], shown["prescription.left.axis"]) == ("", "")
    assert (shown["fitting.right.pd_mm"], shown["fitting.left.height_mm"]) == ("31.5", "20")
    assert shown["line"] == line
    said = unescape(re.findall(r'id="line-said"[^>]*>([^<]*)<', page)[0])
    assert "Not read: “banana”" in said
    assert "was halved" in said


def test_a_typed_line_without_a_prescription_changes_nothing_and_says_so(client: FlaskClient) -> None:
    typed = {**SPHERES, "prescription.left.sphere": "-1", "do": "line", "line": "<b>Ada</b>"}
    page = client.post("/counter", data=typed, follow_redirects=True).text
    assert fields_shown(page)["prescription.left.sphere"] == "-1"
    assert "No prescription was found in the line" in page
    assert "<b>Ada" not in page


# In a browser.


@pytest.fixture(scope="module")
def address(tmp_path_factory: pytest.TempPathFactory) -> Iterator[str]:
    app = create_app(data_dir=tmp_path_factory.mktemp("records"))
    with served(app) as place:
        yield place


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    with chromium() as started:
        yield started


@contextmanager
def opened(browser: Browser, address: str) -> Iterator[Page]:
    """The start page; whatever goes wrong in it fails the test."""
    context = browser.new_context(viewport={"width": 1366, "height": 768})
    page = context.new_page()
    trouble: list[str] = []
    page.on("console", lambda message: trouble.append(message.text) if message.type in ("error", "warning") else None)
    page.on("pageerror", lambda error: trouble.append(str(error)))
    page.goto(f"{address}/")
    yield page
    context.close()
    assert trouble == []


@pytest.fixture
def page(browser: Browser, address: str) -> Iterator[Page]:
    with opened(browser, address) as page:
        yield page


@pytest.fixture(scope="module")
def still(browser: Browser, address: str) -> Iterator[Page]:
    """A page whose program answers nothing, so that what the page does of itself is seen alone."""
    with opened(browser, address) as page:
        page.route("**/counter", lambda route: route.fulfill(status=204))
        page.evaluate("() => document.querySelectorAll('details').forEach((one) => { one.open = true; })")
        yield page


def field(page: Page, name: str) -> Locator:
    return page.locator(f"[name='{name}']")


def paste(page: Page, text: str) -> None:
    """Paste a text where the focus is, as the browser does from its own clipboard."""
    page.context.grant_permissions(["clipboard-read", "clipboard-write"])
    page.evaluate("text => navigator.clipboard.writeText(text)", text)
    page.keyboard.press("Control+V")


def test_the_page_reads_numbers_as_the_program_does(still: Page) -> None:
    for case in CASES:
        one = field(still, FIELD_OF[case["kind"]])
        one.fill("7")
        one.fill(case["typed"])
        told = one.get_attribute("aria-valuenow")
        if case["value"] in (None, "unreadable"):
            assert told is None, case
        else:
            assert told is not None, case
            assert float(told) == case["value"], case
            words = stepping(FIELD_OF[case["kind"]], case["typed"])["aria-valuetext"]
            assert one.get_attribute("aria-valuetext") == words, case


@pytest.mark.parametrize(
    ("name", "typed", "keys", "written"),
    [
        ("prescription.right.sphere", "-4.25", "ArrowUp", "-4.00"),
        ("prescription.right.sphere", "-4.25", "ArrowDown", "-4.50"),
        ("prescription.right.sphere", "-4.30", "ArrowUp", "-4.25"),
        ("prescription.right.sphere", "-4.30", "ArrowDown", "-4.50"),
        ("prescription.right.sphere", "-425", "ArrowUp ArrowDown", "-4.25"),
        ("prescription.right.sphere", "−4,25", "PageUp", "-3.25"),
        ("prescription.right.sphere", "+0.50", "PageDown", "-0.50"),
        ("prescription.right.sphere", "-0.25", "ArrowUp", "+0.00"),
        ("prescription.right.sphere", "", "ArrowUp", "+0.25"),
        ("prescription.right.sphere", "pl", "ArrowDown", "-0.25"),
        ("prescription.right.sphere", "29.9", "ArrowUp ArrowUp", "+30.00"),
        ("prescription.right.sphere", "40", "ArrowUp", "40"),
        ("prescription.right.sphere", "minus", "ArrowUp", "minus"),
        ("prescription.right.cylinder", "ds", "ArrowDown", "-0.25"),
        ("prescription.right.axis", "", "ArrowDown", "179"),
        ("prescription.right.axis", "180", "ArrowUp", "1"),
        ("prescription.right.axis", "1", "ArrowDown", "180"),
        ("prescription.right.axis", "175", "PageUp", "5"),
        ("prescription.right.axis", "92.5", "ArrowDown", "92"),
        ("prescription.right.add", "", "ArrowDown", "+0.00"),
        ("prescription.right.add", "150", "ArrowUp", "+1.75"),
        ("prescription.right.prism.0.amount", "", "ArrowUp ArrowUp", "0.50"),
        ("prescription.right.prism.0.amount", "1", "PageUp", "2.00"),
        ("fitting.right.pd_mm", "", "ArrowUp", None),
        ("fitting.right.pd_mm", "31.3", "ArrowUp", "31.5"),
        ("fitting.right.pd_mm", "31,5", "ArrowUp", "32"),
        ("fitting.tilt_deg", "8", "ArrowDown", "7"),
        ("frame.ed_mm", "", "ArrowUp", "15"),
    ],
)
def test_the_keys_step_a_number_up_and_down_its_grid(
    still: Page, name: str, typed: str, keys: str, written: str | None
) -> None:
    one = field(still, name)
    if written is None:  # from the stated default, half a millimetre up
        written = f"{float(one.get_attribute('placeholder') or '') + 0.5:g}"
    one.fill(typed)
    for key in keys.split():
        one.press(key)
    expect(one).to_have_value(written)


def test_figures_follow_a_step_and_the_reading_stands_beside_the_field_while_it_holds(page: Page) -> None:
    right, left = field(page, "prescription.right.sphere"), field(page, "prescription.left.sphere")
    beside = page.locator("[id='read-prescription.right.sphere']")
    left.fill("-3")
    right.fill("-425")
    expect(beside).to_have_text("read as −4.25")
    expect(right).to_have_value("-425")
    expect(page.locator("#why-price")).to_be_visible()
    page.locator("#why-edge_thickest_mm > summary").click()
    given = page.locator("#why-edge_thickest_mm tbody tr", has_text="sphere as made").locator("td").first
    expect(given).to_contain_text("−4.25")
    right.press("ArrowUp")
    expect(given).to_contain_text("−4.00")
    expect(beside).to_have_text("")


def test_letters_are_typed_and_step_nothing(still: Page) -> None:
    one = field(still, "prescription.right.sphere")
    one.fill("")
    one.press_sequentially("plano")
    expect(one).to_have_value("plano")
    one.press("Control+ArrowUp")
    expect(one).to_have_value("plano")


def test_tab_goes_as_a_prescription_is_read_aloud(page: Page) -> None:
    names = []
    field(page, "prescription.right.sphere").focus()
    for _ in range(12):
        names.append(page.evaluate("() => document.activeElement.name"))
        page.keyboard.press("Tab")
    parts = ("sphere", "cylinder", "axis", "add", "prism.0.amount", "prism.0.base")
    assert names == [f"prescription.{eye}.{part}" for eye in ("right", "left") for part in parts]
    page.keyboard.press("Enter")  # what is seldom written opens, and comes next
    after = []
    for _ in range(3):
        page.keyboard.press("Tab")
        after.append(page.evaluate("() => document.activeElement.name"))
    assert after == [f"prescription.right.{part}" for part in ("prism.1.amount", "prism.1.base", "balance")]


LINE = "R -4.25/-1.00x175 Add 1.50 2 base up 1 BI\nL -375\nPD 31.5/31 banana"


@pytest.mark.parametrize("focus", ["", "wearer.name", "prescription.left.sphere", "line"])
def test_a_copied_line_fills_the_form_wherever_it_is_pasted(page: Page, focus: str) -> None:
    field(page, "prescription.left.cylinder").fill("-2")
    field(page, "frame.a_mm").fill("50")
    if focus == "line":
        page.get_by_text("Paste a prescription line").click()
    if focus:
        field(page, focus).focus()
    paste(page, LINE)
    said = page.locator("#line-said")
    expect(said).to_contain_text("Not read: “banana”")
    shown = {
        "prescription.right.sphere": "-4.25", "prescription.right.cylinder": "-1.00", "prescription.right.axis": "175",
        "prescription.right.add": "1.50", "prescription.right.prism.0.amount": "2",
        "prescription.right.prism.0.base": "up", "prescription.right.prism.1.base": "in",
        "prescription.left.sphere": "-375", "prescription.left.cylinder": "", "fitting.right.pd_mm": "31.5",
        "fitting.left.pd_mm": "31", "frame.a_mm": "50", "wearer.name": "",
    }  # fmt: skip
    for name, text in shown.items():
        expect(field(page, name)).to_have_value(text)
    expect(field(page, "prescription.right.prism.1.amount")).to_be_visible()
    expect(page.locator("[id='read-prescription.left.sphere']")).to_have_text("read as −3.75")
    expect(page.locator("#why-price")).to_be_visible()


def test_one_undo_takes_a_pasted_line_back(page: Page) -> None:
    field(page, "prescription.left.sphere").fill("-1")
    expect(page).to_have_url(re.compile("/counter/"))
    field(page, "prescription.left.sphere").focus()
    paste(page, LINE)
    expect(page.locator("#why-price")).to_be_visible()
    page.get_by_role("button", name=re.compile("^Undo")).click()
    expect(field(page, "prescription.left.sphere")).to_have_value("-1")
    expect(field(page, "prescription.right.sphere")).to_have_value("")


@pytest.mark.parametrize("text", ["R-117", "Ada Lovelace, left 3.5 out of 5"])
def test_other_text_goes_where_it_was_pasted(page: Page, text: str) -> None:
    one = field(page, "wearer.name")
    one.fill("ab")
    one.press("ArrowLeft")
    paste(page, text)
    expect(one).to_have_value(f"a{text}b")
    expect(field(page, "prescription.left.sphere")).to_have_value("")


def test_a_note_takes_a_copied_line_as_it_is(page: Page) -> None:
    page.locator("#fold-wearer > summary").click()
    field(page, "note").focus()
    paste(page, LINE)
    expect(field(page, "note")).to_have_value(LINE)
    expect(field(page, "prescription.left.sphere")).to_have_value("")


def test_where_the_program_does_not_answer_the_text_is_not_lost(page: Page) -> None:
    page.route("**/counter/line", lambda route: route.fulfill(status=204))
    field(page, "reference").focus()
    paste(page, "R -4.25")
    expect(field(page, "reference")).to_have_value("R -4.25")


def test_enter_in_the_typed_line_fills_the_form(page: Page) -> None:
    page.get_by_text("Paste a prescription line").click()
    field(page, "line").fill("R -4.25 L -3.75")
    field(page, "line").press("Enter")
    expect(field(page, "prescription.left.sphere")).to_have_value("-3.75")
    expect(page.locator("#line-said")).to_contain_text("Filled in from the line: right sphere, left sphere.")
