"""Of two counters on one visit the later is shown both, field by field, and decides; nothing goes unseen."""

import html
import json
import re

import pytest
from flask.testing import FlaskClient

from advisor.records.drafts import DraftMissing
from advisor.records.store import Store
from tests.web.test_visits import FORM, LIVE, saved_id


def two_counters(client: FlaskClient, **mine: str) -> tuple[str, dict[str, str]]:
    """Save a visit, save it again from another counter, and return its identifier with the later counter's form."""
    visit_id = saved_id(client)
    theirs = {"note": "theirs", "options.0.material": "thiourethane-160", "frame.rim": "drilled"}
    saved_id(client, visit=visit_id, visit_edit="1", token="b" * 32, **theirs)
    return visit_id, {**FORM, "visit": visit_id, "visit_edit": "1", "token": "c" * 32, **mine}


def differences(page: str) -> dict[str, list[str]]:
    table = re.search(r'<table class="list both">(.*?)</table>', page, re.DOTALL)
    assert table
    rows = re.findall(r'<th scope="row">(.*?)</th><td dir="auto">(.*?)</td><td dir="auto">(.*?)</td>', table[1])
    return {html.unescape(place): [html.unescape(mine), html.unescape(stored)] for place, mine, stored in rows}


def note_of(store: Store, visit_id: str) -> str | None:
    note = json.loads(store.get_visit(visit_id).visit_json).get("note")
    return str(note) if note else None


def test_every_field_that_differs_is_shown_in_words_and_no_other(client: FlaskClient) -> None:
    _, mine = two_counters(client, note="mine")
    late = client.post("/visits", data=mine)
    assert late.status_code == 409
    assert differences(late.text) == {
        "note": ["mine", "theirs"],
        "rim": ["(empty)", "drilled (rimless)"],
        "option 1, material": ["Hard resin 1.50", "Thiourethane 1.60"],
    }
    assert ">mine</textarea>" in late.text


def test_a_number_written_otherwise_is_no_difference(client: FlaskClient) -> None:
    _, mine = two_counters(client, **{"prescription.right.sphere": "-4,250", "note": "mine"})
    assert not any("sphere" in place for place in differences(client.post("/visits", data=mine).text))


def test_mine_is_saved_over_the_edit_that_was_shown(client: FlaskClient, store: Store) -> None:
    visit_id, mine = two_counters(client, note="mine")
    late = client.post("/visits", data=mine).text
    button = re.search(rf'formaction="/visits/{visit_id}/over" name="do" value="(\d+)"', late)
    assert button
    assert note_of(store, visit_id) == "theirs"
    sent = [client.post(f"/visits/{visit_id}/over", data={**mine, "do": button[1]}) for _ in range(2)]  # twice
    assert [answer.status_code for answer in sent] == [303, 303]
    assert (note_of(store, visit_id), store.get_visit(visit_id).edit) == ("mine", 3)


def test_a_third_save_in_between_is_not_overwritten_either(client: FlaskClient, store: Store) -> None:
    visit_id, mine = two_counters(client, note="mine")
    client.post("/visits", data=mine)
    saved_id(client, visit=visit_id, visit_edit="2", token="d" * 32, note="third")
    late = client.post(f"/visits/{visit_id}/over", data={**mine, "do": "2"})
    assert late.status_code == 409
    assert differences(late.text)["note"] == ["mine", "third"]
    assert note_of(store, visit_id) == "third"


@pytest.mark.parametrize("edit", ["", "x", "-1", "99999999999"])
def test_a_press_that_names_no_edit_saves_nothing(client: FlaskClient, store: Store, edit: str) -> None:
    visit_id, mine = two_counters(client, note="mine")
    assert client.post(f"/visits/{visit_id}/over", data={**mine, "do": edit}).status_code == 409
    assert note_of(store, visit_id) == "theirs"


def test_the_stored_one_is_taken_and_the_form_dropped(client: FlaskClient, store: Store) -> None:
    visit_id, mine = two_counters(client, note="mine")
    draft = client.post("/counter", data=mine, headers=LIVE).headers["HX-Replace-Url"].rsplit("/", 1)[1]
    late = client.post("/visits", data={**mine, "draft": draft, "draft_edit": "1"})
    assert f'formaction="/visits/{visit_id}/take"' in late.text
    taken = client.post(f"/visits/{visit_id}/take", data={**mine, "draft": draft})
    assert (taken.status_code, taken.headers["Location"]) == (303, f"/visits/{visit_id}")
    assert note_of(store, visit_id) == "theirs"
    with pytest.raises(DraftMissing):
        store.get_draft(draft)


def test_mine_is_saved_as_a_new_visit(client: FlaskClient, store: Store) -> None:
    visit_id, mine = two_counters(client, note="mine")
    own = client.post("/visits", data={**mine, "do": "new"}).headers["Location"].rsplit("/", 1)[1]
    assert (note_of(store, visit_id), note_of(store, own)) == ("theirs", "mine")


def test_two_windows_of_one_form_can_save_over_each_other_knowingly(client: FlaskClient, store: Store) -> None:
    draft = client.post("/counter", data=FORM, headers=LIVE).headers["HX-Replace-Url"].rsplit("/", 1)[1]
    visit_id = saved_id(client, draft=draft, draft_edit="1", note="theirs")
    mine = {**FORM, "draft": draft, "draft_edit": "0", "note": "mine"}
    late = client.post("/visits", data=mine)
    assert late.status_code == 409
    assert differences(late.text)["note"] == ["mine", "theirs"]
    assert client.post(f"/visits/{visit_id}/over", data={**mine, "do": "1"}).status_code == 303
    assert note_of(store, visit_id) == "mine"


def test_hidden_names_are_hidden_where_both_differ(client: FlaskClient) -> None:
    _, mine = two_counters(client, **{"wearer.name": "Somebody Else"})
    client.post("/names", data={"names": "hidden"})
    shown = differences(client.post("/visits", data=mine).text)
    assert shown["wearer, name"] == ["•••", "•••"]
