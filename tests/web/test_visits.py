"""Visits are saved once, never over a change their editor has not seen, found, reopened and copied."""

import json
import re
from pathlib import Path

import pytest
from flask.testing import FlaskClient

from advisor import __version__
from advisor.counsel.stock import builtin_range, range_to_toml
from advisor.records.drafts import DraftMissing
from advisor.records.store import Store
from advisor.web.app import create_app
from advisor.web.desk import desk_of

LIVE = {"HX-Request": "true"}
FORM = {
    "token": "a" * 32,
    "wearer.name": "Łucja Ábel",
    "reference": "A-7",
    "date": "2026-11-30",
    "prescription.right.sphere": "-4.25",
    "prescription.left.sphere": "-3.75",
    "option_count": "1",
    "options.0.design": "single-vision",
    "options.0.material": "hard-resin-150",
    "options.0.coating.front": "broadband",
}


def saved_id(client: FlaskClient, **changes: str) -> str:
    answer = client.post("/visits", data={**FORM, **changes})
    assert answer.status_code == 303
    return answer.headers["Location"].rsplit("/", 1)[1]


def test_a_saved_visit_holds_input_range_version_and_answer(client: FlaskClient, store: Store) -> None:
    visit = store.get_visit(saved_id(client))
    assert json.loads(visit.visit_json)["prescription"]["right"]["sphere"] == -4.25
    assert json.loads(visit.visit_json)["date"] == visit.date == "2026-11-30"
    answer = json.loads(visit.answer_json)
    assert answer["format"] == "twolight-comparison-1"
    assert answer["options"][0]["material"] == "hard-resin-150"
    assert visit.version == __version__
    kept = store.get_range(visit.range_hash)
    assert kept is not None
    assert kept.toml == range_to_toml(builtin_range())


def test_saving_drops_the_draft_and_going_back_to_it_shows_the_saved_visit(client: FlaskClient, store: Store) -> None:
    live = client.post("/counter", data=FORM, headers=LIVE)
    draft = live.headers["HX-Replace-Url"].rsplit("/", 1)[1]
    visit_id = saved_id(client, draft=draft, draft_edit="1")
    with pytest.raises(DraftMissing):
        store.get_draft(draft)
    back = client.get(f"/counter/{draft}")  # as by the browser's back button
    assert (back.status_code, back.headers["Location"]) == (302, f"/visits/{visit_id}")


def test_a_form_sent_twice_is_one_visit(client: FlaskClient, store: Store) -> None:
    assert saved_id(client) == saved_id(client)
    assert len(store.list_visits()) == 1
    assert store.list_visits()[0].edit == 1


def test_a_form_sent_again_after_a_restart_is_the_same_visit(client: FlaskClient, tmp_path: Path) -> None:
    first = saved_id(client)
    again = create_app(data_dir=tmp_path, testing=True)
    assert saved_id(again.test_client()) == first
    assert len(desk_of(again).store.list_visits()) == 1
    desk_of(again).close()


def test_a_form_saved_as_new_twice_is_one_new_visit(client: FlaskClient, store: Store) -> None:
    first = saved_id(client)
    edit = {"visit": first, "visit_edit": "1", "token": "b" * 32, "do": "new", "note": "another pair"}
    assert saved_id(client, **edit) == saved_id(client, **edit) != first
    assert len(store.list_visits()) == 2


def test_two_windows_of_one_draft_do_not_save_over_each_other(client: FlaskClient, store: Store) -> None:
    draft = client.post("/counter", data=FORM, headers=LIVE).headers["HX-Replace-Url"].rsplit("/", 1)[1]
    mine = {**FORM, "draft": draft, "draft_edit": "1", "note": "mine"}
    client.post("/counter", data={**mine, "note": "theirs"}, headers=LIVE)
    late = client.post("/visits", data=mine)
    assert (late.status_code, store.list_visits()) == (409, [])
    assert "changed in another window" in late.text
    assert f'href="/counter/{draft}"' in late.text
    assert ">mine</textarea>" in late.text
    visit_id = saved_id(client, draft=draft, draft_edit="2", note="theirs")
    later = client.post("/visits", data=mine)  # now the other window has saved
    assert later.status_code == 409
    assert f'href="/visits/{visit_id}"' in later.text
    assert ">mine</textarea>" in later.text
    assert json.loads(store.get_visit(visit_id).visit_json)["note"] == "theirs"
    hidden = dict(re.findall(r'<input type="hidden" name="(\w+)" value="([^"]*)">', later.text))
    again = client.post("/visits", data={**mine, **hidden})
    assert again.status_code == 409  # until it is saved as a new visit
    own = client.post("/visits", data={**mine, **hidden, "do": "new"}).headers["Location"].rsplit("/", 1)[1]
    assert json.loads(store.get_visit(own).visit_json)["note"] == "mine"
    assert json.loads(store.get_visit(visit_id).visit_json)["note"] == "theirs"


def test_a_visit_erased_meanwhile_is_told_and_what_was_typed_stays(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    store.erase_visit(visit_id)
    edit = {**FORM, "visit": visit_id, "visit_edit": "1", "token": "b" * 32, "note": "mine"}
    live = client.post("/counter", data=edit, headers=LIVE)
    assert (live.status_code, 'id="why-price"' in live.text) == (200, True)
    late = client.post("/visits", data=edit)
    assert late.status_code == 409
    assert "may have been erased" in late.text
    assert ">mine</textarea>" in late.text
    hidden = dict(re.findall(r'<input type="hidden" name="(\w+)" value="([^"]*)">', late.text))
    assert saved_id(client, **{"note": "mine", **hidden}) != visit_id


def test_the_same_form_changed_and_sent_again_is_the_same_visit_changed(client: FlaskClient, store: Store) -> None:
    first = saved_id(client)
    assert saved_id(client, note="second thoughts") == first
    assert json.loads(store.get_visit(first).visit_json)["note"] == "second thoughts"


def test_a_change_sent_twice_is_one_change(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    edit = {"visit": visit_id, "visit_edit": "1", "token": "b" * 32, "note": "new"}
    assert saved_id(client, **edit) == saved_id(client, **edit) == visit_id
    assert store.get_visit(visit_id).edit == 2


def test_a_visit_changed_meanwhile_is_not_overwritten(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    saved_id(client, visit=visit_id, visit_edit="1", token="b" * 32, note="theirs")
    mine = {**FORM, "visit": visit_id, "visit_edit": "1", "token": "c" * 32, "note": "mine"}
    late = client.post("/visits", data=mine)
    assert late.status_code == 409
    assert "nothing was overwritten" in late.text
    assert ">mine</textarea>" in late.text
    assert json.loads(store.get_visit(visit_id).visit_json)["note"] == "theirs"
    own = client.post("/visits", data={**mine, "do": "new"})
    assert not own.headers["Location"].endswith(visit_id)
    assert len(store.list_visits()) == 2


def test_a_form_with_a_fault_is_not_saved_and_is_shown_again(client: FlaskClient, store: Store) -> None:
    answer = client.post("/visits", data={**FORM, "prescription.right.cylinder": "-1"})
    assert answer.status_code == 422
    assert "Not saved yet" in answer.text
    assert "needs an axis" in answer.text
    assert 'name="prescription.right.cylinder" value="-1"' in answer.text
    assert store.list_visits() == []


def test_a_key_that_the_range_does_not_hold_is_a_fault_beside_its_field(client: FlaskClient, store: Store) -> None:
    answer = client.post("/visits", data={**FORM, "options.0.material": "hard-resin-151"})
    assert re.search(r'id="fault-options\.0\.material">“hard-resin-151” is not in the range; did you mean', answer.text)
    assert store.list_visits() == []


def test_a_saved_visit_reopens_in_the_counter_with_its_papers(client: FlaskClient) -> None:
    visit_id = saved_id(client)
    page = client.get(f"/visits/{visit_id}").text
    assert 'value="Łucja Ábel"' in page
    for paper in ("sheet", "sheet.pdf", "order", "order.pdf"):
        assert f'href="/visits/{visit_id}/{paper}"' in page
    assert client.get("/visits/nowhere").status_code == 404


def test_a_reopened_visit_says_that_the_range_has_changed_since(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    assert "The range has changed" not in client.get(f"/visits/{visit_id}").text
    store.set_range(range_to_toml(builtin_range()).replace('label = "Hard resin 1.50"', 'label = "Plain resin"'))
    assert "The range has changed" in client.get(f"/visits/{visit_id}").text


def test_a_copy_is_a_new_form_without_date(client: FlaskClient, store: Store) -> None:
    visit_id = saved_id(client)
    answer = client.post(f"/visits/{visit_id}/copy")
    assert answer.status_code == 303
    page = client.get(answer.headers["Location"]).text
    assert 'value="Łucja Ábel"' in page
    assert 'name="date" value=""' in page
    assert 'name="visit" value=""' in page
    assert len(store.list_visits()) == 1


def test_a_visit_is_found_by_the_beginnings_of_its_words(client: FlaskClient) -> None:
    saved_id(client)
    saved_id(client, token="b" * 32, **{"wearer.name": "Teo Brandt"})
    found = client.post("/visits/find", data={"search": "abel luc"}, headers=LIVE).text
    assert "<html" not in found
    assert "Łucja" in found
    assert "Teo" not in found
    whole = client.post("/visits/find", data={"search": "teo"}).text
    assert "<html" in whole
    assert "Łucja" not in whole
    assert "No visit fits" in client.post("/visits/find", data={"search": "nobody"}).text


def test_the_list_goes_on_page_by_page(client: FlaskClient, store: Store) -> None:
    for k in range(53):
        text = json.dumps({"prescription": {}, "wearer": {"name": f"W{k:02}"}})
        store.save_visit(text, range_toml="", version="0", answer_json="{}")
    first = client.get("/visits").text
    assert first.count('<th scope="row">') == 50
    hidden = dict(re.findall(r'<input type="hidden" name="(\w+)" value="([^"]*)">', first))
    second = client.post("/visits/find", data=hidden).text
    assert re.findall(r">(W\d\d)<", second) == ["W02", "W01", "W00"]


def test_hostile_names_are_escaped_in_the_list(client: FlaskClient) -> None:
    saved_id(client, **{"wearer.name": "<img src=x>"})
    assert "<img" not in client.get("/visits").text
