"""The Counter answers with figures, keeps what was typed, and says what is wrong beside its field."""

import json
import re
from pathlib import Path

import pytest
from flask import Flask
from flask.testing import FlaskClient
from werkzeug.test import TestResponse

from advisor.counsel.explanations import EXPLANATIONS
from advisor.counsel.layout import ROWS
from advisor.records.store import Store
from advisor.web.app import create_app
from advisor.web.desk import desk_of

LIVE = {"HX-Request": "true"}
TWO_SPHERES = {
    "prescription.right.sphere": "-4.25",
    "prescription.left.sphere": "-3.75",
    "option_count": "2",
    "baseline": "0",
    "options.0.material": "hard-resin-150",
    "options.0.coating.front": "bare",
    "options.1.material": "hard-resin-150",
    "options.1.coating.front": "broadband",
}
HOSTILE = "<script>alert(1)</script>\"'"


@pytest.fixture
def app(tmp_path: Path) -> Flask:
    return create_app(data_dir=tmp_path, testing=True)


@pytest.fixture
def client(app: Flask) -> FlaskClient:
    return app.test_client()


@pytest.fixture
def store(app: Flask) -> Store:
    return desk_of(app).store


def draft_id(answer: TestResponse) -> str:
    return answer.headers["HX-Replace-Url"].rsplit("/", 1)[1]


def drafts(store: Store) -> int:
    with store._engine.begin() as connection:
        return int(connection.exec_driver_sql("SELECT count(*) FROM draft").scalar_one())


def test_the_start_page_asks_for_two_spheres_and_keeps_nothing(client: FlaskClient, store: Store) -> None:
    page = client.get("/").text
    assert "Figures appear here as soon as this is typed" in page
    assert "Open a demo wearer" in page
    assert drafts(store) == 0


def test_two_spheres_give_a_comparison(client: FlaskClient) -> None:
    page = client.post("/counter", data=TWO_SPHERES, headers=LIVE).text
    assert "<html" not in page
    for words in ("price of the pair", "second image", "reflection seen by others", "what it cannot do"):
        assert words in page
    # Fresnel at n = 1.498, both faces: 1 - (1 - 0.0397)^2 is 7.8 %; the whole lens with all bounces 2R/(1+R) is 7.6 %.
    assert re.search(r">7\.[67]\d %<", page)


def test_a_live_answer_names_the_address_of_the_draft_and_the_draft_holds_what_was_typed(
    client: FlaskClient, store: Store
) -> None:
    first = client.post("/counter", data=TWO_SPHERES, headers=LIVE)
    kept = json.loads(store.get_draft(draft_id(first)).fields_json)["fields"]
    assert kept["prescription.right.sphere"] == "-4.25"
    changed = {**TWO_SPHERES, "draft": draft_id(first), "draft_edit": "1", "prescription.left.sphere": "-3,5"}
    second = client.post("/counter", data=changed, headers=LIVE)
    assert draft_id(second) == draft_id(first)
    assert drafts(store) == 1
    page = client.get(second.headers["HX-Replace-Url"]).text
    assert 'name="prescription.left.sphere" value="-3,5"' in page


def test_without_htmx_the_whole_page_comes_back(client: FlaskClient) -> None:
    answer = client.post("/counter", data=TWO_SPHERES)
    assert answer.status_code == 303
    page = client.get(answer.headers["Location"]).text
    assert "<html" in page
    assert 'value="-4.25"' in page
    assert "second image" in page


def test_a_fault_stands_beside_its_field_and_what_was_typed_stays(client: FlaskClient) -> None:
    wrong = {**TWO_SPHERES, "prescription.right.cylinder": "-1", "frame.a_mm": "wide"}
    live = client.post("/counter", data=wrong, headers=LIVE)
    assert live.status_code == 200
    assert 'data-field="prescription.right.axis"' in live.text
    assert 'class="big"' not in live.text
    page = client.post("/counter", data=wrong, follow_redirects=True).text
    assert re.search(r'id="fault-prescription\.right\.axis">A cylinder of -1 needs an axis from 1 to 180\.<', page)
    assert re.search(r'id="fault-frame\.a_mm">Write a number here\.<', page)
    assert re.search(r'name="frame\.a_mm" value="wide"[^>]*aria-invalid="true"', page)


def test_a_sphere_not_typed_yet_is_waited_for(client: FlaskClient) -> None:
    page = client.post("/counter", data={"prescription.right.sphere": "-1"}, headers=LIVE).text
    assert "the left sphere." in page
    assert 'id="faults"' not in page


@pytest.mark.parametrize(
    "name", ["wearer.name", "note", "prescription.right.sphere", "options.0.material", "kept", "token"]
)
def test_hostile_text_is_escaped(client: FlaskClient, name: str) -> None:
    page = client.post("/counter", data={**TWO_SPHERES, "wearer.name": "A", name: HOSTILE}, follow_redirects=True).text
    assert HOSTILE not in page
    assert "<script>alert" not in page


@pytest.mark.parametrize("text", ["{", "[]", '{"options": 3}', '{"format": "other"}', "1e999", "\x00", "{" * 5000])
def test_a_mangled_hidden_field_is_a_fault_and_no_crash(client: FlaskClient, text: str) -> None:
    answer = client.post("/counter", data={**TWO_SPHERES, "kept": text}, headers=LIVE)
    assert answer.status_code == 200
    assert 'id="faults"' in answer.text


def test_the_difference_from_the_baseline_stands_under_each_figure(client: FlaskClient) -> None:
    page = client.post("/counter", data=TWO_SPHERES, headers=LIVE).text
    assert "times weaker" in page
    other = client.post("/counter", data={**TWO_SPHERES, "baseline": "1"}, headers=LIVE).text
    assert "times stronger" in other


def test_an_option_that_cannot_be_made_keeps_its_place_and_says_why(client: FlaskClient) -> None:
    drilled = {**TWO_SPHERES, "frame.rim": "drilled", "options.0.material": "polycarbonate-159"}
    page = client.post("/counter", data=drilled, headers=LIVE).text
    assert "is not sold for a drilled rim" in page
    assert page.count('<span class="which">2</span>') >= 4


def test_options_are_added_and_removed_without_scripting(client: FlaskClient) -> None:
    added = client.post("/counter", data={**TWO_SPHERES, "do": "add"}, follow_redirects=True).text
    assert 'name="options.2.material"' in added
    removed = client.post("/counter", data={**TWO_SPHERES, "do": "remove-0"}, follow_redirects=True).text
    assert 'name="options.1.material"' not in removed
    assert re.search(r'<option value="broadband" selected>', removed)


def test_a_form_changed_in_another_window_is_not_overwritten(client: FlaskClient, store: Store) -> None:
    first = client.post("/counter", data=TWO_SPHERES, headers=LIVE)
    seen = {**TWO_SPHERES, "draft": draft_id(first), "draft_edit": "1"}
    client.post("/counter", data={**seen, "wearer.name": "Here"}, headers=LIVE)
    late = client.post("/counter", data={**seen, "wearer.name": "There"}, headers=LIVE)
    assert late.status_code == 200
    assert "changed in another window" in late.text
    assert json.loads(store.get_draft(draft_id(first)).fields_json)["fields"]["wearer.name"] == "Here"


def test_a_draft_that_is_gone_is_said_to_be_gone(client: FlaskClient) -> None:
    assert client.get("/counter/nowhere").status_code == 404
    live = client.post("/counter", data={**TWO_SPHERES, "draft": "nowhere", "draft_edit": "1"}, headers=LIVE)
    assert (live.status_code, "no longer kept" in live.text) == (200, True)


def test_a_demo_wearer_opens_as_a_draft(client: FlaskClient, store: Store) -> None:
    answer = client.post("/demo", data={"wearer": "strong-cylinder"})
    assert (answer.status_code, drafts(store)) == (303, 1)
    assert 'value="Teo Brandt"' in client.get(answer.headers["Location"]).text
    assert client.post("/demo", data={"wearer": "../secret"}).status_code == 400


def test_every_row_opens_to_formula_source_and_what_is_left_out(client: FlaskClient) -> None:
    assert {row.key for row in ROWS} <= EXPLANATIONS.keys()
    page = client.post("/counter", data=TWO_SPHERES, headers=LIVE).text
    rows = page.count('<details class="figure"')
    assert rows > 10
    assert page.count("<dt>Formula</dt>") == page.count("<dt>Left out</dt>") == rows
    assert "Numbers put in" in page


def test_a_get_changes_nothing(client: FlaskClient, store: Store) -> None:
    client.post("/counter", data=TWO_SPHERES, headers=LIVE)
    before = store._engine.begin
    with before() as connection:
        rows = connection.exec_driver_sql("SELECT * FROM draft").fetchall()
    for address in ("/", "/visits", "/range", "/range/export", "/range/material/0", "/range/material/new", "/health"):
        assert client.get(address).status_code == 200
    with before() as connection:
        assert connection.exec_driver_sql("SELECT * FROM draft").fetchall() == rows


def test_no_page_needs_what_the_policy_forbids(client: FlaskClient) -> None:
    pages = [client.get(address).text for address in ("/", "/visits", "/range", "/range/coating/3", "/range/shop")]
    pages.append(client.post("/counter", data=TWO_SPHERES, follow_redirects=True).text)
    for page in pages:
        assert not re.search(r"\sstyle=|<style|\son\w+=|hx-on|js:|<script(?! src=)", page)
        assert not re.search(r'(src|href|action)="(?!/|#)', page)
