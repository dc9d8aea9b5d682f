"""The shop's own on the wearer's sheet, in a browser: the sheet follows what is typed, and the logo comes when kept."""

from io import BytesIO
from pathlib import Path
from typing import TYPE_CHECKING

from PIL import Image
from playwright.sync_api import expect

from tests.browser.conftest import serving

if TYPE_CHECKING:
    from playwright.sync_api import Browser

    from tests.browser.conftest import Watched


def logo() -> bytes:
    target = BytesIO()
    Image.new("RGB", (300, 150), (20, 60, 120)).save(target, "PNG")
    return target.getvalue()


def test_the_sheet_follows_what_is_typed_and_the_field_keeps_the_cursor(watched: "Watched") -> None:
    page = watched.page
    page.goto(f"{watched.served.address}/range/sheet")
    sheet = page.locator(".on-paper")
    expect(sheet).to_contain_text("mild liquid soap")
    page.get_by_label("a paragraph of your own").press_sequentially("Come in at any time.")
    expect(sheet).to_contain_text("Come in at any time.")
    assert page.evaluate("() => document.activeElement.name") == "paragraph"
    page.locator("#lines-do > summary").click()
    page.locator("input[value='soap']").uncheck()
    expect(sheet).not_to_contain_text("mild liquid soap")
    page.get_by_label("a paragraph of your own").fill("x" * 601)
    expect(page.locator("#sheet-preview")).to_contain_text("at most 600 letters")
    expect(sheet).to_have_count(0)
    page.get_by_label("a paragraph of your own").fill("Come in.")
    expect(sheet).to_contain_text("Come in.")
    page.get_by_label("shown for a demo wearer").select_option("tinted-pair")
    expect(sheet).to_contain_text("Tint:")
    watched.is_clean()


def test_a_logo_is_sent_kept_seen_and_taken_away(browser: "Browser", tmp_path: Path) -> None:
    with serving(tmp_path) as served:
        page = browser.new_page()
        page.goto(f"{served.address}/range/sheet")
        picture = page.locator(".on-paper .logo")
        expect(picture).to_have_count(0)
        page.get_by_label("logo: PNG or JPEG").set_input_files(
            {"name": "logo.png", "mimeType": "image/png", "buffer": logo()}
        )
        page.get_by_role("button", name="Keep").click()
        expect(page.get_by_role("status").filter(has_text="Kept.")).to_be_visible()
        assert picture.evaluate("(one) => one.naturalWidth") == 300
        high_mm = picture.evaluate("(one) => one.getBoundingClientRect().height") * 25.4 / 96
        assert high_mm <= 18.1
        page.get_by_label("take the logo away").check()
        expect(picture).to_have_count(0)
        page.get_by_role("button", name="Keep").click()
        expect(page.get_by_label("take the logo away")).to_have_count(0)
        page.close()
