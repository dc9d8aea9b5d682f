"""The pictures of a visit and of a form: what the page holds, what its images are, and the picture that changes."""

import io
import json
import re
from collections.abc import Iterator
from html import unescape

import pytest
from axe_playwright_python.sync_playwright import Axe
from flask import Flask
from flask.testing import FlaskClient
from PIL import Image
from playwright.sync_api import Page, expect

from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.store import Store
from advisor.resources import resource_dir
from tests.chromium import chromium, served


def saved(store: Store, name: str, **changes: object) -> str:
    visit = json.loads((resource_dir("demo_patients") / f"{name}.json").read_text("utf-8")) | changes
    text = json.dumps(visit)
    return store.save_visit(text, range_toml=range_to_toml(builtin_range()), version="0", answer_json="{}").id


def images(page: str) -> dict[str, str]:
    """Address and alternative text of every image on the page."""
    found = re.findall(r'<img src="([^"]+)" width="480" height="300" alt="([^"]*)">', page)
    return {address: unescape(alt) for address, alt in found}


def test_a_visit_has_two_labelled_stills_of_every_picture(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "one-good-eye-drilled")
    answer = client.get(f"/visits/{visit_id}/pictures")
    assert answer.status_code == 200
    found = images(answer.text)
    names = [address.rsplit("/", 1)[1] for address in found]
    assert len(names) == 6
    assert {name.split("-")[0] for name in names} == {"road", "desk", "face"}
    assert {name.rsplit("-", 1)[1] for name in names} == {"with.png", "without.png"}
    assert all(found.values())
    assert answer.text.count("Calculated, not a promise.") == 3
    assert "thousands of times dimmer" in answer.text
    assert "without a film" in answer.text
    assert f'href="/visits/{visit_id}"' in answer.text
    assert " style=" not in answer.text
    assert "<style" not in answer.text


def test_each_image_is_a_png_under_the_policy(client: FlaskClient, store: Store) -> None:
    page = client.get(f"/visits/{saved(store, 'office-window-behind')}/pictures").text
    contents = []
    for address in images(page):
        answer = client.get(address)
        assert answer.status_code == 200
        assert answer.headers["Content-Type"] == "image/png"
        assert answer.headers["Cache-Control"] == "no-store"
        assert answer.headers["Content-Security-Policy"].startswith("default-src 'none'")
        assert Image.open(io.BytesIO(answer.data)).size == (480, 300)
        contents.append(answer.data)
    assert len(set(contents)) == len(contents)  # with and without differ


def test_what_the_visit_does_not_lay_out_is_said_and_not_drawn(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver", scenes=["stage-lights"])
    page = client.get(f"/visits/{visit_id}/pictures").text
    assert {address.rsplit("/", 1)[1].split("-")[0] for address in images(page)} == {"face"}
    assert "no scene with lamps ahead" in page
    assert "no scene with a window behind" in page
    for name in ("road-1-with", "desk-1-without", "face-9-with", "face-0-with", "face-1-within", "sky-1-with"):
        assert client.get(f"/visits/{visit_id}/pictures/{name}.png").status_code == 404


def test_the_option_ordered_is_shown_first_and_another_on_asking(client: FlaskClient, store: Store) -> None:
    visit_id = saved(store, "weak-minus-night-driver")  # the second is ordered
    assert all("-2-" in address for address in images(client.get(f"/visits/{visit_id}/pictures").text))
    third = client.get(f"/visits/{visit_id}/pictures?option=3").text
    assert all("-3-" in address for address in images(third))
    assert 'href="?option=3" aria-current="true"' in third
    for text in ("99", "-1", "x", "²", ""):
        assert client.get(f"/visits/{visit_id}/pictures?option={text}").status_code == 200


def test_an_option_without_a_film_has_one_still_and_no_button(client: FlaskClient, store: Store) -> None:
    page = client.get(f"/visits/{saved(store, 'weak-minus-night-driver')}/pictures?option=1").text
    assert all(address.endswith("-1-with.png") for address in images(page))
    assert "has no film" in page
    assert "data-hold" not in page


def test_a_visit_with_nothing_to_make_says_so(client: FlaskClient, store: Store) -> None:
    options = [{"material": "hard-resin-150", "front_power_d": 30.0}]
    visit_id = saved(store, "weak-minus-night-driver", options=options, ordered=None, baseline=0)
    answer = client.get(f"/visits/{visit_id}/pictures")
    assert answer.status_code == 200
    assert "nothing to show" in answer.text
    assert not images(answer.text)


def test_a_form_being_filled_in_has_pictures_as_soon_as_it_can(client: FlaskClient) -> None:
    fields = {
        "prescription.right.sphere": "-0.75", "prescription.left.sphere": "", "option_count": "1", "baseline": "0",
        "options.0.material": "hard-resin-150", "options.0.coating.front": "broadband",
    }  # fmt: skip
    live = {"HX-Request": "true"}
    draft = client.post("/counter", data=fields, headers=live).headers["HX-Replace-Url"]
    waiting = client.get(f"{draft}/pictures")
    assert waiting.status_code == 409
    assert "nothing to draw yet" in waiting.text
    assert client.get(f"{draft}/pictures/face-1-with.png").status_code == 404
    full = client.post("/counter", data=fields | {"prescription.left.sphere": "-0.5"}, headers=live)
    page = client.get(f"{full.headers['HX-Replace-Url']}/pictures")
    assert page.status_code == 200
    addresses = images(page.text)
    assert len(addresses) == 6  # every scene of the range is laid out
    assert client.get(next(iter(addresses))).data.startswith(b"\x89PNG")


def test_how_it_was_made_stands_below(client: FlaskClient, store: Store) -> None:
    page = client.get(f"/visits/{saved(store, 'strong-cylinder')}/pictures").text
    for words in ("Reinhard", "How we got this", "as made", "Which mirrored images are above notice", "thinnest edge"):
        assert words in page
    ids = re.findall(r'\bid="([^"]+)"', page)
    assert len(ids) == len(set(ids))
    for svg in re.findall(r"<svg.*?</svg>", page, re.S):
        assert 'aria-hidden="true"' in svg or "<title" in svg


@pytest.mark.parametrize("address", ["pictures", "pictures/face-1-with.png"])
def test_a_visit_that_is_not_there_has_no_pictures(client: FlaskClient, address: str) -> None:
    assert client.get(f"/visits/nowhere/{address}").status_code == 404
    assert client.get(f"/counter/nowhere/{address}").status_code == 404


@pytest.fixture
def address(app: Flask) -> Iterator[str]:
    with served(app) as place:
        yield place


@pytest.fixture
def page() -> Iterator[Page]:
    with chromium() as browser:
        yield browser.new_page(viewport={"width": 1366, "height": 768})


def test_a_picture_changes_while_its_button_is_held(page: Page, address: str, store: Store) -> None:
    trouble: list[str] = []
    page.on("console", lambda message: trouble.append(message.text))
    page.goto(f"{address}/visits/{saved(store, 'weak-minus-night-driver')}/pictures")
    still, button = page.locator("#still-road-1"), page.get_by_role("button", name="Hold").first
    filmed, bare = still.locator("img").nth(0), still.locator("img").nth(1)
    expect(filmed).to_be_visible()
    expect(bare).to_be_hidden()
    button.focus()
    page.keyboard.down(" ")
    expect(bare).to_be_visible()
    expect(filmed).to_be_hidden()
    expect(still).to_contain_text("without a film")
    expect(button).to_have_attribute("aria-pressed", "true")
    assert page.evaluate("() => window.scrollY") == 0
    page.keyboard.up(" ")
    expect(filmed).to_be_visible()
    expect(bare).to_be_hidden()
    button.hover()
    page.mouse.down()
    expect(bare).to_be_visible()
    page.mouse.up()
    expect(filmed).to_be_visible()
    assert Axe().run(page).response["violations"] == []
    assert trouble == []
